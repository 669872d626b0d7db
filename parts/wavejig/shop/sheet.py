"""Findings about the sheet: folds, holes, cutting process, stock size."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.forming.sheet import minimum_hole_edge_to_bend_mm
from wavejig.reflector.flat import flat_pattern
from wavejig.reflector.model import Tray
from wavejig.reflector.tray import hole_edge_to_bend_mm
from wavejig.shop.corners import corner_findings
from wavejig.shop.finding import ERROR, NOTE, WARNING, Finding
from wavejig.stock.processes import cutter
from wavejig.stock.sheet import minimum_inside_radius_mm


def sheet_findings(design: Design, tray: Tray) -> Iterator[Finding]:
    """Everything about the blank and its folds; nothing for a dish that is there already."""
    if tray.own is not None:
        return
    yield from _folds(design, tray)
    yield from _holes(design, tray)
    yield from _cutting(design)
    yield from _stock(design, tray)
    yield from _marks(design, tray)
    yield from corner_findings(design, tray)


def fold_material_findings(design: Design) -> Iterator[Finding]:
    """Said before the tray is planned: a material that cannot be folded at all."""
    if design.reflector.lips and not design.reflector.metal.foldable:
        yield Finding(
            code="sheet-not-foldable",
            severity=ERROR,
            message=f"{design.reflector.metal.name} cannot be folded, and the recipe asks for lips",
            remedy='Write lips = "none", or use a metal sheet.',
            where="reflector.lips",
            source=design.reflector.metal.source,
        )


def hole_findings(design: Design) -> Iterator[Finding]:
    """Said before the tray is planned: holes that run into each other or nearly so."""
    for a, b in itertools.combinations(design.reflector.holes, 2):
        web = math.dist((a.x_mm, a.y_mm), (b.x_mm, b.y_mm)) - (a.diameter_mm + b.diameter_mm) / 2.0
        if web < max(design.reflector.thickness_mm, 1.0) - 1e-9:
            yield Finding(
                code="holes-meet" if web <= 0.0 else "web-thin",
                severity=ERROR if web <= 0.0 else WARNING,
                message=f"the {a.purpose} hole at ({a.x_mm:.2f}, {a.y_mm:.2f}) and the {b.purpose} hole at "
                f"({b.x_mm:.2f}, {b.y_mm:.2f}) mm "
                + ("run into each other" if web <= 0.0 else f"leave {web:.2f} mm between them"),
                remedy="Move one of them, or take a smaller connector, foot or screw.",
                where="reflector.holes",
            )


def _folds(design: Design, tray: Tray) -> Iterator[Finding]:
    least = design.folding.smallest_flange_mm
    for height, angle in sorted({(lip.height_mm, lip.angle_deg) for lip in tray.lips}):
        if height < least - 1e-9:
            yield Finding(
                code="lip-short",
                severity=ERROR,
                message=f"a lip of {height:g} mm at {angle:g} deg; the shortest flange that can be folded is "
                f"{least:g} mm",
                remedy="Make the lips higher, use thinner sheet, or give the shop's own smallest_flange.",
                where="reflector.lip_height",
            )
    yield from _machine(design, tray)
    r = design.reflector
    if not tray.lips or not r.metal.foldable:
        return
    need = minimum_inside_radius_mm(r.metal, r.thickness_mm)
    if r.inside_radius_mm < need - 1e-9:
        yield Finding(
            code="fold-radius-tight",
            severity=WARNING,
            message=f"folded to an inside radius of {r.inside_radius_mm:g} mm; {r.metal.temper} {r.metal.name} of "
            f"{r.thickness_mm:g} mm should have {need:g} mm or it may crack",
            remedy="Use a larger inside_bend_radius, a softer temper, or fold across the grain.",
            where="reflector.inside_bend_radius",
            source=r.metal.source,
        )
    if not math.isclose(r.inside_radius_mm, design.folding.tooling_radius_mm, abs_tol=0.05):
        yield Finding(
            code="fold-radius-not-tool",
            severity=NOTE,
            message=f"the design folds to {r.inside_radius_mm:g} mm inside, the tool gives "
            f"{design.folding.tooling_radius_mm:g} mm: the blank would come out another size",
            remedy='Leave inside_bend_radius "auto", or ask the shop for that tool.',
            where="reflector.inside_bend_radius",
        )


def _machine(design: Design, tray: Tray) -> Iterator[Finding]:
    """The folding machine's length, the order that four lips need, the grain of the sheet."""
    longest = max((lip.left.half_mm + lip.right.half_mm for lip in tray.lips), default=0.0)
    if longest > design.folding.longest_bend_mm + 1e-9:
        yield Finding(
            code="bend-over-brake",
            severity=ERROR,
            message=f"a bend {longest:.0f} mm long; the longest the folding machine makes is "
            f"{design.folding.longest_bend_mm:g} mm",
            remedy="Use a smaller base, lips on the shorter edges, or another shop (folding.longest_bend).",
            where="folding.longest_bend",
        )
    if {lip.edge[0] for lip in tray.lips} != {"x", "y"} or not design.reflector.metal.foldable:
        return
    inner = min(lip.left.half_mm + lip.right.half_mm for lip in tray.lips)
    height = max(lip.height_mm for lip in tray.lips)
    yield Finding(
        code="box-fold",
        severity=NOTE,
        message="four lips make a box: the last two folds go between lips that stand already, which needs fingers "
        f"no wider than {inner:.0f} mm that clear {height:g} mm",
        remedy="Fold two opposite lips first, then the others with a box-and-pan brake or a loose bar.",
        where="reflector.lips",
    )
    r = design.reflector
    need = minimum_inside_radius_mm(r.metal, r.thickness_mm)
    if need > 0.0 and r.inside_radius_mm < 2.0 * need - 1e-9:
        yield Finding(
            code="fold-along-grain",
            severity=NOTE,
            message=f"with lips on all sides one pair folds along the grain of the sheet, where {r.metal.temper} "
            f"{r.metal.name} should have about {2.0 * need:g} mm inside radius; the design has "
            f"{r.inside_radius_mm:g} mm",
            remedy="Lay the blanks at 45 degrees to the grain, or bend a trial along it and look for cracks.",
            where="reflector.inside_bend_radius",
            source="twice the radius across the grain: common practice, no source",
        )


def _holes(design: Design, tray: Tray) -> Iterator[Finding]:
    least = design.cutter.smallest_hole_mm
    in_file = design.cutter.offset_in_file and tray.own is None  # a dish is only drilled
    for hole in tray.holes:
        at = f"({hole.x_mm:.2f}, {hole.y_mm:.2f}) mm"
        if in_file and hole.diameter_mm <= design.cutter.kerf_mm:
            yield Finding(
                code="hole-below-kerf",
                severity=ERROR,
                message=f"the {hole.purpose} hole of {hole.diameter_mm:g} mm at {at} is no wider than the "
                f"{design.cutter.kerf_mm:g} mm the {design.cutter.process} takes away, so the file has no path for it",
                remedy='Leave compensated = "by-shop", choose a finer process, or make the hole larger.',
                where="cutter.compensated",
            )
        elif hole.diameter_mm < least - 1e-9:
            yield Finding(
                code="hole-small",
                severity=WARNING,
                message=f"the {hole.purpose} hole of {hole.diameter_mm:g} mm at {at} is below the {least:g} mm that "
                f"the {design.cutter.process} cuts",
                remedy="Drill it, or change process or sheet.",
                where="reflector.holes",
            )
    r = design.reflector
    need = minimum_hole_edge_to_bend_mm(r.inside_radius_mm, r.thickness_mm)
    setbacks = {lip.edge: lip.setback_mm for lip in tray.lips}
    for hole, edge, distance in hole_edge_to_bend_mm(tray):
        # one that reaches into the bend itself is a conflict of the design, and there is no tray
        if distance + setbacks[edge] < need - 1e-9:
            yield Finding(
                code="hole-near-bend",
                severity=WARNING,
                message=f"the {hole.purpose} hole at ({hole.x_mm:.2f}, {hole.y_mm:.2f}) mm ends "
                f"{distance + setbacks[edge]:.1f} mm from the outside of the bend at {edge}; below {need:.1f} mm it "
                "is pulled out of round",
                remedy="Move it inwards, or drill it after folding.",
                where="reflector.holes",
            )


def _cutting(design: Design) -> Iterator[Finding]:
    process, metal = cutter(design.cutter.process), design.reflector.metal
    if not metal.foldable and not process.takes_laminate:
        yield Finding(
            code="laminate-cutting",
            severity=WARNING,
            message=f"{design.cutter.process} does not cut glass-epoxy laminate",
            remedy="Shear or rout it (dust mask, water: glass dust harms lungs), drill the holes.",
            where="cutter.process",
        )
    elif not metal.laser_friendly and not process.takes_copper and metal.foldable:
        yield Finding(
            code="metal-reflects-laser",
            severity=WARNING,
            message=f"{metal.name} reflects the beam: many shops with a {design.cutter.process} refuse it",
            remedy='Ask first for a fibre laser that takes it, or use process = "waterjet" or "guillotine" (holes '
            "drilled).",
            where="cutter.process",
        )
    elif not metal.laser_friendly and metal.foldable and "laser" in process.name:
        yield Finding(
            code="metal-needs-fibre",
            severity=NOTE,
            message=f"{metal.name} reflects the beam of many lasers; a fibre laser takes it",
            remedy="Say the metal when you ask for a price; waterjet and guillotine (holes drilled) do it too.",
            where="cutter.process",
        )
    if not process.cuts_holes:
        yield Finding(
            code="holes-by-drill",
            severity=NOTE,
            message=f"a {design.cutter.process} cuts straight edges only: holes and notches are drilled and sawn",
            remedy="Print the blank 1:1 and centre-punch through it; clamp sheet before drilling, it can spin.",
            where="cutter.process",
        )


def _stock(design: Design, tray: Tray) -> Iterator[Finding]:
    x0, y0, x1, y1 = tray.outline.bounds()
    w, h = x1 - x0, y1 - y0
    margin = design.cutter.margin_mm
    sx, sy = design.cutter.stock_x_mm - 2.0 * margin, design.cutter.stock_y_mm - 2.0 * margin
    if not ((w <= sx and h <= sy) or (h <= sx and w <= sy)):
        yield Finding(
            code="blank-over-stock",
            severity=ERROR,
            message=f"the blank is {w:.1f} x {h:.1f} mm, the stock sheet {design.cutter.stock_x_mm:g} x "
            f"{design.cutter.stock_y_mm:g} mm with {margin:g} mm of margin all round",
            remedy="Use a larger stock_sheet, or a smaller base or lower lips.",
            where="cutter.stock_sheet",
        )
    elif design.quantity > 1:
        yield from _bridge(design)


def _bridge(design: Design) -> Iterator[Finding]:
    """What stays between two blanks once both are cut."""
    c, t = design.cutter, design.reflector.thickness_mm
    left = c.spacing_mm - c.kerf_mm
    if left < t - 1e-9 and c.process != "guillotine":
        yield Finding(
            code="blanks-crowded",
            severity=WARNING,
            message=f"blanks {c.spacing_mm:g} mm apart leave {max(left, 0.0):g} mm between two cuts of "
            f"{c.kerf_mm:g} mm; a bridge narrower than the sheet's {t:g} mm tips, burns or tears",
            remedy=f'Write spacing = "{t + c.kerf_mm:g} mm" or more, or leave it "auto".',
            where="cutter.spacing",
        )


def _marks(design: Design, tray: Tray) -> Iterator[Finding]:
    unplaced = flat_pattern(tray, design.name).unplaced
    if unplaced:
        yield Finding(
            code="marks-left-out",
            severity=NOTE,
            message="no room on the blank for: " + ", ".join(unplaced),
            remedy="Write it on by hand before folding.",
            where="reflector.blank",
        )
