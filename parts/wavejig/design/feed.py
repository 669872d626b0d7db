"""Where the feed lands on the sheet: connector, pin leg, ground leg's foot, or the tube.

The pin terminal is the wire's inner corner over the connector; the ground terminal is the other. `along`
below is the unit vector from the pin terminal to the ground terminal. Heights are z above the sheet's
radiator-side face.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from wavejig.design.model import Conflict, FeedDesign, Point2
from wavejig.geometry.plane import Circle
from wavejig.stock.connectors import Connector, Tube
from wavejig.stock.hardware import screws

# Figures of the bench; common practice, no source.
SOLDER_GAP_MM = 0.1  # between surfaces that solder joins by capillarity
FOOT_PLAY_MM = 0.3  # foot hole over the leg's diameter
FOOT_PROUD_MM = 0.5  # how far a foot stands out behind the sheet, for its solder cone
LEAST_WEB_MM = 1.0  # of sheet between two holes
SHORT_CLEARANCE_MM = 1.0  # bare metal of the other polarity
INNER_CLEARANCE_MM = 0.4  # bare wire to the tube's inner conductor, where its insulation still stands
LUG_THICKNESS_MM = 0.5
BORE_DEPTH_DIAMETERS = 2.0  # a solder cup takes about twice its bore (from memory; measure yours)
TUBE_BEHIND_MM = 20.0  # tube left behind the sheet for the cable or plug
TUBE_PLAY_MM = 0.2


@dataclass(frozen=True, slots=True, kw_only=True)
class FeedRequest:
    """What the feed's place follows from. `gap_side_recess_mm`: how far the ground corner's wire stands
    back from its terminal point because the corner is rounded (0 where the wire ends there)."""

    style: str
    connector: Connector | None
    tube: Tube | None
    mounting: str
    leg_diameter_mm: float
    leg_is_wire: bool
    leg_spacing_mm: float | None  # None: auto
    ground: str
    pin: Point2
    ground_terminal: Point2
    sheet_thickness_mm: float
    sheet_solderable: str
    standoff_mm: float
    wire_diameter_mm: float
    recess_mm: float
    lap_mm: float


def least_gap_for_tube_mm(tube: Tube, wire_diameter_mm: float, recess_mm: float) -> float:
    """Feed gap that keeps the pin terminal's bare wire SHORT_CLEARANCE_MM off the tube's wall.

    The wire's end is cut square half a diameter past the terminal, so its corner reaches
    d/2 (sin + cos) of the side's slope, at most 0.71 d, towards the tube.
    """
    return (
        _tube_offset_mm(tube, wire_diameter_mm, recess_mm)
        + tube.outer_diameter_mm / 2.0
        + wire_diameter_mm / math.sqrt(2.0)
        + SHORT_CLEARANCE_MM
    )


def place_feed(request: FeedRequest) -> tuple[FeedDesign, tuple[Conflict, ...]]:
    """The feed's places, and what about them cannot be had."""
    return _place_tube(request) if request.style == "tube" else _place_legs(request)


def _place_legs(r: FeedRequest) -> tuple[FeedDesign, tuple[Conflict, ...]]:
    assert r.connector is not None
    c = r.connector
    gap = math.dist(r.pin, r.ground_terminal)
    along = ((r.ground_terminal[0] - r.pin[0]) / gap, (r.ground_terminal[1] - r.pin[1]) / gap)
    conflicts: list[Conflict] = []
    leg = r.leg_diameter_mm
    # heights of the pin and its insulator: measured from the flange face the pin rises from
    face = -r.sheet_thickness_mm if r.mounting == "behind" else c.flange_thickness_mm
    pin_tip, dielectric_top = face + c.pin_length_mm, face + c.dielectric_length_mm
    in_bore = c.pin_bore_mm >= leg + 0.05
    if in_bore:
        depth = min(BORE_DEPTH_DIAMETERS * c.pin_bore_mm, max(pin_tip - max(dielectric_top, 0.0), 1.0))
        at, bottom = r.pin, pin_tip - depth
    else:
        aside = (c.pin_diameter_mm + leg) / 2.0 + SOLDER_GAP_MM
        at = (r.pin[0] - along[0] * aside, r.pin[1] - along[1] * aside)
        bottom = max(dielectric_top, 0.0) + 0.3
        if pin_tip - bottom < 1.5 * leg:
            conflicts.append(
                Conflict(
                    topic="feed",
                    key="feed.connector",
                    message=f"a leg of {leg:g} mm does not enter the pin's bore of {c.pin_bore_mm:g} mm "
                    f"and the pin stands only {max(pin_tip - bottom, 0.0):.1f} mm clear to lap it beside",
                    remedy="Use a thinner leg (feed.leg), a connector with a larger bore or a longer pin.",
                )
            )
    if pin_tip > r.standoff_mm - r.wire_diameter_mm:
        conflicts.append(
            Conflict(
                topic="feed",
                key="radiator.standoff",
                message=f"the connector's pin reaches {pin_tip:.1f} mm above the sheet, the wire lies at "
                f"{r.standoff_mm:g} mm",
                remedy="Use a shorter pin (feed.connector, feed.calliper.pin_length), or a tube.",
            )
        )

    rear = r.mounting == "behind"
    hole = c.rear_cutout_mm if rear else c.front_cutout_mm
    if hole <= 0.0:
        conflicts.append(
            Conflict(
                topic="feed",
                key="feed.mounting",
                message=f"connector {c.name} cannot be mounted {r.mounting} (of) the sheet",
                remedy='Leave mounting "auto", or give the hole it needs in [feed.calliper].',
            )
        )
        hole = max(c.rear_cutout_mm, c.front_cutout_mm)
    flange_holes = _flange_holes(c, at)
    clear = hole / 2.0
    if c.mounting == "bulkhead":
        clear = max(clear, c.nut_mm / 2.0, c.washer_mm / 2.0, c.flange_mm / 2.0)
    elif not rear:
        clear = max(clear, c.flange_mm / 2.0 * math.sqrt(2.0))
    ground = r.ground
    on_flange = c.mounting == "flange" and not rear
    if ground == "auto":
        ground = "flange" if on_flange else ("sheet" if r.sheet_solderable != "no" else "lug")
    offset = math.dist(at, r.pin)
    least, most = clear + leg / 2.0 + SHORT_CLEARANCE_MM - offset, math.inf
    foot_bottom, foot_hole = -r.sheet_thickness_mm - FOOT_PROUD_MM, math.ceil((leg + FOOT_PLAY_MM) * 10) / 10
    if ground == "flange":
        if not on_flange:
            conflicts.append(
                Conflict(
                    topic="feed",
                    key="feed.ground",
                    message="the ground leg cannot land on a flange that is not on the radiator side",
                    remedy='Write ground = "sheet" or "lug", or mount a flange connector "in-front".',
                )
            )
        least = max(c.dielectric_diameter_mm, c.pin_diameter_mm) / 2.0 + leg / 2.0 + 0.5 - offset
        most = c.flange_mm / 2.0 - leg / 2.0 - 0.3 - offset
        foot_bottom, foot_hole = c.flange_thickness_mm + 0.05, 0.0
    elif ground == "sheet":
        # the foot's hole must leave a web of sheet to the connector's, or the cutter burns through
        web = max(r.sheet_thickness_mm, LEAST_WEB_MM)
        least = max(least, hole / 2.0 + web + foot_hole / 2.0 - offset)
    elif ground == "lug":
        foot_bottom, foot_hole = LUG_THICKNESS_MM, 0.0
    spacing = r.leg_spacing_mm
    if spacing is None:
        spacing = min(max(gap, least), most) if most >= least else least
        spacing = math.ceil(spacing * 20 - 1e-9) / 20.0 if spacing > gap else gap
    if not least - 1e-6 <= spacing <= most + 1e-6:
        conflicts.append(
            Conflict(
                topic="feed",
                key="feed.leg_spacing",
                message=f"the ground leg would land {spacing:.2f} mm from the pin leg, where it touches the "
                f"connector's cut-out, nut, washer or flange edge; it must land "
                + (f"at least {least:.2f} mm" if most == math.inf else f"{least:.2f} to {most:.2f} mm")
                + " from it",
                remedy='Leave leg_spacing "auto", or use a smaller connector or a tube.',
            )
        )
    foot = (r.pin[0] + along[0] * spacing, r.pin[1] + along[1] * spacing)
    head = 0.0 if not flange_holes else _head_mm(c.hole_diameter_mm) / 2.0
    for h in flange_holes:
        apart = math.dist(foot, (h.x_mm, h.y_mm))
        if ground == "sheet" and apart < head + leg / 2.0 + 0.5:
            conflicts.append(
                Conflict(
                    topic="feed",
                    key="feed.leg_spacing",
                    message=f"the ground leg's foot is {apart:.1f} mm from a flange screw whose head needs "
                    f"{head + leg / 2.0 + 0.5:.1f} mm",
                    remedy='Give another leg_spacing, or ground = "lug".',
                )
            )
            break
    design = FeedDesign(
        style="legs",
        terminal_pin=r.pin,
        terminal_ground=r.ground_terminal,
        connector=c,
        mounting=r.mounting,
        leg_diameter_mm=leg,
        leg_is_wire=r.leg_is_wire,
        pin_leg=r.pin,
        pin_joint="bore" if in_bore else "lap",
        pin_leg_bottom_mm=bottom,
        connector_at=at,
        connector_hole_mm=hole,
        flange_holes=flange_holes,
        ground=ground,
        foot=foot,
        foot_bottom_mm=foot_bottom,
        foot_hole_mm=foot_hole,
        clear_radius_mm=clear,
        tube=None,
        tube_at=r.ground_terminal,
        tube_top_mm=0.0,
        tube_bottom_mm=0.0,
    )
    return design, tuple(conflicts)


def _place_tube(r: FeedRequest) -> tuple[FeedDesign, tuple[Conflict, ...]]:
    assert r.tube is not None
    gap = math.dist(r.pin, r.ground_terminal)
    along = ((r.ground_terminal[0] - r.pin[0]) / gap, (r.ground_terminal[1] - r.pin[1]) / gap)
    inward = _tube_offset_mm(r.tube, r.wire_diameter_mm, r.recess_mm)
    at = (r.ground_terminal[0] - along[0] * inward, r.ground_terminal[1] - along[1] * inward)
    conflicts = []
    least = least_gap_for_tube_mm(r.tube, r.wire_diameter_mm, r.recess_mm)
    if gap < least - 1e-6:
        conflicts.append(
            Conflict(
                topic="feed",
                key="radiator.feed_gap",
                message=f"with a feed gap of {gap:g} mm the pin terminal comes within "
                f"{SHORT_CLEARANCE_MM:g} mm of the tube's wall; it needs {least:.2f} mm",
                remedy='Widen the gap (or leave it "auto"), or use a thinner tube.',
            )
        )
    top = r.standoff_mm - r.wire_diameter_mm / 2.0 - SOLDER_GAP_MM
    design = FeedDesign(
        style="tube",
        terminal_pin=r.pin,
        terminal_ground=r.ground_terminal,
        connector=None,
        mounting=r.mounting,
        leg_diameter_mm=r.leg_diameter_mm,
        leg_is_wire=r.leg_is_wire,
        pin_leg=r.pin,
        pin_joint="none",
        pin_leg_bottom_mm=0.0,
        connector_at=at,
        connector_hole_mm=0.0,
        flange_holes=(),
        ground="tube",
        foot=at,
        foot_bottom_mm=0.0,
        foot_hole_mm=0.0,
        clear_radius_mm=0.0,
        tube=r.tube,
        tube_at=at,
        tube_top_mm=top,
        tube_bottom_mm=-r.sheet_thickness_mm - TUBE_BEHIND_MM,
    )
    return design, tuple(conflicts)


def _tube_offset_mm(tube: Tube, wire_diameter_mm: float, recess_mm: float) -> float:
    """Tube axis from the ground terminal towards the pin terminal.

    The wire (its rounded apex, or its end) lies across the tube's wall, clear of the inner conductor.
    """
    off_inner = (wire_diameter_mm + tube.inner_diameter_mm) / 2.0 + INNER_CLEARANCE_MM
    return max(tube.outer_diameter_mm / 2.0, off_inner) - recess_mm


def _flange_holes(c: Connector, at: Point2) -> tuple[Circle, ...]:
    if c.mounting != "flange" or c.hole_pitch_mm <= 0:
        return ()
    half = c.hole_pitch_mm / 2.0
    places = [(-half, -half), (half, -half), (half, half), (-half, half)]
    return tuple(Circle(x_mm=at[0] + x, y_mm=at[1] + y, diameter_mm=c.hole_diameter_mm) for x, y in places)


def _head_mm(hole_mm: float) -> float:
    """Head or washer, whichever is wider, of the largest screw that goes through a flange hole."""
    fitting = [s for s in screws() if s.diameter_mm + 0.1 <= hole_mm]
    return max(fitting[-1].pan_head_mm, fitting[-1].washer_mm) if fitting else 2.0 * hole_mm
