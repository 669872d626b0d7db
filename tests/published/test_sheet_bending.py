"""Sheet bending against worked examples, handbooks and, for springback, direct integration."""

from __future__ import annotations

import pytest
from scipy.integrate import quad

from wavejig.forming.sheet import (
    HandbookClass,
    aviation_bend_allowance_mm,
    bend_allowance_mm,
    bend_deduction_mm,
    din6935_allowance_mm,
    din6935_k_factor,
    gardiner_ratio,
    handbook_bend_length_mm,
    k_from_deduction,
    minimum_corner_relief,
    minimum_flange_mm,
    minimum_hole_edge_to_bend_mm,
    minimum_hole_mm,
    outside_setback_mm,
)
from wavejig.stock.metals import sheet_metal
from wavejig.stock.sheet import minimum_inside_radius_mm

MM_PER_INCH = 25.4


@pytest.mark.parametrize(
    ("angle_deg", "allowance", "deduction"),
    [(90, 2.26195, 1.73805), (60, 1.50796, 0.80144), (120, 3.01593, 3.91227)],
)
def test_allowance_and_deduction(angle_deg: float, allowance: float, deduction: float) -> None:
    """R = T = 1, K = 0.44: BA = angle (R + K T), BD = 2 (R + T) tan(angle/2) - BA, to five decimals."""
    assert bend_allowance_mm(angle_deg, 1.0, 1.0, 0.44) == pytest.approx(allowance, abs=1e-5)
    assert bend_deduction_mm(angle_deg, 1.0, 1.0, 0.44) == pytest.approx(deduction, abs=1e-5)
    assert k_from_deduction(deduction, angle_deg, 1.0, 1.0) == pytest.approx(0.44, abs=1e-5)


@pytest.mark.parametrize(
    ("ratio", "din_k"),
    [
        (0.65, 0.5565),
        (1.0, 0.65),
        (1.5, 0.7380),
        (2.0, 0.8005),
        (3.0, 0.8886),
        (5.0, 0.9995),
        (5.01, 1.0),
        (40.0, 1.0),
    ],
)
def test_din_6935_factor(ratio: float, din_k: float) -> None:
    """DIN 6935, from memory: k = 0.65 + 0.5 log10(r/s), 1 above r/s = 5. Our K is half of it."""
    assert 2.0 * din6935_k_factor(ratio * 1.5, 1.5) == pytest.approx(din_k, abs=1e-4)


@pytest.mark.parametrize(
    ("opening_deg", "allowance"), [(90, -1.9187), (60, -1.2249), (120, -0.9219), (135, -0.6162)]
)
def test_din_6935_allowance(opening_deg: float, allowance: float) -> None:
    """DIN 6935, from memory, r = s = 1: v by opening angle, to four decimals."""
    assert din6935_allowance_mm(opening_deg, 1.0, 1.0) == pytest.approx(allowance, abs=1e-4)


def test_din_6935_flat_length() -> None:
    """Legs of 50 and 50 at 90 deg, r = s = 1: flat length 98.081 mm."""
    assert 50.0 + 50.0 + din6935_allowance_mm(90.0, 1.0, 1.0) == pytest.approx(98.081, abs=5e-4)


@pytest.mark.parametrize(("material", "coefficient"), [("soft", 0.55), ("half-hard", 0.64), ("hard", 0.71)])
def test_handbook_bend_lengths(material: HandbookClass, coefficient: float) -> None:
    """Machinery's Handbook, from memory: 90 deg bend length c T + 1.57 R, other angles in proportion."""
    for radius, thickness in ((1.0, 1.0), (0.5, 0.8), (3.0, 1.5)):
        at_90 = coefficient * thickness + 1.57 * radius
        assert handbook_bend_length_mm(material, 90, radius, thickness) == pytest.approx(at_90, abs=1e-3)
        assert handbook_bend_length_mm(material, 45, radius, thickness) == pytest.approx(at_90 / 2, abs=1e-3)


def test_handbook_and_din_agree_on_a_usual_bend() -> None:
    """Two unlike sources, one bend: soft and half-hard handbook lengths bracket DIN 6935's arc at r/s = 2."""
    arc_mm = bend_allowance_mm(90.0, 2.0, 1.0, din6935_k_factor(2.0, 1.0))
    soft, half_hard = (handbook_bend_length_mm(c, 90.0, 2.0, 1.0) for c in ("soft", "half-hard"))
    assert soft < arc_mm < half_hard


def test_aviation_allowance() -> None:
    """FAA-H-8083-31 family: (0.01743 R + 0.0078 T) per degree; R 0.16, T 0.04 in, 90 deg: 0.2791 in."""
    allowance_mm = aviation_bend_allowance_mm(90.0, 0.16 * MM_PER_INCH, 0.04 * MM_PER_INCH)
    assert allowance_mm / MM_PER_INCH == pytest.approx(0.2791, abs=1e-4)
    # each coefficient by itself: the first is a radian's, rounded by the trade
    per_radius = aviation_bend_allowance_mm(1.0, 2.0, 1.0) - aviation_bend_allowance_mm(1.0, 1.0, 1.0)
    per_thickness = aviation_bend_allowance_mm(1.0, 1.0, 2.0) - aviation_bend_allowance_mm(1.0, 1.0, 1.0)
    assert (per_radius, per_thickness) == pytest.approx((0.01743, 0.0078), abs=1e-9)


def test_worked_u_channel() -> None:
    """FAA handbook's channel of 1 x 2 x 1 in, T 0.040, R 0.16: setback 0.200, flats 0.8, 1.6, 0.8 in."""
    setback_in = outside_setback_mm(90.0, 0.16 * MM_PER_INCH, 0.04 * MM_PER_INCH) / MM_PER_INCH
    assert setback_in == pytest.approx(0.2, abs=1e-12)
    flats_in = [1.0 - setback_in, 2.0 - 2.0 * setback_in, 1.0 - setback_in]
    assert flats_in == pytest.approx([0.8, 1.6, 0.8], abs=1e-12)


def test_gardiner_values() -> None:
    """F. J. Gardiner, Trans. ASME 79 (1957), from memory: 4x^3 - 3x + 1 at x = R Y/(E T)."""
    # x = 0.035714 = 1/28: R 2, Y 250 MPa, E 70 GPa, T 0.2
    assert gardiner_ratio(2.0, 250.0, 70.0, 0.2) == pytest.approx(0.893039, abs=1e-5)
    assert gardiner_ratio(14.0, 250.0, 70.0, 0.1) == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("x", [0.001, 0.05, 0.2, 0.4, 0.49, 0.6])
def test_gardiner_by_integrating_the_stress(x: float) -> None:
    """Ideal plastic sheet of unit width: M by quadrature over the thickness, then elastic unloading."""
    thickness, modulus, radius = 1.0, 100e3, 2.0
    yield_mpa = x * modulus * thickness / radius
    core = min(yield_mpa * radius / modulus, thickness / 2)
    moment = 2 * quad(lambda y: modulus * y / radius * y, 0.0, core)[0]
    moment += 2 * quad(lambda y: yield_mpa * y, core, thickness / 2)[0]
    expected = 1.0 - radius * moment / (modulus * thickness**3 / 12.0)
    assert gardiner_ratio(radius, yield_mpa, modulus / 1e3, thickness) == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize(
    ("name", "temper", "factors"),
    [
        ("aluminium-1100", "O", (0.0, 0.0, 0.0)),
        ("aluminium-1100", "H14", (0.0, 0.0, 1.0)),
        ("aluminium-5052", "H32", (0.0, 1.0, 1.5)),
        ("aluminium-6061", "T6", (1.0, 1.5, 2.5)),
    ],
)
def test_smallest_radii_of_aluminium(name: str, temper: str, factors: tuple[float, ...]) -> None:
    """Aluminum Association 2005: smallest inside radius / thickness at 1/32, 1/16 and 1/8 in, 90 deg."""
    for inches, factor in zip((1 / 32, 1 / 16, 1 / 8), factors, strict=True):
        thickness_mm = inches * MM_PER_INCH
        radius_mm = minimum_inside_radius_mm(sheet_metal(name, temper), thickness_mm)
        assert radius_mm == pytest.approx(factor * thickness_mm, abs=1e-9)


def test_smallest_features() -> None:
    """Common practice: flange 4t; relief t wide (1 mm at least), R + t deep; hole t; hole edge 2t + R."""
    assert minimum_flange_mm(1.5) == 6.0
    assert minimum_hole_mm(1.5) == 1.5
    assert minimum_hole_edge_to_bend_mm(2.0, 1.5) == 5.0
    thick, thin = minimum_corner_relief(2.0, 1.5), minimum_corner_relief(0.5, 0.5)
    assert (thick.width_mm, thick.depth_mm) == (1.5, 3.5)
    assert (thin.width_mm, thin.depth_mm) == (1.0, 1.0)
