"""Planted deviations found again, on the circuit (quick) and on solved antennas (whole)."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from tests.tuning import resonator
from wavejig.tuning.fitting import LIGHT_MM_PER_S, OFFSET
from wavejig.tuning.found import find
from wavejig.tuning.surface import reflection
from wavejig.tuning.sweepfile import MeasuredSweep
from wavejig.tuning.yields import FREQUENCY


def swept(
    found: resonator.Explored,
    deviations: dict[str, float],
    *,
    offset_mm: float = 20.0,
    share: float = 0.0,
    gain: complex = 1.0,
    noise: float = 0.003,
    seed: int = 1,
) -> MeasuredSweep:
    """The circuit with these deviations, as an analyser some way off would see it."""
    f = np.linspace(0.93 * found.band_hz[0], 1.07 * found.band_hz[-1], 201)
    values = {k: found.article.values[k] + v for k, v in deviations.items()}
    s = reflection(resonator.admittance(found.article, values, f / (1.0 + share)), 50.0)
    rng = np.random.default_rng(seed)
    hiss = noise * (rng.standard_normal(len(f)) + 1j * rng.standard_normal(len(f)))
    return MeasuredSweep(
        path=Path("planted-5.s1p"),
        serial="5",
        frequencies_hz=f,
        reflection=gain * s * np.exp(-4j * np.pi * f / LIGHT_MM_PER_S * offset_mm) + hiss,
        reference_ohm=50.0,
    )


@pytest.fixture(scope="module")
def circuit() -> resonator.Explored:
    return resonator.explored(wide=True)[0]


def test_deviations_of_the_circuit(circuit: resonator.Explored) -> None:
    got = find(circuit, swept(circuit, {"side": 0.2, "standoff": -0.25}))
    for key, true in (("side", 0.2), ("standoff", -0.25), (OFFSET, 20.0)):
        d = got.right.get(key)
        assert d.interval[0] <= true <= d.interval[1], (key, d)
        assert d.told
    assert got.right.get("side").value == pytest.approx(0.2, abs=0.03)
    assert got.right.get("standoff").value == pytest.approx(-0.25, abs=0.15)
    assert got.right.get("base_x").value == pytest.approx(0.0, abs=1e-3)  # the circuit has none
    assert got.right.cannot_tell("base_x")
    assert got.right.misfit < 1.3


@pytest.mark.parametrize("offset_mm", [-60.0, -5.0, 0.0, 20.0, 75.0])
def test_the_reference_plane_wherever_it_is(circuit: resonator.Explored, offset_mm: float) -> None:
    got = find(circuit, swept(circuit, {"side": -0.15}, offset_mm=offset_mm))
    assert got.right.get(OFFSET).value == pytest.approx(offset_mm, abs=1.0)
    assert got.right.get("side").value == pytest.approx(-0.15, abs=0.05)


def test_a_calibration_half_a_decibel_off_is_not_taken_for_a_deviation(circuit: resonator.Explored) -> None:
    gain = 10.0 ** (0.5 / 20.0) * np.exp(1j * np.radians(2.0))
    got = find(circuit, swept(circuit, {"side": 0.1}, gain=complex(gain)))
    d = got.right.get("standoff")
    assert d.interval[0] <= 0.0 <= d.interval[1]
    assert got.right.get("side").value == pytest.approx(0.1, abs=0.04)


def test_side_and_the_models_error_cannot_be_told_apart_but_for_a_reading(
    circuit: resonator.Explored,
) -> None:
    """A model 1 % too low and a side as drawn look like a short side; a calliper parts them."""
    sweep = swept(circuit, {}, share=0.01)
    got = find(circuit, sweep)
    assert got.right.get("side").value == pytest.approx(-0.01 * circuit.article.values["side"], abs=0.04)
    assert {"side", FREQUENCY} in [set(pair[:2]) for pair in got.open.vague]
    read = find(circuit, sweep, {"side": circuit.article.values["side"]}, 0.02)
    assert read.open.get(FREQUENCY).value == pytest.approx(0.01, abs=0.004)
    # 0.02 mm of 11.4 is 0.18 %, the sweep's own part about as much: together below 0.4 of the 0.8 % before
    assert read.open.get(FREQUENCY).sigma < 0.4 * got.open.get(FREQUENCY).sigma
    assert read.open.get("side").value == pytest.approx(0.0, abs=0.03)


def test_noise_is_estimated(circuit: resonator.Explored) -> None:
    for noise in (0.003, 0.01, 0.03):
        got = find(circuit, swept(circuit, {"side": 0.1}, noise=noise))
        assert got.right.noise == pytest.approx(np.sqrt(2.0) * np.hypot(noise, 0.002), rel=0.25)
    assert got.right.get("side").sigma > 0.0


def test_intervals_hold_the_truth_about_as_often_as_they_say(circuit: resonator.Explored) -> None:
    rng = np.random.default_rng(4)
    held = 0
    for i in range(20):
        true = {"side": 0.153 * rng.standard_normal(), "standoff": 0.153 * rng.standard_normal()}
        got = find(circuit, swept(circuit, true, noise=0.02, seed=i)).right
        held += sum(got.get(k).interval[0] <= v <= got.get(k).interval[1] for k, v in true.items())
    assert held >= 34  # of 40; 95 % would be 38, and 33 or fewer come by chance once in 70 times


def test_what_no_dimension_explains_is_strange(circuit: resonator.Explored) -> None:
    sweep = swept(circuit, {})
    f = sweep.frequencies_hz
    loose = sweep.reflection + 0.25 * np.exp(-1j * f / 4e7)
    odd = MeasuredSweep(path=sweep.path, serial="1", frequencies_hz=f, reflection=loose, reference_ohm=50.0)
    assert find(circuit, odd).right.misfit > 3.0
