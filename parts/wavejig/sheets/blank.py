"""The blank's drawing: everything needed to lay it out again by hand, from the paper alone.

The datum is the crossing of the centre lines, which is the middle of the base. Seen from the radiator side.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import EDGES, Tray, along, outward, place
from wavejig.sheets.blankcorners import (
    SEEN,
    corner_detail,
    corner_sizes,
    corner_window,
    ear_sizes,
)
from wavejig.sheets.blankholes import (
    TABLES_WIDE_MM,
    crowd,
    feed_detail,
    hole_labels,
    plan_with_holes,
    tables_of,
)
from wavejig.sheets.common import block, general_mm, plus_minus, sheet_text
from wavejig.sheets.fit import best_scale
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    SMALL_TEXT_MM,
    Arrow,
    Chain,
    Item,
    Line,
    LinearDim,
    Sheet,
    Text,
    View,
    number,
)

# Paper kept free round the blank for its dimension lines.
_AROUND_MM = 26.0
_DETAIL_REACH_MM = 17.0  # half the side of the feed's detail, unless the holes want more


def blank_drawing(design: Design, tray: Tray, pattern: FlatPattern) -> Sheet:
    """The blank on one sheet."""
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    wide, high = pattern.size_mm
    detail_holes = crowd(tray)
    table_left = x1 - TABLES_WIDE_MM
    room_wide = table_left - x0 - 2.0 * _AROUND_MM
    room_high = y1 - y0 - 2.0 * _AROUND_MM - 4.0
    scale = best_scale(wide, high, room_wide, room_high, most=2.0)
    middle = (x0 + (table_left - x0) / 2.0 + 1.0, y0 + (y1 - y0) / 2.0 + 2.0)
    in_detail = {id(h) for h in detail_holes} if scale < 2.0 and detail_holes else set()
    labels = hole_labels(tray)
    items = tuple(_main(design, tray, pattern, scale, labels, in_detail))
    views = [
        View(
            title=f"BLANK, FLAT: {SEEN}",
            items=items,
            at=middle,
            scale=scale,
            title_at=(middle[0], y0 + 1.0),
        )
    ]
    tables = [*tables_of(tray, labels, table_left, y1)]
    below = tables[-1].at[1] - tables[-1].height_mm - 3.0
    mitred = corner_window(tray) is not None
    wide_mm = 31.0 if mitred else TABLES_WIDE_MM
    if in_detail:
        views.append(feed_detail(tray, detail_holes, labels, table_left, below, y0, wide_mm))
    if mitred:
        views.append(corner_detail(tray, pattern, table_left + wide_mm, below, y0, TABLES_WIDE_MM - wide_mm))
    notes = (
        ("All bends fold UP, towards the viewer. " if tray.lips else "The blank stays flat. ")
        + "The face shown is the face that looks at the radiator.",
        "Holes: x to the right, y upwards from the datum (crossing of the centre lines = middle of the "
        "base).",
        "Blank is symmetrical about both centre lines but for its holes and marks."
        if _symmetrical(tray)
        else "Blank is not symmetrical: mind the edges' names.",
        "Deburr all edges. Cutting file: reflector/blank-cut.dxf "
        f"({'path carries half the kerf' if design.cutter.offset_in_file else 'nominal, no kerf'}).",
    )
    return Sheet(
        name="blank",
        paper_mm=paper,
        views=tuple(views),
        tables=tuple(tables),
        notes=notes,
        notes_at=(x0, y0 - 5.0),
        block=block(
            design,
            title="reflector blank",
            part="flat blank",
            material=sheet_text(design),
            scale=scale,
            note="seen from the radiator side",
        ),
    )


def _symmetrical(tray: Tray) -> bool:
    return all(
        (a is None) == (b is None)
        and (a is None or b is None or (a.height_mm, a.angle_deg) == (b.height_mm, b.angle_deg))
        for a, b in ((tray.lip("x+"), tray.lip("x-")), (tray.lip("y+"), tray.lip("y-")))
    )


def _main(
    design: Design,
    tray: Tray,
    pattern: FlatPattern,
    scale: float,
    labels: tuple[str, ...],
    in_detail: set[int],
) -> Iterator[Item]:
    yield from plan_with_holes(tray, pattern, scale, labels, in_detail)
    for bend in pattern.bends:
        yield Line(a=bend.line[0], b=bend.line[1], pen="bend")
    if window := corner_window(tray):
        xa, ya, xb, yb = window
        yield Chain(points=((xa, ya), (xb, ya), (xb, yb), (xa, yb)), closed=True, pen="thin")
        yield Text(at=(xb, yb), text="K", height_mm=DIM_TEXT_MM, shift=(0.8, 0.8), bold=True)
    yield from _lip_words(tray, scale)
    yield from _sizes(design, tray, pattern)


def _lip_words(tray: Tray, scale: float) -> Iterator[Item]:
    for lip in tray.lips:
        turned = lip.edge[0] == "x"
        text = f"{lip.edge}: fold UP {number(lip.angle_deg)}\u00b0"  # its radius stands in the table
        # off the centre line where there is room beside it
        half = min(lip.left.half_mm, lip.right.half_mm)
        aside = half / 2.0 if width_mm(text, SMALL_TEXT_MM) + 4.0 <= half * scale else 0.0
        d = lip.bend_end_mm + lip.flange_mm * 0.5
        x, y = outward(lip.edge) * d + np.array([0.0, aside] if turned else [-aside, 0.0])
        yield Text(
            at=(float(x), float(y)),
            text=text,
            anchor="centre",
            rotation_deg=90.0 if turned else 0.0,
            shift=(0.9, 0.0) if turned else (0.0, -0.9),
        )
    # the edge that hangs uppermost; clear of the holes in the middle
    up = outward(tray.up)
    reach = tray.base_reach_mm(tray.up)
    side = along(tray.up) * 0.45 * tray.base_reach_mm("x+" if tray.up[0] == "y" else "y+")
    tail, tip = up * (reach - 14.0 / scale) + side, up * (reach - 3.0 / scale) + side
    yield Arrow(tail=(float(tail[0]), float(tail[1])), tip=(float(tip[0]), float(tip[1])), pen="outline")
    words = f"hangs UP ({tray.up})"
    if tray.up[0] == "y":  # beside the centre line, not across it
        tail[0] = np.copysign(
            max(abs(tail[0]), (width_mm(words, SMALL_TEXT_MM) / 2.0 + 1.5) / scale), side[0]
        )
    yield Text(
        at=(float(tail[0]), float(tail[1])),
        text=words,
        anchor="centre" if tray.up[0] == "y" else "right",
        shift=(0.0, -3.0) if tray.up[0] == "y" else (-1.0, -0.9),
    )


def _sizes(design: Design, tray: Tray, pattern: FlatPattern) -> Iterator[Item]:
    x0, y0, x1, y1 = pattern.outline.bounds()
    wide, high = pattern.size_mm

    def tol(size: float) -> str:
        return plus_minus(general_mm(design, size))

    # over all, outermost
    yield LinearDim(a=(x0, y0), b=(x1, y0), offset_mm=-20.0, after=tol(wide))
    yield LinearDim(a=(x0, y0), b=(x0, y1), offset_mm=20.0, angle_deg=90.0, after=tol(high))
    # widths of the lips that stop short
    for edge, offset in (("y-", -12.0), ("x-", 12.0)):
        lip = tray.lip(edge)
        if lip is None:
            continue
        a, b = place(edge, lip.tip_mm, -lip.left.half_mm), place(edge, lip.tip_mm, lip.right.half_mm)
        if edge == "y-" and abs(lip.left.half_mm + lip.right.half_mm - wide) > 1e-6:
            yield LinearDim(a=(min(a[0], b[0]), y0), b=(max(a[0], b[0]), y0), offset_mm=offset)
        if edge == "x-" and abs(lip.left.half_mm + lip.right.half_mm - high) > 1e-6:
            yield LinearDim(
                a=(x0, min(a[1], b[1])), b=(x0, max(a[1], b[1])), offset_mm=offset, angle_deg=90.0
            )
    # bend lines from the datum: x on top, y on the right
    for edge in EDGES:
        lip = tray.lip(edge)
        if lip is None:
            continue
        middle = (lip.tangent_mm + lip.bend_end_mm) / 2.0
        on = place(edge, middle, 0.0)
        if edge[0] == "x":
            yield LinearDim(a=(0.0, y1), b=(on[0], y1), offset_mm=10.0)
        else:
            yield LinearDim(a=(x1, 0.0), b=(x1, on[1]), offset_mm=-10.0, angle_deg=90.0)
    yield from corner_sizes(pattern.outline, corner_window(tray), within=False)
    for lip in tray.lips:
        if lip.left.ear_mm is not None:
            yield from ear_sizes(lip)
