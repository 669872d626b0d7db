"""The blanks of a batch on stock sheets: how many to a sheet, which way round, what each file draws.

All blanks are alike, so every full sheet is: the packing library lays one out, and it is repeated.
"""

from __future__ import annotations

import math
from dataclasses import replace

from wavejig.batch.model import Box, Nest, NestedShapes, NestSheet, Placement
from wavejig.batch.rectangles import Laid, most_equal
from wavejig.design.model import Design
from wavejig.geometry.lettering import strokes, text_width_mm
from wavejig.geometry.plane import Circle, Contour, Stroke
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.marks import Mark, find_marks
from wavejig.reflector.model import Tray

# The arrow that shows the grain lies in the sheet's margin. Taste, no source.
_ARROW_MM, _BARB = 40.0, 0.3


class NestError(ValueError):
    """No blank fits the stock sheet."""


def nest(design: Design, tray: Tray, pattern: FlatPattern) -> Nest:
    """Lay out the batch. pattern: the nominal blank, without kerf. Raises NestError when none fits."""
    c = design.cutter
    box = pattern.outline.bounds()
    size = (box[2] - box[0], box[3] - box[1])
    room = (c.stock_x_mm - 2.0 * c.margin_mm, c.stock_y_mm - 2.0 * c.margin_mm)
    sheared = c.process == "guillotine"
    laid: tuple[Laid, ...] = ()
    for turns in _ways(c.grain, tray):
        if min(room) > 0.0:
            laid = most_equal(size, room, c.spacing_mm, turns=turns, sheared=sheared)
        if laid:
            break
    if not laid:
        raise NestError(
            f"a blank of {size[0]:.1f} x {size[1]:.1f} mm fits no stock sheet of {c.stock_x_mm:g} x "
            f"{c.stock_y_mm:g} mm with {c.margin_mm:g} mm of margin"
        )
    area = abs(pattern.outline.area_mm2)
    stock_area = c.stock_x_mm * c.stock_y_mm
    n = design.quantity
    sheets = []
    for first in range(0, n, len(laid)):
        used = _kept_together(laid, n - first, size, (c.stock_x_mm, c.stock_y_mm))
        places = tuple(
            _placement(first + i, spot, box, size, c.margin_mm) for i, spot in enumerate(used, start=1)
        )
        sheets.append(
            NestSheet(
                placements=places,
                box=_over_all(places, box),
                utilisation=len(used) * area / stock_area,
            )
        )
    grown = (size[0] + c.spacing_mm) * (size[1] + c.spacing_mm)
    most = math.floor((room[0] + c.spacing_mm) * (room[1] + c.spacing_mm) / grown + 1e-9)
    turned = laid[0].turned
    along = (
        "any" if c.grain == "none" else ("y" if turned else "x") if c.grain == "x" else "x" if turned else "y"
    )
    return Nest(
        stock_mm=(c.stock_x_mm, c.stock_y_mm),
        margin_mm=c.margin_mm,
        spacing_mm=c.spacing_mm,
        grain=c.grain,
        blank_grain=along,
        # a fold at an x edge runs along y
        bends_along_grain=tuple(lip.edge for lip in tray.lips if along != "any" and lip.edge[0] != along),
        bends_across_grain=tuple(lip.edge for lip in tray.lips if lip.edge[0] == along),
        per_sheet=len(laid),
        sheets=tuple(sheets),
        fewest_sheets=math.ceil(n / most),
        utilisation=n * area / (stock_area * len(sheets)),
    )


def _kept_together(
    laid: tuple[Laid, ...], count: int, size: tuple[float, float], stock: tuple[float, float]
) -> tuple[Laid, ...]:
    """The first `count` places of a full sheet, column by column or row by row: whichever leaves more whole."""
    if count >= len(laid):
        return laid
    columns = laid[:count]
    rows = tuple(sorted(laid, key=lambda p: (p.y_mm, p.x_mm))[:count])

    def left(used: tuple[Laid, ...]) -> float:
        wide = max(p.x_mm + (size[1] if p.turned else size[0]) for p in used)
        high = max(p.y_mm + (size[0] if p.turned else size[1]) for p in used)
        return max((stock[0] - wide) * stock[1], (stock[1] - high) * stock[0])

    return rows if left(rows) > left(columns) else columns


def _ways(grain: str, tray: Tray) -> tuple[tuple[str, ...], ...]:
    """What may be done with the blanks, best first.

    Where the grain counts all lie one way. Folds should cross it: with folds along one direction only, that
    says which way; the other is taken only when the blank fits no sheet else.
    """
    if grain == "none":
        return (("none", "all", "any"),)
    folds = {"y" if lip.edge[0] == "x" else "x" for lip in tray.lips}
    if len(folds) != 1:
        return (("none", "all"),)
    crossing = "none" if folds != {grain} else "all"
    return ((crossing,), ("all" if crossing == "none" else "none",))


def _placement(number: int, spot: Laid, box: Box, size: tuple[float, float], margin: float) -> Placement:
    """Where the blank's origin lands; a quarter turn maps (x, y) to (-y, x)."""
    x, y = margin + spot.x_mm, margin + spot.y_mm
    if spot.turned:
        return Placement(number=number, x_mm=x + box[3], y_mm=y - box[0], turn_deg=90.0)
    return Placement(number=number, x_mm=x - box[0], y_mm=y - box[1], turn_deg=0.0)


def blank_box(place: Placement, box: Box) -> Box:
    """The box a blank takes on its sheet; box: of the blank about its own origin."""
    x, y = place.x_mm, place.y_mm
    if place.turn_deg:
        return (x - box[3], y + box[0], x - box[1], y + box[2])
    return (x + box[0], y + box[1], x + box[2], y + box[3])


def _over_all(places: tuple[Placement, ...], box: Box) -> Box:
    boxes = [blank_box(p, box) for p in places]
    low, high = [min(b[i] for b in boxes) for i in (0, 1)], [max(b[i] for b in boxes) for i in (2, 3)]
    return (low[0], low[1], high[0], high[1])


class NumberedBlank:
    """One blank with its marks, to be drawn again and again under running numbers."""

    def __init__(self, design: Design, tray: Tray, pattern: FlatPattern) -> None:
        """pattern: as it is to be cut, kerf included where the file carries it."""
        self._pattern = pattern
        self._name = design.name
        self._digits = len(str(design.quantity))
        widest = max("0123456789", key=lambda d: text_width_mm(d, 1.0)) * self._digits
        # name and number on one line; where that has no room the number on its own, with or without the name
        self._numbered: Mark | None = None
        self._with_name = True
        marks: tuple[Mark, ...] = ()
        for names, with_name in (
            ((self._label(widest, True),), True),
            ((design.name, self._label(widest, False)), False),
            ((self._label(widest, False),), False),
        ):
            marks, _ = find_marks(tray, names)
            self._numbered = next((m for m in marks if m.text == names[-1]), None)
            self._with_name = with_name
            if self._numbered is not None:
                break
        fixed = [s for m in marks if m is not self._numbered for s in m.strokes()]
        # digits are all of one width, so what stands before them stays where it is, whatever the number
        self._leading = sum(len(strokes(c, 1.0)) for c in self._label("", self._with_name))
        if self._numbered is not None:
            fixed += self._numbered.strokes()[: self._leading]
        self._fixed = tuple(fixed)
        self._drawn: tuple[object, NestedShapes] | None = None

    @property
    def has_number(self) -> bool:
        """There is room on the blank for its running number."""
        return self._numbered is not None

    def _label(self, digits: str, with_name: bool) -> str:
        return f"{self._name} No {digits}" if with_name else f"No {digits}"

    def _number(self, number: int) -> tuple[Stroke, ...]:
        """The digits' strokes; the text before them is among the fixed marks."""
        if self._numbered is None:
            return ()
        label = self._label(f"{number:0{self._digits}d}", self._with_name)
        return self._numbered.strokes(label)[self._leading :]

    def shapes(self, laid: Nest, sheet: NestSheet) -> NestedShapes:
        """All that one sheet's file draws; a sheet laid out like the last one drawn shares all but the numbers."""
        spots = (laid.stock_mm, tuple((p.x_mm, p.y_mm, p.turn_deg) for p in sheet.placements))
        if self._drawn is None or self._drawn[0] != spots:
            self._drawn = (spots, self._unnumbered(laid, sheet))
        return replace(
            self._drawn[1],
            numbers=tuple(_stroke(s, p) for p in sheet.placements for s in self._number(p.number)),
            unmarked=() if self.has_number else tuple(p.number for p in sheet.placements),
        )

    def _unnumbered(self, laid: Nest, sheet: NestSheet) -> NestedShapes:
        cut: list[Contour | Circle] = []
        bends = []
        for place in sheet.placements:
            cut.append(_contour(self._pattern.outline, place))
            cut += [_circle(hole, place) for hole in self._pattern.holes]
            bends += [
                (_at(b.line[0], place), _at(b.line[1], place), b.angle_deg) for b in self._pattern.bends
            ]
        w, h = laid.stock_mm
        edge = Stroke(points=((0.0, 0.0), (w, 0.0), (w, h), (0.0, h), (0.0, 0.0)))
        return NestedShapes(
            cut=tuple(cut),
            bends=tuple(bends),
            marks=tuple(_stroke(s, place) for place in sheet.placements for s in self._fixed),
            numbers=(),
            stock=(edge, *_grain_arrow(laid)),
        )


def _grain_arrow(laid: Nest) -> tuple[Stroke, ...]:
    """A double-headed arrow along the grain, in the lower or left margin; none where grain does not matter."""
    w, h = laid.stock_mm
    y = laid.margin_mm / 2.0
    half, barb = min(_ARROW_MM, 0.8 * min(w, h)) / 2.0, _BARB * laid.margin_mm
    if laid.grain == "none" or barb < 0.2:
        return ()
    middle = (w if laid.grain == "x" else h) / 2.0
    chains = [((middle - half, y), (middle + half, y))]
    for side in (-1.0, 1.0):
        tip = (middle + side * half, y)
        chains += [(tip, (tip[0] - side * 2.0 * barb, y + up * barb)) for up in (-1.0, 1.0)]
    flip = laid.grain == "y"
    return tuple(Stroke(points=tuple((v, u) if flip else (u, v) for u, v in chain)) for chain in chains)


def _at(point: tuple[float, float], place: Placement) -> tuple[float, float]:
    x, y = point
    if place.turn_deg:
        x, y = -y, x
    return (x + place.x_mm, y + place.y_mm)


def _stroke(stroke: Stroke, place: Placement) -> Stroke:
    return Stroke(points=tuple(_at(p, place) for p in stroke.points))


def _contour(contour: Contour, place: Placement) -> Contour:
    return Contour(vertices=tuple((*_at((x, y), place), bulge) for x, y, bulge in contour.vertices))


def _circle(circle: Circle, place: Placement) -> Circle:
    x, y = _at((circle.x_mm, circle.y_mm), place)
    return Circle(x_mm=x, y_mm=y, diameter_mm=circle.diameter_mm)
