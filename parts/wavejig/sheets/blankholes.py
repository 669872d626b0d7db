"""A sheet part in plan with its holes: labels, table, and the crowd round the feed drawn larger. Lengths in mm.

The same for a blank and for a dish that is there already.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from wavejig.design.model import Hole
from wavejig.geometry.plane import Circle
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray
from wavejig.sheets.blankcorners import (
    SEEN,
)
from wavejig.sheets.fit import best_scale
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    Chain,
    Item,
    Line,
    Ring,
    Shape,
    Table,
    Text,
    View,
    number,
    scale_text,
)

HOLE_TABLE, BEND_TABLE = "hole-table", "bend-table"


TABLES_WIDE_MM = 84.0


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


def crowd(tray: Tray) -> list[Hole]:
    """Holes of the feed, which stand too close for labels at a small scale."""
    feed = [h for h in tray.holes if h.purpose in ("connector", "flange", "foot", "tube")]
    return feed if len(feed) > 1 else []


def placed_labels(
    named: Sequence[tuple[Hole, str]],
    holes: Sequence[Hole],
    scale: float,
    *,
    origin: tuple[float, float] = (0.0, 0.0),
    half: float = math.inf,
) -> Iterator[Text]:
    """Labels of holes, each on that side of its hole where it meets no other hole, label or the frame.

    Upper right where that is free, else the freest side. holes: all that are in the view, which has this scale;
    origin: what the view calls (0, 0), in mm from the datum, half: of the square it shows.
    """
    taken: list[_Box] = []
    for hole, label in named:
        wide, high = width_mm(label, DIM_TEXT_MM) / scale, DIM_TEXT_MM / scale
        rim = hole.diameter_mm / 2.0 + 1.2 / scale
        spots: list[_Box] = []
        for right, up in ((1, 1), (1, -1), (-1, 1), (-1, -1), (1, 0), (-1, 0), (0, 1), (0, -1)):
            r = rim * (0.75 if right and up else 1.0)
            x = hole.x_mm + (-wide / 2.0, r, -r - wide)[right]
            y = hole.y_mm + (-high / 2.0, r, -r - high)[up]
            spots.append((x, y, x + wide, y + high))
        enough = 0.25 / scale

        def air(spot: _Box, enough: float = enough) -> float:
            far = max(abs(v - origin[i % 2]) for i, v in enumerate(spot))
            return min(
                enough, half - far, *(_to_rim(spot, h) for h in holes), *(_apart(spot, t) for t in taken)
            )

        best = max(spots, key=air)
        taken.append(best)
        yield Text(at=(best[0] - origin[0], best[1] - origin[1]), text=label, height_mm=DIM_TEXT_MM)


_Box = tuple[float, float, float, float]


def _to_rim(box: _Box, hole: Hole) -> float:
    """Distance from a box to the rim of a hole; negative inside it."""
    dx = max(box[0] - hole.x_mm, hole.x_mm - box[2], 0.0)
    dy = max(box[1] - hole.y_mm, hole.y_mm - box[3], 0.0)
    return math.hypot(dx, dy) - hole.diameter_mm / 2.0


def _apart(a: _Box, b: _Box) -> float:
    """Gap between two boxes along the axis where it is larger; negative when they overlap."""
    return max(a[0] - b[2], b[0] - a[2], a[1] - b[3], b[1] - a[3])


def plan_with_holes(
    tray: Tray, pattern: FlatPattern, scale: float, labels: tuple[str, ...], in_detail: set[int]
) -> Iterator[Item]:
    """The outline with its centre lines, every hole, labels of those not drawn larger, and the detail's window.

    in_detail: ids of the holes that the detail F shows larger.
    """
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield Shape(contour=pattern.outline, pen="outline")
    over = 4.0 / scale
    yield Line(a=(x0 - over, 0.0), b=(x1 + over, 0.0), pen="centre")
    yield Line(a=(0.0, y0 - over), b=(0.0, y1 + over), pen="centre")
    for hole in tray.holes:
        circle = Circle(x_mm=hole.x_mm, y_mm=hole.y_mm, diameter_mm=hole.diameter_mm)
        yield Ring(circle=circle, cross=id(hole) not in in_detail)
    named = [(h, label) for h, label in zip(tray.holes, labels, strict=True) if id(h) not in in_detail]
    yield from placed_labels(named, tray.holes, scale)
    if in_detail:
        half, cx, cy = window_of([h for h in tray.holes if id(h) in in_detail])
        corners = ((-half, -half), (half, -half), (half, half), (-half, half))
        yield Chain(points=tuple((cx + a, cy + b) for a, b in corners), closed=True, pen="thin")
        yield Text(at=(cx + half, cy + half), text="F", height_mm=DIM_TEXT_MM, shift=(0.8, 0.8), bold=True)


def tables_of(tray: Tray, labels: tuple[str, ...], left: float, top: float) -> Iterator[Table]:
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


def window_of(holes: list[Hole]) -> tuple[float, float, float]:
    """Half side, x and y of the square round some holes."""
    xs = [v for h in holes for v in (h.x_mm - h.diameter_mm / 2.0, h.x_mm + h.diameter_mm / 2.0)]
    ys = [v for h in holes for v in (h.y_mm - h.diameter_mm / 2.0, h.y_mm + h.diameter_mm / 2.0)]
    half = max(max(xs) - min(xs), max(ys) - min(ys)) / 2.0 + 3.5
    return half, (max(xs) + min(xs)) / 2.0, (max(ys) + min(ys)) / 2.0


def feed_detail(
    tray: Tray,
    holes: list[Hole],
    labels: tuple[str, ...],
    left: float,
    top: float,
    bottom: float,
    wide: float,
) -> View:
    half, cx, cy = window_of(holes)
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
    named = [(hole, names[id(hole)]) for hole in holes]
    items += placed_labels(named, holes, scale, origin=(cx, cy), half=half)
    at = (left + wide / 2.0 - 1.0, (top + bottom) / 2.0 + 2.5)
    title = f"F ({scale_text(scale)}): {SEEN}" if wide > 60.0 else f"F ({scale_text(scale)})"
    return View(title=title, items=tuple(items), at=at, scale=scale, title_at=(at[0], bottom + 0.8))
