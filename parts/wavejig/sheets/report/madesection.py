"""Can it be made? Findings, parts to turn around, fit on bed and sheet."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.sheets.report.fitsection import fit_section
from wavejig.sheets.report.markup import Element, data, el
from wavejig.sheets.report.meshes import chosen, line_drawing
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.tables import count_of
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
            yield el("details", el("summary", count_of(len(notes), "note")), listed, open=not pressing)
    yield el("h3", "The parts")
    yield from _parts(r)
    yield el("h3", "Does it fit the bed and the sheet?")
    yield from fit_section(r)


def made_answer(r: Report) -> str:
    """ "Yes, with 1 warning and 3 notes." """
    counts = {s: sum(f.severity == s for f in r.inspection.findings) for s in SEVERITIES}
    told = [count_of(n, s) for s, n in counts.items() if n]
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
