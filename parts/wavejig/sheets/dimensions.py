"""Dimensions laid out on paper: lines, arrow heads and text of each kind. Paper mm."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable

import numpy as np

from wavejig.sheets.fonts import width_mm
from wavejig.sheets.marks import (
    ARROW_MM,
    GAP_MM,
    OVER_MM,
    TEXT_OFF_MM,
    DimGroup,
    Head,
    Stroke,
    Word,
    arrow_head,
)
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    AngleDim,
    DiameterDim,
    Dim,
    LinearDim,
    Pt,
    RadiusDim,
    View,
    number,
)


def lay_out_dimension(dim: Dim, view: View, put: Callable[[Pt], Pt]) -> DimGroup:
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
