"""Arcs found again in a ring of chords, so that what shapely joined goes to a cutter as arcs. Lengths in mm."""

from __future__ import annotations

import math

import numpy as np

from wavejig.geometry.plane import Contour, Vertex

_LEAST_POINTS = 5  # fewer chords than four are straights
_WIDEST_RAD = math.radians(170.0)
_LONGEST_STEP_RAD = math.radians(25.0)  # coarser chords were straights, not an arc's


def with_arcs(ring: np.ndarray, error_mm: float = 0.004) -> Contour:
    """The closed ring (n, 2), not repeating its first point, with runs of chords on one circle made arcs.

    Greedy from the sharpest corner; every point stays within error_mm of the contour.
    """
    n = len(ring)
    back, ahead = ring - np.roll(ring, 1, axis=0), np.roll(ring, -1, axis=0) - ring
    turn = np.abs(np.arctan2(back[:, 0] * ahead[:, 1] - back[:, 1] * ahead[:, 0], (back * ahead).sum(axis=1)))
    points = np.roll(ring, -int(np.argmax(turn)), axis=0)
    closed = np.vstack([points, points[:1]])
    out: list[Vertex] = []
    i = 0
    while i < n:
        best = i + 1
        bulge = 0.0
        j = i + _LEAST_POINTS - 1
        while j <= n:
            found = _bulge(closed[i : j + 1], error_mm)
            if found is None:
                break
            best, bulge = j, found
            j += 1
        out.append((float(closed[i, 0]), float(closed[i, 1]), bulge))
        i = best
    return Contour(vertices=tuple(out))


def _bulge(points: np.ndarray, error_mm: float) -> float | None:
    """Bulge of the arc through the first, middle and last point; None when the others are off it."""
    a, b, c = points[0], points[len(points) // 2], points[-1]
    ab, ac = b - a, c - a
    cross = float(ab[0] * ac[1] - ab[1] * ac[0])
    if abs(cross) < 1e-9:
        return None
    # centre from a: equal distances to a, b and c
    d = 2.0 * cross
    b2, c2 = float(ab @ ab), float(ac @ ac)
    centre = a + np.array([(ac[1] * b2 - ab[1] * c2) / d, (ab[0] * c2 - ac[0] * b2) / d])
    spokes = points - centre
    radius = float(np.hypot(*spokes[0]))
    if np.abs(np.hypot(spokes[:, 0], spokes[:, 1]) - radius).max() > error_mm:
        return None
    steps = np.arctan2(
        spokes[:-1, 0] * spokes[1:, 1] - spokes[:-1, 1] * spokes[1:, 0],
        (spokes[:-1] * spokes[1:]).sum(axis=1),
    )
    total = float(steps.sum())
    one_way = np.all(steps > 0.0) or np.all(steps < 0.0)
    if not one_way or np.abs(steps).max() > _LONGEST_STEP_RAD or abs(total) > _WIDEST_RAD:
        return None
    # the chords' middles, too, lie within the error
    if radius * (1.0 - math.cos(float(np.abs(steps).max()) / 2.0)) > error_mm:
        return None
    return math.tan(total / 4.0)
