"""Findings about the bent wire: radius against temper, pins, parts of the wire that meet."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.radiator.clearance import clearances
from wavejig.radiator.model import Radiator
from wavejig.radiator.stock import bought_length_mm, stock_of
from wavejig.shop.finding import ERROR, NOTE, WARNING, Finding

# Air below which two wires of an antenna are as good as joined once a bend is a degree off.
LEAST_AIR_DIAMETERS = 0.5
# Straight a bend needs on either side to lie on pin and stop; common practice, no source.
LEAST_STRAIGHT_DIAMETERS = 1.0


def wire_findings(design: Design, radiator: Radiator) -> Iterator[Finding]:
    """Everything about the wire itself."""
    yield from _radius(design)
    yield from _pins(design)
    yield from _clearance(design, radiator)
    yield from _straights(design, radiator)
    yield from _stock(design, radiator)


def _radius(design: Design) -> Iterator[Finding]:
    r = design.radiator
    least = r.metal.min_inside_radius_factor * r.wire_diameter_mm
    if r.inside_radius_mm < least - 1e-6:
        yield Finding(
            code="wire-radius-tight",
            severity=ERROR,
            message=f"inside bend radius {r.inside_radius_mm:.2f} mm; {r.metal.temper} {r.metal.name} wire of "
            f"{r.wire_diameter_mm:g} mm needs {least:.2f} mm or it cracks",
            remedy=f"Use inside_bend_radius of {least:.2f} mm or more, or a softer temper.",
            where="radiator.inside_bend_radius",
            source=r.metal.source,
        )


def _pins(design: Design) -> Iterator[Finding]:
    r = design.radiator
    if not r.pin_is_dowel:
        yield Finding(
            code="pin-not-stock",
            severity=WARNING,
            message=f"no stock dowel is {r.pin_diameter_mm:.2f} mm thick; the corners' pins become printed posts, "
            "which wear and give way",
            remedy='Leave inside_bend_radius "auto", or choose a radius a stock dowel gives.',
            where="radiator.inside_bend_radius",
            source="ISO 2338 and ISO 8734 stock diameters",
        )
    if r.metal.temper != "annealed" and r.metal.hardening_exponent == 0.0:
        yield Finding(
            code="springback-rough",
            severity=NOTE,
            message=f"springback of {r.metal.temper} {r.metal.name} is worked out without strain hardening",
            remedy="Bend one trial corner and compare before bending the batch.",
            where="radiator.temper",
        )


def _clearance(design: Design, radiator: Radiator) -> Iterator[Finding]:
    d = design.radiator.wire_diameter_mm
    for c in clearances(radiator, design.radiator.bend_radius_mm):
        inner = "inner" in c.pieces or "tube" in c.pieces
        wanted = 0.3 if inner else LEAST_AIR_DIAMETERS * d
        if c.air_mm >= wanted - 1e-6:
            continue
        names = c.pieces[0] if c.pieces[0] == c.pieces[1] else f"{c.pieces[0]} and {c.pieces[1]}"
        touching = c.air_mm <= 0.0
        yield Finding(
            code="wires-touch" if touching else "wires-near",
            severity=ERROR if touching else WARNING,
            message=f"{names}: {'overlap by' if touching else 'only'} {abs(c.air_mm):.2f} mm "
            f"{'' if touching else 'of air '}at ({c.at[0]:.1f}, {c.at[1]:.1f}, {c.at[2]:.1f}) mm",
            remedy="Widen the feed gap, change the lobe angle or sides, or use thinner wire.",
            where="radiator",
        )


def _straights(design: Design, radiator: Radiator) -> Iterator[Finding]:
    for piece in radiator.pieces:
        if piece.role == "inner":
            continue
        least = LEAST_STRAIGHT_DIAMETERS * piece.diameter_mm
        short = [b for b in piece.bends[1:] if b.feed_mm < least - 1e-6]
        if not short:
            continue
        numbers = ", ".join(str(b.number) for b in short)
        yield Finding(
            code="straight-short",
            severity=NOTE,
            message=f"{piece.role}: less than {least:.1f} mm of straight before bend {numbers}; the wire has little "
            "to lie against there",
            remedy="Bend these in one grip, or use a smaller bend radius.",
            where=f"radiator, {piece.role}",
        )


def _stock(design: Design, radiator: Radiator) -> Iterator[Finding]:
    """A piece must come out of one spool or bar."""
    for piece in radiator.pieces:
        bought = stock_of(design, piece)
        if bought is None or bought.length_mm is None:
            continue
        room = bought.length_mm - design.wire_stock.end_waste_mm - design.wire_stock.cut_loss_mm
        length = bought_length_mm(radiator, piece)
        if length > room + 1e-9:
            yield Finding(
                code="wire-over-stock",
                severity=ERROR,
                message=f"{piece.role}: {length:.1f} mm to cut; a length of {bought.length_mm:g} mm gives "
                f"{max(room, 0.0):.1f} mm after {design.wire_stock.end_waste_mm:g} mm of end waste and "
                f"{design.wire_stock.cut_loss_mm:g} mm lost in the cut",
                remedy=f"Buy longer lengths (wire_stock.{bought.key}), or waste less at the end if you can.",
                where=f"wire_stock.{bought.key}",
            )
