"""Lay out a sheet: every view, dimension, table and frame as plain strokes, fills and texts on paper.

Both writers draw what comes out of here, so the DXF and the PDF of a drawing cannot differ. A dimension keeps
its parts together (`DimGroup`), so that the DXF can carry it as one DIMENSION. All in paper mm.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator

import numpy as np

from wavejig.geometry.plane import Circle, Contour
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.marks import (
    ARROW_MM,
    GAP_MM,
    OVER_MM,
    TEXT_OFF_MM,
    DimGroup,
    Drawn,
    Head,
    Stroke,
    Word,
    arrow_head,
)
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    AngleDim,
    Arrow,
    Chain,
    DiameterDim,
    Dim,
    Item,
    Line,
    LinearDim,
    Pt,
    RadiusDim,
    Ring,
    Shape,
    Text,
    View,
    number,
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
            yield _dim(item, view, put)


def _dim(dim: Dim, view: View, put: Callable[[Pt], Pt]) -> DimGroup:
    match dim:
        case LinearDim():
            return _linear(dim, put(dim.a), put(dim.b), view)
        case DiameterDim():
            return _diameter(dim, put((dim.circle.x_mm, dim.circle.y_mm)), view)
        case RadiusDim():
            return _radius(dim, put(dim.centre), view)
        case AngleDim():
            return _angle(dim, put(dim.vertex), view)


def _linear(dim: LinearDim, a: Pt, b: Pt, view: View) -> DimGroup:
    t = math.radians(dim.angle_deg)
    u, n = np.array([math.cos(t), math.sin(t)]), np.array([-math.sin(t), math.cos(t)])
    pa, pb = np.array(a), np.array(b)
    level = float(pa @ n) + dim.offset_mm
    fa, fb = pa + n * (level - float(pa @ n)), pb + n * (level - float(pb @ n))
    if float((fb - fa) @ u) < 0.0:
        pa, pb, fa, fb = pb, pa, fb, fa
    length = float((fb - fa) @ u)
    value = length / view.scale
    text = f"{dim.before}{number(value)}{dim.after}"
    if dim.reference:
        text = f"({text})"
    wide = width_mm(text, DIM_TEXT_MM)
    parts: list[Stroke | Head | Word] = []
    for p, f in ((pa, fa), (pb, fb)):
        reach = float((f - p) @ n)
        if abs(reach) > GAP_MM:
            s = math.copysign(1.0, reach)
            parts.append(Stroke(points=(_pt(p + n * s * GAP_MM), _pt(f + n * s * OVER_MM))))
    # lettering reads from below or from the right
    flip = dim.angle_deg <= -90.0 + 1e-6 or dim.angle_deg > 90.0 + 1e-6
    along = dim.angle_deg + (180.0 if flip else 0.0)
    up = -n if flip else n
    inside = length >= 2.0 * ARROW_MM + 1.0
    if inside:
        parts.append(Stroke(points=(_pt(fa), _pt(fb))))
        parts += [arrow_head(_pt(fa), t + math.pi), arrow_head(_pt(fb), t)]
    else:
        parts.append(Stroke(points=(_pt(fa - u * 2.0 * ARROW_MM), _pt(fb + u * 2.0 * ARROW_MM))))
        parts += [arrow_head(_pt(fa), t), arrow_head(_pt(fb), t + math.pi)]
    if wide + 1.0 <= length:
        middle = (fa + fb) / 2.0
    else:  # beside the line's end, on a shelf of its own
        start = fb + u * (2.0 * ARROW_MM if not inside else 0.0)
        end = start + u * (wide + 1.5)
        parts.append(Stroke(points=(_pt(start), _pt(end))))
        middle = start + u * (wide / 2.0 + 1.0)
    parts.append(_word(_pt(middle + up * TEXT_OFF_MM), text, along))
    return DimGroup(
        kind="linear",
        parts=tuple(parts),
        points=(_pt(pa), _pt(pb), _pt(fb)),
        angle_deg=dim.angle_deg,
        value=value,
        text=text,
        factor=1.0 / view.scale,
    )


def _diameter(dim: DiameterDim, centre: Pt, view: View) -> DimGroup:
    r = dim.circle.diameter_mm / 2.0 * view.scale
    u = _unit(dim.angle_deg)
    c = np.array(centre)
    rim, far = c + u * r, c + u * (r + dim.reach_mm)
    text = f"{dim.before}\u00d8{number(dim.circle.diameter_mm)}{dim.after}"
    parts: list[Stroke | Head | Word] = [Stroke(points=(_pt(far), _pt(rim)))]
    parts.append(arrow_head(_pt(rim), math.radians(dim.angle_deg) + math.pi))
    parts += _shelf(far, u, text)
    return DimGroup(
        kind="diameter",
        parts=tuple(parts),
        points=(_pt(c - u * r), _pt(rim)),
        angle_deg=dim.angle_deg,
        value=dim.circle.diameter_mm,
        text=text,
        factor=1.0 / view.scale,
    )


def _radius(dim: RadiusDim, centre: Pt, view: View) -> DimGroup:
    r = dim.radius_mm * view.scale
    u = _unit(dim.angle_deg)
    c = np.array(centre)
    rim = c + u * r
    far = c - u * max(dim.reach_mm - r, 1.0) if dim.inside else c + u * (r + dim.reach_mm)
    text = f"{dim.before}R{number(dim.radius_mm)}{dim.after}"
    parts: list[Stroke | Head | Word] = [Stroke(points=(_pt(far), _pt(rim)))]
    parts.append(arrow_head(_pt(rim), math.radians(dim.angle_deg) + (0.0 if dim.inside else math.pi)))
    parts += _shelf(far, -u if dim.inside else u, text)
    return DimGroup(
        kind="radius",
        parts=tuple(parts),
        points=(_pt(c), _pt(rim)),
        angle_deg=dim.angle_deg,
        value=dim.radius_mm,
        text=text,
        factor=1.0 / view.scale,
    )


def _angle(dim: AngleDim, vertex: Pt, view: View) -> DimGroup:
    v = np.array(vertex)
    turn = (dim.to_deg - dim.from_deg) % 360.0
    angles = np.linspace(dim.from_deg, dim.from_deg + turn, max(3, math.ceil(turn / 5.0) + 1))
    arc = [v + dim.radius_mm * _unit(float(a)) for a in angles]
    text = f"{dim.before}{number(turn)}\u00b0{dim.after}"
    middle = dim.from_deg + turn / 2.0
    away = _unit(middle)
    parts: list[Stroke | Head | Word] = [Stroke(points=tuple(_pt(p) for p in arc))]
    parts.append(arrow_head(_pt(arc[-1]), math.radians(dim.from_deg + turn + 90.0)))
    parts.append(arrow_head(_pt(arc[0]), math.radians(dim.from_deg - 90.0)))
    for a in (dim.from_deg, dim.to_deg):
        parts.append(Stroke(points=(_pt(v), _pt(v + _unit(a) * (dim.radius_mm + OVER_MM)))))
    wide = width_mm(text, DIM_TEXT_MM)
    half = np.array([wide / 2.0, DIM_TEXT_MM / 2.0])
    reach = 1.2 + abs(away[0]) * half[0] + abs(away[1]) * half[1]
    spot = v - away * (reach + 1.5) if dim.outside else v + away * (dim.radius_mm + reach)
    parts.append(_word((float(spot[0]), float(spot[1] - DIM_TEXT_MM / 2.0)), text, 0.0))
    return DimGroup(
        kind="angle",
        parts=tuple(parts),
        points=(
            _pt(v),
            _pt(v + _unit(dim.from_deg) * dim.radius_mm),
            _pt(v + _unit(dim.to_deg) * dim.radius_mm),
            _pt(v + away * dim.radius_mm),
        ),
        angle_deg=0.0,
        value=turn,
        text=text,
        factor=1.0,
    )


def _shelf(far: np.ndarray, u: np.ndarray, text: str) -> Iterable[Stroke | Word]:
    """A level line at a leader's end with the text on it."""
    side = 1.0 if u[0] >= -1e-9 else -1.0
    wide = width_mm(text, DIM_TEXT_MM)
    end = far + np.array([side * (wide + 1.0), 0.0])
    middle = (far + end) / 2.0
    return (
        Stroke(points=(_pt(far), _pt(end))),
        _word((float(middle[0]), float(middle[1] + TEXT_OFF_MM)), text, 0.0),
    )


def _word(at: Pt, text: str, rotation_deg: float) -> Word:
    return Word(at=at, text=text, height_mm=DIM_TEXT_MM, anchor="centre", rotation_deg=rotation_deg)


def _unit(angle_deg: float) -> np.ndarray:
    return np.array([math.cos(math.radians(angle_deg)), math.sin(math.radians(angle_deg))])


def _pt(v: np.ndarray) -> Pt:
    return (float(v[0]), float(v[1]))
