"""Plane regions with holes, and what strokes of a width cover. Uses shapely, for `solid` modules only.

A region is an outer ring and its holes, each (n, 2) x, y in mm, not repeating the first point.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np
from shapely import LineString, MultiPolygon, Polygon, set_precision, union_all

from wavejig.geometry.plane import Contour, Stroke

_GRID_MM = 1e-6  # corners that should coincide do


@dataclass(frozen=True, slots=True, kw_only=True)
class Region:
    """One connected plane region."""

    outer: np.ndarray
    holes: tuple[np.ndarray, ...]


def grooves(marks: Iterable[Stroke], width_mm: float) -> tuple[Region, ...]:
    """What strokes of `width_mm` cover, square at their ends; crossing strokes become one region."""
    lines = [LineString(m.points) for m in marks]
    return regions_of(
        union_all(
            [
                line.buffer(width_mm / 2.0, cap_style="square", join_style="mitre", mitre_limit=2.0)
                for line in lines
            ]
        )
    )


def strokes_within(contour: Contour, marks: Iterable[Stroke]) -> tuple[Stroke, ...]:
    """The strokes that lie wholly inside a contour."""
    area = Polygon(contour.points())
    return tuple(m for m in marks if area.contains(LineString(m.points)))


def regions_of(shape: Any) -> tuple[Region, ...]:
    """The polygons of a shapely shape as regions."""
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
