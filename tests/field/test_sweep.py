"""A band from few solves, against solving everywhere."""

from __future__ import annotations

import numpy as np
import pytest

from tests.field.antennas import LIGHT_HZ, dipole, side_by_side
from tests.field.demos import NAMES, band, demo_model
from wavejig.field import ModelError, solve, sweep


@pytest.mark.parametrize("name", [NAMES[0], *(pytest.param(n, marks=pytest.mark.slow) for n in NAMES[1:])])
def test_the_sweep_says_what_solving_says(name: str) -> None:
    """At frequencies it did not solve, every reflection within the tolerance; and what it solved, exactly."""
    model, (low, high) = demo_model(name), band(name)
    swept = sweep(model, low, high, 1e-4)
    between = low + (high - low) * np.array([0.07, 0.31, 0.62, 0.93])
    solved = solve(model, between)
    assert np.abs(swept.s11(between) - solved.s11).max() < 1e-4
    assert swept.reached
    known = np.array([r.frequencies_hz[0] for r in swept.responses])
    own = np.array([r.admittance_s[0, 0, 0] for r in swept.responses])
    assert swept.admittance_s(known)[:, 0, 0] == pytest.approx(own, rel=1e-9)


@pytest.mark.parametrize("name", NAMES)
def test_a_demo_band_takes_few_solves(name: str) -> None:
    """At most seven."""
    swept = sweep(demo_model(name), *band(name))
    assert swept.reached
    assert swept.solves <= 7


def test_a_wide_band_with_a_sharp_resonance() -> None:
    """An octave about a thin dipole: the reflection within 1e-4 everywhere, from far fewer solves than points."""
    model = dipole(0.5, 1e-5, 24)
    swept = sweep(model, 0.7 * LIGHT_HZ, 1.4 * LIGHT_HZ, 1e-5)
    assert swept.reached
    assert swept.solves < 16
    f = np.linspace(0.7, 1.4, 29) * LIGHT_HZ
    assert np.abs(swept.s11(f) - solve(model, f).s11).max() < 1e-4
    assert swept.impedance_ohm(f) == pytest.approx(solve(model, f).impedance_ohm, rel=1e-3)


def test_several_ports() -> None:
    model = side_by_side(0.3, 1e-4, 12)
    swept = sweep(model, 0.9 * LIGHT_HZ, 1.1 * LIGHT_HZ)
    f = np.array([0.93, 1.04]) * LIGHT_HZ
    solved = solve(model, f)
    assert swept.admittance_s(f) == pytest.approx(solved.admittance_s, rel=1e-4)
    assert swept.impedance_ohm(f) == pytest.approx(solved.impedance_ohm, rel=1e-3)
    assert swept.s11(f) == pytest.approx(solved.s11, abs=1e-4)


def test_it_owns_up_when_it_stops_short() -> None:
    swept = sweep(dipole(0.5, 1e-5, 12), 0.3 * LIGHT_HZ, 2.2 * LIGHT_HZ, 1e-9, most=5)
    assert swept.solves == 5
    assert not swept.reached
    assert swept.error > 1e-9


def test_the_error_is_measured_not_guessed() -> None:
    """The stated error is the miss at the last solve of the fit without it: refitting without it shows it."""
    from wavejig.field.sweeping import _evaluate, _fit, _scattering

    model = dipole(0.5, 1e-3, 12)
    swept = sweep(model, 0.8 * LIGHT_HZ, 1.2 * LIGHT_HZ, 1e-3)
    units = {(float(r.frequencies_hz[0]) / LIGHT_HZ - 0.8) / 0.4: r for r in swept.responses}
    misses = []
    for unit, response in units.items():
        if unit in (0.0, 1.0):
            continue
        others = {u: r for u, r in units.items() if u != unit}
        guess = _scattering(_evaluate(_fit(others), np.array([unit])), response.reference_ohm)
        misses.append(float(np.abs(guess - response.scattering()).max()))
    assert any(m == pytest.approx(swept.error, rel=1e-6) for m in misses)


def test_references() -> None:
    """Reflection in another reference, by hand: (Z - R) / (Z + R)."""
    swept = sweep(dipole(0.5, 1e-3, 12), 0.9 * LIGHT_HZ, 1.1 * LIGHT_HZ)
    f = [LIGHT_HZ]
    z = swept.impedance_ohm(f)
    assert swept.s11(f, 75.0) == pytest.approx((z - 75.0) / (z + 75.0), rel=1e-9)
    assert swept.s11(f) == pytest.approx((z - 50.0) / (z + 50.0), rel=1e-9)


def test_outside_its_band_it_refuses() -> None:
    swept = sweep(dipole(0.5, 1e-3, 12), 0.9 * LIGHT_HZ, 1.1 * LIGHT_HZ)
    with pytest.raises(ModelError, match="holds between"):
        swept.s11([1.11 * LIGHT_HZ])
    with pytest.raises(ModelError, match="low end"):
        sweep(dipole(0.5, 1e-3, 12), LIGHT_HZ, LIGHT_HZ)
