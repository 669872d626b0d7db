"""The batch put together: nest, wire, plates, bill."""

from __future__ import annotations

from collections.abc import Sequence

from wavejig.batch.bill import bill
from wavejig.batch.model import Batch, PrintPiece
from wavejig.batch.nest import NumberedBlank, nest
from wavejig.batch.plates import print_plan
from wavejig.batch.wire import wire_plans
from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.radiator.model import Radiator
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray
from wavejig.spacer.model import Spacer


def plan(
    design: Design,
    radiator: Radiator,
    tray: Tray,
    pattern: FlatPattern,
    spacer: Spacer,
    fixture: Fixture,
    pieces: Sequence[PrintPiece] = (),
) -> Batch:
    """Everything about the batch. pattern: the nominal blank; pieces: the printed parts, once they are made.

    Raises NestError, StockTooShortError or ValueError for what findings have refused before.
    """
    laid = nest(design, tray, pattern) if design.reflector.own is None else None
    wires = wire_plans(design, radiator)
    prints = print_plan(design, pieces) if pieces else None
    marked = laid is None or NumberedBlank(design, tray, pattern).has_number
    return Batch(
        quantity=design.quantity,
        nest=laid,
        wires=wires,
        bill=bill(design, spacer, fixture, laid, wires, prints),
        prints=prints,
        unmarked=() if marked else tuple(range(1, design.quantity + 1)),
    )
