"""Findings on what comes off what, from moving it in the build: bent wire, finished radiator, spacer pieces."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from wavejig.shop.finding import WARNING, Finding

if TYPE_CHECKING:  # their modules load shapely, which `check` does without
    from wavejig.fixture.liftout import LiftOut
    from wavejig.spacer.withdraw import Withdrawal


def way_findings(lift_outs: tuple[LiftOut, ...], withdrawals: tuple[Withdrawal, ...]) -> Iterator[Finding]:
    """What is caught on its stated way."""
    for out in lift_outs:
        if not out.free:
            yield Finding(
                code="wire-caught",
                severity=WARNING,
                message=f"the wire does not leave the {out.plate} {out.way}: it overlaps by {-out.least_mm:.2f} mm",
                remedy="Take the pins out first, or ease that place with a file; report this design.",
                where="fixture",
                source="moved step by step against the planned pieces",
            )
    for way in withdrawals:
        if not way.free:
            least = min(way.least_wire_mm, way.least_rim_mm, way.least_hardware_mm, way.lip_mm)
            yield Finding(
                code="spacer-caught",
                severity=WARNING,
                message=f"{way.piece} does not come out {way.way}: it overlaps by {-least:.2f} mm",
                remedy='Use style = "posts", or give the base more room; report this design.',
                where="spacer",
                source="moved step by step against the planned pieces",
            )
