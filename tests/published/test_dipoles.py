"""Thin dipoles against the closed forms of the induced-EMF method and common tables.

P. S. Carter, Circuit relations in radiating systems and applications to antenna problems, Proc. IRE 20
(1932) 1004-1041 (formulas from memory). The closed forms are computed here with scipy's sine and cosine
integrals, a route the product does not use.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.special import sici

from tests.field.antennas import (
    LIGHT_HZ,
    dipole,
    elements_of,
    over_plane,
    side_by_side,
    wire_currents,
    with_currents,
)
from wavejig.field import Model, solve
from wavejig.field.matrix import impedance_matrix, make_passes
from wavejig.field.shapes import grid_lines, plate
from wavejig.field.units import ETA_OHM

BROADSIDE = [(1.0, 0.0, 0.0)]
UP = [(0.0, 0.0, 1.0)]


def carter_self() -> complex:
    """Z11 = eta / 4 pi (Cin(2 pi) + j Si(2 pi))."""
    si, ci = sici(2.0 * np.pi)
    cin = np.euler_gamma + np.log(2.0 * np.pi) - ci
    return complex(ETA_OHM / (4.0 * np.pi) * (cin + 1j * si))


def carter_mutual(distance: float) -> complex:
    """Side by side half-wave dipoles, distance in wavelengths."""
    k = 2.0 * np.pi
    u0 = k * distance
    u1 = k * (np.hypot(distance, 0.5) + 0.5)
    u2 = k * (np.hypot(distance, 0.5) - 0.5)
    (s0, c0), (s1, c1), (s2, c2) = sici(u0), sici(u1), sici(u2)
    return complex(ETA_OHM / (4.0 * np.pi) * ((2.0 * c0 - c1 - c2) - 1j * (2.0 * s0 - s1 - s2)))


MUTUAL = {
    0.1: 67.287 + 7.533j,
    0.125: 64.138 - 0.073j,
    0.2: 51.361 - 19.159j,
    0.25: 40.758 - 28.329j,
    0.5: -12.523 - 29.908j,
    1.0: 4.009 + 17.730j,
}


def sinusoid(points: np.ndarray) -> np.ndarray:
    return np.asarray(np.sin(2.0 * np.pi * (0.25 - np.abs(points[:, 2]))))


def imposed(model: Model, ports: list[np.ndarray]) -> np.ndarray:
    """Reaction of given currents on the solver's own matrix."""
    elements = elements_of(model)
    z = impedance_matrix(model, elements, make_passes(model, elements), LIGHT_HZ)
    currents = np.array(ports)
    return np.asarray(currents @ z @ currents.T)


def test_the_closed_forms_themselves() -> None:
    """73.0790 + j42.5151 ohm, and the mutual impedances of the check-value table."""
    assert carter_self() == pytest.approx(73.0790 + 42.5151j, rel=1e-4)
    for distance, value in MUTUAL.items():
        assert carter_mutual(distance) == pytest.approx(value, abs=1.5e-3)


@pytest.mark.parametrize("radius", [1e-4, 1e-5])
def test_self_impedance_of_a_sinusoidal_current(radius: float) -> None:
    """The current Carter assumes, put on the solver's matrix, within 0.5 %."""
    model = dipole(0.5, radius, 80)
    z = imposed(model, [wire_currents(elements_of(model), sinusoid)])[0, 0]
    assert abs(z - carter_self()) < 0.005 * abs(carter_self())
    assert z.real == pytest.approx(carter_self().real, rel=1e-3)


@pytest.mark.parametrize("distance", sorted(MUTUAL))
def test_mutual_impedance_of_sinusoidal_currents(distance: float) -> None:
    """As above for two dipoles, within 0.5 %."""
    model = side_by_side(distance, 1e-5, 60)
    elements = elements_of(model)
    near = wire_currents(elements, lambda p: sinusoid(p) * (p[:, 0] < distance / 2.0))
    far = wire_currents(elements, lambda p: sinusoid(p) * (p[:, 0] > distance / 2.0))
    z = imposed(model, [near, far])
    assert abs(z[0, 1] - carter_mutual(distance)) < 0.005 * abs(carter_mutual(distance))
    assert abs(z[0, 1] - z[1, 0]) < 1e-12 * abs(z[0, 1])


RADII = (1e-4, 1e-6, 1e-8, 1e-10)


def thinnest(values: list[complex]) -> complex:
    """Quadratic extrapolation in 1/Omega to 0, Omega = 2 ln(length / radius)."""
    x = 1.0 / (2.0 * np.log(0.5 / np.array(RADII)))
    return complex(np.polyfit(x, np.array(values), 2)[-1])


def test_solved_impedances_tend_to_the_closed_form() -> None:
    """Solved at four radii, extrapolated in 1/Omega, within 1 ohm."""
    solved = [complex(solve(dipole(0.5, a, 80), [LIGHT_HZ]).impedance_ohm[0]) for a in RADII]
    assert abs(solved[0] - carter_self()) > 5.0  # the way there is long: the extrapolation does the work
    assert abs(thinnest(solved).real - carter_self().real) < 1.0
    assert abs(thinnest(solved).imag - carter_self().imag) < 1.0


@pytest.mark.parametrize("distance", [0.1, 0.25, 0.5, 1.0])
def test_solved_mutual_impedances_tend_to_the_closed_form(distance: float) -> None:
    """As above."""
    solved = [complex(solve(side_by_side(distance, a, 60), [LIGHT_HZ]).impedance_ohm[0, 0, 1]) for a in RADII]
    assert abs(thinnest(solved).real - carter_mutual(distance).real) < 1.0
    assert abs(thinnest(solved).imag - carter_mutual(distance).imag) < 1.0


def test_directivity_of_the_sinusoidal_dipole() -> None:
    """2.1509 dBi; the far-field integrals to 0.001 dB."""
    model = dipole(0.5, 1e-5, 100)
    response = with_currents(model, wire_currents(elements_of(model), sinusoid))
    assert response.directivity_dbi(BROADSIDE)[0, 0] == pytest.approx(2.1509, abs=1e-3)


def test_directivity_of_a_solved_thin_dipole() -> None:
    """2.151 dBi within 0.01 dB for a wire of a ten-millionth of its wavelength."""
    response = solve(dipole(0.5, 1e-7, 60), [LIGHT_HZ])
    assert response.directivity_dbi(BROADSIDE)[0, 0] == pytest.approx(2.151, abs=0.01)


@pytest.mark.parametrize(
    ("height", "impedance", "dbi"),
    [(0.1, 21.718 + 61.674j, 8.826), (0.125, 32.322 + 70.845j, 8.704), (0.2, 66.867 + 79.919j, 8.121),
     (0.25, 85.602 + 72.423j, 7.485)],
)  # fmt: skip
def test_dipole_over_an_infinite_sheet(height: float, impedance: complex, dbi: float) -> None:
    """Z11 - Z12(2h) by Carter; the current imposed within 0.5 %, the thin wire solved within 0.05 dB."""
    closed = carter_self() - carter_mutual(2.0 * height)
    assert closed == pytest.approx(impedance, rel=1e-3)
    model = over_plane(0.5, 1e-5, 80, height)
    currents = wire_currents(elements_of(model), lambda p: np.sin(2.0 * np.pi * (0.25 - np.abs(p[:, 1]))))
    assert abs(imposed(model, [currents])[0, 0] - closed) < 0.005 * abs(closed)
    assert solve(model, [LIGHT_HZ]).directivity_dbi(UP)[0, 0] == pytest.approx(dbi, abs=0.05)


def test_two_dipoles_in_phase() -> None:
    """Two parallel half-wave dipoles 0.5 apart, driven in phase: 5.978 dBi (by Carter's impedances), 0.02 dB.

    Imposed currents, so that only the far field is judged; then solved ones, whose shape differs a little.
    """
    model = side_by_side(0.5, 1e-5, 60)
    response = with_currents(model, wire_currents(elements_of(model), sinusoid))
    across = [(0.0, 1.0, 0.0)]
    # the response of imposed currents has one port's worth of them: drive it through its first port only
    assert response.directivity_dbi(across, voltages=(1.0, 0.0))[0, 0] == pytest.approx(5.978, abs=0.02)
    solved = solve(side_by_side(0.5, 1e-6, 40), [LIGHT_HZ])
    assert solved.directivity_dbi(across, voltages=(1.0, 1.0))[0, 0] == pytest.approx(5.978, abs=0.05)


def test_two_dipoles_in_phase_over_an_infinite_sheet() -> None:
    """The same two 0.25 above a sheet: 9.921 dBi, 0.02 dB, imposed currents."""
    one = over_plane(0.5, 1e-5, 60, 0.25)
    shifted = tuple(replace(w, start=(0.5, *w.start[1:]), end=(0.5, *w.end[1:])) for w in one.wires)
    model = replace(one, wires=one.wires + shifted)
    currents = wire_currents(elements_of(model), lambda p: np.sin(2.0 * np.pi * (0.25 - np.abs(p[:, 1]))))
    assert with_currents(model, currents).directivity_dbi(UP)[0, 0] == pytest.approx(9.921, abs=0.02)


@pytest.mark.parametrize(("slenderness", "shortening"), [(5000.0, 0.02), (50.0, 0.05)])
def test_resonant_shortening(slenderness: float, shortening: float) -> None:
    """W. L. Stutzman, G. A. Thiele, Antenna Theory and Design, table of resonant lengths, from memory.

    Length over diameter 5000 and 50: 2 % and 5 % below half a wave, within 2 % of the length.
    """

    def reactance(length: float) -> float:
        z = solve(dipole(length, length / slenderness / 2.0, 40), [LIGHT_HZ]).impedance_ohm[0]
        return float(z.imag)

    resonant = brentq(reactance, 0.44, 0.50, xtol=1e-4)
    assert resonant / 0.5 == pytest.approx(1.0 - shortening, abs=0.02)


def test_dipole_before_a_real_sheet() -> None:
    """A sheet of 3 x 3 wavelengths stands in for the infinite one: impedance within 1 %, 0.4 dB (rim's ripple)."""
    model = over_plane(0.5, 1e-5, 20, 0.25)
    infinite = solve(model, [LIGHT_HZ])
    lines = grid_lines([-1.5, 0.0, 1.5], 0.1001)
    real = solve(Model(wires=model.wires, ports=model.ports, triangles=plate(lines, lines)), [LIGHT_HZ])
    z, z_real = infinite.impedance_ohm[0], real.impedance_ohm[0]
    assert abs(z_real - z) < 0.01 * abs(z)
    assert real.directivity_dbi(UP)[0, 0] == pytest.approx(infinite.directivity_dbi(UP)[0, 0], abs=0.4)
    assert real.power_balance[0] == pytest.approx(1.0, abs=1e-3)
