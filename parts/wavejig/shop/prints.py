"""Findings about the printed parts: what does not fit the bed, what the fixture and spacer cannot do."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.shop.finding import ERROR, NOTE, WARNING, Finding
from wavejig.spacer.model import Spacer
from wavejig.stock.processes import plastic

# Ordinary soft solder melts from 183 deg C (tin-lead eutectic; lead-free 217 and more); from memory.
SOLDER_MELTS_C = 183.0


def spacer_findings(design: Design, spacer: Spacer) -> Iterator[Finding]:
    """What the spacer's plan found impossible, and heat near its plastic."""
    for c in spacer.conflicts:
        yield Finding(code="spacer-conflict", severity=ERROR, message=c.message, remedy=c.remedy, where=c.key)
    for note in spacer.notes:
        yield Finding(
            code="spacer-note",
            severity=NOTE,
            message=note.rstrip("."),
            remedy="Nothing to change: keep it in mind while soldering.",
            where="spacer",
        )
    material = plastic(spacer.plastic)
    if material.glass_transition_c < SOLDER_MELTS_C:
        yield Finding(
            code="solder-heat",
            severity=NOTE,
            message=f"{material.name} softens at {material.glass_transition_c:g} deg C, solder melts at "
            f"{SOLDER_MELTS_C:g} and more; the spacer keeps clear of the joints",
            remedy="Clip a heat sink between joint and plastic, solder hot and short.",
            where="spacer.material",
            source="glass transition from table plastics; solder from memory",
        )
    if spacer.style == "posts" and not material.outdoors:
        yield Finding(
            code="plastic-weather",
            severity=WARNING,
            message=f"posts of {material.name} stay outdoors, where it does not last",
            remedy="Print them in ASA, or use the removable block.",
            where="spacer.material",
            source=material.source,
        )


def fixture_findings(design: Design, fixture: Fixture) -> Iterator[Finding]:
    """What the fixture's plan found impossible or awkward."""
    for c in fixture.conflicts:
        yield Finding(
            code="fixture-conflict", severity=ERROR, message=c.message, remedy=c.remedy, where=c.key
        )
    for note in fixture.notes:
        yield Finding(
            code="fixture-note",
            severity=NOTE,
            message=note.rstrip("."),
            remedy="Nothing to change in the recipe. What is not engraved stands on the fixture's drawing; without a "
            "tick, bend to the angle the step names and compare in the check nest.",
            where="fixture",
        )
    for load in fixture.pins.too_weak[:1]:
        yield Finding(
            code="post-too-weak",
            severity=WARNING,
            message=f"a printed post of {load.diameter_mm:.2f} mm would see {load.post_mpa:.1f} MPa at its root and "
            f"{fixture.pins.plastic} may see {load.allowable_mpa:.1f} across its layers; the board has holes "
            "for metal pins instead",
            remedy="Turn pins of this diameter from bar, or choose an inside bend radius a stock dowel gives.",
            where="radiator.inside_bend_radius",
            source="bending of a round post, plastic moment of the wire; allowable stress from table plastics",
        )
    if fixture.style == "stop-block" or (fixture.stop_block is not None and len(fixture.board.tiles) > 1):
        yield Finding(
            code="fixture-style",
            severity=NOTE,
            message=f"the wire is bent on a {fixture.style.replace('-', ' ')}: {fixture.style_reason}",
            remedy='Set style = "board" or "stop-block" under [fixture] to have the other.',
            where="fixture.style",
        )
    material = plastic(design.printer.plastic)
    if material.glass_transition_c < SOLDER_MELTS_C and not fixture.has_window:
        yield Finding(
            code="nest-heat",
            severity=WARNING,
            message=f"{material.name} softens at {material.glass_transition_c:g} deg C and the nest's lobes are "
            "too small for a window about the joint",
            remedy="Never solder in the nest: check the radiator there, solder it on the spacer.",
            where="printer.material",
            source="glass transition from table plastics; solder from memory",
        )
    printed = (fixture.board, fixture.nest) if fixture.style == "board" else (fixture.nest,)
    tiles = {p.name: len(p.tiles) for p in printed if len(p.tiles) > 1}
    for name, count in tiles.items():
        yield Finding(
            code="fixture-tiled",
            severity=NOTE,
            message=f"the {name} is larger than the {design.printer.bed_x_mm:g} x {design.printer.bed_y_mm:g} mm bed "
            f"and prints as {count} keyed tiles",
            remedy="Join them on a flat table; a drop of glue in the keys keeps them there.",
            where="printer.bed",
        )
