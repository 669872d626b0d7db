"""Findings about bending: springback not yet tried, wires for which no bending order was found."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.fixture.bending.model import BendOrder
from wavejig.fixture.bending.tolerance import springback_effect
from wavejig.fixture.model import Fixture
from wavejig.radiator.model import Radiator
from wavejig.shop.finding import NOTE, WARNING, Finding

# Below this nobody sees it on the bench.
_LEAST_MM = 0.05


def springback_findings(design: Design, radiator: Radiator, fixture: Fixture) -> Iterator[Finding]:
    """What the table's springback, good within a factor of two, can do to this radiator."""
    if design.radiator.springback_measured:
        return
    effect = springback_effect(design, radiator, fixture)
    if not effect:
        return
    sides = [max(abs(a), abs(b)) for name, a, b in effect if name.startswith(("side", "lobe"))]
    closing = [max(abs(a), abs(b)) for name, a, b in effect if not name.startswith(("side", "lobe"))]
    if max([*sides, *closing]) < _LEAST_MM:
        return
    what = "sides" if design.radiator.side_mm is not None or not design.radiator.lobe_diameter_mm else "lobes"
    bits = []
    if sides:
        bits.append(f"{what} by up to {max(sides):.2f} mm")
    if closing:
        bits.append(f"feed gap and closing by up to {max(closing):.1f} mm")
    yield Finding(
        code="springback-untried",
        severity=NOTE,
        message=f"springback of {design.radiator.metal.temper} {design.radiator.metal.name} wire is known within a "
        f"factor of two only; that moves {' and '.join(bits)}",
        remedy="Bend a trial on the pack's gauge and write the reading into the recipe ([[radiator.trial]]).",
        where="radiator.trial",
        source=design.radiator.metal.source,
    )


def order_findings(order: BendOrder) -> Iterator[Finding]:
    """Wires that cannot be bent on this fixture in any order that was tried."""
    for piece in order.pieces:
        if piece.found:
            continue
        searched = "" if piece.complete else f" (after {piece.looked} bends tried; not every order was)"
        yield Finding(
            code="no-bend-order",
            severity=WARNING,
            message=f"no order of bends found in which nothing collides{searched}: {piece.reason}",
            remedy=" ".join(piece.remedies),
            where=f"fixture, {piece.piece} wire",
        )
