"""Findings about work at the bench: heat that the sheet draws, solder that may bridge, an open tube."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.shop.finding import NOTE, WARNING, Finding
from wavejig.stock.sheet import heat_flow_w

# Joint over room temperature while soldering: some 220 deg C of lead-free solder; from memory.
JOINT_RISE_K = 200.0
# What a hand iron with a broad bit keeps giving; common practice, no source.
IRON_W = 60.0
# Of bright metal heated round a foot or tube, beyond its hole; common practice, no source.
JOINT_RIM_MM = 1.0
# Air between a bare pin and the rim of its hole, below which a solder whisker shorts it; common practice.
LEAST_PIN_AIR_MM = 1.0


def bench_findings(design: Design) -> Iterator[Finding]:
    """Everything about soldering and sealing the feed."""
    yield from _heat(design)
    yield from _pin(design)
    if design.feed.style == "tube":
        yield Finding(
            code="seal-tube",
            severity=NOTE,
            message="the tube is open at the terminals: water creeps between its wall and the insulation",
            remedy="Close the end with a drop of low-loss sealant after measuring, and measure again.",
            where="feed.style",
        )


def joint_heat_w(design: Design) -> float | None:
    """Watts that the sheet carries off from the feed's joint with it; None when nothing is soldered to it."""
    feed, sheet = design.feed, design.reflector
    if feed.style == "tube":
        assert feed.tube is not None
        radius = feed.tube.outer_diameter_mm / 2.0
    elif feed.ground == "sheet":
        radius = feed.foot_hole_mm / 2.0
    else:
        return None
    rim = min(sheet.base_x_mm, sheet.base_y_mm) / 2.0
    return heat_flow_w(sheet.metal.name, sheet.thickness_mm, radius + JOINT_RIM_MM, rim, JOINT_RISE_K)


def _heat(design: Design) -> Iterator[Finding]:
    watts = joint_heat_w(design)
    if watts is None or watts <= IRON_W:
        return
    sheet = design.reflector
    yield Finding(
        code="sheet-draws-heat",
        severity=WARNING,
        message=f"{sheet.thickness_mm:.3g} mm {sheet.metal.name}, {sheet.base_x_mm:g} x {sheet.base_y_mm:g} mm, "
        f"carries some {watts:.0f} W away from the soldered joint; an ordinary iron gives {IRON_W:g} W",
        remedy="Warm the sheet from below first (hot plate, hot air), use a strong iron or a small torch, or take "
        'ground = "lug" and solder the leg to its lug beforehand.',
        where="reflector.thickness",
        source="steady conduction in a disc; conductivity from table heat-conductivity, iron common practice",
    )


def _pin(design: Design) -> Iterator[Finding]:
    feed = design.feed
    c = feed.connector
    if feed.style != "legs" or c is None:
        return
    face = -design.reflector.thickness_mm if feed.mounting == "behind" else c.flange_thickness_mm
    insulated = face + c.dielectric_length_mm >= 0.0  # its plastic fills the hole, or stands above it
    rim = c.dielectric_diameter_mm / 2.0 if not insulated else feed.connector_hole_mm / 2.0
    air = rim - max(c.pin_diameter_mm, feed.leg_diameter_mm) / 2.0
    if air < LEAST_PIN_AIR_MM - 1e-9:
        yield Finding(
            code="pin-near-sheet",
            severity=WARNING,
            message=f"{air:.2f} mm between the pin and the rim of its hole of {2.0 * rim:g} mm; a whisker of solder "
            f"bridges less than {LEAST_PIN_AIR_MM:g} mm",
            remedy="A larger cut-out in [feed.calliper], a thinner leg, or a drop of varnish on the rim.",
            where="feed.connector",
        )
