"""build-sheet.pdf: what the person at the bench reads, from the list of materials to the check template."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from reportlab.lib.units import mm
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import (
    BaseDocTemplate,
    CondPageBreak,
    Frame,
    KeepTogether,
    NextPageTemplate,
    PageBreak,
    PageTemplate,
    Spacer,
    Table,
)

from wavejig.design.model import Design
from wavejig.fixture.bending.model import BendOrder
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets import bending, lists
from wavejig.sheets.fit import best_scale
from wavejig.sheets.flow import PLAIN, Picture, heading, lead, numbered, pages_canvas, para, table, title
from wavejig.sheets.fonts import REGULAR, printable, use_fonts
from wavejig.sheets.frame import PAPERS_MM
from wavejig.sheets.layout import lay_out
from wavejig.sheets.model import Item, Shape, View, number
from wavejig.sheets.process import NAMES, assembly_steps
from wavejig.sheets.station import exposure, wind
from wavejig.sheets.template import templates
from wavejig.shop import Inspection

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction  # the solver is not needed to set its figures

# Round the text; printers leave 4 to 6 mm white, so templates may come nearer. Common practice, no source.
MARGIN_MM, TOP_MM, FOOT_MM, TEMPLATE_MARGIN_MM = 14.0, 12.0, 14.0, 8.0
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
    """Everything the sheet is made from. prediction, order: None where there is none."""

    inspection: Inspection
    pattern: FlatPattern
    prediction: Prediction | None = None
    order: BendOrder | None = None

    @property
    def design(self) -> Design:
        """The design."""
        return self.inspection.design


def write_build_sheet(sheet: BuildSheet, path: Path) -> None:
    """Typeset the sheet. Same input, same bytes. Raises OSError when it cannot be written."""
    use_fonts()
    design = sheet.design
    wide, high = PAPERS_MM[design.sheet.paper]
    document = BaseDocTemplate(
        str(path),
        pagesize=(wide * mm, high * mm),
        title=printable(f"{design.name}: build sheet"),
        author="",
        subject="",
        creator="wavejig",
        invariant=1,
        pageCompression=1,
        initialFontName=REGULAR,
    )
    text = (wide - 2.0 * MARGIN_MM, high - TOP_MM - FOOT_MM)
    full = (wide - 2.0 * TEMPLATE_MARGIN_MM, high - TEMPLATE_MARGIN_MM - FOOT_MM)
    document.addPageTemplates(
        [
            PageTemplate(id="text", frames=[_frame(MARGIN_MM, text)]),
            PageTemplate(id="template", frames=[_frame(TEMPLATE_MARGIN_MM, full)]),
        ]
    )
    story = [*_text(sheet, text[0]), *_templates(sheet, full)]

    def footer(canvas: Canvas, page: int, pages: int) -> None:
        canvas.saveState()
        canvas.setFont(REGULAR, 7.5)
        y = 7.0 * mm
        canvas.setLineWidth(0.2 * mm)
        canvas.line(MARGIN_MM * mm, y + 3.6 * mm, (wide - MARGIN_MM) * mm, y + 3.6 * mm)
        canvas.drawString(MARGIN_MM * mm, y, printable(f"{design.name}: build sheet"))
        canvas.drawRightString((wide - MARGIN_MM) * mm, y, f"page {page} of {pages}")
        canvas.restoreState()

    document.build(story, canvasmaker=pages_canvas(footer))


def _frame(left_mm: float, size_mm: tuple[float, float]) -> Frame:
    """A page's field above the footer."""
    w, h = size_mm
    return Frame(
        left_mm * mm,
        FOOT_MM * mm,
        w * mm,
        h * mm,
        leftPadding=0,
        rightPadding=0,
        topPadding=0,
        bottomPadding=0,
    )


def _text(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    yield from _head(sheet, wide)
    yield from _findings(sheet)
    yield from _materials(sheet, wide)
    yield from _bend_tables(sheet, wide)
    yield from _folding(sheet, wide)
    yield from _frames(sheet, wide)
    yield from _assembly(sheet, wide)
    yield from _first_article(sheet, wide)
    yield from _bench(sheet, wide)
    yield from _cautions(sheet, wide)
    yield from _mounting(sheet)


def _head(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    design = sheet.design
    t = design.target
    yield title(f"{design.name}: build sheet")
    yield para(
        f"{design.quantity} \u00d7 {FAMILY_WORDS[design.radiator.family]} before a "
        f"{'folded tray' if design.reflector.lips else 'flat reflector'}, for "
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
        ("reflector base along x", design.reflector.base_x_mm),
        ("reflector base along y", design.reflector.base_y_mm),
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
        "beam. Every picture says from which side it is seen. Drawings: folder drawings/; cutting "
        "files: reflector/.",
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
            yield lead(f"{f.severity} {f.code}:", f"{f.message}. {f.remedy}")
    notes = [f for f in sheet.inspection.findings if f.severity == "note"]
    if notes:
        yield heading("Notes on this design")
        for f in notes:
            yield lead(f"{f.code}:", f"{f.message}. {f.remedy}", small=True, after=0.8)


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
    yield Spacer(1, 1.0 * mm)
    yield para(
        "And: solder, flux, alcohol, a calliper, eye protection, gloves, the heat clip, a mating plug.",
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
            "Lengths in mm from the cut start. From start: to where the bend begins. Feed: straight "
            "before it. "
            "Rotation: turn of the bend's plane from the bend before, clockwise looking along the wire "
            "from its "
            "start. Bend to: angle before the wire springs back to the finished angle. Radii inside.",
            small=True,
        ),
    ]
    for name, rows in lists.bends(i.radiator, i.fixture):
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
        "Full circles: pins that stand in this step. Grey wire: before the bend; outlined wire: after "
        "it has sprung back. "
        "What reaches past the board is cut off in the picture.",
        small=True,
    )
    for remark in _order_remarks(sheet):
        yield para(remark, small=True)
    cell = wide / _FRAME_COLUMNS
    cells = []
    for frame in bending.frames(i.radiator, i.fixture, sheet.order):
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
    yield numbered(assembly_steps(sheet.design, i.radiator, i.spacer, i.fixture), wide)


def _first_article(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.tray
    yield CondPageBreak(60 * mm)
    yield heading("First article: measure the first one before making the rest")
    checks = lists.first_article(sheet.design, i.radiator, i.tray, sheet.pattern)
    rows = [(str(k), c.what, c.how, c.nominal, c.limits, "", "") for k, c in enumerate(checks, start=1)]
    widths = tuple(wide * w for w in (0.045, 0.19, 0.285, 0.105, 0.165, 0.12, 0.09))
    yield table(
        ("no.", "what", "how", "nominal", "limits", "measured", "in order"),
        rows,
        widths,
        high_mm=7.6,
        boxes=(5, 6),
    )
    yield Spacer(1, 1.5 * mm)
    yield para(
        f"Limits: the recipe's tolerances, else ISO 2768-{sheet.design.tolerances.grade}. Article no. "
        "______   measured by "
        "________________   instrument ________________",
        small=True,
    )


def _bench(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    p = sheet.prediction
    yield CondPageBreak(45 * mm)
    yield heading("Bench measurement")
    plane = f" seen {p.reference_plane}," if p is not None else ""
    yield para(
        f"Reflection{plane} analyser calibrated at that plane, antenna pointing at free space. Compare "
        "with the prediction: "
        "a shifted dip says the loops are too long (dip low) or too short (dip high); a shallow dip "
        "says gap, legs or standoff."
    )
    if p is None:
        yield para("No prediction was made for this pack: write down what you measure.", bold=True)
    elif not p.meets_target:
        yield lead(
            "Prediction misses the target:",
            f"worst return loss in the band {p.worst.return_loss_db:.1f} dB, wanted "
            f"{number(p.wanted_db)} dB.",
        )
    widths = tuple(wide * w for w in (0.24, 0.2, 0.14, 0.2, 0.22))
    yield table(lists.BENCH_HEAD, lists.bench(sheet.design, p), widths, high_mm=7.6, boxes=(4,))
    rows = lists.radiation(p)
    if rows:
        yield Spacer(1, 2.0 * mm)
        yield table(("radiation at the band's middle", "predicted"), rows, (0.5 * wide, 0.25 * wide))


def _cautions(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    design = sheet.design
    e = exposure(design, lists.peak_gain_dbi(sheet.prediction))
    yield CondPageBreak(70 * mm)
    yield heading("Cautions")
    yield lead(
        "Edges and ends:",
        "cut sheet is sharp, bent wire is springy. Gloves for sheet, eye protection for wire.",
    )
    yield lead(
        "Soldering:",
        "burns; flux fumes harm lungs: draw them off. Leaded solder: wash your hands, no food at the "
        "bench. Let joints go cold.",
    )
    yield lead(
        "On the mast:",
        "falls, falling tools, overhead lines, lightning. Keep well away from power lines; have work at "
        "height, earthing and "
        "bonding done by people licensed for it, under the codes in force where you are.",
    )

    def given(text: str, assumed: bool) -> str:
        return f"{text} (assumed: the recipe does not say)" if assumed else f"{text} (from the recipe)"

    gain = f"{e.gain_dbi:.1f} dBi ({'assumed, nothing was predicted' if e.gain_assumed else 'predicted'})"
    power = number(e.power_w * 1000.0, 3 if e.power_w < 0.001 else 1)
    rows = (
        ("transmitter power", given(f"{power} mW", e.power_assumed)),
        ("cable loss", given(f"{number(e.loss_db, 1)} dB", e.loss_assumed)),
        ("gain in the main beam", gain),
        (
            "EIRP",
            f"{e.eirp_w:.3g} W = {e.eirp_dbm:.1f} dBm. Many rules limit it: check the limits where you are.",
        ),
        (
            f"distance to {number(e.limit_w_per_m2, 1)} W/m\u00b2 in the main beam",
            f"{e.clear_m:.2f} m in free space, {e.reflected_m:.2f} m with full reflection (density \u00d7 4)",
        ),
        ("the formula holds beyond", f"{e.far_field_m:.2f} m (2 D\u00b2 / wavelength)"),
        ("keep at least", f"{number(e.keep_m, 1)} m from the front while it transmits; never touch it then"),
    )
    waves = lead(
        "Radio waves:",
        "S = EIRP / (4 \u03c0 r\u00b2) (FCC OET Bulletin 65, 1997); limit: general public, whole body, "
        "ICNIRP 2020 "
        "(from memory). National rules differ and come first.",
    )
    yield KeepTogether([waves, table(("exposure", ""), rows, (0.34 * wide, 0.66 * wide))])


def _mounting(sheet: BuildSheet) -> Iterator[Any]:
    design, tray = sheet.design, sheet.inspection.tray
    assert tray is not None
    yield CondPageBreak(50 * mm)
    yield heading("Mounting")
    upright = design.polarisation == "vertical"
    lobes = ""
    if design.radiator.family != "quad":
        lobes = f" and the lobes stand {'side by side' if upright else 'one above the other'}"
    yield lead(
        "Which way up:",
        f"for {design.polarisation} polarisation edge {design.reflector.up} (marked THIS EDGE UP) hangs "
        f"uppermost; the feed gap then lies {'upright' if upright else 'level'}{lobes}. Both ends of the link must "
        "match: turned a quarter, the link loses 20 dB and more.",
    )
    holes = [h for h in tray.holes if h.purpose == "mounting"]
    if holes:
        at = "; ".join(f"({number(h.x_mm)}, {number(h.y_mm)})" for h in holes)
        pole = f" for a pole of \u00d8{number(design.pole_mm)} mm" if design.pole_mm else ""
        yield lead(
            "Clamp:",
            f"{len(holes)} holes \u00d8{number(holes[0].diameter_mm)} at {at} mm from the middle, seen "
            "from the radiator "
            f"side{pole}. Large washers; locking nuts; stainless clamps insulated from unlike metal.",
        )
    else:
        yield lead("Clamp:", "no clamp holes in this recipe (set pole in [mounting] for a pattern).")
    drains = [h for h in tray.holes if h.purpose == "drain"]
    low = design.reflector.up[0] + ("-" if design.reflector.up[1] == "+" else "+")
    if drains:
        at = "; ".join(f"({number(h.x_mm)}, {number(h.y_mm)})" for h in drains)
        yield lead(
            "Drain:", f"the {len(drains)} drain holes at {at} mm are at the low edge ({low}): keep them open."
        )
    else:
        yield lead("Drain:", f"no drain holes; water must be free to run off at the low edge ({low}).")
    yield lead(
        "Sealing:",
        "self-amalgamating tape over the mated plug, wound upwards; cable with a drip loop below the "
        "connector; sealant on "
        "the back of the feed, none over the drain holes.",
    )
    w = wind(design, tray)
    yield lead(
        "Wind:",
        f"{w.force_n:.0f} N on {w.area_m2:.4f} m\u00b2 at {number(w.speed_m_per_s, 1)} m/s"
        f"{' (assumed: the recipe does not say)' if w.assumed else ''}: F = \u00bd d v\u00b2 Cd A, air "
        "density d = 1.25 kg/m\u00b3, Cd = "
        f"{number(w.drag)} (from memory). A figure for whoever rates the mast, not a rating; ice and "
        "clamps come on top.",
    )


def _templates(sheet: BuildSheet, field_mm: tuple[float, float]) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.tray
    room = (field_mm[0], field_mm[1] - 0.5)
    yield NextPageTemplate("template")
    for tile in templates(i.radiator, i.tray, sheet.pattern, room):
        yield PageBreak()
        yield Picture(tile.drawn, *room)
