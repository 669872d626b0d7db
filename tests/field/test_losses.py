"""Losses and sleeves against closed forms, and as they must grow and shrink."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy.optimize import brentq

from tests.field.antennas import LIGHT_HZ, biquad, dipole, over_plane
from wavejig.field import Insulation, Model, Port, solve
from wavejig.field.losses import surface_resistance_ohm
from wavejig.field.shapes import chain, grid_lines, plate

COPPER = 58e6


def metal(model: Model, wires: float | None, sheet: float | None = None) -> Model:
    return replace(
        model,
        wires=tuple(replace(w, conductivity_s_per_m=wires) for w in model.wires),
        sheet_conductivity_s_per_m=sheet,
    )


@pytest.mark.parametrize("conductivity", [1e4, 1e6, COPPER])
def test_wire_loss_of_a_half_wave_dipole(conductivity: float) -> None:
    """A sinusoid loses Rs / (2 pi a) times a quarter wave against 73.1 ohm radiated: within 2 %."""
    radius = 1e-5
    got = solve(metal(dipole(0.5, radius, 60), conductivity), [LIGHT_HZ]).efficiency[0]
    lost = surface_resistance_ohm(LIGHT_HZ, conductivity) / (2.0 * np.pi * radius) * 0.25
    assert 1.0 / got - 1.0 == pytest.approx(lost / 73.08, rel=0.02 if lost < 10.0 else 0.1)


def test_sheet_loss_under_a_dipole() -> None:
    """The currents an infinite sheet would carry (2 n x H of the dipole), squared and added up: within 4 %.

    H of a sinusoidal half-wave dipole has a closed form: I (exp(-jkR1) + exp(-jkR2)) / (4 pi rho) in size
    (any text; from memory), so this way to the loss shares nothing with the solver.
    """
    height, half, conductivity = 0.125, 0.75, 1e3
    model = over_plane(0.5, 1e-4, 16, height)
    lines = grid_lines([-half, 0.0, half], 0.0751)
    sheet = metal(
        Model(wires=model.wires, ports=model.ports, triangles=plate(lines, lines)), None, conductivity
    )
    got = solve(sheet, [LIGHT_HZ]).efficiency[0]

    step = 0.005
    x, y = np.meshgrid(*2 * [np.arange(-half + step / 2, half, step)], indexing="ij")
    k = 2.0 * np.pi
    rho = np.hypot(x, height)
    r1, r2 = np.sqrt(rho**2 + (y - 0.25) ** 2), np.sqrt(rho**2 + (y + 0.25) ** 2)
    h = np.abs(np.exp(-1j * k * r1) + np.exp(-1j * k * r2)) / (4.0 * np.pi * rho)
    # H circles the dipole's axis: its part along the sheet
    j2 = (2.0 * h * height / rho) ** 2
    lost = surface_resistance_ohm(LIGHT_HZ, conductivity) * float(j2.sum()) * step**2
    # radiated by the same ampere before an infinite sheet: Carter, 32.322 ohm (check values)
    assert 1.0 / got - 1.0 == pytest.approx(lost / 32.322, rel=0.04)


def test_loss_goes_with_the_root_of_the_conductivity() -> None:
    """Small losses: a hundredth of the conductivity, ten times the loss, wires, sheet and attachments alike."""
    model = biquad(mesh_mm=13.0)
    for part in ((True, False), (False, True)):
        lost = []
        for conductivity in (1e9, 1e7):
            lossy = metal(model, conductivity if part[0] else None, conductivity if part[1] else None)
            response = solve(lossy, [2.44e9])
            lost.append(1.0 / response.efficiency[0] - 1.0)
            assert response.power_balance[0] == pytest.approx(1.0, abs=1e-3)
        assert lost[1] / lost[0] == pytest.approx(10.0, rel=0.01)
        assert lost[0] > 1e-6


def test_no_conductivity_no_loss() -> None:
    response = solve(biquad(mesh_mm=13.0), [2.44e9])
    assert response.efficiency[0] == 1.0
    up = [(0.0, 0.0, 1.0)]
    assert response.gain_dbi(up) == pytest.approx(response.directivity_dbi(up), abs=0.005)


def test_gain_is_directivity_times_efficiency() -> None:
    response = solve(metal(dipole(0.5, 1e-5, 40), 1e5), [LIGHT_HZ])
    side = [(1.0, 0.0, 0.0)]
    loss_db = 10.0 * np.log10(response.efficiency[0])
    assert loss_db < -0.1
    assert response.gain_dbi(side)[0, 0] == pytest.approx(
        response.directivity_dbi(side)[0, 0] + loss_db, abs=0.01
    )


def sleeved(permittivity: float, outer: float, length: float = 0.5) -> Model:
    wires = chain(
        [(0.0, 0.0, -length / 2.0), (0.0, 0.0, length / 2.0)],
        1e-3,
        counts=40,
        insulation=Insulation(outer_radius_m=outer, permittivity=permittivity),
    )
    return Model(wires=wires, ports=(Port(wire=20, end=0),))


def test_a_sleeve_of_air_or_of_no_thickness_changes_nothing() -> None:
    bare = solve(dipole(0.5, 1e-3, 40), [LIGHT_HZ]).impedance_ohm[0]
    assert solve(sleeved(1.0, 3e-3), [LIGHT_HZ]).impedance_ohm[0] == pytest.approx(bare, rel=1e-12)
    assert solve(sleeved(4.0, 1e-3), [LIGHT_HZ]).impedance_ohm[0] == pytest.approx(bare, rel=1e-12)


@pytest.mark.parametrize(("permittivity", "outer"), [(2.3, 1.5e-3), (2.3, 2e-3), (4.0, 2e-3)])
def test_a_sleeve_slows_the_wave(permittivity: float, outer: float) -> None:
    """A coaxial line's reasoning: the sleeve raises the capacitance to the far surroundings, not the inductance.

    Out to D the inverse capacitance goes with ln(D/b) + ln(b/a)/er and the inductance with ln(D/a); for a
    wire as thin as this D is about a sixth of the wavelength. So the shortening is known to its order, 25 %.
    """

    def resonance(permittivity: float) -> float:
        def reactance(f: float) -> float:
            return float(solve(sleeved(permittivity, outer), [f]).impedance_ohm[0].imag)

        return brentq(reactance, 0.80 * LIGHT_HZ, 1.0 * LIGHT_HZ, rtol=1e-6)

    found = 1.0 - resonance(permittivity) / resonance(1.0)
    far, a = 1.0 / 6.0, 1e-3
    ratio = (np.log(far / outer) + np.log(outer / a) / permittivity) / np.log(far / a)
    assert found == pytest.approx(1.0 - np.sqrt(ratio), rel=0.25)
