"""The radiator's drawing: plan from the radiator side, front view, and the feed from the end.

Sides, gaps and angles are those of the centrelines, between the points where they would meet sharp.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.geometry.plane import Contour
from wavejig.radiator.drawing import views as plan_views
from wavejig.radiator.model import Radiator
from wavejig.sheets.common import block, plus_minus, wire_text
from wavejig.sheets.feedview import TABLES_WIDE_MM, end_view
from wavejig.sheets.fit import best_scale
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    Arrow,
    Chain,
    Item,
    Line,
    LinearDim,
    Ring,
    Shape,
    Sheet,
    Text,
    View,
    number,
)
from wavejig.sheets.project import seen_wire
from wavejig.sheets.radiatorsizes import plan_sizes
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
    yield from plan_sizes(design, radiator, scale)
    # where the view from the end looks from
    x, y = high[0] + 9.0 / scale, low[1] - 4.0 / scale
    yield Arrow(tail=(x + 9.0 / scale, y), tip=(x, y), pen="outline")
    yield Text(
        at=(x + 4.0 / scale, y), text="G", height_mm=DIM_TEXT_MM, anchor="centre", shift=(0.0, 1.0), bold=True
    )
    yield Text(at=(0.0, high[1]), text="+y", anchor="centre", shift=(0.0, 7.5))
    yield Arrow(tail=(0.0, high[1] - 2.0 / scale), tip=(0.0, high[1] + 6.0 / scale))


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
