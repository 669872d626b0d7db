"""Springback of round wire against closed forms and direct integration of the stress over the section."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest
from scipy.integrate import quad
from scipy.special import beta

from wavejig.forming.wire import (
    FULLY_PLASTIC_RATIO,
    loaded_radius_mm,
    moment_ratio,
    plastic_moment_nmm,
    relaxed_radius_mm,
)
from wavejig.stock.metals import wire_metal

DIAMETER = 1.628  # mm, 14 AWG
RADIUS = DIAMETER / 2


def second_moment_mm4(radius: float = RADIUS) -> float:
    return math.pi * radius**4 / 4


def integrated_moment(bend: float, radius: float, e_mpa: float, k: float, n: float) -> float:
    """M by quadrature of min(E strain, K strain^n) y over the round section: no closed form, no beta."""
    core = min(bend * (k / e_mpa) ** (1 / (1 - n)), radius)

    def strip(y: float) -> float:
        strain = y / bend
        return min(e_mpa * strain, k * strain**n) * y * 2 * math.sqrt(max(radius**2 - y**2, 0.0))

    parts = [0.0, core, radius] if core < radius else [0.0, radius]
    pieces = (quad(strip, low, high, epsabs=0, epsrel=1e-11, limit=400)[0] for low, high in pairwise(parts))
    return float(2 * sum(pieces))


def test_fully_plastic_ratio() -> None:
    """Fully plastic over first-yield moment of a round bar: 16/(3 pi) = 1.697653."""
    assert pytest.approx(1.697653, abs=1e-6) == FULLY_PLASTIC_RATIO
    assert moment_ratio(0.0) == pytest.approx(FULLY_PLASTIC_RATIO, rel=1e-14)


@pytest.mark.parametrize(("core", "ratio"), [(1.0, 1.0), (0.5, 1.493660), (0.1, 1.689177)])
def test_partly_plastic_ratio(core: float, ratio: float) -> None:
    """M/My = (2/3pi)[(5 - 2c^2) sqrt(1 - c^2) + 3 asin(c)/c], ideal plastic, c = core/radius."""
    assert moment_ratio(core) == pytest.approx(ratio, abs=1e-6)


@pytest.mark.parametrize("core", [1e-6, 1e-3, 0.05, 0.3, 0.6, 0.7, 0.7072, 0.75, 0.9, 0.999])
def test_ideal_plastic_ratio_is_the_closed_form(core: float) -> None:
    """The same closed form across the whole range, on both sides of where the product's series change."""
    closed = 2 / (3 * math.pi) * ((5 - 2 * core**2) * math.sqrt(1 - core**2) + 3 * math.asin(core) / core)
    assert moment_ratio(core) == pytest.approx(closed, rel=1e-12)


@pytest.mark.parametrize(("yield_mpa", "opens_deg"), [(69.0, 0.332), (250.0, 1.203)])
def test_ideal_plastic_springback_of_a_right_angle(yield_mpa: float, opens_deg: float) -> None:
    """1/Rf = 1/Ro - (M/My) Y/(E r); E 117 GPa, Ro 3: a bend held at 90 deg opens by so much."""
    relaxed = relaxed_radius_mm(3.0, DIAMETER, 117.0, yield_mpa, 0.0)
    assert 90.0 * (1.0 - 3.0 / relaxed) == pytest.approx(opens_deg, abs=5e-4)
    core = yield_mpa * 3.0 / (117e3 * RADIUS)
    ratio = 2 / (3 * math.pi) * ((5 - 2 * core**2) * math.sqrt(1 - core**2) + 3 * math.asin(core) / core)
    assert 1 / relaxed == pytest.approx(1 / 3.0 - ratio * yield_mpa / (117e3 * RADIUS), rel=1e-10)


@pytest.mark.parametrize(
    ("modulus_gpa", "k_mpa", "n", "opens_deg"),
    [(117.0, 315.0, 0.54, 0.550), (110.0, 895.0, 0.49, 1.821), (69.0, 180.0, 0.20, 1.001)],
    ids=["annealed copper", "annealed 70-30 brass", "1100-O aluminium"],
)
def test_hardening_springback(modulus_gpa: float, k_mpa: float, n: float, opens_deg: float) -> None:
    """Flow stress K strain^n: M = 2 K r^(n+3) R^(-n) B((n+2)/2, 3/2), 1/Rf = 1/Ro - M/(E I).

    K, n from Kalpakjian & Schmid's table, from memory. Ro 3 mm, bend held at 90 deg.
    """
    by_beta = 2 * k_mpa * RADIUS ** (n + 3) * 3.0**-n * beta((n + 2) / 2, 1.5)
    assert plastic_moment_nmm(3.0, DIAMETER, modulus_gpa, k_mpa, n) == pytest.approx(by_beta, rel=1e-6)
    relaxed = relaxed_radius_mm(3.0, DIAMETER, modulus_gpa, k_mpa, n)
    assert 90.0 * (1.0 - 3.0 / relaxed) == pytest.approx(opens_deg, abs=1e-3)


def test_annealed_copper_moment() -> None:
    """The same formula, annealed copper (K 315 MPa, n 0.54), d 1.628, R 3: 82.18 N mm."""
    assert plastic_moment_nmm(3.0, DIAMETER, 117.0, 315.0, 0.54) == pytest.approx(82.18, abs=5e-3)


@pytest.mark.parametrize("bend_mm", [0.9, 3.0, 52.0, 400.0, 3000.0])
@pytest.mark.parametrize(
    ("e_gpa", "k_mpa", "n"),
    [
        (117.0, 69.0, 0.0),
        (117.0, 250.0, 0.0),
        (117.0, 315.0, 0.54),
        (110.0, 895.0, 0.49),
        (69.0, 180.0, 0.2),
        (69.0, 410.0, 0.05),
    ],
)
def test_moment_by_integrating_the_stress(bend_mm: float, e_gpa: float, k_mpa: float, n: float) -> None:
    """From the tightest bend to nearly elastic ones: quadrature over the section agrees to 1e-7."""
    expected = integrated_moment(bend_mm, RADIUS, e_gpa * 1e3, k_mpa, n)
    assert plastic_moment_nmm(bend_mm, DIAMETER, e_gpa, k_mpa, n) == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(("yield_mpa", "former_mm"), [(69.0, 48.87), (150.0, 45.65), (250.0, 42.22)])
def test_formers_of_a_round_lobe_without_an_elastic_core(yield_mpa: float, former_mm: float) -> None:
    """Finished centreline radius 52, d 1.628, E 117 GPa: former by 1/Ro = 1/Rf + M/(E I), M = 4/3 Y r^3.

    That textbook moment ignores the elastic core. A rigid bar (modulus a million times copper's) has
    none, so the product's moment must then give the published formers, which are cut off at 0.01 mm.
    """
    rigid_nmm = plastic_moment_nmm(former_mm, DIAMETER, 117e6, yield_mpa, 0.0)
    former = 1 / (1 / 52.0 + rigid_nmm / (117e3 * second_moment_mm4()))
    assert former == pytest.approx(former_mm, abs=0.01)


@pytest.mark.parametrize("yield_mpa", [69.0, 150.0, 250.0])
def test_the_elastic_core_makes_the_former_a_little_larger(yield_mpa: float) -> None:
    """An elastic core carries less, so the wire springs back less than the textbook moment says.

    How much less is what quadrature of the stress says: let go from the former, it relaxes to 52 mm.
    """
    former = loaded_radius_mm(52.0, DIAMETER, 117.0, yield_mpa, 0.0)
    moment = integrated_moment(former, RADIUS, 117e3, yield_mpa, 0.0)
    assert 1 / (1 / former - moment / (117e3 * second_moment_mm4())) == pytest.approx(52.0, abs=1e-6)
    textbook = 1 / (1 / 52.0 + 4 / 3 * yield_mpa * RADIUS**3 / (117e3 * second_moment_mm4()))
    assert textbook < former < 52.0


def test_former_of_a_round_lobe_of_annealed_copper() -> None:
    """Finished centreline radius 52, K 315 MPa, n 0.54: former of 50.83 mm."""
    metal = wire_metal("copper", "annealed")
    former = loaded_radius_mm(
        52.0,
        DIAMETER,
        metal.youngs_modulus_gpa,
        metal.strength_coefficient_mpa,
        metal.hardening_exponent,
    )
    assert former == pytest.approx(50.83, abs=0.01)
