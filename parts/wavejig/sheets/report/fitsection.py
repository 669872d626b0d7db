"""Does it fit the bed and the sheet? The blank on its stock sheet, the largest print on the bed."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator

from wavejig.batch.model import Placement
from wavejig.files.printable import BED_MARGIN_MM
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets import lists
from wavejig.sheets.model import number
from wavejig.sheets.report.axes import Pt, chain, line, picture, word
from wavejig.sheets.report.markup import Element, el
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.tables import count_of, figure, parts_of, table

_WIDE, _EDGE = 380.0, 10.0  # of the pictures, and white round them
_ALONE = 250.0  # the blank alone, its longer side

_LETTER = 5.6  # width of a small letter, about

Move = Callable[[float, float], Pt]


def fit_section(r: Report) -> Iterator[Element]:
    """The pictures and the table of prints."""
    bed = r.design.printer
    own = r.design.reflector.kind == "own"
    if r.batch is not None:
        files = {e.path for e, _ in r.files}
        whole = [(*row[:3], _link(row[3], files)) for row in lists.batch(r.batch)]
        yield table("For the whole batch", lists.BATCH_HEAD, whole)
    yield el("div", parts_of((_own(r) if own else _sheet(r), _plate(r) or _bed(r))), class_="pair")
    prints = None if r.batch is None else r.batch.prints
    made = {} if prints is None else {p.name: p.count for p in prints.pieces}
    rows = [
        (
            p.name,
            part,
            str(made.get(p.name, count)),
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
    """The batch's blanks on the first stock sheet (or one in its corner), and the blank larger."""
    c, pattern = r.design.cutter, r.pattern
    nest = None if r.batch is None else r.batch.nest
    wide_mm, high_mm = (c.stock_x_mm, c.stock_y_mm) if nest is None else nest.stock_mm
    x0, y0, x1, y1 = pattern.outline.bounds()
    scale = _WIDE / max(wide_mm, high_mm)
    floor = _EDGE + high_mm * scale
    top = floor + 42.0
    parts = [el("rect", x=_EDGE, y=_EDGE, width=wide_mm * scale, height=high_mm * scale, class_="frame")]
    placed = (
        (Placement(number=1, x_mm=-x0, y_mm=-y0, turn_deg=0.0),)
        if nest is None
        else nest.sheets[0].placements
    )
    for place in placed:
        parts += _placed(pattern, place, lambda x, y: (_EDGE + scale * x, floor - scale * y))
    folds = " (- \u00b7 - folds)" if pattern.bends else ""
    parts.append(word((_EDGE, top - 10.0), f"the blank alone, from the radiator side{folds}:"))
    parts += _alone(pattern, top)
    w, h = pattern.size_mm
    stock = f"{number(wide_mm)} by {number(high_mm)} mm"
    text = f"Blank {number(w, 1)} by {number(h, 1)} mm; stock sheet {stock}"
    if nest is not None:
        first = f" (the first of {len(nest.sheets)} shown)" if len(nest.sheets) > 1 else ""
        text = (
            f"{count_of(r.design.quantity, 'blank')} of {number(w, 1)} by {number(h, 1)} mm on "
            f"{count_of(len(nest.sheets), 'stock sheet')} of {stock}{first}, "
            f"{100.0 * nest.utilisation:.0f} % of the metal used"
        )
    text += f"; {count_of(len(pattern.holes), 'hole')}, {count_of(len(pattern.bends), 'fold')} in each."
    tall = top + _ALONE * (y1 - y0) / max(x1 - x0, y1 - y0) + _EDGE
    return figure(text, picture(400.0, tall, "sheet-plot", "Blanks and stock sheet", text, parts))


def _placed(pattern: FlatPattern, place: Placement, move: Move) -> Iterator[Element]:
    """One blank where the nest has it, with its running number."""

    def seen(x: float, y: float) -> Pt:
        a, b = (-y, x) if place.turn_deg else (x, y)
        return move(a + place.x_mm, b + place.y_mm)

    yield el("path", d=_closed(pattern.outline.points(0.2), seen), class_="part")
    x0, y0, x1, y1 = pattern.outline.bounds()
    at = seen((x0 + x1) / 2.0, (y0 + y1) / 2.0)
    yield word((at[0], at[1] + 4.0), f"{place.number}", class_="t small", anchor="middle")


def _own(r: Report) -> Element:
    """A reflector that is there already: its floor and what is drilled in it."""
    pattern, own = r.pattern, r.design.reflector.own
    w, h = pattern.size_mm
    size = (
        f"\u00d8{number(w, 1)}"
        if own is not None and own.shape == "round"
        else f"{number(w, 1)} by {number(h, 1)}"
    )
    text = (
        f"Your own reflector, {size} mm inside on its floor: nothing is cut, "
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


def _plate(r: Report) -> Element | None:
    """The first plate of the batch's prints."""
    prints = None if r.batch is None else r.batch.prints
    if prints is None or not prints.plates:
        return None
    plate, sizes = prints.plates[0], {p.name: p.size_mm for p in prints.pieces}
    wide_mm, high_mm = prints.bed_mm
    scale = _WIDE / max(wide_mm, high_mm)
    high = high_mm * scale
    margin = prints.margin_mm * scale
    used_x, used_y = wide_mm * scale - 2.0 * margin, high - 2.0 * margin
    parts = [
        el("rect", x=_EDGE, y=_EDGE, width=wide_mm * scale, height=high, class_="frame"),
        el(
            "rect", x=_EDGE + margin, y=_EDGE + margin, width=used_x, height=used_y, class_="fold",
        ),
    ]  # fmt: skip
    for spot in plate.spots:
        w, h = sizes[spot.name][:: -1 if spot.turn_deg else 1]
        x, y = _EDGE + scale * (spot.x_mm - w / 2.0), _EDGE + high - scale * (spot.y_mm + h / 2.0)
        parts.append(el("rect", x=x, y=y, width=scale * w, height=scale * h, class_="part"))
    for spot in plate.spots:
        if _LETTER * len(spot.name) > scale * sizes[spot.name][1 if spot.turn_deg else 0]:
            continue  # no room; the table names them all
        at = (_EDGE + scale * spot.x_mm, _EDGE + high - scale * spot.y_mm + 4.0)
        parts.append(word(at, spot.name, anchor="middle", class_="t small halo"))
    text = (
        f"Plate 1 of {len(prints.plates)}: {count_of(len(plate.spots), 'piece')} in {plate.plastic} on a bed of "
        f"{number(wide_mm)} by {number(high_mm)} mm (dashed: the part of it that is used); the boxes round the pieces."
    )
    return figure(text, picture(400.0, high + 2.0 * _EDGE, "bed-plot", "First plate on the bed", text, parts))


def _link(path: str, files: set[str]) -> str | Element:
    """A link where the pack has just that file."""
    return el("a", path, href=path) if path in files else path


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
