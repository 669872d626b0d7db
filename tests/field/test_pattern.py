"""Beamwidths, sidelobes, front-to-back and polarisation of patterns known in closed form."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from tests.field.antennas import LIGHT_HZ, biquad, dipole, elements_of, wire_currents, with_currents
from wavejig.field import Model, ModelError, Port, Response, solve
from wavejig.field.farfield import sphere_degree
from wavejig.field.pattern import read_pattern
from wavejig.field.quadrature import sphere_rule
from wavejig.field.shapes import chain

X, Y, Z = (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)


def sinusoid_array(places: list[float], amperes: list[complex]) -> Response:
    """Half-wave dipoles along z, spread along x (wavelengths), with sinusoidal currents of these sizes."""
    wires = sum((dipole(0.5, 1e-5, 40, at=(x, 0.0)).wires for x in places), ())
    model = Model(wires=wires, ports=(Port(wire=20, end=0),))
    elements = elements_of(model)
    total = np.zeros(elements.unknowns, dtype=np.complex128)
    for x, ampere in zip(places, amperes, strict=True):

        def shape(p: np.ndarray, x: float = x) -> np.ndarray:
            here = np.isclose(p[:, 0], x)
            return np.asarray(np.sin(2.0 * np.pi * (0.25 - np.abs(p[:, 2]))) * here)

        total += ampere * wire_currents(elements, shape)
    return Response(
        frequencies_hz=np.array([LIGHT_HZ]),
        model=model,
        elements=elements,
        currents_a_per_v=total[None, :, None],
        remarks=(),
    )


def test_half_wave_dipole() -> None:
    """cos(pi/2 cos t)/sin t: 78 degrees between half powers along the wire, no end to the beam across it."""
    pattern = read_pattern(sinusoid_array([0.0], [1.0]), axis=X, polarisation=Z)

    def drop(t: float) -> float:
        return float((np.cos(np.pi / 2.0 * np.cos(t)) / np.sin(t)) ** 2 - 0.5)

    width = 180.0 - 2.0 * np.degrees(brentq(drop, 0.5, np.pi / 2.0))
    assert width == pytest.approx(78.1, abs=0.05)
    assert pattern.e_plane.beamwidth_deg == pytest.approx(width, abs=0.02)
    assert pattern.h_plane.beamwidth_deg is None
    assert pattern.front_to_back_db == pytest.approx(0.0, abs=1e-9)
    assert pattern.axial_dbi == pytest.approx(2.151, abs=1e-3)
    assert pattern.cross_db < -100.0
    assert pattern.efficiency == 1.0


def test_short_dipole() -> None:
    """sin t: 90 degrees, 1.761 dBi."""
    model = dipole(0.01, 1e-6, 4)
    elements = elements_of(model)
    currents = wire_currents(elements, lambda p: 1.0 - np.abs(p[:, 2]) / 0.005)
    pattern = read_pattern(with_currents(model, currents), axis=Y, polarisation=Z)
    assert pattern.e_plane.beamwidth_deg == pytest.approx(90.0, abs=0.03)
    assert pattern.axial_dbi == pytest.approx(10.0 * np.log10(1.5), abs=1e-3)


@pytest.mark.parametrize("ratio", [0.2, 0.5, 0.9])
def test_front_to_back_of_two_dipoles_in_quadrature(ratio: float) -> None:
    """A quarter wave apart and a quarter period behind: (1 + r) forward, (1 - r) back."""
    response = sinusoid_array([0.0, 0.25], [1.0, -1j * ratio])
    expected = 20.0 * np.log10((1.0 + ratio) / (1.0 - ratio))
    assert read_pattern(response, axis=X, polarisation=Z).front_to_back_db == pytest.approx(
        expected, abs=1e-6
    )
    turned = read_pattern(response, axis=(-1.0, 0.0, 0.0), polarisation=Z)
    assert turned.front_to_back_db == pytest.approx(-expected, abs=1e-6)


def test_sidelobe_and_beamwidth_of_four_in_a_row() -> None:
    """Array factor sin(4u)/(4 sin u), u = pi/2 sin t: its beamwidth and its first sidelobe (-11.3 dB)."""

    def factor(t: float) -> float:
        u = np.pi / 2.0 * np.sin(t)
        return float(np.sin(4.0 * u) / (4.0 * np.sin(u)))

    half = brentq(lambda t: factor(t) ** 2 - 0.5, 0.05, 0.5)
    side = minimize_scalar(lambda t: -(factor(t) ** 2), bounds=(0.55, 1.3), method="bounded")
    level = 10.0 * np.log10(-side.fun)
    assert level == pytest.approx(-11.3, abs=0.05)
    pattern = read_pattern(sinusoid_array([-0.75, -0.25, 0.25, 0.75], [1.0] * 4), axis=Y, polarisation=Z)
    assert pattern.h_plane.beamwidth_deg == pytest.approx(2.0 * np.degrees(half), abs=0.02)
    assert pattern.h_plane.first_sidelobe_db == pytest.approx(level, abs=0.01)
    assert pattern.h_plane.peak_angle_deg in (0.0, -180.0, 180.0)


def test_a_beam_that_squints() -> None:
    """Two dipoles half a wave apart, a quarter period between them: the peak leaves the axis by 30 degrees."""
    pattern = read_pattern(sinusoid_array([0.0, 0.5], [1.0, np.exp(-0.5j * np.pi)]), axis=Y, polarisation=Z)
    # sin t = 1/2 toward the lagging one (at +x); angles grow from the axis to axis x polarisation = +x
    assert pattern.h_plane.peak_angle_deg in (30.0, 150.0)
    assert pattern.axial_dbi < pattern.h_plane.peak_dbi - 2.0


@pytest.mark.parametrize("tilt_deg", [10.0, 30.0, 45.0])
def test_cross_polarisation_of_a_tilted_dipole(tilt_deg: float) -> None:
    """Turned about the axis by t: the cross part is sin^2 t of the whole."""
    t = np.radians(tilt_deg)
    end = np.array([np.sin(t), np.cos(t), 0.0]) * 0.25
    wires = chain([-end, end], 1e-5, counts=20)
    response = solve(Model(wires=wires, ports=(Port(wire=10, end=0),)), [LIGHT_HZ])
    pattern = read_pattern(response)
    assert pattern.cross_db == pytest.approx(20.0 * np.log10(np.sin(t)), abs=1e-6)
    cut = pattern.e_plane
    both = 10.0 ** (cut.co_dbi / 10.0) + 10.0 ** (cut.cross_dbi / 10.0)
    assert both == pytest.approx(10.0 ** (cut.total_dbi / 10.0), rel=1e-9)


def test_an_untilted_dipole_has_no_cross_part_in_either_cut() -> None:
    wires = chain([(0.0, -0.25, 0.0), (0.0, 0.25, 0.0)], 1e-5, counts=20)
    pattern = read_pattern(solve(Model(wires=wires, ports=(Port(wire=10, end=0),)), [LIGHT_HZ]))
    for cut in (pattern.e_plane, pattern.h_plane):
        lit = (cut.total_dbi > -40.0) & (np.abs(cut.angles_deg) < 179.0)
        assert (cut.cross_dbi - cut.total_dbi)[lit].max() < -60.0


def test_directions_that_are_none() -> None:
    response = sinusoid_array([0.0], [1.0])
    with pytest.raises(ModelError, match="axis"):
        read_pattern(response, axis=(0.0, 0.0, 0.0))
    with pytest.raises(ModelError, match="polarisation"):
        read_pattern(response, axis=Z, polarisation=Z)
    for bad in ([(2.0, 0.0, 0.0)], [0.0, 0.0, 1.0], [(1.0, 0.0)]):
        with pytest.raises(ModelError, match="unit vectors"):
            response.directivity_dbi(bad)


def test_the_sphere_is_fine_enough() -> None:
    """Half as many harmonics again change the radiated power by less than a part in a million."""
    for model, hz in ((biquad(mesh_mm=13.0), 2.44e9), (dipole(0.5, 1e-3, 20), LIGHT_HZ)):
        response = solve(model, [hz])
        drive = response.drive(0, None)
        degree = sphere_degree(response.elements, hz)
        powers = []
        for d in (degree, degree * 3 // 2):
            directions, weights = sphere_rule(d)
            powers.append(float(response.radiation(directions, drive).intensity_w_per_sr[0] @ weights))
        assert powers[0] == pytest.approx(powers[1], rel=1e-6)
