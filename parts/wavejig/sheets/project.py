"""Wires seen from a side: outlines of round wire along a path, in the plane of the view.

Uses shapely. Lengths in mm.
"""

from __future__ import annotations

import itertools

import numpy as np
from shapely import LineString, MultiPolygon, Polygon, union_all

from wavejig.geometry.path import Path
from wavejig.geometry.plane import Contour

Outline = tuple[Contour, tuple[Contour, ...]]
"""An outer contour and the holes in it."""

_CHORD_MM = 0.01
_SIMPLE_MM = 0.005


def axes(side: str) -> np.ndarray:
    """(2, 3) float: directions to the right and upwards of a view from `side`: "z+", "x+" or "y-"."""
    return np.array(
        {
            "z+": [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0]],
            "x+": [[0.0, 1.0, 0.0], [0.0, 0.0, 1.0]],
            "y-": [[1.0, 0.0, 0.0], [0.0, 0.0, 1.0]],
        }[side]
    )


def seen_wire(path: Path, diameter_mm: float, side: str) -> tuple[Outline, ...]:
    """Outlines of a wire as seen from a side, (a wire hides only itself)."""
    flat = path.sample(chord_error_mm=_CHORD_MM) @ axes(side).T
    return outlines_of(flat, diameter_mm)


def outlines_of(points: np.ndarray, width_mm: float) -> tuple[Outline, ...]:
    """Outlines of what a band of `width_mm` along points (n, 2) covers, ends cut square."""
    steps = [
        LineString([a, b]).buffer(width_mm / 2.0, cap_style="flat")
        for a, b in itertools.pairwise(points)
        if float(np.hypot(*(b - a))) > 1e-6
    ]
    # a disc closes the corner between two steps; near the ends it would round what is cut square
    ends = np.minimum(*(np.hypot(*(points - p).T) for p in (points[0], points[-1])))
    closed = float(np.hypot(*(points[0] - points[-1]))) < width_mm / 2.0
    joints = [
        LineString([p, p + 1e-6]).buffer(width_mm / 2.0, quad_segs=16)
        for p, off in zip(points[1:-1], ends[1:-1], strict=True)
        if closed or off > width_mm / 2.0
    ]
    if not steps:
        return ()
    shape = union_all([*steps, *joints]).simplify(_SIMPLE_MM)
    parts = shape.geoms if isinstance(shape, MultiPolygon) else [shape]
    out: list[Outline] = []
    for part in parts:
        if isinstance(part, Polygon) and not part.is_empty:
            outer, *holes = (
                Contour.polygon([*ring.coords][:-1]) for ring in (part.exterior, *part.interiors)
            )
            out.append((outer, tuple(holes)))
    return tuple(out)
