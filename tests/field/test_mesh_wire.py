"""Chords: as long together as the path they stand for, ends and marks kept, none too long."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.field.mesh_wire import chords
from wavejig.geometry.path import Path, round_corners


def length(nodes: np.ndarray) -> float:
    return float(np.linalg.norm(np.diff(nodes, axis=0), axis=1).sum())


def zigzag(turns: list[float], radius: float) -> Path:
    """Sides of 40 mm, turned by these angles (degrees) one after another, every other one out of the plane."""
    points = [np.zeros(3)]
    heading = np.array([1.0, 0.0, 0.0])
    for i, turn in enumerate([0.0, *turns]):
        side = np.array([0.0, 1.0, 0.0]) if i % 2 else np.array([0.0, 0.0, 1.0])
        side -= heading * (side @ heading)
        side /= np.linalg.norm(side)
        a = np.radians(turn)
        heading = np.cos(a) * heading + np.sin(a) * side
        points.append(points[-1] + 40.0 * heading)
    corners = [(float(p[0]), float(p[1]), float(p[2])) for p in points]
    return round_corners(corners, [radius] * len(turns))


bends = st.lists(st.floats(26.0, 130.0) | st.floats(-130.0, -26.0), min_size=1, max_size=4)


@given(bends, st.floats(1.0, 9.0), st.floats(0.8, 20.0))
def test_developed_length_is_kept(turns: list[float], radius: float, longest: float) -> None:
    """To a part in a hundred million for bends beyond 25 degrees."""
    path = zigzag(turns, radius)
    nodes = chords(path, longest)
    assert length(nodes) == pytest.approx(path.length_mm, rel=1e-8)
    assert np.array_equal(nodes[0], path.start)
    assert nodes[-1] == pytest.approx(np.array(path.end), abs=1e-9)
    assert np.linalg.norm(np.diff(nodes, axis=0), axis=1).max() <= longest * (1.0 + 1e-6)


@given(st.floats(1.0, 25.0), st.floats(1.0, 9.0))
def test_slight_bends_lose_next_to_nothing(turn: float, radius: float) -> None:
    """One chord for an arc of at most 25 degrees is short of it by angle^2 / 24, under 0.8 % of the arc."""
    path = zigzag([turn], radius)
    arc = path.arcs[0].length_mm
    missing = path.length_mm - length(chords(path, 1000.0))
    assert -1e-9 <= missing <= arc * (np.radians(turn) ** 2 / 24.0 + 1e-9)


@given(bends, st.floats(1.0, 6.0))
def test_chords_stay_by_the_path(turns: list[float], radius: float) -> None:
    """No node further from the path than the swelling that keeps the length: a tenth of the radius."""
    path = zigzag(turns, radius)
    fine = path.sample(chord_error_mm=1e-3, step_mm=0.2)
    for node in chords(path, 5.0):
        assert np.linalg.norm(fine - node, axis=1).min() < 0.1 * radius + 0.11


def test_finer_is_closer() -> None:
    path = zigzag([90.0], 8.0)
    fine = path.sample(chord_error_mm=1e-4, step_mm=0.02)

    def away(longest: float) -> float:
        return max(float(np.linalg.norm(fine - n, axis=1).min()) for n in chords(path, longest))

    assert away(1.0) < 0.5 * away(4.0)


def test_marks_become_nodes() -> None:
    path = zigzag([90.0], 4.0)
    mark = np.array([11.3, 0.0, 0.0])
    aside = np.array([11.3, 0.4, 0.0])
    nodes = chords(path, 7.0, marks=[mark, aside])
    assert np.linalg.norm(nodes - mark, axis=1).min() < 1e-9
    assert np.linalg.norm(nodes - aside, axis=1).min() > 0.3
    assert length(nodes) == pytest.approx(path.length_mm, rel=1e-8)
