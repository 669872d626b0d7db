"""Where no plastic may come: solder, the feed's hardware, wire that leaves the standoff plane, lips."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from wavejig.design.model import Design, Hole, Lip, Point2
from wavejig.geometry.path import Line
from wavejig.radiator.model import Radiator
from wavejig.spacer.profile import Frame
from wavejig.stock.hardware import screws

# Figures of the bench: common practice, no source.
SOLDER_FREE_MM = 8.0  # plastic to a joint at wire level: the wire carries the iron's heat along
FOOT_FREE_MM = 5.0  # plastic to a joint on the sheet, which spreads the heat
HARDWARE_PLAY_MM = 0.5  # plastic to screws, nuts, connector: they sit as far off centre as their holes let
LIP_PLAY_MM = 0.5  # plastic to a fold's root
IN_PLANE_MM = 0.02  # wire nearer to the standoff plane than this lies in it


@dataclass(frozen=True, slots=True, kw_only=True)
class Keepout:
    """A disc no plastic may enter, play included, at any height."""

    what: str
    x_mm: float
    y_mm: float
    radius_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Wires:
    """The radiator as points.

    points: (n, 3) along all pieces, closer than a quarter of the thinnest wire's diameter; radius_mm:
    (n,) over the insulation; flat: (n,) bool, whether the point lies in the standoff plane and is part
    of the main wire; chords: chains of (k, 2) x, y of the main wire's stretches in that plane.
    """

    points: np.ndarray
    radius_mm: np.ndarray
    flat: np.ndarray
    chords: tuple[np.ndarray, ...]


def wires(design: Design, radiator: Radiator) -> Wires:
    """Sample the radiator. Raises ValueError when none of the main wire lies in the standoff plane."""
    height = design.radiator.standoff_mm
    points, radii, flat = [], [], []
    for piece in radiator.pieces:
        bare = piece.role in ("tube", "inner")
        radius = piece.diameter_mm / 2.0 + (0.0 if bare else design.radiator.insulation_thickness_mm)
        xyz = piece.path.sample(chord_error_mm=0.002, step_mm=min(0.2, piece.diameter_mm / 4.0))
        points.append(xyz)
        radii.append(np.full(len(xyz), radius))
        level = np.abs(xyz[:, 2] - height) <= IN_PLANE_MM
        flat.append(level if piece is radiator.main else np.zeros(len(xyz), dtype=bool))
    return Wires(
        points=np.concatenate(points),
        radius_mm=np.concatenate(radii),
        flat=np.concatenate(flat),
        chords=_level_chains(radiator, height),
    )


def _level_chains(radiator: Radiator, height_mm: float) -> tuple[np.ndarray, ...]:
    chains: list[list[np.ndarray]] = [[]]
    for segment in radiator.main.path.segments:
        part = type(radiator.main.path)(segments=(segment,)).sample(chord_error_mm=0.002)
        level = bool(np.all(np.abs(part[:, 2] - height_mm) <= IN_PLANE_MM))
        if level and (not isinstance(segment, Line) or segment.length_mm > 1e-9):
            chains[-1].append(part[:, :2])
        elif chains[-1]:
            chains.append([])
    found = tuple(np.concatenate(chain) for chain in chains if chain)
    if not found:
        raise ValueError(
            f"no stretch of the main wire lies at the standoff of {height_mm:g} mm, so no spacer can "
            "carry it; check the standoff and the corners' z"
        )
    return found


def keepouts(design: Design, radiator: Radiator) -> tuple[Keepout, ...]:
    """Discs about solder joints and the feed's hardware (not wires: `wires` has those)."""
    feed, height = design.feed, design.radiator.standoff_mm
    out = [
        Keepout(what="the solder at the pin terminal", **_at(feed.terminal_pin), radius_mm=SOLDER_FREE_MM),
        Keepout(
            what="the solder at the ground terminal", **_at(feed.terminal_ground), radius_mm=SOLDER_FREE_MM
        ),
    ]
    thick = 1.5 * design.radiator.covered_diameter_mm
    for joint in radiator.joints:
        free = SOLDER_FREE_MM if joint.at[2] > height / 2.0 else FOOT_FREE_MM
        if joint.kind == "lap" and abs(joint.at[2] - height) <= thick:
            free += joint.length_mm / 2.0  # it lies along the wire, to both sides of its middle
        out.append(
            Keepout(
                what=f"the {joint.kind} joint of {joint.between[0]} and {joint.between[1]}",
                x_mm=joint.at[0],
                y_mm=joint.at[1],
                radius_mm=free,
            )
        )
    if feed.style == "legs":
        clear = feed.clear_radius_mm + HARDWARE_PLAY_MM
        out.append(Keepout(what="the connector", **_at(feed.connector_at), radius_mm=clear))
        out.append(Keepout(what="the ground leg's foot", **_at(feed.foot), radius_mm=FOOT_FREE_MM))
        out += [
            Keepout(
                what="a flange screw",
                x_mm=hole.x_mm,
                y_mm=hole.y_mm,
                radius_mm=hardware_radius_mm(hole.diameter_mm) + HARDWARE_PLAY_MM,
            )
            for hole in feed.flange_holes
        ]
    else:
        out.append(Keepout(what="the tube's solder", **_at(feed.tube_at), radius_mm=FOOT_FREE_MM))
    return tuple(out)


def loose_hardware(design: Design) -> tuple[tuple[Hole, float], ...]:
    """Holes whose bolts can be fitted after soldering, each with its hardware's radius."""
    late = [hole for hole in design.reflector.holes if hole.purpose in ("mounting", "other")]
    return tuple((hole, hardware_radius_mm(hole.diameter_mm) + HARDWARE_PLAY_MM) for hole in late)


def hardware_radius_mm(hole_mm: float) -> float:
    """Radius of the washer or head of the thickest screw that enters a hole. Source: table `screws`."""
    entering = [s for s in screws() if s.diameter_mm <= hole_mm]
    if not entering or hole_mm > 1.3 * entering[-1].diameter_mm:
        return 1.2 * hole_mm  # off the table: a washer is some 2.4 times its screw
    widest = entering[-1]
    # a nut's corners stand 2/sqrt(3) out over its flats
    nut = widest.nut_across_flats_mm * 2.0 / math.sqrt(3.0)
    return max(widest.washer_mm, widest.pan_head_mm, widest.cap_head_mm, nut) / 2.0


def flat_half_mm(design: Design, axis: str, sign: int) -> float:
    """From the centre to the end of the flat base towards an edge: the fold's root, or the cut edge."""
    sheet = design.reflector
    half = (sheet.base_x_mm if axis == "x" else sheet.base_y_mm) / 2.0
    if sheet.own is not None:
        return half - sheet.own.inset_mm
    lip = lip_at(design, axis, sign)
    if lip is None:
        return half
    setback = (sheet.inside_radius_mm + sheet.thickness_mm) * math.tan(math.radians(lip.angle_deg) / 2.0)
    return half - setback


def lip_at(design: Design, axis: str, sign: int) -> Lip | None:
    """The lip on an edge, or None."""
    edge = f"{axis}{'+' if sign > 0 else '-'}"
    return next((lip for lip in design.reflector.lips if lip.edge == edge), None)


def lip_tip_mm(design: Design, axis: str, sign: int) -> tuple[float, float]:
    """How far out and how high the sheet reaches at an edge: its lip's outermost and highest, or the cut edge."""
    sheet = design.reflector
    half = (sheet.base_x_mm if axis == "x" else sheet.base_y_mm) / 2.0
    lip = lip_at(design, axis, sign)
    if lip is None:
        return half, 0.0
    turn, thick = math.radians(lip.angle_deg), sheet.thickness_mm
    # its height is measured along the outer face, from where the outer faces would meet
    top = lip.height_mm * math.sin(turn) + max(0.0, thick * math.cos(turn)) - thick
    return half + max(0.0, lip.height_mm * math.cos(turn)), top


def axis_of(frame: Frame) -> tuple[str, int]:
    """Axis and sign of a frame's direction."""
    dx, dy = frame.direction
    return ("y" if dy else "x"), (1 if dx + dy > 0 else -1)


def edge_room_mm(design: Design, at: Point2) -> float:
    """From a point of the base to the end of its flat, the nearest way."""
    own = design.reflector.own
    if own is not None and own.shape == "round":
        return flat_half_mm(design, "x", 1) - math.hypot(*at)
    return min(
        flat_half_mm(design, axis, 1 if value > 0 else -1) - abs(value)
        for axis, value in zip("xy", at, strict=True)
    )


def limits_mm(design: Design, frame: Frame, widest_mm: float = 0.0) -> tuple[float, float, float]:
    """Room of a piece: greatest v at rest, greatest v while pulled (infinite without a lip), greatest |u|.

    widest_mm: the piece's own greatest |u|: in a round dish the room along v is less beside the middle.
    """
    dx, dy = frame.direction
    along, across = ("y", "x") if dy else ("x", "y")
    sign = 1 if dx + dy > 0 else -1
    own = design.reflector.own
    if own is not None:
        v, u = flat_half_mm(design, along, sign) - LIP_PLAY_MM, flat_half_mm(design, across, 1) - LIP_PLAY_MM
        if own.shape == "round":
            v = math.sqrt(max(v * v - widest_mm * widest_mm, 0.0))
        return v, v, u
    rest = flat_half_mm(design, along, sign)
    lipped = lip_at(design, along, sign) is not None
    if lipped:
        rest -= LIP_PLAY_MM
    sides = []
    for side in (-1, 1):
        play = LIP_PLAY_MM if lip_at(design, across, side) is not None else 0.0
        sides.append(flat_half_mm(design, across, side) - play)
    return rest, rest if lipped else math.inf, min(sides)


def _at(point: Point2) -> dict[str, float]:
    return {"x_mm": point[0], "y_mm": point[1]}
