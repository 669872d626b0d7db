"""Plane regions with holes, for bodies that carry engraving or a channel. Uses shapely, for `solid` only.

A region is an outer ring and its holes, each (n, 2) x, y in mm, not repeating the first point.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np
from shapely import LineString, MultiPolygon, Polygon, set_precision, union_all

from wavejig.geometry.plane import Contour, Stroke

# Chords of a rounded channel stay this near to its arc; below what a printer resolves.
_CHORD_ERROR_MM = 0.01
_GRID_MM = 1e-6  # corners that should coincide do


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """One connected plane region."""

    outer: np.ndarray
    holes: tuple[np.ndarray, ...]


def grooves(marks: Iterable[Stroke], width_mm: float) -> tuple[Region, ...]:
    """What strokes of `width_mm` cover, square at their ends; crossing strokes become one region."""
    lines = [LineString(m.points) for m in marks]
    return _regions(
        union_all(
            [
                line.buffer(width_mm / 2.0, cap_style="square", join_style="mitre", mitre_limit=2.0)
                for line in lines
            ]
        )
    )


def channelled(
    contour: Contour, chains: Iterable[Iterable[tuple[float, float]]], width_mm: float
) -> tuple[Region, ...]:
    """What is left of a contour's inside beside channels of `width_mm` along chains of points."""
    half = width_mm / 2.0
    # chords per quarter turn that stay within the error: half (1 - cos(step/2)) = error
    quarter = max(4, math.ceil(math.pi / 4.0 / math.acos(1.0 - min(_CHORD_ERROR_MM / half, 0.5))))
    channels = union_all(
        [LineString(list(chain)).buffer(half, cap_style="square", quad_segs=quarter) for chain in chains]
    )
    return _regions(Polygon(contour.points()).difference(channels))


def _regions(shape: Any) -> tuple[Region, ...]:
    tidy = set_precision(shape, _GRID_MM)
    parts = tidy.geoms if isinstance(tidy, MultiPolygon) else [tidy]
    return tuple(
        Region(
            outer=np.array(part.exterior.coords)[:-1],
            holes=tuple(np.array(ring.coords)[:-1] for ring in part.interiors),
        )
        for part in parts
        if isinstance(part, Polygon) and not part.is_empty
    )
