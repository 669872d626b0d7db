"""A picture of one bend, and what all such pictures share: the wire, and what leaves the picture. Lengths in mm."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import numpy as np

from wavejig.geometry.plane import Contour
from wavejig.sheets.model import Item, Pen, Shape
from wavejig.sheets.project import outlines_of


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """One picture: items in mm with the box (x0, y0, x1, y1) to show, and what is said below it."""

    title: str
    text: str
    items: tuple[Item, ...]
    box: tuple[float, float, float, float]
    seen: str


def wire_shapes(points: np.ndarray, diameter: float, pen: Pen) -> Iterator[Item]:
    """A wire along points, (n, 2), as seen: filled where it is the formed one."""
    for contour, holes in outlines_of(points, diameter):
        yield Shape(contour=contour, holes=holes, pen=pen, filled=pen == "wire")


def cut_off(items: Iterable[Item], box: tuple[float, float, float, float]) -> Iterator[Item]:
    """The items with filled and grey wire clipped to a box."""
    from shapely import MultiPolygon, Polygon
    from shapely import box as rectangle

    frame = rectangle(*box)
    for item in items:
        if not isinstance(item, Shape) or item.pen not in ("wire", "grey"):
            yield item
            continue
        whole = Polygon(item.contour.points(), [h.points() for h in item.holes]).buffer(0.0)
        part = whole.intersection(frame)
        for piece in part.geoms if isinstance(part, MultiPolygon) else [part]:
            if isinstance(piece, Polygon) and not piece.is_empty:
                contour, *holes = (
                    Contour.polygon([*ring.coords][:-1]) for ring in (piece.exterior, *piece.interiors)
                )
                yield Shape(contour=contour, holes=tuple(holes), pen=item.pen, filled=item.filled)
