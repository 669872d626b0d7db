"""General tolerances and process figures against the standards."""

from __future__ import annotations

import pytest

from wavejig.stock.processes import (
    Grade,
    cutter,
    iso2768_angle_deg,
    iso2768_linear_mm,
    plastic,
    print_clearance_mm,
    printers,
)

LINEAR = {
    "f": (0.05, 0.05, 0.1, 0.15, 0.2, 0.3),
    "m": (0.1, 0.1, 0.2, 0.3, 0.5, 0.8),
    "c": (0.2, 0.3, 0.5, 0.8, 1.2, 2.0),
}
BOUNDS = (0.5, 3, 6, 30, 120, 400, 1000)


@pytest.mark.parametrize("grade", ["f", "m", "c"])
def test_linear_tolerances(grade: Grade) -> None:
    """ISO 2768-1 table 1: 0.5 up to 3, over 3 up to 6, 6-30, 30-120, 120-400, 400-1000 mm."""
    assert iso2768_linear_mm(0.5, grade) == LINEAR[grade][0]
    for low, high, tolerance in zip(BOUNDS, BOUNDS[1:], LINEAR[grade], strict=False):
        assert iso2768_linear_mm(low + 1e-6, grade) == tolerance
        assert iso2768_linear_mm(high, grade) == tolerance


@pytest.mark.parametrize(
    ("leg_mm", "tolerance_deg"),
    [(1, 1.0), (10, 1.0), (10.1, 0.5), (50, 0.5), (50.1, 1 / 3), (120, 1 / 3), (121, 1 / 6), (400, 1 / 6)],
)
def test_angular_tolerances(leg_mm: float, tolerance_deg: float) -> None:
    """ISO 2768-1 table 3, grade m, from memory: 1 deg, 30', 20', 10' by the shorter leg."""
    assert iso2768_angle_deg(leg_mm, "m") == pytest.approx(tolerance_deg, rel=1e-12)


def test_laser_kerf() -> None:
    """Shops' guides: 0.13 to 0.38 mm in metal, 0.2 typical."""
    assert cutter("fibre-laser").kerf_mm == 0.2
    assert 0.13 <= cutter("co2-laser").kerf_mm <= 0.38


def test_printed_fits() -> None:
    """Common practice: press 0.1 to 0.15, slide 0.2 to 0.3, loose 0.4; holes 0.1 to 0.2 under, +-0.2."""
    assert 0.1 <= print_clearance_mm("press") <= 0.15
    assert 0.2 <= print_clearance_mm("slide") <= 0.3
    assert print_clearance_mm("loose") == 0.4
    for printer in printers():
        assert printer.clearance_mm == print_clearance_mm("slide")
        assert 0.1 <= printer.hole_allowance_mm <= 0.2
        assert printer.tolerance_mm == 0.2


@pytest.mark.parametrize(("name", "low_c", "high_c"), [("PLA", 59, 59), ("PETG", 77, 77), ("ABS", 100, 105)])
def test_plastics(name: str, low_c: float, high_c: float) -> None:
    """Glass transition from data sheets; prints at 1 to 10 GHz: permittivity 2.55-2.95, e'' 0.007-0.08

    (Zechmeister & Lacik).
    """
    found = plastic(name)
    assert low_c <= found.glass_transition_c <= high_c
    assert (found.permittivity_low, found.permittivity_high) == (2.55, 2.95)
    assert (
        0.007
        <= found.permittivity_low * found.loss_tangent
        <= found.permittivity_high * found.loss_tangent
        <= 0.08
    )
