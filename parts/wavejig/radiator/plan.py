"""Design -> Radiator: the main wire from its lobes' corners, legs or tube, laps and joints.

Which wire does what. Where both ends of the main wire meet at the pin terminal (biquad, double-biquad,
twin-loop, closed paths) they bend down side by side and are lapped: with legs of the same wire one end
goes on as the pin leg; otherwise a leg of its own joins them there. At the ground terminal the main wire
runs through, and the ground leg laps it from below, or the tube's wall carries it. With a tube the ends
are plain: one butts against the other and the inner conductor, hooked over, ties them (a tail bent down
would be a stub at the terminals). Where the main wire ends at both terminals (quad, open paths) its ends
are the two legs.
"""

from __future__ import annotations

import math

from wavejig.design.feed import SOLDER_GAP_MM
from wavejig.design.model import Design
from wavejig.forming.wire import developed_arc_mm, loaded_angle_deg, loaded_radius_mm, relaxed_radius_mm
from wavejig.geometry.path import Arc, Path, PathError, Point, round_corners
from wavejig.radiator.feedlegs import PlanError, aside_from, leg_points
from wavejig.radiator.model import Bend, Joint, Piece, Radiator

BUTT_GAP_MM = 0.05  # between a butted end and the flank it meets; common practice, no source


def plan(design: Design) -> Radiator:
    """The radiator's pieces with their bend tables, and its joints.

    Raises PlanError where the wire has no room for its bends or legs.
    """
    try:
        return _Planner(design).radiator()
    except PathError as err:
        raise PlanError(f"the wire's bends do not fit: {err}") from err


class _Planner:
    """Lays out one design; corner points and radii are gathered per piece, then rounded."""

    def __init__(self, design: Design) -> None:
        self.design = design
        self.r = design.radiator
        self.feed = design.feed
        self.wire = self.r.wire_diameter_mm
        self.leg = self.feed.leg_diameter_mm
        self.bend = self.r.bend_radius_mm
        self.corners = [c.at for c in self.r.corners]
        self.radii = [c.radius_mm for c in self.r.corners]
        self.closed = self.r.ground_corner is not None
        self.pin = self.corners[0]
        self.ground = self.corners[-1 if self.r.ground_corner is None else self.r.ground_corner]
        self.height = self.r.standoff_mm
        self.joints: list[Joint] = []

    def radiator(self) -> Radiator:
        pieces = [self._main()]
        if self.feed.style == "tube":
            pieces += self._tube()
        else:
            if not self.feed.leg_is_wire:
                pieces.append(self._pin_leg())
            if self.closed or not self.feed.leg_is_wire:
                pieces.append(self._ground_leg())
            self._leg_joints()
        return Radiator(pieces=tuple(pieces), joints=tuple(self.joints))

    # -- the main wire ------------------------------------------------------------------------------

    def _main(self) -> Piece:
        points, radii = self.corners[1:-1], self.radii[1:-1]
        head, tail = self._head(), self._tail()
        all_points = [*head, *points, *tail]
        all_radii = [self.bend] * (len(head) - 1) + radii + [self.bend] * (len(tail) - 1)
        return self._piece("main", all_points, all_radii, self.wire, trim_mm=self.r.trim_mm)

    def _head(self) -> list[Point]:
        """The main wire's first end: the pin leg itself, a tail beside a separate leg, or a plain end."""
        if self.feed.style == "tube":
            return [aside_from(self.pin, self.corners[1], -self.wire / 2.0)]
        if self.feed.leg_is_wire:
            return [(*self.feed.pin_leg, self.feed.pin_leg_bottom_mm), self.pin]
        at = aside_from(self.pin, self.corners[1], self._beside())
        return [self._tail_end(at), at]

    def _tail(self) -> list[Point]:
        """Its last end: back at the pin terminal, or at the ground terminal where it ends there."""
        end = self.corners[-1]
        if self.feed.style == "tube":
            if not self.closed:
                return [end]
            # butts against the flank of the first end, which reaches half a diameter past the terminal
            u, v = self.corners[1], self.corners[-2]
            opening = _angle(self.pin, u, v)
            return [aside_from(end, v, self.wire / 2.0 / math.sin(opening) + BUTT_GAP_MM)]
        if self.feed.leg_is_wire and not self.closed:
            foot, bottom = self.feed.foot, self.feed.foot_bottom_mm
            return [end, *leg_points(_xy(end), foot, self.height - self.bend, bottom, self.bend)]
        at = aside_from(end, self.corners[-2], self._beside())
        if self.closed and self.feed.leg_is_wire:
            self.joints.append(
                Joint(
                    kind="lap",
                    between=("main", "main"),
                    at=(*_xy(self.pin), self.height - self.bend - self.r.lap_mm / 2.0),
                    length_mm=self.r.lap_mm,
                    note="both ends of the main wire, side by side below the pin terminal",
                )
            )
        return [at, self._tail_end(at)]

    def _beside(self) -> float:
        """Centre distance of the wire's tail from the leg (or other end) it is soldered to."""
        other = self.wire if self.feed.leg_is_wire else self.leg
        return (self.wire + other) / 2.0 + SOLDER_GAP_MM

    def _tail_end(self, at: Point) -> Point:
        bottom = self.height - self.bend - self.r.lap_mm
        floor = self._floor()
        if bottom < floor:
            raise PlanError(
                f"the lap of {self.r.lap_mm:g} mm below the pin terminal would reach {bottom:.2f} mm above "
                f"the sheet, where it must stay above {floor:.2f} mm; use a shorter lap, a smaller bend "
                "radius or a larger standoff"
            )
        return (at[0], at[1], bottom)

    def _floor(self) -> float:
        """Lowest height for a tail at the pin terminal: clear of the sheet and of the connector's pin."""
        assert self.feed.connector is not None
        face = (
            -self.design.reflector.thickness_mm
            if self.feed.mounting == "behind"
            else self.feed.connector.flange_thickness_mm
        )
        return max(face + self.feed.connector.pin_length_mm, 0.0) + 0.5

    # -- legs ---------------------------------------------------------------------------------------

    def _leg_bend_mm(self) -> float:
        """Centreline radius of a leg of another diameter, bent on the same pin."""
        if math.isclose(self.leg, self.wire, abs_tol=1e-9):
            return self.bend
        metal = self.r.metal
        return relaxed_radius_mm(
            self.r.loaded_inside_radius_mm + self.leg / 2.0,
            self.leg,
            metal.youngs_modulus_gpa,
            metal.strength_coefficient_mpa,
            metal.hardening_exponent,
        )

    def _pin_leg(self) -> Piece:
        top = (*self.feed.pin_leg, self.height - self.bend)
        bottom = (*self.feed.pin_leg, self.feed.pin_leg_bottom_mm)
        self.joints.append(
            Joint(
                kind="lap",
                between=("main", "pin-leg"),
                at=(*self.feed.pin_leg, self.height - self.bend - self.r.lap_mm / 2.0),
                length_mm=self.r.lap_mm,
                note="the main wire's ends either side of the pin leg"
                if self.closed
                else "the main wire's tail beside the pin leg",
            )
        )
        return self._piece("pin-leg", [bottom, top], [], self.leg)

    def _ground_leg(self) -> Piece:
        bend = self._leg_bend_mm()
        at = self.ground
        if self.closed:
            # an angle piece: lapped under the side that leaves the ground terminal, then down
            assert self.r.ground_corner is not None
            below = (self.wire + self.leg) / 2.0 + SOLDER_GAP_MM
            level = self.height - below
            beyond = self.corners[self.r.ground_corner + 1]
            end = aside_from(at, (beyond[0], beyond[1], at[2]), bend + self.r.lap_mm)
            points: list[Point] = [(end[0], end[1], level), (at[0], at[1], level)]
            start_z = level - bend
            joint_at = ((at[0] + end[0]) / 2.0, (at[1] + end[1]) / 2.0, self.height - below / 2.0)
            note = "the ground leg's arm under the side that leaves the ground terminal"
        else:
            points = [(at[0], at[1], self.height - self.bend)]
            start_z = self.height - self.bend - self.r.lap_mm
            joint_at = (at[0], at[1], start_z + self.r.lap_mm / 2.0)
            note = "the main wire's tail beside the ground leg"
        points += leg_points(_xy(at), self.feed.foot, start_z, self.feed.foot_bottom_mm, bend)
        self.joints.append(
            Joint(kind="lap", between=("main", "ground-leg"), at=joint_at, length_mm=self.r.lap_mm, note=note)
        )
        return self._piece("ground-leg", points, [bend] * (len(points) - 2), self.leg)

    def _leg_joints(self) -> None:
        feed = self.feed
        pin_piece = "main" if feed.leg_is_wire else "pin-leg"
        ground_piece = "main" if feed.leg_is_wire and not self.closed else "ground-leg"
        assert feed.connector is not None
        face = (
            -self.design.reflector.thickness_mm
            if feed.mounting == "behind"
            else feed.connector.flange_thickness_mm
        )
        tip = face + feed.connector.pin_length_mm
        self.joints.append(
            Joint(
                kind="bore" if feed.pin_joint == "bore" else "lap",
                between=(pin_piece, "connector"),
                at=(*feed.pin_leg, (tip + feed.pin_leg_bottom_mm) / 2.0),
                length_mm=max(tip - feed.pin_leg_bottom_mm, 0.0),
                note="in the pin's solder cup" if feed.pin_joint == "bore" else "beside the pin",
            )
        )
        how = {
            "sheet": ("butt", "through its hole in the sheet, soldered all round"),
            "flange": ("butt", "on the connector's flange"),
            "lug": ("lap", "to a lug under the connector's screw or nut"),
        }[feed.ground]
        self.joints.append(
            Joint(
                kind=how[0],
                between=(ground_piece, "reflector" if feed.ground == "sheet" else "connector"),
                at=(*feed.foot, max(feed.foot_bottom_mm, 0.0)),
                length_mm=self.design.reflector.thickness_mm if feed.ground == "sheet" else 0.0,
                note=how[1],
            )
        )

    # -- tube ---------------------------------------------------------------------------------------

    def _tube(self) -> list[Piece]:
        feed, tube = self.feed, self.feed.tube
        assert tube is not None
        top = feed.tube_top_mm
        outer = self._piece(
            "tube",
            [(*feed.tube_at, feed.tube_bottom_mm), (*feed.tube_at, top)],
            [],
            tube.outer_diameter_mm,
        )
        inner_d = tube.inner_diameter_mm
        # the inner conductor rises past the wires and crosses over the first side, where it is hooked
        level = self.height + (self.wire + inner_d) / 2.0 + SOLDER_GAP_MM / 2.0
        over = aside_from(self.pin, self.corners[1], self.bend + self.wire)
        end = aside_from(
            (*feed.tube_at, level), (over[0], over[1], level), math.dist(feed.tube_at, _xy(over)) + inner_d
        )
        radius = min(1.5 * inner_d + inner_d / 2.0, max(level - top - 0.2, inner_d))
        inner = self._piece(
            "inner", [(*feed.tube_at, top), (*feed.tube_at, level), end], [radius], inner_d, of_copper=True
        )
        if self.closed:
            self.joints.append(
                Joint(
                    kind="butt",
                    between=("main", "main"),
                    at=self.pin,
                    length_mm=self.wire,
                    note="one end against the flank of the other; the hooked inner conductor ties both",
                )
            )
        self.joints += [
            Joint(
                kind="butt",
                between=("main", "tube"),
                at=(*_xy(self.ground), self.height - self.wire / 2.0),
                length_mm=self.wire,
                note="the wire across the tube's wall, soldered along its outside",
            ),
            Joint(
                kind="hook",
                between=("main", "inner"),
                at=over,
                length_mm=self.wire,
                note="the tube's inner conductor bent over the first side",
            ),
            Joint(
                kind="butt",
                between=("tube", "reflector"),
                at=(*feed.tube_at, 0.0),
                length_mm=self.design.reflector.thickness_mm,
                note="through its hole in the sheet, soldered all round",
            ),
        ]
        return [outer, inner]

    # -- pieces -------------------------------------------------------------------------------------

    def _piece(
        self,
        role: str,
        points: list[Point],
        radii: list[float],
        diameter: float,
        *,
        trim_mm: float = 0.0,
        of_copper: bool = False,
    ) -> Piece:
        try:
            path = round_corners(points, radii)
        except PathError as err:
            raise PlanError(f"{role} wire: {err}") from err
        n = self.r.neutral_axis_factor
        bends, travelled, end = bend_table(
            design=self.design, path=path, diameter_mm=diameter, soft=of_copper
        )
        del travelled
        developed = sum(s.length_mm for s in path.lines) + sum(
            developed_arc_mm(a.angle_deg, a.radius_mm - diameter / 2.0, diameter, n) for a in path.arcs
        )
        assert math.isclose(developed, end, abs_tol=1e-6)
        return Piece(
            role=role,
            path=path,
            diameter_mm=diameter,
            bends=bends,
            developed_length_mm=developed,
            trim_mm=trim_mm,
        )


def bend_table(
    *, design: Design, path: Path, diameter_mm: float, soft: bool = False
) -> tuple[tuple[Bend, ...], float, float]:
    """Rows of a piece's bend table, the developed length up to its last bend's end, and the whole.

    soft: the tube's inner conductor, bent by hand: no springback is stated for it (loaded = finished).
    """
    r = design.radiator
    rows: list[Bend] = []
    travelled = 0.0
    after_last = 0.0
    for number, (bend, arc) in enumerate(zip(path.bends(), path.arcs, strict=True), start=1):
        inside = arc.radius_mm - diameter_mm / 2.0
        if soft:
            loaded = arc.radius_mm
        elif math.isclose(arc.radius_mm, r.bend_radius_mm, abs_tol=1e-9):
            loaded = r.loaded_inside_radius_mm + r.wire_diameter_mm / 2.0
        else:
            loaded = _loaded(design, arc, diameter_mm)
        travelled = after_last + bend.feed_mm
        rows.append(
            Bend(
                number=number,
                from_start_mm=travelled,
                feed_mm=bend.feed_mm,
                rotation_deg=bend.rotation_deg,
                angle_deg=bend.angle_deg,
                loaded_angle_deg=loaded_angle_deg(bend.angle_deg, arc.radius_mm, loaded),
                inside_radius_mm=inside,
                loaded_inside_radius_mm=loaded - diameter_mm / 2.0,
                in_plane=abs(arc.normal[2]) > 1.0 - 1e-9,
            )
        )
        after_last = travelled + developed_arc_mm(bend.angle_deg, inside, diameter_mm, r.neutral_axis_factor)
    return tuple(rows), travelled, after_last + path.tail_mm()


def _loaded(design: Design, arc: Arc, diameter_mm: float) -> float:
    metal = design.radiator.metal
    try:
        return loaded_radius_mm(
            arc.radius_mm,
            diameter_mm,
            metal.youngs_modulus_gpa,
            metal.strength_coefficient_mpa,
            metal.hardening_exponent,
        )
    except ValueError as err:
        raise PlanError(str(err)) from err


def _angle(at: Point, one: Point, other: Point) -> float:
    u = [a - b for a, b in zip(one, at, strict=True)]
    v = [a - b for a, b in zip(other, at, strict=True)]
    cosine = sum(a * b for a, b in zip(u, v, strict=True)) / (math.hypot(*u) * math.hypot(*v))
    return math.acos(max(-1.0, min(1.0, cosine)))


def _xy(p: Point) -> tuple[float, float]:
    return (p[0], p[1])
