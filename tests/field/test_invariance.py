"""What must not change an answer: place, turn, size, numbering, mirrors, threads; and reciprocity."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numba
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation

from tests.field.antennas import LIGHT_HZ, biquad, dipole, loop, over_plane, side_by_side
from tests.field.demos import NAMES, band, demo_model
from wavejig.field import Insulation, Model, Port, solve
from wavejig.field.matrix import impedance_matrix
from wavejig.field.shapes import chain, grid_lines, plate
from wavejig.field.solver import prepare

HZ = 2.44e9
SHEET_ANTENNA = biquad(mesh_mm=13.0, lip_mm=20.0)
TWO = replace(
    SHEET_ANTENNA,
    # a second port where the other leg lands: wires, sheet, attachments and a coupling in one model
    ports=(SHEET_ANTENNA.ports[0], Port(wire=len(SHEET_ANTENNA.wires) - 3, end=0)),
)


def moved(model: Model, place: Callable[[np.ndarray], np.ndarray], scale: float = 1.0) -> Model:
    """The model with every point put through place, radii and sleeves scaled."""

    def at(p: tuple[float, float, float]) -> tuple[float, float, float]:
        x, y, z = place(np.array([p]))[0].tolist()
        return (x, y, z)

    wires = []
    for w in model.wires:
        sleeve = w.insulation
        if sleeve is not None:
            sleeve = replace(sleeve, outer_radius_m=sleeve.outer_radius_m * scale)
        wires.append(
            replace(w, start=at(w.start), end=at(w.end), radius_m=w.radius_m * scale, insulation=sleeve)
        )
    triangles = place(model.triangles.reshape(-1, 3)).reshape(-1, 3, 3)
    return replace(model, wires=tuple(wires), triangles=triangles)


def admittance(model: Model, hz: float = HZ, *, mirrors: bool = True) -> np.ndarray:
    return solve(model, [hz], mirrors=mirrors).admittance_s[0]


def close(a: np.ndarray, b: np.ndarray, tolerance: float) -> bool:
    return bool(np.abs(a - b).max() < tolerance * np.abs(b).max())


def test_the_foot_of_the_second_leg_is_a_port() -> None:
    """TWO is what it says: both ports at the sheet, both with a current."""
    starts = [TWO.wires[p.wire].start[2] for p in TWO.ports]
    assert starts == [0.0, 0.0]
    assert np.abs(np.diag(admittance(TWO))).min() > 1e-4


@settings(max_examples=6)
@given(st.integers(0, 10**6), st.floats(-3.0, 3.0), st.floats(-3.0, 3.0))
def test_turned_and_shifted(seed: int, dx: float, dz: float) -> None:
    """Impedance to 1e-9 anywhere within 3 m (25 wavelengths); the pattern turns with the antenna."""
    turn = Rotation.random(random_state=seed)

    def place(p: np.ndarray) -> np.ndarray:
        return np.asarray(turn.apply(np.array(p)) + np.array([dx, 0.7, dz]))

    before, after = solve(TWO, [HZ]), solve(moved(TWO, place), [HZ])
    assert close(after.admittance_s, before.admittance_s, 1e-9)
    looks = np.array([(0.0, 0.0, 1.0), (0.6, 0.0, 0.8), (0.0, -0.8, 0.6), (0.36, 0.48, -0.8)])
    # a directivity in decibels: 1e-9 of the field, its deep directions a little less
    assert after.directivity_dbi(turn.apply(looks)) == pytest.approx(before.directivity_dbi(looks), abs=1e-6)


@pytest.mark.parametrize("scale", [1e-3, 0.37, 25.4, 1e3])
def test_scaled_with_the_wavelength(scale: float) -> None:
    """Lossless: the same impedance at the wavelength as many times longer (sleeves scale too)."""
    sleeve = Insulation(outer_radius_m=1.3e-3, permittivity=2.3)
    model = replace(TWO, wires=tuple(replace(w, insulation=sleeve) for w in TWO.wires))
    scaled = moved(model, lambda p: p * scale, scale)
    assert close(admittance(scaled, HZ / scale), admittance(model), 1e-9)


@settings(max_examples=6)
@given(st.integers(0, 10**6))
def test_numbering_and_direction_do_not_matter(seed: int) -> None:
    """Wires and triangles in any order, wires run either way, triangles from any corner, either side up.

    The order also decides which of two elements observes the other, so this is reciprocity of the
    quadrature too, which the symmetric matrix by itself would hide.
    """
    draw = np.random.default_rng(seed)
    order = draw.permutation(len(TWO.wires))
    back = draw.random(len(order)) < 0.5
    wires = [TWO.wires[i] for i in order]
    wires = [replace(w, start=w.end, end=w.start) if b else w for w, b in zip(wires, back, strict=True)]
    place = {int(old): new for new, old in enumerate(order)}
    ports = tuple(replace(p, wire=place[p.wire], end=p.end ^ int(back[place[p.wire]])) for p in TWO.ports)
    triangles = TWO.triangles[draw.permutation(len(TWO.triangles))]
    triangles = np.array([np.roll(t, draw.integers(3), axis=0)[:: draw.choice([1, -1])] for t in triangles])
    shuffled = Model(wires=tuple(wires), triangles=triangles, ports=ports)
    assert close(admittance(shuffled), admittance(TWO), 1e-9)


def test_ports_may_change_places() -> None:
    swapped = replace(TWO, ports=TWO.ports[::-1])
    assert close(admittance(swapped), admittance(TWO)[::-1, ::-1], 1e-12)


@pytest.mark.parametrize(
    ("model", "hz"),
    [(TWO, HZ), (side_by_side(0.3, 1e-4, 30), LIGHT_HZ), (TWO, 1.9e9)],
    ids=["legs on a sheet", "dipoles", "legs off resonance"],
)
def test_reciprocity(model: Model, hz: float) -> None:
    """Y12 = Y21 to 1e-6 (asked; 1e-9 reached)."""
    y = admittance(model, hz, mirrors=False)
    assert abs(y[0, 1] - y[1, 0]) < 1e-9 * abs(y[0, 1])
    assert abs(y[0, 1]) > 1e-3 * abs(y[0, 0])


def symmetric_models() -> dict[str, tuple[Model, float, int]]:
    lines = grid_lines([-0.5, 0.0, 0.5], 0.1)
    level = chain([(0.0, -0.25, 0.125), (0.0, 0.25, 0.125)], 1e-3, counts=20)
    over_sheet = Model(wires=level, triangles=plate(lines, lines), ports=(Port(wire=10, end=0),))
    return {
        "biquad": (SHEET_ANTENNA, HZ, 2),
        "both ports": (TWO, HZ, 2),
        "loop": (loop(1.0, 80, 1e-3), LIGHT_HZ, 2),
        "dipole over a sheet": (over_sheet, LIGHT_HZ, 2),
        "dipole over ground": (over_plane(0.5, 1e-3, 20, 0.2), LIGHT_HZ, 2),
        "dipoles": (side_by_side(0.3, 1e-4, 30), LIGHT_HZ, 1),
    }


@pytest.mark.parametrize("name", symmetric_models())
def test_mirrors_change_the_work_and_nothing_else(name: str) -> None:
    model, hz, at_least = symmetric_models()[name]
    assert len(prepare(model, hz).mirrors) >= at_least
    with_mirrors, without = solve(model, [hz]), solve(model, [hz], mirrors=False)
    assert close(with_mirrors.admittance_s, without.admittance_s, 1e-9)
    assert close(with_mirrors.currents_a_per_v, without.currents_a_per_v, 1e-9)


@pytest.mark.parametrize("name", NAMES[:1])
def test_mirrors_are_not_seen_where_there_are_none(name: str) -> None:
    """A demo antenna has an off-centre feed; a nearly symmetric model is not symmetric either."""
    model = demo_model(name)
    hz = band(name)[0]
    nudged = replace(
        SHEET_ANTENNA, wires=(replace(SHEET_ANTENNA.wires[0], radius_m=0.91e-3), *SHEET_ANTENNA.wires[1:])
    )
    assert len(prepare(nudged, HZ).mirrors) <= len(prepare(SHEET_ANTENNA, HZ).mirrors)
    bent = dipole(0.5, 1e-3, 20)
    first = bent.wires[0]
    bent = replace(bent, wires=(replace(first, start=(1e-4, 0.0, first.start[2])), *bent.wires[1:]))
    assert len(prepare(bent, LIGHT_HZ).mirrors) == 1  # y = 0 still holds
    assert close(solve(model, [hz]).admittance_s, solve(model, [hz], mirrors=False).admittance_s, 1e-9)


def test_threads_change_no_bit() -> None:
    """The shares of the work never meet in a sum."""
    if numba.config.NUMBA_NUM_THREADS < 2:
        pytest.skip("numba is set to one thread here")
    before = numba.get_num_threads()
    try:
        answers = []
        for threads in (1, 2):
            numba.set_num_threads(threads)
            response = solve(TWO, [HZ], mirrors=False)
            prepared = prepare(TWO, HZ, mirrors=False)
            matrix = impedance_matrix(TWO, prepared.elements, prepared.passes, HZ)
            answers.append((matrix, response.directivity_dbi([(0.0, 0.0, 1.0), (0.6, 0.0, 0.8)])))
        assert np.array_equal(answers[0][0], answers[1][0])
        assert answers[0][1] == pytest.approx(answers[1][1], abs=1e-9)  # LAPACK's own threads may round
    finally:
        numba.set_num_threads(before)


def test_the_ground_is_a_mirror() -> None:
    """Over z = 0 as with its image built by hand: driven against each other, the same admittance."""
    over = over_plane(0.5, 1e-3, 20, 0.15)
    image = moved(over, lambda p: p * np.array([1.0, 1.0, -1.0]))
    both = Model(
        wires=over.wires + image.wires,
        ports=(over.ports[0], Port(wire=len(over.wires) + image.ports[0].wire, end=0)),
    )
    y = admittance(both, LIGHT_HZ)
    assert close(admittance(over, LIGHT_HZ), np.array([[y[0, 0] - y[0, 1]]]), 1e-9)


def test_a_rod_on_the_ground_is_half_a_dipole() -> None:
    wires = chain([(0.0, 0.0, 0.0), (0.0, 0.0, 0.25)], 1e-3, counts=10)
    rod = solve(Model(wires=wires, ports=(Port(wire=0, end=0),), plane="z=0"), [LIGHT_HZ])
    whole = solve(dipole(0.5, 1e-3, 20), [LIGHT_HZ])
    assert rod.impedance_ohm[0] == pytest.approx(whole.impedance_ohm[0] / 2.0, rel=1e-9)
    side = [(1.0, 0.0, 0.0)]
    gain = 10.0 * np.log10(2.0)
    assert rod.directivity_dbi(side)[0, 0] == pytest.approx(
        whole.directivity_dbi(side)[0, 0] + gain, abs=1e-6
    )
    assert rod.directivity_dbi([(0.6, 0.0, -0.8)])[0, 0] == -np.inf
