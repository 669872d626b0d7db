"""Findings that only the batch's plan can make."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.batch.model import Batch
from wavejig.shop.finding import NOTE, WARNING, Finding


def batch_findings(batch: Batch) -> Iterator[Finding]:
    """What the nest had to give up."""
    nest = batch.nest
    if nest is None:
        return
    # of a box one pair runs along the grain whichever way it lies: `fold-along-grain` speaks of that
    if nest.bends_along_grain and not nest.bends_across_grain:
        yield Finding(
            code="nest-along-grain",
            severity=WARNING,
            message=f"the blank fits the stock sheet of {nest.stock_mm[0]:g} x {nest.stock_mm[1]:g} mm only with its "
            f"folds along the grain ({nest.grain}), where sheet cracks sooner",
            remedy="Use a larger stock_sheet, one with its grain the other way (cutter.grain), or a larger "
            "inside_bend_radius.",
            where="cutter.stock_sheet",
        )
    if batch.unmarked:
        yield Finding(
            code="blanks-unnumbered",
            severity=NOTE,
            message="no room on the blank for its running number",
            remedy="Number the blanks by hand as they come off the sheet.",
            where="reflector.blank",
        )
