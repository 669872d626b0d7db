"""Sheet folding: inverses, scaling, limits. Published figures are in tests/published."""

from __future__ import annotations

import math
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.forming.sheet import (
    bend_allowance_mm,
    bend_deduction_mm,
    din6935_allowance_mm,
    din6935_k_factor,
    gardiner_ratio,
    handbook_bend_length_mm,
    k_from_deduction,
    outside_setback_mm,
)

angles = st.floats(1.0, 170.0)
radii = st.floats(0.0, 20.0)
thicknesses = st.floats(0.2, 6.0)
factors = st.floats(0.0, 1.0)


@given(angles, radii, thicknesses, factors)
def test_k_and_deduction_are_inverse(angle: float, radius: float, thickness: float, k: float) -> None:
    deduction = bend_deduction_mm(angle, radius, thickness, k)
    assert k_from_deduction(deduction, angle, radius, thickness) == pytest.approx(k, abs=1e-8)


@given(angles, radii, thicknesses, factors, st.floats(0.1, 10.0))
def test_scaling_all_lengths(angle: float, radius: float, thickness: float, k: float, scale: float) -> None:
    for function in (bend_allowance_mm, bend_deduction_mm):
        assert function(angle, radius * scale, thickness * scale, k) == pytest.approx(
            function(angle, radius, thickness, k) * scale, rel=1e-9, abs=1e-9
        )
    assert din6935_k_factor(radius * scale, thickness * scale) == pytest.approx(
        din6935_k_factor(radius, thickness), rel=1e-9
    )


@given(angles, radii, thicknesses, factors)
def test_allowance_lies_between_inner_and_outer_arc(a: float, r: float, t: float, k: float) -> None:
    assert math.radians(a) * r - 1e-9 <= bend_allowance_mm(a, r, t, k) <= math.radians(a) * (r + t) + 1e-9


@given(radii, thicknesses)
def test_din_k_stays_between_its_sharp_and_its_wide_value(radius: float, thickness: float) -> None:
    assert (0.65 + 0.5 * math.log10(0.65)) / 2 <= din6935_k_factor(radius, thickness) <= 0.5
    assert din6935_k_factor(radius, thickness) <= din6935_k_factor(radius * 1.1, thickness)


@given(radii, thicknesses, st.floats(90.0, 165.0))
def test_din_allowance_is_the_deduction_for_blunt_angles(r: float, t: float, opening: float) -> None:
    """From an opening of 90 deg up, v is minus the bend deduction; below, the legs end elsewhere."""
    deduction = bend_deduction_mm(180.0 - opening, r, t, din6935_k_factor(r, t))
    assert din6935_allowance_mm(opening, r, t) == pytest.approx(-deduction, abs=1e-9)
    sharp = bend_deduction_mm(120.0, r, t, din6935_k_factor(r, t))
    assert din6935_allowance_mm(60.0, r, t) > -sharp


def test_din_allowance_is_nothing_for_nearly_flat_sheet() -> None:
    assert din6935_allowance_mm(166.0, 1.0, 1.0) == din6935_allowance_mm(180.0, 1.0, 1.0) == 0.0


@given(st.floats(0.1, 50.0), thicknesses)
def test_sheet_springback_grows_with_radius(radius: float, thickness: float) -> None:
    tight, wide = (gardiner_ratio(r, 250.0, 110.0, thickness) for r in (radius, radius * 1.2))
    assert 0.0 <= wide <= tight < 1.0


def test_flat_and_sharp_bends() -> None:
    assert bend_allowance_mm(0.0, 1.0, 1.0, 0.4) == 0.0
    assert outside_setback_mm(0.0, 1.0, 1.0) == 0.0
    assert bend_allowance_mm(90.0, 0.0, 1.0, 0.5) == pytest.approx(math.pi / 4)
    assert bend_allowance_mm(180.0, 1.0, 1.0, 0.0) == pytest.approx(math.pi)


def test_a_deduction_no_sheet_can_have() -> None:
    with pytest.raises(ValueError) as caught:
        k_from_deduction(3.0, 90.0, 1.0, 1.0)
    least, most = 4.0 - math.pi, 4.0 - math.pi / 2
    assert f"got 3 mm, need {least:.3f} to {most:.3f} mm for 90 deg" in str(caught.value)


@pytest.mark.parametrize(
    ("call", "says"),
    [
        (lambda: bend_allowance_mm(-1.0, 1.0, 1.0, 0.4), "bend angle: got -1 deg, need 0 (flat) to 180"),
        (lambda: bend_allowance_mm(181.0, 1.0, 1.0, 0.4), "bend angle: got 181 deg"),
        (lambda: bend_allowance_mm(math.nan, 1.0, 1.0, 0.4), "bend angle: got nan deg"),
        (lambda: bend_allowance_mm(90.0, -1.0, 1.0, 0.4), "inside radius: got -1 mm, need 0 or more"),
        (lambda: bend_allowance_mm(90.0, 1.0, 0.0, 0.4), "sheet thickness: got 0 mm, need above 0"),
        (lambda: bend_allowance_mm(90.0, 1.0, 1.0, 1.2), "K-factor: got 1.2, need 0 to 1"),
        (lambda: outside_setback_mm(180.0, 1.0, 1.0), "bend angle: got 180 deg, need less than 180"),
        (lambda: k_from_deduction(1.0, 0.0, 1.0, 1.0), "need above 0 to find K"),
        (lambda: din6935_k_factor(1.0, 0.0), "sheet thickness: got 0 mm"),
        (lambda: din6935_allowance_mm(181.0, 1.0, 1.0), "opening angle: got 181 deg, need 0 to 180"),
        (lambda: gardiner_ratio(1.0, 0.0, 110.0, 1.0), "got yield 0 MPa and modulus 110 GPa"),
    ],
)
def test_refusals(call: Any, says: str) -> None:
    with pytest.raises(ValueError) as caught:
        call()
    assert says in str(caught.value)


def test_unknown_handbook_class() -> None:
    wrong: Any = "springy"
    with pytest.raises(ValueError, match=r"material class: got 'springy', need one of soft, half-hard, hard"):
        handbook_bend_length_mm(wrong, 90.0, 1.0, 1.0)
