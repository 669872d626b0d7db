"""Does it fit the bed and the sheet? The blank on its stock sheet, the largest print on the bed."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator

from wavejig.files.printable import BED_MARGIN_MM
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets.model import number
from wavejig.sheets.report.axes import Pt, chain, line, picture, word
from wavejig.sheets.report.markup import Element, el
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.tables import count_of, figure, parts_of, table

_WIDE, _EDGE = 380.0, 10.0  # of the pictures, and white round them
_ALONE = 250.0  # the blank alone, its longer side

Move = Callable[[float, float], Pt]


def fit_section(r: Report) -> Iterator[Element]:
    """The pictures and the table of prints."""
    bed = r.design.printer
    own = r.design.reflector.kind == "own"
    yield el("div", parts_of((_own(r.pattern) if own else _sheet(r), _bed(r))), class_="pair")
    rows = [
        (
            p.name,
            part,
            str(count),
            " \u00d7 ".join(number(s, 1) for s in p.size_mm) + " mm",
            f"{number(p.overhang_deg, 0)}\u00b0"
            + (f", bridges {number(p.bridge_mm, 1)} mm" if p.bridge_mm else ""),
        )
        for part, count, p in r.prints
    ]
    caption = (
        f"Printed pieces, on a bed of {number(bed.bed_x_mm)} \u00d7 {number(bed.bed_y_mm)} \u00d7 "
        f"{number(bed.bed_z_mm)} mm less {number(BED_MARGIN_MM)} mm all round; "
        "each was checked to print without support."
    )
    yield table(
        caption, ("piece", "for", "pieces", "size as it lies", "steepest overhang"), rows, numbers=(2,)
    )


def _sheet(r: Report) -> Element:
    """The blank in the corner of a stock sheet, and larger beside it."""
    c, pattern = r.design.cutter, r.pattern
    x0, y0, x1, y1 = pattern.outline.bounds()
    wide, high = x1 - x0, y1 - y0
    turned = not (wide <= c.stock_x_mm and high <= c.stock_y_mm)
    scale = _WIDE / max(c.stock_x_mm, c.stock_y_mm)
    floor = _EDGE + c.stock_y_mm * scale

    def on_stock(x: float, y: float) -> Pt:
        a, b = (y - y0, x - x0) if turned else (x - x0, y - y0)
        return _EDGE + scale * a, floor - scale * b

    top = floor + 42.0
    parts = [
        el("rect", x=_EDGE, y=_EDGE, width=c.stock_x_mm * scale, height=c.stock_y_mm * scale, class_="frame"),
        el("path", d=_closed(pattern.outline.points(0.2), on_stock), class_="part"),
        word((_EDGE, top - 10.0), "the blank alone, from the radiator side (- \u00b7 - folds):"),
        *_alone(pattern, top),
    ]
    w, h = pattern.size_mm
    text = (
        f"Blank {number(w, 1)} by {number(h, 1)} mm on a stock sheet of "
        f"{number(c.stock_x_mm)} by {number(c.stock_y_mm)} mm{', turned a quarter' if turned else ''}; "
        f"{count_of(len(pattern.holes), 'hole')}, {count_of(len(pattern.bends), 'fold')}."
    )
    tall = top + _ALONE * high / max(wide, high) + _EDGE
    return figure(text, picture(400.0, tall, "sheet-plot", "Blank and stock sheet", text, parts))


def _own(pattern: FlatPattern) -> Element:
    """A reflector that is there already: its floor and what is drilled in it."""
    w, h = pattern.size_mm
    text = (
        f"Your own reflector, {number(w, 1)} by {number(h, 1)} mm inside on its floor: nothing is cut, "
        f"{count_of(len(pattern.holes), 'hole')} to be drilled by the template. From the radiator side."
    )
    tall = 2.0 * _EDGE + _ALONE * h / max(w, h)
    parts = list(_alone(pattern, _EDGE))
    return figure(text, picture(400.0, tall, "sheet-plot", "What is drilled", text, parts))


def _alone(pattern: FlatPattern, top: float) -> Iterator[Element]:
    """Outline, holes and folds, the longer side as long as the picture gives."""
    x0, y0, x1, y1 = pattern.outline.bounds()
    scale = _ALONE / max(x1 - x0, y1 - y0)

    def at(x: float, y: float) -> Pt:
        return _EDGE + scale * (x - x0), top + scale * (y1 - y)

    yield el("path", d=_closed(pattern.outline.points(0.2), at), class_="part")
    for hole in pattern.holes:
        yield el("path", d=_closed(hole.points(0.2), at), class_="part hole")
    for bend in pattern.bends:
        yield line(at(*bend.line[0]), at(*bend.line[1]), "fold")


def _closed(points: Iterable[Iterable[float]], move: Move) -> str:
    """Path data of a closed loop of (x, y) in mm."""
    return chain((move(*(float(v) for v in p)) for p in points), closed=True)


def _bed(r: Report) -> Element | None:
    """The largest printed piece in the middle of the bed."""
    if not r.prints:
        return None
    bed = r.design.printer
    _, _, largest = max(r.prints, key=lambda p: (p[2].size_mm[0] * p[2].size_mm[1], p[2].name))
    scale = 380.0 / max(bed.bed_x_mm, bed.bed_y_mm)
    wide, high = bed.bed_x_mm * scale, bed.bed_y_mm * scale
    edge = BED_MARGIN_MM * scale
    w, h = largest.size_mm[0] * scale, largest.size_mm[1] * scale
    parts = [
        el("rect", x=10.0, y=10.0, width=wide, height=high, class_="frame"),
        el(
            "rect", x=10.0 + edge, y=10.0 + edge, width=wide - 2 * edge, height=high - 2 * edge, class_="fold"
        ),
        el("rect", x=10.0 + (wide - w) / 2, y=10.0 + (high - h) / 2, width=w, height=h, class_="part"),
        word((10.0 + wide / 2, 14.0 + high / 2), largest.name, anchor="middle", class_="t halo"),
    ]
    text = (
        f"Largest print: {largest.name}, {number(largest.size_mm[0], 1)} by {number(largest.size_mm[1], 1)} mm "
        "on a bed of "
        f"{number(bed.bed_x_mm)} by {number(bed.bed_y_mm)} mm (dashed: the part of it that is used)."
    )
    return figure(text, picture(400.0, high + 20.0, "bed-plot", "Largest print on the bed", text, parts))
