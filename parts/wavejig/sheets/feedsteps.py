"""The order of soldering the feed, as sentences with this design's numbers in them. Plain text, no markup."""

from __future__ import annotations

import math
from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.radiator.model import Radiator
from wavejig.radiator.stock import bought_length_mm
from wavejig.sheets.model import number
from wavejig.shop.bench import joint_heat_w
from wavejig.spacer.model import Spacer
from wavejig.stock.hardware import screw_through
from wavejig.stock.processes import plastic

NAMES = {
    "main": "main wire",
    "pin-leg": "pin leg",
    "ground-leg": "ground leg",
    "tube": "semi-rigid tube",
    "inner": "tube's inner conductor",
    "connector": "connector",
    "reflector": "reflector",
}


def screw_for(hole_mm: float) -> str:
    """The largest screw with 0.1 mm of play in a hole ("" if none is that thin)."""
    return screw_through(hole_mm)


def _iron(design: Design) -> str:
    """How the sheet draws heat, in words, from its size and metal."""
    r = design.reflector
    watts = joint_heat_w(design)
    drawn = f", some {watts:.0f} W" if watts is not None else ""
    floor = f"{number(r.base_x_mm, 0)} \u00d7 {number(r.base_y_mm, 0)} mm"
    if r.own is not None and r.own.shape == "round":
        floor = f"\u00d8{number(r.base_x_mm, 0)} mm"
    return (
        f"the sheet ({floor} of {number(r.thickness_mm)} mm "
        f"{r.metal.name}) draws the heat{drawn}: a strong iron with a broad bit, or warm the sheet from below first"
    )


def _spacer_on(design: Design, spacer: Spacer) -> str:
    if spacer.style == "posts":
        return (
            f"Screw the {len(spacer.posts)} posts on from the back ({design.spacer.post_screw}), "
            "channels along the wire."
        )
    names = " and ".join(p.name for p in spacer.pieces)
    return (
        f"Set {names} on the reflector; they hold the wire's centre {number(spacer.standoff_mm)} mm above it."
    )


def _held_down(spacer: Spacer) -> Iterator[str]:
    """Once the wire lies on the block's pieces: what keeps them where they are."""
    if spacer.style == "posts":
        return
    held = {h.piece: h for h in spacer.hold_downs}
    if held:
        force = max(h.force_n for h in spacer.hold_downs)
        pushed = "; ".join(
            f"{h.name} from {_way(h.withdrawal)} onto {piece}, until it stops at the edge"
            for piece, h in held.items()
        )
        yield (
            "Slide the pieces in until their rims meet the wire, then push a hold-down over the sheet's edge "
            f"onto each, jaw under the sheet: {pushed}. Each presses with some {number(force, 0)} N; the sheet "
            "must stand with its edges free underneath."
        )
    loose = [p.name for p in spacer.pieces if p.name not in held]
    if loose:
        yield (
            f"Slide {' and '.join(loose)} in until the rims meet the wire and hold them down with tape or a "
            "weight, clear of the joints."
        )


def _spacer_off(spacer: Spacer) -> str:
    if spacer.style == "posts":
        return (
            "The posts stay. Fix the wire in their channels with a drop of weatherproof "
            "adhesive, well off the joints."
        )
    moves = "; ".join(
        f"{p.name} along {_way(p.withdrawal)} {number(p.travel_mm, 1)} mm, then up" for p in spacer.pieces
    )
    off = "pull the hold-downs straight out over the edges, " if spacer.hold_downs else ""
    return f"Let everything go cold, {off}then take the spacer out: {moves}. Do not lever on the wire."


def _way(direction: tuple[float, float]) -> str:
    x, y = direction
    return ("x+" if x > 0 else "x-") if abs(x) > abs(y) else ("y+" if y > 0 else "y-")


def _clip(spacer: Spacer) -> str:
    soft = plastic(spacer.plastic)
    return (
        f"Clip a heat sink (crocodile clip) on the wire between joint and spacer: {soft.name} goes soft at "
        f"{soft.glass_transition_c:.0f} \u00b0C, solder melts at 183 \u00b0C and more. Hot and short."
    )


def leg_steps(design: Design, radiator: Radiator, spacer: Spacer, fixture: Fixture) -> Iterator[str]:
    feed = design.feed
    c = feed.connector
    assert c is not None
    where = (
        "behind the sheet, its boss coming through" if feed.mounting == "behind" else "on the radiator side"
    )
    screw = screw_for(c.hole_diameter_mm) if feed.flange_holes else ""
    held = f"four {screw} screws" if screw else "its nut and toothed washer"
    if feed.ground == "flange":
        yield (
            f"Before the connector {c.name} goes on the sheet: tin the spot on its flange where the "
            "ground leg lands, "
            f"{_offset(feed.foot, feed.connector_at)} of the pin. Away from the sheet the flange takes "
            "the heat alone."
        )
    if feed.ground == "lug":
        yield (
            "Solder the ground leg into its tinned lug now, on its own: under the screw, the big sheet "
            "would draw the "
            "heat away."
        )
    yield (
        f"Fit the connector {c.name} {where}; {held}, gasket or sealant under the flange. "
        + (
            "The lug with the ground leg goes under the screw nearest to its place. "
            if feed.ground == "lug"
            else ""
        )
        + "The pin must not touch the sheet: look through the gap all round."
    )
    yield (
        "Screw a mating plug onto the connector and leave it on while soldering: it keeps the pin in "
        "the middle when "
        "its plastic goes soft."
    )
    laps = [
        j for j in radiator.joints if j.kind == "lap" and "main" in j.between and "connector" not in j.between
    ]
    if laps and not fixture.has_window:
        yield (
            "Do NOT solder in the check nest: its plastic is too near the joints. Hold the radiator in a vice "
            "between wooden jaws for the laps that follow, and check it in the nest again when it is cold."
        )
    where = "With the radiator in the nest, solder" if fixture.has_window else "Solder"
    for joint in laps:
        names = " and ".join(dict.fromkeys(NAMES[b] for b in joint.between))
        if joint.between[0] == joint.between[1]:
            yield f"{where} the lap of the {names}: {joint.note}, {number(joint.length_mm, 1)} mm long."
        elif not (feed.ground == "lug" and "ground-leg" in joint.between):
            yield (
                f"{where} {names} together: {joint.note}, lap {number(joint.length_mm, 1)} mm. The leg must "
                "point to where it will land."
            )
    yield _spacer_on(design, spacer)
    pin = "into the pin's solder cup" if feed.pin_joint == "bore" else "beside the pin"
    yield (
        f"Lower the radiator onto the spacer: the pin leg goes {pin}, "
        + (
            "the ground leg's arm comes under its side"
            if feed.ground == "lug"
            else "the ground leg to its landing"
        )
        + ". The pin's side is y+, up in the drawings."
    )
    yield from _held_down(spacer)
    yield _clip(spacer)
    if feed.ground == "sheet":
        yield (
            f"Solder the ground leg in its hole in the sheet FIRST, all round: {_iron(design)}. Once it "
            "is cold the pin "
            "joint will not move any more."
        )
    elif feed.ground == "flange":
        yield f"Solder the ground leg to the tinned spot on the flange FIRST; behind it {_iron(design)}."
    else:
        for joint in (j for j in laps if "ground-leg" in j.between):
            yield (
                f"Solder the ground leg to the main wire: {joint.note}, lap {number(joint.length_mm, 1)} mm."
            )
    how = (
        f"fill the cup (\u00d8{number(c.pin_bore_mm, 2)} mm bore), no lump outside it"
        if feed.pin_joint == "bore"
        else "a lap along the pin, no lump"
    )
    yield f"Solder the pin leg to the pin: {how}. Then let it go cold before the plug comes off."
    yield _spacer_off(spacer)


def tube_steps(design: Design, radiator: Radiator, spacer: Spacer) -> Iterator[str]:
    feed = design.feed
    tube = feed.tube
    assert tube is not None
    outer = next(p for p in radiator.pieces if p.role == "tube")
    inner = next(p for p in radiator.pieces if p.role == "inner")
    rise = number(inner.developed_length_mm, 1)
    yield (
        f"Tube {tube.name}, {number(bought_length_mm(radiator, outer), 1)} mm long (more if its connector sits further "
        f"away): take wall and insulation off the last {rise} mm without nicking the inner conductor."
    )
    yield (
        f"Put the tube through its hole in the sheet so that its wall ends {number(feed.tube_top_mm)} "
        "mm above the "
        f"radiator side; hold it square. Solder it to the sheet all round FIRST: {_iron(design)}."
    )
    yield _spacer_on(design, spacer)
    yield (
        "Lower the radiator onto the spacer: the ground side's corner lies across the end of the tube's wall."
    )
    yield from _held_down(spacer)
    yield _clip(spacer)
    yield "Solder the wire to the tube's wall along its outside. No solder into the tube's open end."
    hook = next((j for j in radiator.joints if j.kind == "hook"), None)
    butt = next((j for j in radiator.joints if j.between == ("main", "main")), None)
    if butt is not None:
        yield f"Bring the main wire's two ends together: {butt.note}."
    if hook is not None:
        yield ("Bend the inner conductor over the first side and solder; nothing of it may touch the wall.")
    yield _spacer_off(spacer)


def _offset(a: tuple[float, float], b: tuple[float, float]) -> str:
    dx, dy = a[0] - b[0], a[1] - b[1]
    parts = []
    if abs(dx) > 0.05:
        parts.append(f"{number(abs(dx))} mm towards {'x+' if dx > 0 else 'x-'}")
    if abs(dy) > 0.05:
        parts.append(f"{number(abs(dy))} mm towards {'y+' if dy > 0 else 'y-'}")
    return " and ".join(parts) or f"{number(math.hypot(dx, dy))} mm"
