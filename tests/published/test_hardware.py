"""Holes, fits and connector patterns against the standards' figures."""

from __future__ import annotations

import math

import pytest

from wavejig.stock.connectors import Tube, connector, tubes
from wavejig.stock.hardware import (
    clearance_hole_mm,
    dowel_diameters_mm,
    dowel_limits_mm,
    fit_limits_mm,
    screw,
    tap_drill_mm,
)


@pytest.mark.parametrize(
    ("name", "fine_mm", "medium_mm", "coarse_mm"),
    [
        ("M2", 2.2, 2.4, 2.6),
        ("M2.5", 2.7, 2.9, 3.1),
        ("M3", 3.2, 3.4, 3.6),
        ("M4", 4.3, 4.5, 4.8),
        ("M5", 5.3, 5.5, 5.8),
    ],
)
def test_clearance_holes(name: str, fine_mm: float, medium_mm: float, coarse_mm: float) -> None:
    """ISO 273, fine, medium and coarse series."""
    got = (
        clearance_hole_mm(name, "fine"),
        clearance_hole_mm(name, "medium"),
        clearance_hole_mm(name, "coarse"),
    )
    assert got == (fine_mm, medium_mm, coarse_mm)
    assert clearance_hole_mm(name) == medium_mm


@pytest.mark.parametrize(
    ("name", "drill_mm"), [("M2", 1.6), ("M2.5", 2.05), ("M3", 2.5), ("M4", 3.3), ("M5", 4.2)]
)
def test_tap_drills(name: str, drill_mm: float) -> None:
    """Usual tap drills, thread diameter less pitch (ISO 261 coarse)."""
    assert tap_drill_mm(name) == drill_mm


@pytest.mark.parametrize(("name", "outside_mm"), [("M3", 7.0), ("M4", 9.0), ("M5", 10.0), ("M6", 12.0)])
def test_washers(name: str, outside_mm: float) -> None:
    """ISO 7089 outside diameters, from memory."""
    assert screw(name).washer_mm == outside_mm


def test_fits_of_3_to_6_mm() -> None:
    """ISO 286: H7 0/+12, h6 -8/0, m6 +4/+12 um over 3 up to 6 mm; dowels (ISO 8734) are m6."""
    for diameter_mm in (3.01, 4.0, 6.0):
        assert fit_limits_mm(diameter_mm, "H7") == (0.0, 0.012)
        assert fit_limits_mm(diameter_mm, "h6") == (-0.008, 0.0)
        assert fit_limits_mm(diameter_mm, "m6") == dowel_limits_mm(diameter_mm) == (0.004, 0.012)


def test_fits_up_to_3_mm() -> None:
    """ISO 286: H7 0/+10, h6 -6/0, m6 +2/+8 um up to 3 mm; from memory."""
    assert fit_limits_mm(3.0, "H7") == (0.0, 0.010)
    assert fit_limits_mm(3.0, "h6") == (-0.006, 0.0)
    assert dowel_limits_mm(1.5) == (0.002, 0.008)


@pytest.mark.parametrize(("low", "high"), [(3, 6), (6, 10), (10, 18), (18, 30)])
def test_fit_widths_follow_the_standard_tolerance_unit(low: float, high: float) -> None:
    """ISO 286-1: i = 0.45 D^(1/3) + 0.001 D um, D the geometric mean of the range; IT6 = 10 i, IT7 = 16 i.

    From memory; the standard rounds to whole micrometres, mostly up; up to 3 mm it is above the formula.
    """
    mean = math.sqrt(low * high)
    unit_um = 0.45 * mean ** (1 / 3) + 0.001 * mean
    widths_um = {c: (b - a) * 1000 for c in ("H7", "h6", "m6") for a, b in [fit_limits_mm(high, c)]}
    assert widths_um["H7"] == pytest.approx(16 * unit_um, abs=1.0)
    assert widths_um["h6"] == pytest.approx(10 * unit_um, abs=1.0)
    assert widths_um["m6"] == pytest.approx(widths_um["h6"], abs=1e-9)


def test_dowel_sizes() -> None:
    """ISO 8734 hardened pins run 1, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10, 12, 16, 20 mm; from memory."""
    assert dowel_diameters_mm(hardened_only=True) == (1, 1.5, 2, 2.5, 3, 4, 5, 6, 8, 10, 12, 16, 20)
    assert set(dowel_diameters_mm()) - set(dowel_diameters_mm(hardened_only=True)) == {0.6, 0.8, 1.2}


def test_flange_patterns() -> None:
    """Usual four-hole flanges, from memory: SMA 12.7 square, 8.64 pitch, 2.6; N 25.4, 18.26, 3.2 to 3.4."""
    sma, n = connector("sma-4hole-post"), connector("n-4hole")
    assert (sma.flange_mm, sma.hole_pitch_mm, sma.hole_diameter_mm) == (12.7, 8.64, 2.6)
    assert (n.flange_mm, n.hole_pitch_mm) == (25.4, 18.26)
    assert 3.2 <= n.hole_diameter_mm <= 3.4


@pytest.mark.parametrize("tube", tubes(), ids=lambda tube: tube.name)
def test_semi_rigid_tubes_are_50_ohm(tube: Tube) -> None:
    """MIL-C-17 semi-rigid is 50 +-1 ohm by name; here from its sizes, Z = (eta0/2pi) ln(D/d)/sqrt(eps)."""
    ratio = tube.dielectric_diameter_mm / tube.inner_diameter_mm
    impedance_ohm = 376.7303 / (2 * math.pi) * math.log(ratio) / math.sqrt(tube.permittivity)
    assert impedance_ohm == pytest.approx(50.0, abs=1.0)
