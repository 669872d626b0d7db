"""Strength, stiffness, conductivity and galvanic figures against published ranges."""

from __future__ import annotations

import pytest

from wavejig.stock.metals import Form, allowed_galvanic_v, galvanic_difference_v, sheet_metal, wire_metal


@pytest.mark.parametrize("form", ["wire", "sheet"])
@pytest.mark.parametrize(
    ("temper", "low", "high"), [("annealed", 48, 54), ("half-hard", 176, 176), ("hard", 265, 270)]
)
def test_copper_proof_stress(form: Form, temper: str, low: float, high: float) -> None:
    """Smithells Metals Reference Book, 8th ed., table 22.7: O 48-54, half hard 176, hard 265-270 MPa."""
    metal = (wire_metal if form == "wire" else sheet_metal)("copper", temper)
    assert low <= metal.yield_mpa <= high
    assert metal.youngs_modulus_gpa == 117.0


@pytest.mark.parametrize(("temper", "stress"), [("half-hard", 170), ("hard", 300), ("spring", 430)])
def test_brass_proof_stress(temper: str, stress: float) -> None:
    """EN 1652 CuZn37: R350 170, R410 300, R480 430 MPa; E 110 GPa."""
    assert sheet_metal("brass", temper).yield_mpa == wire_metal("brass", temper).yield_mpa == stress
    assert sheet_metal("brass", temper).youngs_modulus_gpa == 110.0


def test_soft_brass_is_within_its_maximum() -> None:
    """EN 1652 CuZn37 R300: at most 180 MPa."""
    assert 0 < sheet_metal("brass", "annealed").yield_mpa <= 180


@pytest.mark.parametrize(
    ("name", "temper", "stress", "modulus"),
    [
        ("aluminium-5052", "H32", 193, 70),
        ("aluminium-1050", "H14", 103, 70),
        ("aluminium-6061", "T6", 276, 69),
        ("tinplate", "TS275", 275, 207),
    ],
)
def test_sheet_proof_stress(name: str, temper: str, stress: float, modulus: float) -> None:
    """Aluminum Association data and EN 10202 (partly from memory): proof stress and modulus."""
    metal = sheet_metal(name, temper)
    assert (metal.yield_mpa, metal.youngs_modulus_gpa) == (stress, modulus)


@pytest.mark.parametrize(
    ("name", "temper", "k_mpa", "n"),
    [("copper", "annealed", 315, 0.54), ("brass", "annealed", 895, 0.49), ("aluminium-1100", "O", 180, 0.20)],
)
def test_flow_stress_constants(name: str, temper: str, k_mpa: float, n: float) -> None:
    """Kalpakjian & Schmid, table of K and n at room temperature, from memory."""
    metal = wire_metal(name, temper)
    assert (metal.strength_coefficient_mpa, metal.hardening_exponent) == (k_mpa, n)


def test_copper_conducts_as_the_international_standard() -> None:
    """IEC 60028: 100 % IACS is a resistivity of 1/58 ohm mm2/m at 20 C, density 8.89."""
    copper = wire_metal("copper")
    assert (copper.conductivity_ms_per_m, copper.density_g_per_cm3) == (58.0, 8.89)


@pytest.mark.parametrize(
    ("one", "other", "difference_v"),
    [
        ("copper", "tin", 0.30),
        ("copper", "aluminium", 0.55),
        ("tin", "copper", 0.30),
        ("brass", "brass", 0.0),
    ],
)
def test_galvanic_differences(one: str, other: str, difference_v: float) -> None:
    """Anodic index after MIL-STD-889/MIL-F-14072, from memory: copper 0.35, tin 0.65, aluminium 0.90 V."""
    assert galvanic_difference_v(one, other) == pytest.approx(difference_v, abs=1e-12)


def test_galvanic_limits() -> None:
    """Common practice: 0.15 V outdoors; copper on brass passes there, copper on aluminium does not."""
    assert allowed_galvanic_v() == allowed_galvanic_v("outdoors") == 0.15
    assert galvanic_difference_v("copper", "brass") <= 0.15 < galvanic_difference_v("copper", "aluminium")
