"""Wire bending: there and back, scaling, order, limits. Published figures are in tests/published."""

from __future__ import annotations

import math
from typing import NamedTuple

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.forming.wire import (
    developed_arc_mm,
    loaded_angle_deg,
    loaded_radius_mm,
    moment_ratio,
    plastic_moment_nmm,
    relaxed_radius_mm,
)


class Wire(NamedTuple):
    diameter_mm: float
    youngs_modulus_gpa: float
    strength_coefficient_mpa: float
    hardening_exponent: float


COPPER = Wire(1.628, 117.0, 315.0, 0.54)
HARD = Wire(1.628, 117.0, 267.0, 0.0)

wires = st.builds(
    Wire,
    diameter_mm=st.floats(0.3, 6.0),
    youngs_modulus_gpa=st.floats(60.0, 210.0),
    strength_coefficient_mpa=st.floats(30.0, 900.0),
    hardening_exponent=st.one_of(st.just(0.0), st.floats(0.01, 0.55)),
)
bend_ratios = st.floats(1.2, 500.0)  # centreline radius / wire radius


def elastic_moment(radius_mm: float, wire: Wire) -> float:
    return wire.youngs_modulus_gpa * 1e3 * math.pi * (wire.diameter_mm / 2) ** 4 / 4 / radius_mm


@given(wires, bend_ratios)
def test_form_and_let_go(wire: Wire, ratio: float) -> None:
    """The former found for a finished radius relaxes to that radius, and is the tighter of the two."""
    finished = ratio * wire.diameter_mm / 2
    try:
        former = loaded_radius_mm(finished, *wire)
    except ValueError:
        # only where even a bend to nothing springs back too far
        assert relaxed_radius_mm(wire.diameter_mm / 2, *wire) > finished
        return
    assert wire.diameter_mm / 2 <= former < finished
    assert relaxed_radius_mm(former, *wire) == pytest.approx(finished, rel=1e-9)


@given(wires, bend_ratios)
def test_a_wire_never_springs_past_straight(wire: Wire, ratio: float) -> None:
    loaded = ratio * wire.diameter_mm / 2
    moment = plastic_moment_nmm(loaded, *wire)
    assert 0 < moment <= elastic_moment(loaded, wire) * (1 + 1e-12)
    assert relaxed_radius_mm(loaded, *wire) > loaded


@given(wires, bend_ratios, st.floats(1.0001, 3.0))
def test_a_tighter_former_leaves_a_tighter_bend(wire: Wire, ratio: float, factor: float) -> None:
    tight = ratio * wire.diameter_mm / 2
    assert relaxed_radius_mm(tight, *wire) <= relaxed_radius_mm(tight * factor, *wire)
    assert plastic_moment_nmm(tight, *wire) >= plastic_moment_nmm(tight * factor, *wire) * (1 - 1e-12)


@given(wires, bend_ratios, st.floats(0.1, 10.0))
def test_scaling_all_lengths_scales_the_result(wire: Wire, ratio: float, scale: float) -> None:
    loaded = ratio * wire.diameter_mm / 2
    bigger = wire._replace(diameter_mm=wire.diameter_mm * scale)
    relaxed, scaled = relaxed_radius_mm(loaded, *wire), relaxed_radius_mm(loaded * scale, *bigger)
    # where a hair of plastic strain is left the difference of curvatures loses digits
    if relaxed < 1000 * loaded:
        assert scaled == pytest.approx(relaxed * scale, rel=1e-8)
    assert plastic_moment_nmm(loaded * scale, *bigger) == pytest.approx(
        plastic_moment_nmm(loaded, *wire) * scale**3, rel=1e-10
    )


@given(wires, bend_ratios)
def test_a_stronger_wire_needs_more_and_springs_more(wire: Wire, ratio: float) -> None:
    loaded = ratio * wire.diameter_mm / 2
    stronger = wire._replace(strength_coefficient_mpa=wire.strength_coefficient_mpa * 1.1)
    assert plastic_moment_nmm(loaded, *stronger) >= plastic_moment_nmm(loaded, *wire) * (1 - 1e-12)
    assert relaxed_radius_mm(loaded, *stronger) >= relaxed_radius_mm(loaded, *wire) * (1 - 1e-12)


@given(st.floats(0.001, 0.999), st.floats(0.0, 0.9))
def test_moment_ratio_has_no_step_where_the_series_change(core: float, exponent: float) -> None:
    """The ratio falls as the core grows, for every exponent, right across c^2 = 0.5."""
    assert moment_ratio(core, exponent) >= moment_ratio(min(core * 1.001, 1.0), exponent) >= 1.0 - 1e-12
    edge = math.sqrt(0.5)
    assert moment_ratio(edge * (1 - 1e-12), exponent) == pytest.approx(
        moment_ratio(edge * (1 + 1e-12), exponent), rel=1e-10
    )


def test_an_elastic_bend_springs_back_straight() -> None:
    yield_strain = HARD.strength_coefficient_mpa / (HARD.youngs_modulus_gpa * 1e3)
    first_yield_mm = HARD.diameter_mm / 2 / yield_strain
    assert relaxed_radius_mm(first_yield_mm * 1.01, *HARD) == math.inf
    assert first_yield_mm < relaxed_radius_mm(first_yield_mm * 0.9, *HARD) < math.inf


def test_a_nearly_straight_finished_wire_is_formed_just_past_first_yield() -> None:
    yield_strain = HARD.strength_coefficient_mpa / (HARD.youngs_modulus_gpa * 1e3)
    first_yield_mm = HARD.diameter_mm / 2 / yield_strain
    former = loaded_radius_mm(1e6, *HARD)
    assert 0.9 * first_yield_mm < former < first_yield_mm


def test_annealed_and_ideal_plastic_meet_at_no_hardening() -> None:
    """A vanishing exponent is the ideal plastic metal: no other branch of the code."""
    assert plastic_moment_nmm(10.0, 1.628, 117.0, 267.0, 1e-9) == pytest.approx(
        plastic_moment_nmm(10.0, *HARD), rel=1e-7
    )


@given(st.floats(1.0, 180.0), st.floats(2.0, 60.0), st.floats(0.7, 1.0))
def test_loaded_angle_keeps_the_arc(angle_deg: float, finished_mm: float, factor: float) -> None:
    loaded_mm = finished_mm * factor
    loaded_deg = loaded_angle_deg(angle_deg, finished_mm, loaded_mm)
    assert loaded_deg * loaded_mm == pytest.approx(angle_deg * finished_mm, rel=1e-12)
    assert loaded_deg >= angle_deg


@given(st.floats(0.0, 360.0), st.floats(0.0, 50.0), st.floats(0.2, 6.0), st.floats(0.0, 1.0))
def test_developed_arc_lies_between_inside_and_outside(
    angle_deg: float, inside_mm: float, diameter_mm: float, factor: float
) -> None:
    length = developed_arc_mm(angle_deg, inside_mm, diameter_mm, factor)
    inner, outer = math.radians(angle_deg) * inside_mm, math.radians(angle_deg) * (inside_mm + diameter_mm)
    assert inner - 1e-9 <= length <= outer + 1e-9
    assert length == pytest.approx(inner + factor * (outer - inner), abs=1e-9)


@pytest.mark.parametrize(
    ("wire", "radius_mm", "says"),
    [
        (COPPER._replace(diameter_mm=0.0), 3.0, "wire diameter in mm: got 0, need a positive"),
        (COPPER._replace(diameter_mm=math.nan), 3.0, "wire diameter in mm: got nan"),
        (COPPER._replace(youngs_modulus_gpa=-1.0), 3.0, "Young's modulus in GPa: got -1"),
        (COPPER._replace(strength_coefficient_mpa=math.inf), 3.0, "strength coefficient in MPa: got inf"),
        (COPPER._replace(strength_coefficient_mpa=2e5), 3.0, "Check the units: MPa and GPa"),
        (COPPER._replace(hardening_exponent=1.0), 3.0, "hardening exponent: got 1, need 0 <= n < 1"),
        (COPPER._replace(hardening_exponent=-0.1), 3.0, "hardening exponent: got -0.1"),
        (COPPER, 0.8, "got 0.8 mm for wire of 1.628 mm, need a finite radius of at least 0.814 mm"),
        (COPPER, math.inf, "centreline radius: got inf mm"),
        (COPPER, math.nan, "centreline radius: got nan mm"),
    ],
)
def test_refusals(wire: Wire, radius_mm: float, says: str) -> None:
    for function in (plastic_moment_nmm, relaxed_radius_mm, loaded_radius_mm):
        with pytest.raises(ValueError) as caught:
            function(radius_mm, *wire)
        assert says in str(caught.value)


def test_no_former_is_tight_enough() -> None:
    """Finished radius = wire radius: any springback at all puts the former inside the wire."""
    with pytest.raises(ValueError, match=r"no former bends wire of 1.628 mm .* 0.814 mm.*softer temper"):
        loaded_radius_mm(0.814, *COPPER)


@pytest.mark.parametrize(("finished", "loaded"), [(3.0, 3.1), (3.0, 0.0), (math.inf, 3.0), (math.nan, 3.0)])
def test_loaded_angle_refusals(finished: float, loaded: float) -> None:
    with pytest.raises(ValueError, match=r"need 0 < loaded <= finished"):
        loaded_angle_deg(90.0, finished, loaded)


def test_developed_arc_refusals() -> None:
    with pytest.raises(ValueError, match=r"neutral axis factor: got 1.1, need 0 to 1"):
        developed_arc_mm(90.0, 3.0, 1.6, 1.1)
    for bad in ((-1.0, 3.0, 1.6), (90.0, -3.0, 1.6), (90.0, 3.0, 0.0)):
        with pytest.raises(ValueError, match=r"need angle and radius of at least 0"):
            developed_arc_mm(*bad, 0.5)


@pytest.mark.parametrize(("core", "exponent"), [(0.0, 0.1), (1.1, 0.0), (-0.1, 0.0), (0.5, 1.0), (0.5, -0.1)])
def test_moment_ratio_refusals(core: float, exponent: float) -> None:
    with pytest.raises(ValueError, match=r"need 0 <"):
        moment_ratio(core, exponent)
