"""Wire paths as chains of chords that keep the developed length. Lengths in mm here."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from wavejig.field.mesh_plan import MeshPlan
from wavejig.geometry.path import Arc, Path

Array = NDArray[np.float64]


def chords(
    path: Path,
    longest_mm: float,
    *,
    marks: Sequence[Array] = (),
    plan: MeshPlan | None = None,
    name: str = "",
) -> Array:
    """(n, 3) nodes along a path: straights in equal parts, arcs as chords as long together as the arc.

    marks: points on the path's straights that must be nodes. No chord is longer than `longest_mm`, but for
    a neighbour of the design that `plan` was recorded with; name: of this path in the plan.
    """
    kept = MeshPlan() if plan is None else plan
    points: list[Array] = [np.array(path.start)]
    for number, segment in enumerate(path.segments):
        if isinstance(segment, Arc):
            wanted = _arc_count(segment, longest_mm)
            points += _arc_nodes(segment, kept.choose((name, number, "arc"), lambda n=wanted: n))  # type: ignore[misc]
        else:
            start, end = np.array(segment.start), np.array(segment.end)
            points += _straight_nodes(start, end, longest_mm, marks, kept, (name, number))
    return np.array(points)


def _straight_nodes(
    start: Array,
    end: Array,
    longest_mm: float,
    marks: Sequence[Array],
    plan: MeshPlan,
    place: tuple[str, int],
) -> list[Array]:
    along = end - start
    length = float(np.linalg.norm(along))
    stops = {0.0, 1.0}
    for mark in marks:
        t = float((mark - start) @ along) / length**2
        if np.linalg.norm(start + along * t - mark) < 1e-6 and 1e-6 < t < 1.0 - 1e-6:
            stops.add(t)
    ordered = sorted(stops)
    out = []
    for part, (a, b) in enumerate(itertools.pairwise(ordered)):
        wanted = max(1, math.ceil((b - a) * length / longest_mm - 1e-9))
        n = plan.choose((*place, part, len(ordered)), lambda n=wanted: n)  # type: ignore[misc]
        out += [start + along * (a + (b - a) * i / n) for i in range(1, n + 1)]
    return out


def _arc_count(arc: Arc, longest_mm: float) -> int:
    # one chord for a slight bend: it is short of the arc by angle^2/24, half a percent of a small length
    fewest = 1 if arc.angle_deg <= 25.0 else 2
    return max(fewest, math.ceil(arc.length_mm / longest_mm - 1e-9), math.ceil(arc.angle_deg / 50.0))


def _arc_nodes(arc: Arc, n: int) -> list[Array]:
    """Interior nodes stand a little outside the arc, so that the n chords are as long as it is."""
    total = arc.length_mm
    centre, normal = np.array(arc.centre), np.array(arc.normal)
    u = np.array(arc.start) - centre
    v = np.cross(normal, u)
    angles = np.radians(arc.angle_deg) * np.arange(n + 1) / n

    def nodes(swell: float) -> Array:
        scale = np.full(n + 1, swell)
        scale[0] = scale[-1] = 1.0
        return np.asarray(
            centre + scale[:, None] * (np.cos(angles)[:, None] * u + np.sin(angles)[:, None] * v)
        )

    low, high = 1.0, 1.5
    for _ in range(60):
        middle = (low + high) / 2.0
        length = float(np.linalg.norm(np.diff(nodes(middle), axis=0), axis=1).sum())
        low, high = (middle, high) if length < total else (low, middle)
    found = nodes(high)
    found[-1] = np.array(arc.end)
    return list(found[1:])
