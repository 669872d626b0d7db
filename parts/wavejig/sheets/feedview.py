"""The feed drawn larger, seen from the x+ end. Lengths in mm."""

from __future__ import annotations

import numpy as np

from wavejig.design.model import Design
from wavejig.geometry.plane import Contour
from wavejig.radiator.model import Radiator
from wavejig.sheets.common import plus_minus
from wavejig.sheets.fit import best_scale
from wavejig.sheets.model import (
    Item,
    Line,
    LinearDim,
    Shape,
    Text,
    View,
    scale_text,
)
from wavejig.sheets.project import axes, outlines_of

TABLES_WIDE_MM = 78.0


_SHEET_PAST_MM = 6.0  # how much reflector the end view shows beside the legs


def end_view(design: Design, radiator: Radiator, left: float, top: float, bottom: float) -> View:
    """The feed seen from the x+ end: y to the right, radiator up. Only what stands near the middle."""
    feed = design.feed
    z = design.radiator.standoff_mm
    ys = [feed.terminal_pin[1], feed.terminal_ground[1], feed.foot[1], feed.pin_leg[1]]
    if feed.style == "tube":
        ys = [feed.terminal_pin[1], feed.terminal_ground[1], feed.tube_at[1]]
    y_low, y_high = min(ys) - _SHEET_PAST_MM, max(ys) + _SHEET_PAST_MM
    t = design.reflector.thickness_mm
    deep = min(min(p.path.bounds()[0][2] for p in radiator.pieces), -t)
    deep = max(deep, -t - 4.0)
    tall, wide = z + 4.0 - deep, y_high - y_low
    scale = best_scale(wide, tall, TABLES_WIDE_MM - 34.0, top - bottom - 32.0, most=5.0)
    items: list[Item] = []
    hole = 0.0
    if feed.style == "legs":
        hole = feed.connector_hole_mm
        at = feed.connector_at[1]
    else:
        assert feed.tube is not None
        hole, at = feed.tube.outer_diameter_mm + 0.2, feed.tube_at[1]
    foot = feed.foot_hole_mm if feed.style == "legs" and feed.ground == "sheet" else 0.0
    cuts = sorted(
        [
            (at - hole / 2.0, at + hole / 2.0),
            *([(feed.foot[1] - foot / 2.0, feed.foot[1] + foot / 2.0)] if foot else []),
        ]
    )
    cursor = y_low
    for a, b in [*cuts, (y_high, y_high)]:
        if a > cursor:
            items.append(Shape(contour=Contour.rectangle(cursor, -t, a, 0.0), pen="outline", filled=True))
        cursor = max(cursor, b)
    near = _SHEET_PAST_MM + 4.0
    for piece in radiator.pieces:
        for run in _near_feed(
            piece.path.sample(chord_error_mm=0.01, step_mm=0.5),
            feed.terminal_pin[0],
            near,
            (y_low, y_high),
            deep,
        ):
            items += [
                Shape(contour=o, holes=h, pen="wire")
                for o, h in outlines_of(run @ axes("x+").T, piece.diameter_mm)
            ]
    items.append(Line(a=(y_low, z), b=(y_high, z), pen="centre"))
    items.append(
        LinearDim(
            a=(y_high, 0.0),
            b=(y_high, z),
            offset_mm=-7.0,
            angle_deg=90.0,
            after=plus_minus(design.tolerances.standoff_mm),
        )
    )
    low_y, high_y = sorted((feed.terminal_pin[1], feed.terminal_ground[1]))
    items.append(
        LinearDim(
            a=(low_y, z),
            b=(high_y, z),
            offset_mm=8.0 if z * scale > 24.0 else 30.0,
            after=plus_minus(min(design.tolerances.side_mm, 0.2)),
        )
    )
    if feed.style == "legs":
        a, b = sorted((feed.foot[1], feed.pin_leg[1]))
        items.append(LinearDim(a=(a, deep), b=(b, deep), offset_mm=-7.0, after=plus_minus(0.2)))
        for y, name in ((feed.pin_leg[1], "pin leg"), (feed.foot[1], "ground leg")):
            anchor, aside = ("left", 2.0) if y == b else ("right", -2.0)
            shift = (aside + (aside / abs(aside)) * design.feed.leg_diameter_mm / 2.0 * scale, 1.5)
            items.append(Text(at=(y, 0.0), text=name, shift=shift, anchor=anchor))  # type: ignore[arg-type]
    else:
        items.append(
            LinearDim(
                a=(y_low, 0.0),
                b=(y_low, feed.tube_top_mm),
                offset_mm=6.0,
                angle_deg=90.0,
                after=plus_minus(design.tolerances.standoff_mm),
            )
        )
    at_paper = (
        left + TABLES_WIDE_MM / 2.0 - (y_low + y_high) / 2.0 * scale - 2.0,
        bottom + 16.0 - deep * scale,
    )
    return View(
        title=f"G ({scale_text(scale)}): the feed, seen from x+",
        items=tuple(items),
        at=at_paper,
        scale=scale,
        title_at=(left + TABLES_WIDE_MM / 2.0, bottom + 1.0),
    )


def _near_feed(
    points: np.ndarray, feed_x: float, near: float, between: tuple[float, float], lowest: float
) -> list[np.ndarray]:
    """Stretches of a path within `near` of `feed_x` in x, between two y and not below `lowest`."""
    keep = (
        (np.abs(points[:, 0] - feed_x) <= near) & (points[:, 1] >= between[0]) & (points[:, 1] <= between[1])
    )
    keep &= points[:, 2] >= lowest
    runs: list[np.ndarray] = []
    start = None
    for i, k in enumerate([*keep, False]):
        if k and start is None:
            start = i
        elif not k and start is not None:
            if i - start >= 2:
                runs.append(points[start:i])
            start = None
    return runs
