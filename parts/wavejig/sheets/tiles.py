"""Pages of a template that is larger than one: what falls on each, scale bars, where to glue. Paper mm."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

from wavejig.geometry.plane import Contour
from wavejig.sheets.layout import lay_out
from wavejig.sheets.marks import Drawn, Head, Stroke, Word
from wavejig.sheets.model import Item, View

BAR_MM = 100.0


OVERLAP_MM = 10.0  # of neighbouring tiles, to glue on; common practice, no source


_HEAD_MM = 26.0  # of a page, for its words and the level scale bar


_SIDE_MM = 6.0  # for the upright scale bar


@dataclass(frozen=True, slots=True, kw_only=True)
class Tile:
    """One page of a template. caption: which one and from which side; drawn: paper mm in the page's frame."""

    caption: str
    drawn: tuple[Drawn, ...]


def tiled(
    name: str,
    items: tuple[Item, ...],
    box: tuple[float, float, float, float],
    frame_mm: tuple[float, float],
    title: str = "CHECK TEMPLATE 1:1",
) -> Iterator[Tile]:
    wide, high = frame_mm[0] - _SIDE_MM, frame_mm[1] - _HEAD_MM
    columns, rows = (_count(box[2] - box[0], wide), _count(box[3] - box[1], high))
    turned = _count(box[2] - box[0], high) * _count(box[3] - box[1], wide) < columns * rows
    if turned:  # a quarter turn counter-clockwise saves paper
        columns, rows = _count(box[3] - box[1], wide), _count(box[2] - box[0], high)
    size = (box[3] - box[1], box[2] - box[0]) if turned else (box[2] - box[0], box[3] - box[1])
    step = (wide - OVERLAP_MM, high - OVERLAP_MM)
    spare = (
        max(wide - size[0], 0.0) / 2.0 if columns == 1 else 0.0,
        max(high - size[1], 0.0) / 2.0 if rows == 1 else 0.0,
    )
    view = View(title="", items=items, at=(0.0, 0.0), scale=1.0, title_at=(0.0, 0.0))
    drawn = tuple(lay_out(view))
    for row in range(rows):
        for column in range(columns):
            # of the template's box, from its upper left corner
            left, top = column * step[0] - spare[0], row * step[1] - spare[1]
            if turned:
                # the box's upper left corner after the turn is its upper right one before
                origin = (_SIDE_MM - left + box[3], high + top - box[2])
            else:
                origin = (_SIDE_MM - left - box[0], high + top - box[3])
            window = (_SIDE_MM, 0.0, _SIDE_MM + wide, high)
            parts = tuple(_placed(drawn, origin, window, turned=turned))
            many = (
                f", tile {row + 1}-{column + 1} of {rows} rows and {columns} columns"
                if rows * columns > 1
                else ""
            )
            caption = f"{name}{many}{', turned a quarter on the page' if turned else ''}"
            yield Tile(
                caption=caption,
                drawn=(*parts, *_furniture(title, caption, frame_mm, (row, column), (rows, columns), window)),
            )


def _count(size: float, room: float) -> int:
    return 1 if size <= room else math.ceil((size - OVERLAP_MM) / (room - OVERLAP_MM))


def _placed(
    drawn: tuple[Drawn, ...],
    origin: tuple[float, float],
    window: tuple[float, float, float, float],
    *,
    turned: bool,
) -> Iterator[Drawn]:
    """What is drawn, moved (and turned) to a tile; what lies outside its window is left out, chains are cut."""

    def put(x: float, y: float) -> tuple[float, float]:
        return (origin[0] - y, origin[1] + x) if turned else (origin[0] + x, origin[1] + y)

    for thing in drawn:
        if isinstance(thing, Word):
            at = put(*thing.at)
            if _within(at, window):
                yield replace(thing, at=at, rotation_deg=thing.rotation_deg + (90.0 if turned else 0.0))
            continue
        if isinstance(thing, Head):
            if _within(put(*thing.tip), window):
                yield Head(tip=put(*thing.tip), back=(put(*thing.back[0]), put(*thing.back[1])))
            continue
        if not isinstance(thing, Stroke):
            continue
        if thing.contour is not None:
            points = thing.contour.points(0.005)
            chain = [put(float(x), float(y)) for x, y in [*points, points[0]]]
            corners = tuple((*put(x, y), b) for x, y, b in thing.contour.vertices)
            whole: Stroke = Stroke(contour=Contour(vertices=corners), pen=thing.pen)
        elif thing.circle is not None:
            points = thing.circle.points(0.005)
            chain = [put(float(x), float(y)) for x, y in [*points, points[0]]]
            whole = Stroke(points=tuple(chain), pen=thing.pen)
        else:
            chain = [put(x, y) for x, y in thing.points]
            whole = Stroke(points=tuple(chain), pen=thing.pen)
        if all(_within(p, window) for p in chain):
            yield whole
            continue
        for run in _clipped(chain, window):
            yield Stroke(points=tuple(run), pen=thing.pen)


def _within(p: tuple[float, float], window: tuple[float, float, float, float]) -> bool:
    return window[0] <= p[0] <= window[2] and window[1] <= p[1] <= window[3]


def _clipped(
    chain: list[tuple[float, float]], window: tuple[float, float, float, float]
) -> Iterator[list[tuple[float, float]]]:
    """The stretches of a chain inside a window: each straight clipped (Liang and Barsky 1984, from memory)."""
    run: list[tuple[float, float]] = []
    for (x0, y0), (x1, y1) in itertools.pairwise(chain):
        t0, t1 = 0.0, 1.0
        dx, dy = x1 - x0, y1 - y0
        for p, q in (
            (-dx, x0 - window[0]),
            (dx, window[2] - x0),
            (-dy, y0 - window[1]),
            (dy, window[3] - y0),
        ):
            if abs(p) < 1e-12:
                if q < 0.0:
                    t0, t1 = 1.0, 0.0
            elif p < 0.0:
                t0 = max(t0, q / p)
            else:
                t1 = min(t1, q / p)
        if t0 >= t1:
            if len(run) > 1:
                yield run
            run = []
            continue
        a, b = (x0 + t0 * dx, y0 + t0 * dy), (x0 + t1 * dx, y0 + t1 * dy)
        if not run or math.dist(run[-1], a) > 1e-6:
            if len(run) > 1:
                yield run
            run = [a]
        run.append(b)
    if len(run) > 1:
        yield run


def _furniture(
    title: str,
    caption: str,
    frame_mm: tuple[float, float],
    at: tuple[int, int],
    grid: tuple[int, int],
    window: tuple[float, float, float, float],
) -> Iterator[Drawn]:
    """Words, scale bars, and where the neighbouring tiles are glued on."""
    top = frame_mm[1]
    yield Word(at=(0.0, top - 4.5), text=title, height_mm=3.2, anchor="left", bold=True)
    yield Word(at=(0.0, top - 9.0), text=caption, height_mm=2.0, anchor="left")
    yield Word(
        at=(0.0, top - 13.0),
        text="Print at 100 % (actual size). Measure BOTH bars before you trust it: 100 mm each, within "
        "0.3 mm.",
        height_mm=2.0,
        anchor="left",
    )
    bar = top - 20.0
    yield from _bar((_SIDE_MM, bar), level=True)
    yield from _bar((3.0, 4.0), level=False)
    x0, y0, x1, y1 = window
    row, column = at
    edge = OVERLAP_MM
    if column > 0:
        yield Stroke(points=((x0 + edge, y0), (x0 + edge, y1)), pen="hidden")
        yield Word(
            at=(x0 + edge - 1.0, y0 + 20.0),
            text=f"glue over tile {row + 1}-{column}",
            height_mm=1.8,
            anchor="left",
            rotation_deg=90.0,
        )
    if row > 0:
        yield Stroke(points=((x0, y1 - edge), (x1, y1 - edge)), pen="hidden")
        yield Word(
            at=(x0 + 20.0, y1 - edge + 1.0),
            text=f"glue over tile {row}-{column + 1}",
            height_mm=1.8,
            anchor="left",
        )
    if grid[0] * grid[1] > 1:
        # register marks: the middles of the overlaps, which coincide on neighbouring tiles
        xs = [x for x, on in ((x0 + edge / 2.0, column > 0), (x1 - edge / 2.0, column < grid[1] - 1)) if on]
        ys = [y for y, on in ((y1 - edge / 2.0, row > 0), (y0 + edge / 2.0, row < grid[0] - 1)) if on]
        for x in xs or [x0 + 30.0]:
            for y in ys or [y0 + 30.0, y1 - 30.0]:
                yield Stroke(points=((x - 3.0, y), (x + 3.0, y)))
                yield Stroke(points=((x, y - 3.0), (x, y + 3.0)))
        if not xs:
            for y in ys:
                x = x1 - 30.0
                yield Stroke(points=((x - 3.0, y), (x + 3.0, y)))
                yield Stroke(points=((x, y - 3.0), (x, y + 3.0)))


def _bar(at: tuple[float, float], *, level: bool) -> Iterator[Drawn]:
    """A scale bar of exactly 100 mm with a tick each 10 mm."""
    x, y = at

    def p(along: float, aside: float) -> tuple[float, float]:
        return (x + along, y + aside) if level else (x + aside, y + along)

    yield Stroke(points=(p(0.0, 0.0), p(BAR_MM, 0.0)), pen="outline")
    for i in range(11):
        long = 3.0 if i in (0, 5, 10) else 1.5
        yield Stroke(points=(p(10.0 * i, 0.0), p(10.0 * i, long)))
    yield Word(at=p(BAR_MM + 1.5, 0.2 if level else 2.5), text="100 mm", height_mm=1.8, anchor="left",
               rotation_deg=0.0 if level else 90.0)  # fmt: skip
