"""The build sheet's second half: first article, bench, cautions, mounting."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from reportlab.lib.units import mm
from reportlab.platypus import (
    CondPageBreak,
    KeepTogether,
    Spacer,
)

from wavejig.sheets import checks
from wavejig.sheets.buildmodel import BuildSheet
from wavejig.sheets.flow import heading, lead, para, table
from wavejig.sheets.model import number
from wavejig.sheets.station import exposure, wind


def proving_story(sheet: BuildSheet, wide_mm: float) -> Iterator[Any]:
    """What is measured, what to beware of, how it is put up; wide_mm: of the text."""
    yield from _first_article(sheet, wide_mm)
    yield from _bench(sheet, wide_mm)
    yield from _cautions(sheet, wide_mm)
    yield from _mounting(sheet)


def _first_article(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.tray
    yield CondPageBreak(60 * mm)
    yield heading("First article: measure the first one before making the rest")
    wanted = checks.first_article(sheet.design, i.radiator, i.tray, sheet.pattern)
    rows = [(str(k), c.what, c.how, c.nominal, c.limits, "", "") for k, c in enumerate(wanted, start=1)]
    widths = tuple(wide * w for w in (0.045, 0.185, 0.275, 0.105, 0.185, 0.12, 0.085))
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
        f"says gap, {'legs' if sheet.design.feed.style == 'legs' else 'height of the tube'} or standoff."
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
    yield table(checks.BENCH_HEAD, checks.bench(sheet.design, p), widths, high_mm=7.6, boxes=(4,))
    rows = checks.radiation(p)
    if rows:
        yield Spacer(1, 2.0 * mm)
        yield table(("radiation at the band's middle", "predicted"), rows, (0.5 * wide, 0.25 * wide))


def _cautions(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    design = sheet.design
    e = exposure(design, checks.peak_gain_dbi(sheet.prediction))
    yield CondPageBreak(70 * mm)
    yield heading("Cautions")
    yield lead(
        "Edges and ends:",
        "cut sheet is sharp, bent wire is springy. Gloves for sheet, eye protection for wire.",
    )
    if not design.reflector.metal.foldable:
        yield lead(
            "Laminate dust:",
            "glass and resin; it harms lungs and skin. Drill and file wet, or with extraction and a mask.",
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
    marked = "marked THIS EDGE UP" if tray.own is None else "UP on the drill template; mark it on the back"
    lobes = ""
    if design.radiator.family != "quad":
        lobes = f" and the lobes stand {'side by side' if upright else 'one above the other'}"
    yield lead(
        "Which way up:",
        f"for {design.polarisation} polarisation edge {design.reflector.up} ({marked}) hangs "
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
        hole = "drain hole" if len(drains) == 1 else f"the {len(drains)} drain holes"
        at = "; ".join(f"({number(h.x_mm)}, {number(h.y_mm)})" for h in drains)
        yield lead("Drain:", f"{hole} at {at} mm, at the low edge ({low}): keep open.")
    else:
        yield lead("Drain:", f"no drain holes; water must be free to run off at the low edge ({low}).")
    yield lead(
        "Sealing:",
        "self-amalgamating tape over the mated plug, wound upwards; cable with a drip loop below "
        + ("the connector" if design.feed.style == "legs" else "the tube's connector")
        + "; sealant on the back of the feed"
        + (", none over the drain holes." if drains else "."),
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
