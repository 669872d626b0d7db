"""A wire moved past upright prisms: how near it comes. Uses shapely, for builds and tests only. Lengths in mm.

The printed pieces the wire must leave are plates with plane cuts, or stacks of layers: upright prisms all of
them. The distance from a point to such a prism is exact, sqrt(across^2 + up^2), so a wire given as points
along its centreline and a radius is too, to the chords of its arcs.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import shapely
from shapely import Polygon, union_all

from wavejig.geometry.plane import Contour

CHORD_MM = 0.002


@dataclass(frozen=True, slots=True, kw_only=True)
class Prism:
    """Plastic between two heights; `plan` is a shapely polygon or several."""

    plan: shapely.Geometry
    bottom_mm: float
    top_mm: float


def contour_polygon(contour: Contour) -> Polygon:
    """The inside of a contour, its arcs as chords within CHORD_MM."""
    return Polygon(contour.points(CHORD_MM))


def disc(x_mm: float, y_mm: float, radius_mm: float) -> Polygon:
    """A disc with chords within CHORD_MM."""
    n = max(24, int(np.ceil(np.pi / np.arccos(max(0.0, 1.0 - CHORD_MM / max(radius_mm, CHORD_MM))))))
    t = 2.0 * np.pi * np.arange(n) / n
    return Polygon(np.column_stack([x_mm + radius_mm * np.cos(t), y_mm + radius_mm * np.sin(t)]))


def slabs(
    outline: Contour, cuts: Sequence[tuple[shapely.Geometry, float]], thickness_mm: float
) -> tuple[Prism, ...]:
    """A plate with its top on z = 0, from plan areas cut to depths: a prism between each two depths."""
    whole = contour_polygon(outline)
    levels = sorted({0.0, thickness_mm, *(min(d, thickness_mm) for _, d in cuts)})
    out = []
    for upper, lower in pairwise(levels):
        gone = [area for area, depth in cuts if depth >= lower - 1e-9]
        plan = whole.difference(union_all(gone)) if gone else whole
        if not plan.is_empty:
            out.append(Prism(plan=plan, bottom_mm=-lower, top_mm=-upper))
    return tuple(out)


def clearances_mm(
    points: np.ndarray, radius_mm: np.ndarray, prisms: Sequence[Prism], moves: np.ndarray
) -> np.ndarray:
    """Least air between a wire and the prisms after each move; negative where they overlap.

    points: (n, 3) along the wire; radius_mm: (n,); moves: (k, 3), each from the place `points` tells.
    Returns (k,).
    """
    out = np.full(len(moves), np.inf)
    for prism in prisms:
        shapely.prepare(prism.plan)
        edge = shapely.boundary(prism.plan)
        last: tuple[float, float] | None = None
        across, depth = np.zeros(0), np.zeros(0)
        for k, (dx, dy, dz) in enumerate(moves):
            z = points[:, 2] + dz
            up = np.maximum(np.maximum(prism.bottom_mm - z, z - prism.top_mm), 0.0)
            if float((up - radius_mm).min()) > out[k]:
                continue  # wholly above or below, by more than is known already
            if last != (dx, dy):
                spots = shapely.points(points[:, 0] + dx, points[:, 1] + dy)
                across = shapely.distance(spots, prism.plan)
                inside = across <= 0.0
                depth = np.zeros(len(points))
                depth[inside] = shapely.distance(spots[inside], edge)
                last = (dx, dy)
            sunk = np.minimum(depth, np.minimum(z - prism.bottom_mm, prism.top_mm - z))
            air = np.where((across <= 0.0) & (up <= 0.0), -sunk, np.hypot(across, up)) - radius_mm
            out[k] = min(out[k], float(air.min()))
    return out
