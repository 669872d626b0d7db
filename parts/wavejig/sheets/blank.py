"""The blank's drawing: everything needed to lay it out again by hand, from the paper alone.

The datum is the crossing of the centre lines, which is the middle of the base. Seen from the radiator side.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from wavejig.design.model import Design, Hole
from wavejig.geometry.plane import Circle, Contour
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import EDGES, Tray, TrayLip, along, outward, place
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
    RadiusDim,
    Ring,
    Shape,
    Sheet,
    Table,
    Text,
    View,
    number,
    scale_text,
)

SEEN = "seen from the radiator side"
HOLE_TABLE, BEND_TABLE = "hole-table", "bend-table"
# Paper kept free round the blank for its dimension lines.
_AROUND_MM = 26.0
_TABLES_WIDE_MM = 84.0
_DETAIL_REACH_MM = 17.0  # half the side of the feed's detail, unless the holes want more


def blank_drawing(design: Design, tray: Tray, pattern: FlatPattern) -> Sheet:
    """The blank on one sheet."""
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    wide, high = pattern.size_mm
    detail_holes = _crowd(tray)
    table_left = x1 - _TABLES_WIDE_MM
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
    tables = [*_tables(tray, labels, table_left, y1)]
    below = tables[-1].at[1] - tables[-1].height_mm - 3.0
    mitred = _corner_window(tray) is not None
    wide_mm = 31.0 if mitred else _TABLES_WIDE_MM
    if in_detail:
        views.append(_detail(tray, detail_holes, labels, table_left, below, y0, wide_mm))
    if mitred:
        views.append(
            _corner_detail(tray, pattern, table_left + wide_mm, below, y0, _TABLES_WIDE_MM - wide_mm)
        )
    notes = (
        "All bends fold UP, towards the viewer. The face shown is the face that looks at the radiator.",
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


def hole_labels(tray: Tray) -> tuple[str, ...]:
    """A letter and number for each hole: A1, A2 for alike ones in the order they stand in the tray."""
    kinds: dict[tuple[str, float], str] = {}
    counts: dict[str, int] = {}
    out = []
    for hole in tray.holes:
        letter = kinds.setdefault((hole.purpose, hole.diameter_mm), chr(ord("A") + len(kinds) % 26))
        counts[letter] = counts.get(letter, 0) + 1
        out.append(f"{letter}{counts[letter]}")
    return tuple(x if counts[x[0]] > 1 else x[0] for x in out)


def _symmetrical(tray: Tray) -> bool:
    return all(
        (a is None) == (b is None)
        and (a is None or b is None or (a.height_mm, a.angle_deg) == (b.height_mm, b.angle_deg))
        for a, b in ((tray.lip("x+"), tray.lip("x-")), (tray.lip("y+"), tray.lip("y-")))
    )


def _crowd(tray: Tray) -> list[Hole]:
    """Holes of the feed, which stand too close for labels at a small scale."""
    feed = [h for h in tray.holes if h.purpose in ("connector", "flange", "foot", "tube")]
    return feed if len(feed) > 1 else []


def _main(
    design: Design,
    tray: Tray,
    pattern: FlatPattern,
    scale: float,
    labels: tuple[str, ...],
    in_detail: set[int],
) -> Iterator[Item]:
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield Shape(contour=pattern.outline, pen="outline")
    over = 4.0 / scale
    yield Line(a=(x0 - over, 0.0), b=(x1 + over, 0.0), pen="centre")
    yield Line(a=(0.0, y0 - over), b=(0.0, y1 + over), pen="centre")
    for bend in pattern.bends:
        yield Line(a=bend.line[0], b=bend.line[1], pen="bend")
    for hole, label in zip(tray.holes, labels, strict=True):
        c = Circle(x_mm=hole.x_mm, y_mm=hole.y_mm, diameter_mm=hole.diameter_mm)
        small = id(hole) in in_detail
        yield Ring(circle=c, cross=not small)
        if not small:
            r = hole.diameter_mm / 2.0 + 1.2 / scale
            yield Text(at=(hole.x_mm + r * 0.75, hole.y_mm + r * 0.75), text=label, height_mm=DIM_TEXT_MM)
    if in_detail:
        half, cx, cy = _window([h for h in tray.holes if id(h) in in_detail])
        yield Chain(
            points=(
                (cx - half, cy - half),
                (cx + half, cy - half),
                (cx + half, cy + half),
                (cx - half, cy + half),
            ),
            closed=True,
            pen="thin",
        )
        yield Text(at=(cx + half, cy + half), text="F", height_mm=DIM_TEXT_MM, shift=(0.8, 0.8), bold=True)
    if window := _corner_window(tray):
        xa, ya, xb, yb = window
        yield Chain(points=((xa, ya), (xb, ya), (xb, yb), (xa, yb)), closed=True, pen="thin")
        yield Text(at=(xb, yb), text="K", height_mm=DIM_TEXT_MM, shift=(0.8, 0.8), bold=True)
    yield from _lip_words(tray, scale)
    yield from _sizes(design, tray, pattern)


def _lip_words(tray: Tray, scale: float) -> Iterator[Item]:
    for lip in tray.lips:
        turned = lip.edge[0] == "x"
        text = f"{lip.edge}: fold UP {number(lip.angle_deg)}\u00b0, R{number(tray.inside_radius_mm)} inside"
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
    yield Text(
        at=(float(tail[0]), float(tail[1])),
        text=f"UP when mounted ({tray.up})",
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
    yield from _corner_sizes(pattern.outline, _corner_window(tray), within=False)
    for lip in tray.lips:
        if lip.left.ear_mm is not None:
            yield from _ear_sizes(lip)


def _ear_sizes(lip: TrayLip) -> Iterator[Item]:
    """How far a mitred lip's ears reach, on the two edges whose sides are free."""
    assert lip.left.ear_mm is not None
    start = lip.bend_end_mm + lip.left.ear_mm
    foot, tip = lip.left.reach_mm(lip.left.ear_mm), lip.left.reach_mm(lip.flange_mm)
    same = abs(foot - tip) < 1e-6
    if lip.edge == "y+":
        y = lip.tip_mm
        yield LinearDim(a=(-tip, y), b=(tip, y), offset_mm=18.0)
        if not same:
            yield LinearDim(a=(-foot, start), b=(foot, start), offset_mm=-6.0)
    if lip.edge == "x+":
        x = lip.tip_mm
        yield LinearDim(a=(x, -tip), b=(x, tip), offset_mm=-18.0, angle_deg=90.0)
        if not same:
            yield LinearDim(a=(start, -foot), b=(start, foot), offset_mm=6.0, angle_deg=90.0)


def _corner_sizes(
    outline: Contour, window: tuple[float, float, float, float] | None, *, within: bool
) -> Iterator[Item]:
    """Radii of the outline's arcs in the corner at x+, y+ (all four are alike).

    window: x0, y0, x1, y1 of the corner's detail; only the arcs within it, or only those without.
    """
    done: set[tuple[float, bool]] = set()
    arcs = sorted(_arcs(outline), key=lambda a: -(a[0][0] + 2.0 * a[0][1]))
    for centre, radius, middle_deg, hollow in arcs:
        x = centre[0] + radius * math.cos(math.radians(middle_deg))
        y = centre[1] + radius * math.sin(math.radians(middle_deg))
        key = (round(radius, 6), hollow)
        if x <= 0.0 or y <= 0.0 or key in done:
            continue
        if window and (window[0] <= x <= window[2] and window[1] <= y <= window[3]) != within:
            continue
        done.add(key)
        count = sum(1 for _, r, _, h in arcs if (round(r, 6), h) == key)
        yield RadiusDim(
            centre=centre,
            radius_mm=radius,
            angle_deg=middle_deg,
            inside=hollow,
            reach_mm=9.0 if not hollow else 14.0,
            before=f"{count}\u00d7 " if count > 1 else "",
        )


def _corner_window(tray: Tray) -> tuple[float, float, float, float] | None:
    """The stretch of sheet round the corner at x+, y+ that is drawn larger when lips are mitred."""
    a, b = tray.lip("x+"), tray.lip("y+")
    if a is None or b is None or a.right.ear_mm is None or b.left.ear_mm is None:
        return None
    past = a.right.ear_mm + 0.6
    x = a.bend_end_mm + a.right.ear_mm
    y = b.bend_end_mm + b.left.ear_mm
    return (b.left.half_mm - past, a.right.half_mm - past, x + past, y + past)


def _corner_detail(
    tray: Tray, pattern: FlatPattern, left: float, top: float, bottom: float, wide: float
) -> View:
    """The mitred corner at x+, y+, with where its ears begin (from the bend lines) and its radii."""
    window = _corner_window(tray)
    assert window is not None
    a, b = tray.lip("x+"), tray.lip("y+")
    assert a is not None and b is not None and a.right.ear_mm is not None and b.left.ear_mm is not None
    x0, y0, x1, y1 = window
    cx, cy = (x0 + x1) / 2.0, (y0 + y1) / 2.0
    scale = best_scale(x1 - x0, y1 - y0, wide - 18.0, top - bottom - 26.0, most=5.0)
    items: list[Item] = []
    for run in clipped(pattern.outline, window):
        items.append(Chain(points=tuple((x - cx, y - cy) for x, y in run), pen="outline"))
    bend_x, bend_y = (a.tangent_mm + a.bend_end_mm) / 2.0, (b.tangent_mm + b.bend_end_mm) / 2.0
    items.append(Line(a=(bend_x - cx, y0 - cy), b=(bend_x - cx, a.right.half_mm - cy), pen="bend"))
    items.append(Line(a=(x0 - cx, bend_y - cy), b=(b.left.half_mm - cx, bend_y - cy), pen="bend"))
    ear_x, ear_y = a.bend_end_mm + a.right.ear_mm, b.bend_end_mm + b.left.ear_mm
    items.append(LinearDim(a=(bend_x - cx, y0 - cy), b=(ear_x - cx, a.right.half_mm - cy), offset_mm=-5.0))
    items.append(
        LinearDim(
            a=(x0 - cx, bend_y - cy), b=(b.left.half_mm - cx, ear_y - cy), offset_mm=5.0, angle_deg=90.0
        )
    )
    for count, dim in enumerate(_corner_sizes(pattern.outline, window, within=True)):
        assert isinstance(dim, RadiusDim)
        centre = (dim.centre[0] - cx, dim.centre[1] - cy)
        items.append(replace(dim, centre=centre, reach_mm=(8.0, 16.0, 24.0)[count % 3]))
    at = (left + wide / 2.0 - 3.0, (top + bottom) / 2.0 + 4.0)
    return View(
        title=f"K ({scale_text(scale)})",
        items=tuple(items),
        at=at,
        scale=scale,
        title_at=(left + wide / 2.0, bottom + 0.8),
    )


def clipped(
    outline: Contour, window: tuple[float, float, float, float]
) -> Iterator[tuple[tuple[float, float], ...]]:
    """The stretches of an outline inside a window, as chains; cut to the window's edge within 0.05 mm."""
    x0, y0, x1, y1 = window
    loop = outline.points(0.005)
    dense: list[np.ndarray] = []
    for p, q in zip(loop, np.roll(loop, -1, axis=0), strict=True):
        n = max(1, math.ceil(float(np.hypot(*(q - p))) / 0.05))
        dense.extend(p + (q - p) * k / n for k in range(n))
    keep = [bool(x0 <= p[0] <= x1 and y0 <= p[1] <= y1) for p in dense]
    if all(keep) or not any(keep):
        return
    start = next(i for i in range(len(keep)) if keep[i] and not keep[i - 1])
    run: list[tuple[float, float]] = []
    for i in range(len(dense) + 1):
        k = (start + i) % len(dense)
        if i < len(dense) and keep[k]:
            run.append((float(dense[k][0]), float(dense[k][1])))
        elif run:
            if len(run) > 1:
                yield tuple(run)
            run = []


def _arcs(outline: Contour) -> Iterator[tuple[tuple[float, float], float, float, bool]]:
    """Centre, radius, direction of the arc's middle from the centre, and whether it is a hollow corner."""
    vertices = outline.vertices
    for (x0, y0, bulge), (x1, y1, _) in zip(vertices, (*vertices[1:], vertices[0]), strict=True):
        if not bulge:
            continue
        theta = 4.0 * math.atan(abs(bulge))
        radius = math.hypot(x1 - x0, y1 - y0) / (2.0 * math.sin(theta / 2.0))
        offset = (1.0 - bulge**2) / (4.0 * bulge)
        centre = ((x0 + x1) / 2.0 - (y1 - y0) * offset, (y0 + y1) / 2.0 + (x1 - x0) * offset)
        chord = math.degrees(math.atan2(y1 - y0, x1 - x0))
        yield centre, radius, chord - math.copysign(90.0, bulge), bulge < 0.0


def _tables(tray: Tray, labels: tuple[str, ...], left: float, top: float) -> Iterator[Table]:
    rows = tuple(
        (label, number(h.x_mm), number(h.y_mm), f"\u00d8{number(h.diameter_mm)}", h.purpose)
        for label, h in zip(labels, tray.holes, strict=True)
    )
    holes = Table(
        title="HOLES from the datum, mm",
        head=("hole", "x", "y", "size", "for"),
        rows=rows,
        widths_mm=(12.0, 17.0, 17.0, 15.0, 21.0),
        at=(left, top),
        name=HOLE_TABLE,
    )
    yield holes
    if not tray.lips:
        return
    bends = Table(
        title="BENDS, mm",
        head=("edge", "datum to bend", "edge to bend", "angle", "R inside"),
        rows=tuple(
            (
                lip.edge,
                number((lip.tangent_mm + lip.bend_end_mm) / 2.0),
                f"({number(lip.tip_mm - (lip.tangent_mm + lip.bend_end_mm) / 2.0)})",
                f"UP {number(lip.angle_deg)}\u00b0",
                number(tray.inside_radius_mm),
            )
            for lip in tray.lips
        ),
        widths_mm=(10.0, 22.0, 20.0, 15.0, 15.0),
        at=(left, top - holes.height_mm - 4.0),
        name=BEND_TABLE,
    )
    yield bends
    lip = tray.lips[0]
    yield Table(
        title="BEND FIGURES",
        head=("allowance", "deduction", "K-factor", "setback"),
        rows=(
            (
                number(lip.allowance_mm, 3),
                number(lip.deduction_mm, 3),
                number(lip.k_factor, 3),
                number(lip.setback_mm, 3),
            ),
        ),
        widths_mm=(20.5, 20.5, 20.5, 20.5),
        at=(left, bends.at[1] - bends.height_mm - 4.0),
        name="bend-figures",
    )


def _window(holes: list[Hole]) -> tuple[float, float, float]:
    """Half side, x and y of the square round some holes."""
    xs = [v for h in holes for v in (h.x_mm - h.diameter_mm / 2.0, h.x_mm + h.diameter_mm / 2.0)]
    ys = [v for h in holes for v in (h.y_mm - h.diameter_mm / 2.0, h.y_mm + h.diameter_mm / 2.0)]
    half = max(max(xs) - min(xs), max(ys) - min(ys)) / 2.0 + 3.5
    return half, (max(xs) + min(xs)) / 2.0, (max(ys) + min(ys)) / 2.0


def _detail(
    tray: Tray,
    holes: list[Hole],
    labels: tuple[str, ...],
    left: float,
    top: float,
    bottom: float,
    wide: float,
) -> View:
    half, cx, cy = _window(holes)
    scale = best_scale(2.0 * half, 2.0 * half, wide - 2.0, top - bottom - 8.0, most=5.0)
    names = dict(zip((id(h) for h in tray.holes), labels, strict=True))
    items: list[Item] = [
        Line(a=(-half, -cy), b=(half, -cy), pen="centre"),
        Line(a=(-cx, -half), b=(-cx, half), pen="centre"),
        Chain(points=((-half, -half), (half, -half), (half, half), (-half, half)), closed=True, pen="thin"),
    ]
    for hole in holes:
        c = Circle(x_mm=hole.x_mm - cx, y_mm=hole.y_mm - cy, diameter_mm=hole.diameter_mm)
        items.append(Ring(circle=c, cross=True))
        r = hole.diameter_mm / 2.0 + 0.8 / scale
        items.append(
            Text(at=(c.x_mm + r * 0.72, c.y_mm + r * 0.72), text=names[id(hole)], height_mm=DIM_TEXT_MM)
        )
    at = (left + wide / 2.0 - 1.0, (top + bottom) / 2.0 + 2.5)
    title = f"F ({scale_text(scale)}): {SEEN}" if wide > 60.0 else f"F ({scale_text(scale)})"
    return View(title=title, items=tuple(items), at=at, scale=scale, title_at=(at[0], bottom + 0.8))
