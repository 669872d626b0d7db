"""What is left of a post's plan beside its wire's channel. Uses shapely, for `solid` only."""

from __future__ import annotations

import math
from collections.abc import Iterable

from shapely import LineString, Polygon, union_all

from wavejig.geometry.plane import Contour
from wavejig.geometry.region import Region, regions_of

# Chords of a rounded channel stay this near to its arc; below what a printer resolves.
_CHORD_ERROR_MM = 0.01


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
    return regions_of(Polygon(contour.points()).difference(channels))
