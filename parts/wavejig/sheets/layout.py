"""Lay out a sheet: every view, dimension, table and frame as plain strokes, fills and texts on paper.

Both writers draw what comes out of here, so the DXF and the PDF of a drawing cannot differ. A dimension keeps
its parts together (`DimGroup`), so that the DXF can carry it as one DIMENSION. All in paper mm.
"""

from __future__ import annotations

import math
from collections.abc import Iterator

from wavejig.geometry.plane import Circle, Contour
from wavejig.sheets.dimensions import lay_out_dimension
from wavejig.sheets.marks import (
    ARROW_MM,
    Drawn,
    Stroke,
    Word,
    arrow_head,
)
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    Arrow,
    Chain,
    Item,
    Line,
    Pt,
    Ring,
    Shape,
    Text,
    View,
)


def lay_out(view: View) -> Iterator[Drawn]:
    """Everything of a view, on paper."""
    for item in view.items:
        yield from _item(item, view)
    if view.title:
        yield Word(at=view.title_at, text=view.title, height_mm=DIM_TEXT_MM, anchor="centre", bold=True)


def _item(item: Item, view: View) -> Iterator[Drawn]:
    def put(p: Pt) -> Pt:
        return (view.at[0] + p[0] * view.scale, view.at[1] + p[1] * view.scale)

    match item:
        case Line():
            yield Stroke(points=(put(item.a), put(item.b)), pen=item.pen)
        case Chain():
            points = tuple(put(p) for p in item.points)
            yield Stroke(points=(*points, points[0]) if item.closed else points, pen=item.pen)
        case Shape():
            contour, *holes = (
                Contour(vertices=tuple((*put((x, y)), b) for x, y, b in c.vertices))
                for c in (item.contour, *item.holes)
            )
            yield Stroke(contour=contour, holes=tuple(holes), pen=item.pen, filled=item.filled)
        case Ring():
            x, y = put((item.circle.x_mm, item.circle.y_mm))
            d = item.circle.diameter_mm * view.scale
            yield Stroke(circle=Circle(x_mm=x, y_mm=y, diameter_mm=d), pen=item.pen)
            if item.cross:
                r = d / 2.0 + 1.0
                yield Stroke(points=((x - r, y), (x + r, y)), pen="thin")
                yield Stroke(points=((x, y - r), (x, y + r)), pen="thin")
        case Text():
            x, y = put(item.at)
            yield Word(
                at=(x + item.shift[0], y + item.shift[1]),
                text=item.text,
                height_mm=item.height_mm,
                anchor=item.anchor,
                rotation_deg=item.rotation_deg,
                bold=item.bold,
            )
        case Arrow():
            tail, tip = put(item.tail), put(item.tip)
            heading = math.atan2(tip[1] - tail[1], tip[0] - tail[0])
            # a wide line would blunt the head's point
            neck = (tip[0] - ARROW_MM * math.cos(heading), tip[1] - ARROW_MM * math.sin(heading))
            yield Stroke(points=(tail, neck), pen=item.pen)
            yield arrow_head(tip, heading)
        case _:
            yield lay_out_dimension(item, view, put)
