"""Findings about weather: unlike metals in contact, water that stays."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.shop.finding import NOTE, WARNING, Finding
from wavejig.stock.metals import allowed_galvanic_v, galvanic_difference_v


def outdoor_findings(design: Design) -> Iterator[Finding]:
    """Corrosion and drainage."""
    wire, sheet = design.radiator.metal, design.reflector.metal
    difference = galvanic_difference_v(wire.galvanic_group, sheet.galvanic_group)
    allowed = allowed_galvanic_v("outdoors")
    if difference > allowed + 1e-9:
        yield Finding(
            code="unlike-metals",
            severity=WARNING,
            message=f"{wire.name} wire on {sheet.name}: {difference:.2f} V apart in the anodic index, above the "
            f"{allowed:.2f} V that lasts outdoors; the joint corrodes where it gets wet",
            remedy="Use tinned wire or a tinned lug, and seal the joint, or choose nearer metals.",
            where="reflector.material",
            source="anodic index after MIL-STD-889, from memory",
        )
    low = design.reflector.up[0] + "-"
    has_low_lip = any(lip.edge == low for lip in design.reflector.lips)
    drained = any(h.purpose == "drain" for h in design.reflector.holes)
    if design.reflector.own is not None:
        has_low_lip = True
    if has_low_lip and not drained:
        yield Finding(
            code="no-drain",
            severity=WARNING,
            message=f"the {'lip' if design.reflector.own is None else 'wall'} at the low edge ({low}) holds rain: "
            "there is no drain hole",
            remedy='Write drain = "auto" in [mounting], or add a hole with purpose = "drain".',
            where="mounting.drain",
        )
    if design.feed.style == "legs":
        yield Finding(
            code="seal-connector",
            severity=NOTE,
            message="water creeps in round the connector and up the cable",
            remedy="Gasket or sealant under the flange, self-amalgamating tape over the mated plug.",
            where="feed.connector",
        )
