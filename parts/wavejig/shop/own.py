"""Findings about a dish, box or lid somebody already has: does everything fit inside, can it be drilled."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.radiator.model import Radiator
from wavejig.reflector.model import Tray
from wavejig.reflector.own import floor_room_mm
from wavejig.shop.finding import ERROR, NOTE, WARNING, Finding

# Wire to wall that can be assembled by hand at all; common practice, no source.
LEAST_CLEAR_MM = 2.0
# Nearer than this the wall carries much of the wire's current back: a dent of a millimetre is heard. In
# wavelengths; common practice, no source.
NEAR_WAVES = 1.0 / 16.0
# A hole's rim to where the wall's radius begins: nearer, the drill climbs; common practice, no source.
WALL_ROOM_MM = 1.0
# Thinner metal buckles and grabs under a twist drill; common practice, no source.
THIN_MM = 1.0


def own_findings(design: Design, tray: Tray, radiator: Radiator | None) -> Iterator[Finding]:
    """Everything about the user's own dish; nothing for sheet that is cut."""
    if tray.own is None:
        return
    if radiator is not None:
        yield from _walls(design, tray, radiator)
        yield from _rim(design, tray, radiator)
    yield from _holes(tray)
    yield from _connector(design, tray)
    yield from _metal(design)
    if tray.thickness_mm < THIN_MM:
        yield Finding(
            code="own-thin-drilling",
            severity=NOTE,
            message=f"the dish is {tray.thickness_mm:g} mm thick: a twist drill grabs and tears metal that thin",
            remedy="A step drill or a hole punch from a small pilot hole, hard wood clamped behind, low speed.",
            where="reflector.thickness",
        )
    yield Finding(
        code="own-measure",
        severity=NOTE,
        message="the dish's sizes are the recipe's: the prediction, the spacer and the drill template stand on them",
        remedy="Measure each dish inside: twice across, the depth at four places. Tune again if one is off by more "
        "than 1 mm; a dish out of round by more takes the template with play.",
        where="reflector.own",
    )


def wall_clearance_mm(tray: Tray, radiator: Radiator) -> tuple[float, tuple[float, float, float]]:
    """Least way from the surface of the wire to the wall, level, and the point of the centreline where."""
    own = tray.own
    assert own is not None
    found = (math.inf, (0.0, 0.0, 0.0))
    for piece in radiator.pieces:
        points = piece.path.sample(chord_error_mm=0.02, step_mm=1.0)
        within = points[(points[:, 2] >= 0.0) & (points[:, 2] <= own.depth_mm)]
        if not len(within):
            continue
        out = np.tan(np.radians(own.slope_deg)) * within[:, 2]
        if own.shape == "round":
            room = tray.half_x_mm + out - np.hypot(within[:, 0], within[:, 1])
        else:
            room = (
                np.minimum(tray.half_x_mm - np.abs(within[:, 0]), tray.half_y_mm - np.abs(within[:, 1])) + out
            )
        # the wire is round: square to a leaning wall it is nearer by the cosine
        room = room * math.cos(math.radians(own.slope_deg)) - piece.diameter_mm / 2.0
        n = int(np.argmin(room))
        if room[n] < found[0]:
            x, y, z = within[n]
            found = (float(room[n]), (float(x), float(y), float(z)))
    return found


def _walls(design: Design, tray: Tray, radiator: Radiator) -> Iterator[Finding]:
    clear, at = wall_clearance_mm(tray, radiator)
    near = NEAR_WAVES * design.target.wavelength_mm
    if clear >= near:
        return
    place = f"({at[0]:.1f}, {at[1]:.1f}, {at[2]:.1f}) mm"
    if clear < LEAST_CLEAR_MM:
        yield Finding(
            code="own-wall-touched",
            severity=ERROR,
            message=(
                f"the wire at {place} runs {-clear:.1f} mm into the dish's wall"
                if clear < 0.0
                else f"the wire at {place} is {clear:.1f} mm from the dish's wall; below {LEAST_CLEAR_MM:g} mm it "
                "touches once handled"
            ),
            remedy="Take a larger dish, or a smaller radiator.",
            where="reflector.own",
        )
        return
    yield Finding(
        code="own-wall-near",
        severity=WARNING,
        message=f"the wire at {place} is {clear:.1f} mm from the dish's wall; below {near:.1f} mm (a sixteenth of a "
        "wavelength) a small dent or a radiator off centre shifts the match",
        remedy="Take a larger dish, or measure every article.",
        where="reflector.own",
    )


def _rim(design: Design, tray: Tray, radiator: Radiator) -> Iterator[Finding]:
    own = tray.own
    assert own is not None
    standoff = design.radiator.standoff_mm
    if standoff > own.depth_mm:
        yield Finding(
            code="own-rim-below-wire",
            severity=NOTE,
            message=f"the wire stands {standoff - own.depth_mm:.1f} mm above the rim: the dish does not shelter it, "
            "and nothing keeps it from what the antenna is laid on",
            remedy="Lay it face up only; a deeper dish shelters it.",
            where="reflector.own.depth",
        )


def _holes(tray: Tray) -> Iterator[Finding]:
    own = tray.own
    assert own is not None
    for hole in tray.holes:
        room = floor_room_mm(tray, hole.x_mm, hole.y_mm) - own.inset_mm - hole.diameter_mm / 2.0
        if room < WALL_ROOM_MM - 1e-9:
            yield Finding(
                code="own-hole-near-wall",
                severity=WARNING,
                message=f"the {hole.purpose} hole of {hole.diameter_mm:g} mm at ({hole.x_mm:.2f}, {hole.y_mm:.2f}) mm "
                + (
                    f"runs {-room:.1f} mm into the radius between floor and wall"
                    if room < 0.0
                    else f"ends {room:.1f} mm from the radius between floor and wall"
                )
                + f"; below {WALL_ROOM_MM:g} mm a drill climbs up it",
                remedy="Move it inwards, or centre-punch deep and drill from the outside.",
                where="reflector.holes",
            )


def _connector(design: Design, tray: Tray) -> Iterator[Finding]:
    """The connector's flange or nut lies flat inside only clear of the wall."""
    own, feed = tray.own, design.feed
    assert own is not None
    if feed.connector is None:
        return
    c = feed.connector
    # from outside a square flange reaches to its corners, inside its clear circle
    inside = feed.mounting == "in-front"
    reach = feed.clear_radius_mm if inside else c.flange_mm / math.sqrt(2.0)
    flat = floor_room_mm(tray, *feed.connector_at) - own.inset_mm
    if flat < reach - 1e-9:
        yield Finding(
            code="own-connector-near-wall",
            severity=ERROR,
            message=f"the connector {c.name} takes {reach:.1f} mm of flat floor about its middle and has {flat:.1f} mm "
            "to the bend of the wall",
            remedy="Take a dish with a larger floor, or a smaller connector.",
            where="feed.connector",
        )


def _metal(design: Design) -> Iterator[Finding]:
    metal, feed = design.reflector.metal, design.feed
    if metal.solderable == "no" and feed.style == "legs" and feed.ground == "lug":
        yield Finding(
            code="own-not-solderable",
            severity=NOTE,
            message=f"{metal.name} does not take ordinary solder: the ground leg goes to a tinned lug under a screw",
            remedy="Scrape paint, lacquer and oxide off under the lug, and lay a toothed washer between.",
            where="reflector.material",
            source=metal.source,
        )
    yield Finding(
        code="own-coating",
        severity=NOTE,
        message="dishes, boxes and lids are often lacquered or painted, clear lacquer included: it insulates, and it "
        "burns under the iron",
        remedy="Scrape to bright metal where anything is soldered or clamped, in fresh air; check with a meter: below "
        "1 ohm from there to the rim.",
        where="reflector.own",
    )
