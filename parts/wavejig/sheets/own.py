"""The drawing of a dish, box or lid that is there already: its floor with the holes to drill, and a section."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray, along, outward
from wavejig.reflector.own import section
from wavejig.sheets.blankholes import (
    TABLES_WIDE_MM,
    crowd,
    feed_detail,
    hole_labels,
    plan_with_holes,
    tables_of,
)
from wavejig.sheets.common import block, sheet_text
from wavejig.sheets.fit import best_scale
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    AngleDim,
    Arrow,
    Item,
    Line,
    LinearDim,
    Shape,
    Sheet,
    Text,
    View,
    number,
    scale_text,
)

_AROUND_MM = 14.0  # paper round the plan for its dimension lines
_SECTION_HIGH_MM = 48.0  # paper for the section, sizes included
SEEN = "seen from the radiator side"


def own_drawing(design: Design, tray: Tray, pattern: FlatPattern) -> Sheet:
    """Plan of the floor with its holes, and the section with the sizes that were measured."""
    own = tray.own
    assert own is not None
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    wide, high = pattern.size_mm
    left = x1 - TABLES_WIDE_MM
    split = y0 + _SECTION_HIGH_MM
    scale = best_scale(wide, high, left - x0 - 2.0 * _AROUND_MM, y1 - split - 2.0 * _AROUND_MM, most=2.0)
    middle = ((x0 + left) / 2.0, (split + y1) / 2.0 + 2.0)
    labels = hole_labels(tray)
    crowded = crowd(tray)
    hidden = {id(h) for h in crowded} if scale < 2.0 else set()
    views = [
        View(
            title=f"FLOOR OF THE DISH ({scale_text(scale)}): {SEEN}",
            items=tuple(_plan(tray, pattern, scale, labels, hidden)),
            at=middle,
            scale=scale,
            title_at=(middle[0], split - 2.0),
        )
    ]
    reach = 2.0 * max(abs(x) for x, _, _ in section(tray, "x").vertices)
    zoom = best_scale(reach, own.depth_mm, left - x0 - 60.0, _SECTION_HIGH_MM - 22.0, most=1.0)
    views.append(
        View(
            title=f"SECTION along x ({scale_text(zoom)}): seen from y-, radiator side up",
            items=tuple(_section(tray)),
            at=(middle[0], y0 + 12.0),
            scale=zoom,
            title_at=(middle[0], y0 + 1.0),
        )
    )
    tables = [*tables_of(tray, labels, left, y1)]
    if hidden:
        below = tables[-1].at[1] - tables[-1].height_mm - 3.0
        views.append(feed_detail(tray, crowded, labels, left, below, y0, TABLES_WIDE_MM))
    return Sheet(
        name="own-dish",
        paper_mm=paper,
        views=tuple(views),
        tables=tuple(tables),
        notes=(
            "This part is not made, only drilled. Sizes are the recipe's, measured inside; floor size: where floor and "
            "wall would meet sharply.",
            "Holes: x to the right, y upwards from the datum (crossing of the centre lines = middle of the floor).",
            "Centre-punch, pilot, step drill; clamp the work; deburr both sides. 1:1 templates: "
            "reflector/drill-template.pdf, fixture/drill-template.",
        ),
        notes_at=(x0, y0 - 5.0),
        block=block(
            design,
            title="own dish, drilling",
            part="dish",
            material=sheet_text(design),
            scale=scale,
            note=SEEN,
        ),
    )


def _plan(
    tray: Tray, pattern: FlatPattern, scale: float, labels: tuple[str, ...], hidden: set[int]
) -> Iterator[Item]:
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield from plan_with_holes(tray, pattern, scale, labels, hidden)
    up = outward(tray.up)
    reach = tray.half_mm(tray.up)
    side = along(tray.up) * 0.35 * reach
    tail, tip = up * (0.62 * reach) + side, up * (0.82 * reach) + side
    yield Arrow(tail=_pt(tail), tip=_pt(tip), pen="outline")
    yield Text(at=_pt(tail), text="hangs UP", anchor="centre", shift=(0.0, -3.2))
    yield LinearDim(
        a=(x0, 0.0), b=(x1, 0.0), offset_mm=(y0 * scale) - 12.0, before="" if not _round(tray) else "\u00d8"
    )
    if not _round(tray):
        yield LinearDim(a=(0.0, y0), b=(0.0, y1), offset_mm=-(x0 * scale) + 12.0, angle_deg=90.0)


def _section(tray: Tray) -> Iterator[Item]:
    own = tray.own
    assert own is not None
    yield Shape(contour=section(tray, "x"), pen="thin", filled=True)
    half, t, depth = tray.half_x_mm, tray.thickness_mm, own.depth_mm
    top = half + own.reach_mm(depth)
    yield Line(a=(0.0, -t - 3.0), b=(0.0, depth + 3.0), pen="centre")
    yield LinearDim(a=(top, 0.0), b=(top, depth), offset_mm=-12.0 - own.rim_mm, angle_deg=90.0)
    if own.slope_deg > 0.0:
        yield Line(a=(-half, 0.0), b=(-half, depth), pen="thin")
        yield AngleDim(
            vertex=(-half, 0.0), from_deg=90.0, to_deg=90.0 + own.slope_deg, radius_mm=16.0, outside=True
        )
    if own.rim_mm > 0.0:
        yield LinearDim(a=(top, depth), b=(top + own.rim_mm, depth), offset_mm=6.0)
    # one on either side of the centre line
    said = f"R{number(own.radius_mm)} between floor and wall"
    yield Text(at=(0.0, 0.0), text=said, anchor="right", shift=(-2.0, 2.0))
    yield Text(at=(0.0, 0.0), text=f"{number(t)} mm thick", anchor="left", shift=(2.0, 2.0))


def _round(tray: Tray) -> bool:
    return tray.own is not None and tray.own.shape == "round"


def _pt(v: np.ndarray) -> tuple[float, float]:
    return (float(v[0]), float(v[1]))
