"""The build sheet's first half: what is made, of what, bent and soldered how."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from reportlab.lib.units import mm
from reportlab.platypus import (
    KeepTogether,
    Spacer,
    Table,
)

from wavejig.batch.model import Batch
from wavejig.design.model import Design
from wavejig.fixture.bending.model import BendOrder
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets import bending, lists
from wavejig.sheets.feedsteps import NAMES
from wavejig.sheets.fit import best_scale
from wavejig.sheets.flow import PLAIN, Picture, heading, lead, numbered, para, table, title
from wavejig.sheets.layout import lay_out
from wavejig.sheets.model import Item, Shape, View, number
from wavejig.sheets.own import reflector_facts, reflector_words
from wavejig.sheets.process import assembly_steps
from wavejig.shop import Inspection

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction  # the solver is not needed to set its figures

FAMILY_WORDS = {
    "quad": "one-lobe loop (quad)",
    "biquad": "two-lobe loop (biquad)",
    "double-biquad": "four-lobe loop (double biquad)",
    "twin-loop": "two round loops (twin loop)",
    "path": "loop of the recipe's own corners",
}


_FRAME_COLUMNS = 2


@dataclass(frozen=True, slots=True, kw_only=True)
class BuildSheet:
    """Everything the sheet is made from. prediction, order, batch: None where there is none."""

    inspection: Inspection
    pattern: FlatPattern
    prediction: Prediction | None = None
    order: BendOrder | None = None
    batch: Batch | None = None

    @property
    def design(self) -> Design:
        """The design."""
        return self.inspection.design


def making_story(sheet: BuildSheet, wide_mm: float) -> Iterator[Any]:
    """What is made, of what, and how, in the order of the work; wide_mm: of the text."""
    yield from _head(sheet, wide_mm)
    yield from _findings(sheet)
    yield from _materials(sheet, wide_mm)
    yield from _bend_tables(sheet, wide_mm)
    yield from _folding(sheet, wide_mm)
    yield from _frames(sheet, wide_mm)
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
        pictures.append((name, _picture(items, box, scale)))
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


def _picture(items: tuple[Item, ...], box: tuple[float, float, float, float], scale: float) -> Picture:
    view = View(
        title="", items=items, at=(-box[0] * scale, -box[1] * scale), scale=scale, title_at=(0.0, 0.0)
    )
    return Picture(lay_out(view), (box[2] - box[0]) * scale, (box[3] - box[1]) * scale)


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


def _bend_tables(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.fixture
    rest = wide - 10.0
    widths = (10.0, *(rest * w for w in (0.115, 0.095, 0.1, 0.09, 0.095, 0.1, 0.105, 0.3)))
    before: list[Any] = [
        heading("Bend table of the wire"),
        para(
            "Lengths in mm from the cut end called START. From start: to where the bend begins. Feed: straight "
            "before it. "
            "Rotation: turn of the bend's plane from the bend before, clockwise looking along the wire "
            "from its "
            "start. Bend to: angle before the wire springs back to the finished angle. Radii inside.",
            small=True,
        ),
    ]
    for name, rows in lists.bends(i.radiator, i.fixture, sheet.order):
        made = table(lists.BEND_HEAD, rows, widths)
        yield KeepTogether([*before, para(name, bold=True, after=0.8), made, Spacer(1, 2.0 * mm)])
        before = []


def _folding(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    tray = sheet.inspection.tray
    assert tray is not None
    if not tray.lips:
        return
    rows = [
        (
            lip.edge,
            "up, towards the radiator",
            f"{number(lip.angle_deg)}\u00b0",
            number(tray.inside_radius_mm),
            number((lip.tangent_mm + lip.bend_end_mm) / 2.0),
            number(lip.tip_mm - (lip.tangent_mm + lip.bend_end_mm) / 2.0),
            number(lip.deduction_mm, 3),
            number(lip.k_factor, 3),
        )
        for lip in tray.lips
    ]
    head = (
        "edge",
        "fold",
        "angle",
        "R inside",
        "bend line from datum",
        "bend line from edge",
        "deduction",
        "K-factor",
    )
    widths = tuple(wide * w for w in (0.07, 0.23, 0.09, 0.1, 0.16, 0.15, 0.11, 0.09))
    yield KeepTogether(
        [
            heading("Folds of the reflector"),
            table(head, rows, widths),
            Spacer(1, 1.0 * mm),
            para(
                "Face marked THIS FACE TO RADIATOR is inside. Datum: middle of the base. Lengths in mm.",
                small=True,
            ),
        ]
    )


def _frames(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.fixture
    yield heading("Bending, step by step")
    yield para(
        "Black circles: pins and discs that stand in this step; the arrow: which way the free side is swung. Grey "
        "wire: before the bend; filled wire: after it has sprung back. What reaches past the board is cut off in "
        "the picture. The same steps in colour: fixture/steps.svg.",
        small=True,
    )
    for told in bending.marks_to_draw(sheet.order):
        yield para(told, small=True)
    for remark in _order_remarks(sheet):
        yield para(remark, small=True)
    cell = wide / _FRAME_COLUMNS
    cells = []
    for frame in bending.frames(sheet.design, i.radiator, i.fixture, sheet.order):
        x0, y0, x1, y1 = frame.box
        room = (cell - 6.0) / (x1 - x0)
        scale = min(room, 52.0 / (y1 - y0), 2.0)
        picture = _picture(frame.items, frame.box, scale)
        cells.append(
            [
                para(frame.title, bold=True, after=0.5),
                picture,
                para(f"({frame.seen}) {frame.text}", small=True, after=2.0),
            ]
        )
    for k in range(0, len(cells), _FRAME_COLUMNS):
        row = cells[k : k + _FRAME_COLUMNS]
        row += [[]] * (_FRAME_COLUMNS - len(row))
        made = Table([row], colWidths=[cell * mm] * _FRAME_COLUMNS)
        made.setStyle(PLAIN)
        yield made


def _order_remarks(sheet: BuildSheet) -> Iterator[str]:
    """Where the pictures' order comes from, when no plan vouches for it."""
    if sheet.order is None:
        yield "The order is the bend table's; it has not been checked for collisions."
        return
    for piece in sheet.order.pieces:
        if not piece.found:
            yield (
                f"{NAMES[piece.piece]}: no order without a collision was found ({piece.reason}). The pictures show the "
                "bend table's order: mind where the wire's ends go."
            )


def _assembly(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.spacer and i.fixture
    yield heading("Soldering and assembly, in order")
    yield numbered(assembly_steps(sheet.design, i.radiator, i.spacer, i.fixture, sheet.order), wide)
