"""Can it be made? Findings, parts to turn around, fit on bed and sheet."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.files.printable import BED_MARGIN_MM
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets.model import number
from wavejig.sheets.report.axes import chain, line, picture, word
from wavejig.sheets.report.markup import Element, data, el
from wavejig.sheets.report.meshes import chosen, line_drawing
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.tables import figure, table
from wavejig.shop.finding import NOTE, SEVERITIES, Finding

# Base64 letters of meshes in one page; a phone opens a page of this size without waiting. Taste, no source.
MOST_MESH_BYTES = 2_200_000


def made_section(r: Report) -> Iterator[Element | str]:
    """The section's inside."""
    yield el("p", made_answer(r))
    if r.inspection.findings:
        yield el("h3", "Findings")
        pressing = [f for f in r.inspection.findings if f.severity != NOTE]
        notes = [f for f in r.inspection.findings if f.severity == NOTE]
        if pressing:
            yield el("ul", [_finding(f) for f in pressing], class_="findings")
        if notes:
            listed = el("ul", [_finding(f) for f in notes], class_="findings")
            yield el("details", el("summary", _count(len(notes), "note")), listed, open=not pressing)
    yield el("h3", "The parts")
    yield from _parts(r)
    yield el("h3", "Does it fit the bed and the sheet?")
    yield from _fit(r)


def made_answer(r: Report) -> str:
    """ "Yes, with 1 warning and 3 notes." """
    counts = {s: sum(f.severity == s for f in r.inspection.findings) for s in SEVERITIES}
    told = [_count(n, s) for s, n in counts.items() if n]
    if not r.inspection.can_be_made:
        return f"No: {' and '.join(told)}."
    return f"Yes, with {' and '.join(told)}." if told else "Yes; there is nothing to remark."


def _finding(f: Finding) -> Element:
    return el(
        "li",
        el(
            "p",
            el("span", f.severity, class_="severity"),
            " \u00b7 ",
            f.where,
            " \u00b7 ",
            el("code", f.code),
        ),
        el("p", f.message),
        el("p", el("b", "Do: "), f.remedy),
        el("p", f"Rule: {f.source}", class_="soft"),
        class_=f.severity,
    )


def _parts(r: Report) -> Iterator[Element | str]:
    pieces, left_out = chosen(r.pieces, MOST_MESH_BYTES)
    antenna = [(i, p["name"]) for i, p in enumerate(pieces) if p["group"] == "antenna"]
    others = [(i, p["name"]) for i, p in enumerate(pieces) if p["group"] != "antenna"]
    options = [el("option", "the antenna, put together", value="antenna")]
    options.append(
        el("optgroup", [el("option", name, value=str(i)) for i, name in antenna], label="one part alone")
    )
    if others:
        options.append(
            el(
                "optgroup",
                [el("option", n, value=str(i)) for i, n in others],
                label="printed tools, as they print",
            )
        )
    yield el(
        "div",
        line_drawing(r.pieces),
        el(
            "canvas", id="parts-canvas", hidden=True, tabindex="0", role="img",
            aria_label="Parts in three dimensions, to turn around: " + ", ".join(name for _, name in antenna),
            aria_describedby="parts-told",
        ),
        id="stage",
    )  # fmt: skip
    yield el(
        "p", "A line drawing; with scripts allowed it can be turned around.", id="parts-told", class_="soft",
        role="status",
    )  # fmt: skip
    views = (
        ("reset", "First view"), ("front", "From the front"), ("side", "From the side"), ("back", "From behind"),
        ("nearer", "Nearer"), ("further", "Further"),
    )  # fmt: skip
    yield el(
        "div",
        el("label", "Show ", el("select", options, id="parts-choice")),
        el("div", [el("button", text, type="button", data_view=v) for v, text in views], id="parts-buttons"),
        id="parts-controls", hidden=True,
    )  # fmt: skip
    boxes = [
        el("label", el("input", type="checkbox", value=str(i), checked=True), name) for i, name in antenna
    ]
    yield el("fieldset", el("legend", "In the picture:"), boxes, id="parts-boxes", hidden=True)
    if left_out:
        yield el(
            "p",
            f"Too large for this page, to be seen in their own files: {', '.join(left_out)}.",
            class_="soft",
        )
    yield el("script", data(pieces), type="application/json", id="parts-data")


def _fit(r: Report) -> Iterator[Element]:
    design = r.design
    bed = design.printer
    yield el("div", _sheet(design, r.pattern), _bed(r), class_="pair")
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


def _sheet(design: Design, pattern: FlatPattern) -> Element | None:
    """The blank in the corner of a stock sheet."""
    c = design.cutter
    x0, y0, x1, y1 = pattern.outline.bounds()
    turned = not (x1 - x0 <= c.stock_x_mm and y1 - y0 <= c.stock_y_mm)
    scale = 380.0 / max(c.stock_x_mm, c.stock_y_mm)
    high = c.stock_y_mm * scale
    zoom = 250.0 / max(x1 - x0, y1 - y0)

    def at(x: float, y: float, k: float) -> tuple[float, float]:
        return (y - y0, x - x0) if turned and k is scale else (x - x0, y - y0)

    def outlines(k: float, dx: float, dy: float, tall: float) -> Iterator[Element]:
        def put(points: object) -> str:
            seen = (at(float(x), float(y), k) for x, y in points)  # type: ignore[attr-defined]
            return chain(((dx + k * a, dy + tall - k * b) for a, b in seen), closed=True)

        yield el("path", d=put(pattern.outline.points(0.2)), class_="part")
        if k is zoom:
            for hole in pattern.holes:
                yield el("path", d=put(hole.points(0.2)), class_="part hole")
            for bend in pattern.bends:
                (ax, ay), (bx, by) = bend.line
                yield line(
                    (dx + k * (ax - x0), dy + tall - k * (ay - y0)),
                    (dx + k * (bx - x0), dy + tall - k * (by - y0)),
                    "fold",
                )

    parts = [
        el("rect", x=10.0, y=10.0, width=c.stock_x_mm * scale, height=high, class_="frame"),
        *outlines(scale, 10.0, 10.0, high),
    ]
    tall = (y1 - y0) * zoom
    top = 10.0 + high + 42.0
    parts.append(word((10.0, top - 10.0), "the blank alone, from the radiator side (- \u00b7 - folds):"))
    parts += outlines(zoom, 10.0, top, tall)
    w, h = pattern.size_mm
    text = (
        f"Blank {number(w, 1)} by {number(h, 1)} mm on a stock sheet of "
        f"{number(c.stock_x_mm)} by {number(c.stock_y_mm)} mm"
        f"{', turned a quarter' if turned else ''}; {_count(len(pattern.holes), 'hole')}, "
        f"{_count(len(pattern.bends), 'fold')}."
    )
    return figure(text, picture(400.0, top + tall + 10.0, "sheet-plot", "Blank and stock sheet", text, parts))


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


def _count(number_of: int, word_: str) -> str:
    """ "1 hole", "2 holes"."""
    return f"{number_of} {word_}{'' if number_of == 1 else 's'}"
