"""Findings about what the printer's nozzle can draw, and what it must lay over air. Lengths in mm.

Pieces are planned so that nothing prints over air but short bridges; what a finished mesh bridges is measured on it
(`files/printable.py`), and one that needs support is refused there.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.fixture.board import SMALL_TEXT_MM
from wavejig.fixture.model import Fixture, Plate
from wavejig.fixture.owntemplate import GUIDE_WALL_MM
from wavejig.shop.finding import NOTE, WARNING, Finding
from wavejig.spacer import marks as spacer_marks
from wavejig.spacer.model import Spacer
from wavejig.spacer.posts import WALL_MM as POST_WALL_MM

# A wall of fewer lines than this is left out by slicers or prints with a seam through it; common practice, no source.
LEAST_LINES = 2.0
# Of the longest bridge that prints: beyond this share it sags where the fan is weak; common practice, no source.
LONG_BRIDGE_SHARE = 0.5


def nozzle_findings(design: Design, spacer: Spacer | None, fixture: Fixture | None) -> Iterator[Finding]:
    """Thinnest walls and smallest lettering of the printed pieces against the nozzle."""
    yield from _walls(design, spacer, fixture)
    yield from _lettering(design, spacer, fixture)


def thinnest_walls_mm(
    design: Design, spacer: Spacer | None, fixture: Fixture | None
) -> Iterator[tuple[str, float]]:
    """(where, thickness) of walls whose thickness does not follow the nozzle by itself."""
    for plate in _plates(fixture):
        webs = [
            math.dist(a.at, b.at) - (a.diameter_mm + b.diameter_mm) / 2.0
            for a, b in itertools.combinations(plate.holes, 2)
        ]
        # holes that run into each other are one hole
        between = [w for w in webs if w > 1e-6]
        if between:
            yield f"{plate.name}, between two holes", min(between)
    if fixture is not None and fixture.template is not None and design.reflector.own is not None:
        yield "drill-template, round a hole", GUIDE_WALL_MM
    if spacer is not None and spacer.style == "posts":
        yield "spacer posts, round the screw", POST_WALL_MM


def _walls(design: Design, spacer: Spacer | None, fixture: Fixture | None) -> Iterator[Finding]:
    least = LEAST_LINES * design.printer.nozzle_mm
    thin = [
        (wall, where) for where, wall in thinnest_walls_mm(design, spacer, fixture) if wall < least - 1e-9
    ]
    if not thin:
        return
    wall, where = min(thin)
    others = f" (and {len(thin) - 1} more)" if len(thin) > 1 else ""
    yield Finding(
        code="wall-below-nozzle",
        severity=WARNING,
        message=f"{where}: {wall:.2f} mm of plastic{others}; a nozzle of {design.printer.nozzle_mm:g} mm needs "
        f"{least:g} mm for two lines beside each other",
        remedy=f"Print with a nozzle of {math.floor(wall / LEAST_LINES * 20.0 + 1e-9) / 20.0:g} mm or finer "
        "(printer.nozzle).",
        where="printer.nozzle",
    )


def _lettering(design: Design, spacer: Spacer | None, fixture: Fixture | None) -> Iterator[Finding]:
    nozzle = design.printer.nozzle_mm
    drawn = [(p.name, SMALL_TEXT_MM, p.mark_width_mm) for p in _plates(fixture) if p.marks]
    if spacer is not None and spacer.style == "block":
        drawn.append(("spacer", spacer_marks.least_text_mm(nozzle), spacer_marks.line_mm(nozzle)))
    # between the bars of an E, half a capital apart, stands a wall of the plate's plastic
    closed = [
        (high / 2.0 - groove, name, high, groove)
        for name, high, groove in drawn
        if high / 2.0 - groove < nozzle - 1e-9
    ]
    if not closed:
        return
    wall, name, high, groove = min(closed)
    yield Finding(
        code="text-below-nozzle",
        severity=NOTE,
        message=f"{name}: lettering {high:g} mm high in grooves of {groove:g} mm leaves {max(wall, 0.0):.2f} mm "
        f"between two strokes; a nozzle of {nozzle:g} mm closes that, and the smallest marks cannot be read",
        remedy="Print with a finer nozzle, or write the numbers on by hand from the drawing.",
        where="printer.nozzle",
    )


def span_findings(piece: str, bridge_mm: float, longest_mm: float) -> Iterator[Finding]:
    """What one printed piece, as meshed, spans over air. bridge_mm: measured; longest_mm: that prints at all.

    Pieces with longer bridges, or ledges that rest on one side, are refused before (`files/printable.py`).
    """
    if bridge_mm > LONG_BRIDGE_SHARE * longest_mm + 1e-9:
        yield Finding(
            code="span-long",
            severity=NOTE,
            message=f"{piece} spans {bridge_mm:.1f} mm over air; printers lay up to {longest_mm:g} mm without "
            f"support, and sag beyond {LONG_BRIDGE_SHARE * longest_mm:g} mm where the fan is weak",
            remedy="Full fan and slow bridges in the slicer; look into the first print and pare off what sags.",
            where=piece,
        )


def _plates(fixture: Fixture | None) -> Iterator[Plate]:
    if fixture is None:
        return
    if fixture.style == "stop-block" and fixture.stop_block is not None:
        yield fixture.stop_block.plate
    else:
        yield fixture.board
    yield fixture.nest
    if fixture.template is not None:
        yield fixture.template.plate
    for gauge in fixture.gauges:
        yield gauge.plate
