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
            message=note,
            remedy="See the spacer's own remarks.",
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
            message=note,
            remedy="Write or hold it by hand.",
            where="fixture",
        )
    tiles = {p.name: len(p.tiles) for p in (fixture.board, fixture.nest) if len(p.tiles) > 1}
    for name, count in tiles.items():
        yield Finding(
            code="fixture-tiled",
            severity=NOTE,
            message=f"the {name} is larger than the {design.printer.bed_x_mm:g} x {design.printer.bed_y_mm:g} mm bed "
            f"and prints as {count} keyed tiles",
            remedy="Join them on a flat table; a drop of glue in the keys keeps them there.",
            where="printer.bed",
        )
