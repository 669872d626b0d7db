"""The radiator's drawing: plan from the radiator side, front view, and the feed from the end.

Sides, gaps and angles are those of the centrelines, between the points where they would meet sharp.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.geometry.plane import Circle, Contour
from wavejig.radiator.drawing import views as plan_views
from wavejig.radiator.model import Radiator
from wavejig.sheets.common import block, plus_minus, wire_text
from wavejig.sheets.feedview import TABLES_WIDE_MM, end_view
from wavejig.sheets.fit import best_scale
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    AngleDim,
    Arrow,
    Chain,
    DiameterDim,
    Item,
    Line,
    LinearDim,
    RadiusDim,
    Ring,
    Shape,
    Sheet,
    Text,
    View,
    number,
)
from wavejig.sheets.project import seen_wire
from wavejig.sheets.radiatortables import corner_tables, pieces_table


def radiator_drawing(design: Design, radiator: Radiator) -> Sheet:
    """The radiator on one sheet."""
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    low, high = (np.array(v) for v in _bounds(radiator))
    wide, tall, deep = high - low
    left = x1 - TABLES_WIDE_MM
    field_wide = left - x0
    front_high = deep + 6.0
    scale = 0.01
    for most in (5.0, 2.0, 1.0, 0.5, 0.2):
        scale = best_scale(wide, 1.0, field_wide - 52.0, 1e9, most=most)
        if tall * scale + front_high * scale + 70.0 <= y1 - y0:
            break
    centre = x0 + field_wide / 2.0 + 2.0
    plan_band, front_band = tall * scale + 48.0, front_high * scale + 22.0
    first = design.sheet.projection == "first"
    spare = max((y1 - y0) - plan_band - front_band, 0.0) / 2.0
    if first:  # seen from y-, so it stands above the plan
        plan_mid = y0 + spare / 2.0 + plan_band / 2.0
        front_base = y0 + plan_band + spare + 10.0
    else:
        front_base = y0 + spare / 2.0 + 12.0
        plan_mid = y0 + front_band + spare + plan_band / 2.0
    plan_at = (centre - (low[0] + high[0]) / 2.0 * scale, plan_mid - (low[1] + high[1]) / 2.0 * scale + 2.0)
    front_at = (plan_at[0], front_base - min(low[2], 0.0) * scale + 2.0)
    views = [
        View(
            title="RADIATOR: seen from the radiator side (reflector behind)",
            items=tuple(_plan(design, radiator, scale)),
            at=plan_at,
            scale=scale,
            title_at=(centre, plan_mid - plan_band / 2.0 + 1.0),
        ),
        View(
            title="seen from the y- side (from below as drawn), radiator up",
            items=tuple(_front(design, radiator, scale)),
            at=front_at,
            scale=scale,
            title_at=(centre, front_base - 8.0),
        ),
    ]
    tables = [pieces_table(radiator, left, y1)]
    tables += corner_tables(design, left, tables[0].at[1] - tables[0].height_mm - 4.0)
    top = min(t.at[1] - t.height_mm for t in tables) - 3.0
    views.append(end_view(design, radiator, left, top, y0))
    return Sheet(
        name="radiator",
        paper_mm=paper,
        views=tuple(views),
        tables=tuple(tables),
        notes=(
            "Sides, gap and angles: centreline to centreline, between the points where the centrelines "
            "would meet "
            "sharp. Radii: inside of the wire, finished.",
            "Bend after the bend table (radiator/bend-table.csv); check in the nest. +z is towards the "
            "viewer of the plan.",
        ),
        notes_at=(x0, y0 - 5.0),
        block=block(
            design,
            title="radiator",
            part=f"radiator, {design.radiator.family}",
            material=wire_text(design),
            scale=scale,
            note=f"standoff {number(design.radiator.standoff_mm)} mm, {design.polarisation} polarisation",
        ),
    )


def _bounds(radiator: Radiator) -> tuple[tuple[float, ...], tuple[float, ...]]:
    boxes = [p.path.bounds() for p in radiator.pieces]
    half = radiator.main.diameter_mm / 2.0
    low = tuple(min(b[0][i] for b in boxes) - half for i in range(3))
    high = tuple(max(b[1][i] for b in boxes) + half for i in range(3))
    return low, high


def _plan(design: Design, radiator: Radiator, scale: float) -> Iterator[Item]:
    for view in plan_views(radiator):
        for outline in view.outlines:
            yield Shape(contour=outline, pen="wire")
        for circle in view.ends_on:
            yield Ring(circle=circle, pen="wire")
        for line in view.centrelines:
            yield Chain(points=line.points, pen="centre")
    low, high = _bounds(radiator)
    yield from _plan_sizes(design, radiator, scale)
    # where the view from the end looks from
    x, y = high[0] + 9.0 / scale, low[1] - 4.0 / scale
    yield Arrow(tail=(x + 9.0 / scale, y), tip=(x, y), pen="outline")
    yield Text(
        at=(x + 4.0 / scale, y), text="G", height_mm=DIM_TEXT_MM, anchor="centre", shift=(0.0, 1.0), bold=True
    )
    yield Text(at=(0.0, high[1]), text="+y", anchor="centre", shift=(0.0, 7.5))
    yield Arrow(tail=(0.0, high[1] - 2.0 / scale), tip=(0.0, high[1] + 6.0 / scale))


def _plan_sizes(design: Design, radiator: Radiator, scale: float) -> Iterator[Item]:
    r, tol = design.radiator, design.tolerances
    corners = [c.at for c in r.corners]
    side = plus_minus(tol.side_mm)
    arcs = [a for a in radiator.main.path.arcs if abs(a.normal[2]) > 1.0 - 1e-9]
    if r.lobe_diameter_mm is not None:
        big = [a for a in arcs if a.angle_deg > 180.0]
        for arc in big[:1]:
            circle = Circle(x_mm=arc.centre[0], y_mm=arc.centre[1], diameter_mm=2.0 * arc.radius_mm)
            yield DiameterDim(
                circle=circle,
                angle_deg=35.0 if arc.centre[0] > 0 else 145.0,
                after=side,
                before=f"{len(big)}\u00d7 ",
            )
        if len(big) > 1:
            a, b = sorted((b.centre[:2] for b in big[:2]), key=lambda p: p[0])
            yield LinearDim(a=a, b=b, offset_mm=-(big[0].radius_mm * scale + 9.0), after=side)
    else:
        xs, ys = [c[0] for c in corners], [c[1] for c in corners]
        left, right = min(xs), max(xs)
        bottom = min(ys)
        far_left = max((c for c in corners if abs(c[0] - left) < 1e-6), key=lambda c: -c[1])
        far_right = max((c for c in corners if abs(c[0] - right) < 1e-6), key=lambda c: -c[1])
        low = -(far_left[1] - bottom) * scale - 16.0
        yield LinearDim(a=far_left[:2], b=far_right[:2], offset_mm=low, after=side)
        top, under = max(corners, key=lambda c: (c[1], -c[0])), min(corners, key=lambda c: (c[1], c[0]))
        a = (under[0], under[1])
        yield LinearDim(
            a=a, b=(top[0], top[1]), offset_mm=(a[0] - left) * scale + 9.0, angle_deg=90.0, after=side
        )
    if r.side_mm is not None:
        yield from _side_size(design, corners, scale)
    small = [a for a in arcs if a.angle_deg <= 180.0]
    if small:
        # a corner low down near the middle: there is room below it, between two lobes
        arc = min(small, key=lambda a: (round(a.centre[1], 3), abs(a.centre[0]), -a.centre[0]))
        inside = arc.radius_mm - r.wire_diameter_mm / 2.0
        out = np.subtract(arc.middle, arc.centre)
        middle = math.degrees(math.atan2(out[1], out[0]))
        hangs = middle < 0.0
        lean = min(35.0, arc.angle_deg / 2.0 - 5.0)
        alike = sum(1 for a in arcs if abs(a.radius_mm - arc.radius_mm) < 1e-6)
        yield RadiusDim(
            centre=(arc.centre[0], arc.centre[1]),
            radius_mm=inside,
            angle_deg=middle - lean if hangs else middle,
            inside=not hangs,
            reach_mm=8.0 if hangs else 26.0,
            before=f"{alike}\u00d7 " if alike > 1 else "",
            after=" inside",
        )


def _side_size(design: Design, corners: list[tuple[float, float, float]], scale: float) -> Iterator[Item]:
    """One side of a lobe along itself, and the angle at the corner opposite the feed."""
    r, tol = design.radiator, design.tolerances
    assert r.side_mm is not None
    sides = [
        (np.array(a[:2]), np.array(b[:2]))
        for a, b in itertools.pairwise(corners)
        if abs(math.dist(a[:2], b[:2]) - r.side_mm) < 0.2
    ]
    if not sides:
        return
    # on the upper right, measured outside
    a, b = max(sides, key=lambda s: float((s[0] + s[1]) @ np.array([1.0, 1.2])))
    if a[1] > b[1]:
        a, b = b, a
    angle = math.degrees(math.atan2(b[1] - a[1], b[0] - a[0]))
    yield LinearDim(a=_xy(a), b=_xy(b), offset_mm=-9.0, angle_deg=angle, after=plus_minus(tol.side_mm))
    for before, at, after in zip(corners, corners[1:], corners[2:], strict=False):
        if abs(at[0] - max(c[0] for c in corners)) > 1e-6:
            continue
        u, v = np.subtract(before, at)[:2], np.subtract(after, at)[:2]
        one, two = (math.degrees(math.atan2(w[1], w[0])) for w in (u, v))
        if (two - one) % 360.0 > 180.0:
            one, two = two, one
        yield AngleDim(
            vertex=(at[0], at[1]), from_deg=one, to_deg=two,
            radius_mm=min(16.0, 0.5 * r.side_mm * scale), after=plus_minus(tol.bend_angle_deg),
            outside=r.side_mm * scale < 36.0,
        )  # fmt: skip
        break


def _front(design: Design, radiator: Radiator, scale: float) -> Iterator[Item]:
    low, high = _bounds(radiator)
    t = design.reflector.thickness_mm
    half = design.reflector.base_x_mm / 2.0
    left, right = max(-half, low[0] - 6.0 / scale), min(half, high[0] + 6.0 / scale)
    yield Shape(contour=Contour.rectangle(left, -t, right, 0.0), pen="outline", filled=True)
    for piece in radiator.pieces:
        for outline in seen_wire(piece.path, piece.diameter_mm, "y-"):
            yield Shape(contour=outline[0], holes=outline[1], pen="wire")
    z = design.radiator.standoff_mm
    yield Line(a=(left, z), b=(right, z), pen="centre")
    yield LinearDim(
        a=(right, 0.0),
        b=(right, z),
        offset_mm=-9.0,
        angle_deg=90.0,
        after=plus_minus(design.tolerances.standoff_mm),
    )
    yield Text(at=(left, 0.0), text="reflector", shift=(1.0, 0.8))


def _xy(v: np.ndarray) -> tuple[float, float]:
    return (float(v[0]), float(v[1]))
