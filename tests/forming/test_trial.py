"""Trial bends and trial lengths give back the wire they were made from."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from wavejig.forming.trial import Reading, fit_flow_stress, neutral_axis_factor
from wavejig.forming.wire import relaxed_radius_mm

E_GPA = 117.0


def reading(radius_mm: float, bent_deg: float, d: float, k: float, n: float) -> Reading:
    """What a wire of flow stress k*strain^n shows."""
    relaxed = relaxed_radius_mm(radius_mm, d, E_GPA, k, n)
    return Reading(loaded_radius_mm=radius_mm, bent_deg=bent_deg, relaxed_deg=bent_deg * radius_mm / relaxed)


@given(
    d=st.floats(0.8, 4.0),
    k=st.floats(60.0, 900.0),
    n=st.sampled_from([0.0, 0.2, 0.54]),
    ratio=st.floats(1.6, 6.0),
    bent=st.floats(40.0, 170.0),
)
def test_one_reading_gives_back_the_strength(d: float, k: float, n: float, ratio: float, bent: float) -> None:
    fitted = fit_flow_stress([reading(ratio * d, bent, d, k, n)], d, E_GPA, n)
    assert fitted.strength_coefficient_mpa == pytest.approx(k, rel=1e-6)
    assert not fitted.exponent_fitted and fitted.hardening_exponent == n
    assert fitted.largest_error_deg < 1e-6


@settings(max_examples=25)
@given(d=st.floats(1.0, 3.0), k=st.floats(150.0, 800.0), n=st.floats(0.05, 0.7))
def test_a_tight_and_a_wide_reading_give_strength_and_hardening(d: float, k: float, n: float) -> None:
    """Two unknowns, two readings; the table's n is not used then."""
    readings = [reading(2.2 * d, 100.0, d, k, n), reading(20.0 * d, 90.0, d, k, n)]
    fitted = fit_flow_stress(readings, d, E_GPA, 0.54)
    assert fitted.exponent_fitted
    assert fitted.hardening_exponent == pytest.approx(n, abs=2e-3)
    assert fitted.strength_coefficient_mpa == pytest.approx(k, rel=5e-3)


def test_a_reading_predicts_another_radius_better_than_scaling_the_angle() -> None:
    """Why K is fitted and the springback not scaled: its share of the angle grows with the radius."""
    d, k, n = 1.8, 480.0, 0.54
    fitted = fit_flow_stress([reading(3.9, 100.0, d, k, n)], d, E_GPA, n)
    wide = reading(47.0, 90.0, d, k, n)
    predicted = 1.0 - 47.0 / relaxed_radius_mm(47.0, d, E_GPA, fitted.strength_coefficient_mpa, n)
    scaled = reading(3.9, 100.0, d, k, n).share
    assert predicted == pytest.approx(wide.share, rel=1e-6)
    assert abs(scaled - wide.share) > 0.5 * wide.share


def test_equal_readings_are_averaged_by_their_share() -> None:
    d = 1.8
    one, two = (
        Reading(loaded_radius_mm=3.9, bent_deg=100.0, relaxed_deg=99.2),
        Reading(loaded_radius_mm=3.9, bent_deg=100.0, relaxed_deg=98.8),
    )
    fitted = fit_flow_stress([one, two], d, E_GPA, 0.54)
    share = 1.0 - 3.9 / relaxed_radius_mm(3.9, d, E_GPA, fitted.strength_coefficient_mpa, 0.54)
    assert share == pytest.approx(math.sqrt(0.008 * 0.012), rel=0.01)
    assert fitted.largest_error_deg == pytest.approx(0.22, abs=0.03)


@pytest.mark.parametrize(
    ("bent", "relaxed", "needle"),
    [
        (100.0, 100.0, "opens"),
        (100.0, 101.0, "opens"),
        (100.0, 0.0, "left"),
        (100.0, 60.0, "more springback"),
    ],
)
def test_impossible_readings_are_refused(bent: float, relaxed: float, needle: str) -> None:
    bad = Reading(loaded_radius_mm=3.9, bent_deg=bent, relaxed_deg=relaxed)
    with pytest.raises(ValueError, match=needle):
        fit_flow_stress([bad], 1.8, E_GPA, 0.2)


@given(
    n=st.floats(0.3, 0.7),
    d=st.floats(0.8, 4.0),
    radius=st.floats(1.0, 20.0),
    angle=st.floats(30.0, 150.0),
    bends=st.integers(1, 8),
)
def test_a_trial_length_gives_back_the_factor(
    n: float, d: float, radius: float, angle: float, bends: int
) -> None:
    """Built the other way: straights and arcs of a wire whose unstretched line lies at n*d."""
    straight = 30.0
    a = math.radians(angle)
    cut = straight * (bends + 1) + bends * a * (radius + n * d)
    outside = straight * (bends + 1) + bends * 2.0 * (radius + d) * math.tan(a / 2.0)
    assert neutral_axis_factor(cut, outside, bends, angle, radius, d) == pytest.approx(n, abs=1e-9)


def test_handbook_allowance_of_soft_copper_reads_as_its_factor() -> None:
    """Machinery's Handbook, soft copper, 90 deg: 0.55 T + 1.57 R, so the line lies at 0.55/1.5708 = 0.35 T."""
    t, r = 2.0, 4.0
    cut = 40.0 + 0.55 * t + 1.5708 * r
    outside = 40.0 + 2.0 * (r + t)
    assert neutral_axis_factor(cut, outside, 1, 90.0, r, t) == pytest.approx(0.55 / 1.5708, abs=1e-3)


def test_bends_of_half_a_turn_have_no_outer_corner() -> None:
    with pytest.raises(ValueError, match="below 180"):
        neutral_axis_factor(100.0, 110.0, 1, 180.0, 3.0, 1.8)
