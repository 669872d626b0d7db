"""The build sheet's first half: what is made, of what, bent and soldered how."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from reportlab.lib.units import mm
from reportlab.platypus import (
    Spacer,
    Table,
)

from wavejig.sheets import lists
from wavejig.sheets.bendstory import bend_tables, folding, frames_story
from wavejig.sheets.buildmodel import BuildSheet, picture_of
from wavejig.sheets.fit import best_scale
from wavejig.sheets.flow import PLAIN, heading, lead, numbered, para, table, title
from wavejig.sheets.model import Item, Shape, number
from wavejig.sheets.ownwords import reflector_facts, reflector_words
from wavejig.sheets.process import assembly_steps

if TYPE_CHECKING:
    pass  # the solver is not needed to set its figures

FAMILY_WORDS = {
    "quad": "one-lobe loop (quad)",
    "biquad": "two-lobe loop (biquad)",
    "double-biquad": "four-lobe loop (double biquad)",
    "twin-loop": "two round loops (twin loop)",
    "path": "loop of the recipe's own corners",
}


def making_story(sheet: BuildSheet, wide_mm: float) -> Iterator[Any]:
    """What is made, of what, and how, in the order of the work; wide_mm: of the text."""
    yield from _head(sheet, wide_mm)
    yield from _findings(sheet)
    yield from _materials(sheet, wide_mm)
    yield from bend_tables(sheet, wide_mm)
    yield from folding(sheet, wide_mm)
    yield from frames_story(sheet, wide_mm)
    yield from _assembly(sheet, wide_mm)


def _head(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    design = sheet.design
    t = design.target
    yield title(f"{design.name}: build sheet")
    yield para(
        f"{design.quantity} \u00d7 {FAMILY_WORDS[design.radiator.family]} before a "
        f"{reflector_words(design)}, for "
        f"{number(t.band_low_hz / 1e6)} to {number(t.band_high_hz / 1e6)} MHz, {design.polarisation} "
        "polarisation. Wanted: "
        f"return loss of {number(t.return_loss_db)} dB or more in {number(t.reference_ohm)} \u03a9 over "
        "the whole band.",
        after=2.0,
    )
    radiator = sheet.inspection.radiator
    assert radiator is not None
    pictures = []
    for name, items, box in (
        ("seen from the radiator side; y+ up", tuple(_antenna(sheet)), sheet.pattern.outline.bounds()),
    ):
        scale = best_scale(box[2] - box[0], box[3] - box[1], 90.0, 90.0, most=1.0)
        pictures.append((name, picture_of(items, box, scale)))
    facts = [
        (
            "side" if design.radiator.side_mm else "lobe diameter",
            design.radiator.side_mm or design.radiator.lobe_diameter_mm,
        ),
        ("feed gap", design.radiator.feed_gap_mm),
        ("standoff, wire's centre to sheet", design.radiator.standoff_mm),
        *reflector_facts(design),
        ("wire diameter", design.radiator.wire_diameter_mm),
    ]
    rows = [(name, f"{number(v)} mm") for name, v in facts if v]
    rows.append(("feed", "two legs" if design.feed.style == "legs" else "semi-rigid tube"))
    picture = Table(
        [[pictures[0][1], table(("main figures (wire: centre to centre)", ""), rows, (58.0, 30.0))],
         [para(pictures[0][0], small=True), ""]],
        colWidths=[(wide - 90.0) * mm, 90.0 * mm],
    )  # fmt: skip
    picture.setStyle(PLAIN)
    yield picture
    yield para(
        "Directions: +x to the right and +y up as seen from the radiator side; +z towards the radiator "
        "and the main "
        "beam. Every picture says from which side it is seen. Drawings: folder drawings/; "
        f"{'cutting files' if design.reflector.own is None else 'drill template'}: reflector/.",
        small=True,
    )


def _antenna(sheet: BuildSheet) -> Iterator[Item]:
    from wavejig.radiator.drawing import views as plan_views
    from wavejig.sheets.model import Line, Ring

    tray, radiator = sheet.inspection.tray, sheet.inspection.radiator
    assert tray is not None and radiator is not None
    yield Shape(contour=sheet.pattern.outline, pen="thin")
    for circle in tray.circles:
        yield Ring(circle=circle, pen="grey")
    for bend in sheet.pattern.bends:
        yield Line(a=bend.line[0], b=bend.line[1], pen="bend")
    for view in plan_views(radiator):
        for outline in view.outlines:
            yield Shape(contour=outline, pen="wire", filled=True)


def _findings(sheet: BuildSheet) -> Iterator[Any]:
    found = [f for f in sheet.inspection.findings if f.severity != "note"]
    if found:
        yield heading("Warnings: read before you start")
        for f in found:
            yield lead(f"{f.severity} {f.code}:", f"{f.message.rstrip('.')}. {f.remedy}")
    notes = [f for f in sheet.inspection.findings if f.severity == "note"]
    if notes:
        yield heading("Notes on this design")
        for f in notes:
            yield lead(f"{f.code}:", f"{f.message.rstrip('.')}. {f.remedy}", small=True, after=0.8)


def _materials(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.spacer and i.fixture
    yield heading(f"Materials and cut list, for {sheet.design.quantity}")
    rest = wide - 30.0
    widths = (0.29 * rest, 0.35 * rest, 0.36 * rest, 10.0, 20.0)
    rows = lists.materials(sheet.design, i.radiator, sheet.pattern, i.spacer)
    yield table(("part", "material or type", "size", "each", "in all"), rows, widths)
    yield Spacer(1, 2.0 * mm)
    tools = lists.tools(sheet.design, i.fixture, i.spacer)
    yield table(("once for the batch", "", "pieces"), tools, (0.55 * wide, 0.35 * wide, 0.1 * wide))
    if sheet.batch is not None:
        yield Spacer(1, 2.0 * mm)
        four = (0.2 * wide, 0.18 * wide, 0.39 * wide, 0.23 * wide)
        yield table(lists.BATCH_HEAD, lists.batch(sheet.batch), four)
    yield Spacer(1, 1.0 * mm)
    yield para(
        "And: solder, flux, alcohol, a calliper, eye protection, gloves, the heat clip.",
        small=True,
    )


def _assembly(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.spacer and i.fixture
    yield heading("Soldering and assembly, in order")
    yield numbered(assembly_steps(sheet.design, i.radiator, i.spacer, i.fixture, sheet.order), wide)
