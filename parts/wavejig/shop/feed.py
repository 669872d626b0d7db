"""Findings about the feed: what cannot land, what cannot be soldered, values that are only starting ones."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.shop.finding import ERROR, NOTE, WARNING, Finding


def conflict_findings(design: Design) -> Iterator[Finding]:
    """Each conflict met while resolving, as an error."""
    for c in design.conflicts:
        yield Finding(
            code=f"{c.topic}-conflict", severity=ERROR, message=c.message, remedy=c.remedy, where=c.key
        )


def feed_findings(design: Design) -> Iterator[Finding]:
    """Soldering the feed to this sheet, and the pin joint."""
    feed, metal = design.feed, design.reflector.metal
    soldered = feed.style == "tube" or feed.ground == "sheet"
    if soldered and metal.solderable == "no":
        what = "the tube" if feed.style == "tube" else "the ground leg"
        yield Finding(
            code="sheet-not-solderable",
            severity=ERROR,
            message=f"{what} is soldered to the sheet, and {metal.name} does not take ordinary solder",
            remedy='Use brass, copper or tinplate, or legs with ground = "lug" (a tinned lug under a screw).',
            where="reflector.material",
            source=metal.source,
        )
    elif soldered and metal.solderable == "with-flux":
        yield Finding(
            code="sheet-needs-flux",
            severity=WARNING,
            message=f"{metal.name} takes solder only with a strong flux, which must be washed off again",
            remedy="Try it on an offcut first, or use a lug under a screw.",
            where="reflector.material",
            source=metal.source,
        )
    if feed.style == "legs" and feed.ground == "lug":
        yield Finding(
            code="ground-by-lug",
            severity=NOTE,
            message="the ground leg is soldered to a tinned lug under a connector screw or nut",
            remedy="Bright metal, toothed washer and sealed edge under the lug; solder the leg to it first.",
            where="feed.ground",
        )
    if design.radiator.metal.solderable == "no":
        yield Finding(
            code="wire-not-solderable",
            severity=ERROR,
            message=f"the wire's joints are soldered, and {design.radiator.metal.name} does not take solder",
            remedy="Use copper, tinned copper or brass wire.",
            where="radiator.metal",
            source=design.radiator.metal.source,
        )
    if feed.style == "legs" and feed.pin_joint == "lap":
        assert feed.connector is not None
        yield Finding(
            code="pin-lapped",
            severity=NOTE,
            message=f"a leg of {feed.leg_diameter_mm:.2f} mm does not enter the pin (bore "
            f"{feed.connector.pin_bore_mm:g} mm): it is soldered beside it, the connector moved aside to suit",
            remedy="A thinner leg (feed.leg) or a wider cup makes the better joint.",
            where="feed.connector",
        )
    if feed.style == "legs":
        yield Finding(
            code="measure-connector",
            severity=NOTE,
            message="the connector's sizes are usual figures; makers differ by tenths and more"
            if feed.connector is not None and feed.connector.source != "measured"
            else "the connector's sizes are your own measures",
            remedy="Measure yours and put what differs into [feed.calliper].",
            where="feed.connector",
        )


def value_findings(design: Design) -> Iterator[Finding]:
    """Which electrical numbers are rules of thumb so far."""
    electrical = ("side", "lobe_diameter", "standoff", "feed_gap")
    open_ones = [k for k, v in design.values if k in electrical and v.origin == "starting value"]
    if open_ones:
        yield Finding(
            code="starting-values",
            severity=NOTE,
            message=f"{', '.join(open_ones)}: starting values by rule of thumb, not yet tuned to this build",
            remedy="Make one first article and measure it before the batch.",
            where="radiator",
        )
