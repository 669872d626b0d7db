"""Hold-downs: printed clamps that press the block's pieces onto the sheet while the feed is soldered.

A hold-down is a C in side view. Its lower jaw lies under the sheet as far in as the piece's back, its back
stands outside the edge (and its lip, if it has one), and its arm reaches in over the lip to the back edge of
the piece's grip. Arm and jaw press on the same spot from both sides, so the sheet itself is not bent. The
mouth is made narrower than what it grips and springs open. The arm's underside rises inwards there, so it
pushes the piece towards the feed and never draws it away. It is pushed on from outside and pulled off the
same way, before the piece.

Lengths in mm, forces in N, stresses in MPa. Side views are in v, along the piece's withdrawal, and z.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from wavejig.design.model import Design
from wavejig.design.version import version_code
from wavejig.geometry.lettering import strokes, text_width_mm
from wavejig.geometry.plane import Contour, Stroke
from wavejig.spacer import marks
from wavejig.spacer.bed import fits_upright
from wavejig.spacer.keepout import (
    Keepout,
    Wires,
    axis_of,
    hardware_radius_mm,
    lip_at,
    lip_tip_mm,
)
from wavejig.spacer.model import BlockPiece, HoldDown
from wavejig.spacer.profile import Frame
from wavejig.stock.processes import plastic

# Common practice, no source, as all proportions here.
WIDTH_MM = 10.0
FORCE_N = 8.0  # wanted on each piece: many times the radiator's weight, and no effort to pull off
MOST_FORCE_N = 30.0
PRESS_MM = (
    0.8,
    2.5,
)  # a mouth that springs less is lost in the printer's error; one that springs more is slow
DEPTHS_MM = tuple(4.5 + 0.5 * k for k in range(24))  # of arm, back and jaw in side view
LEAST_SPRING_MM = 20.0  # arm: shorter ones are too stiff
MOST_REACH_MM = 120.0  # longer ones are soft, and in the way
STRAIN_SHARE = 0.5  # of what the plastic may take: inner corners are sharp
WEDGE_DEG = 8.0  # underside over the grip; below the angle of friction, so it stays where it is pushed to
LEAD_DEG = 30.0
BEARING_MM = 3.0  # wedge inwards of the grip's back edge
BEFORE_MM = 1.0  # and outwards of it
LIP_PLAY_MM = 0.3  # arm over the lip as it is pushed on
LEAD_OVER_MM = 0.5  # tip over the grip before it springs
LEAST_TIP_MM = 1.5
WIRE_BESIDE_MM, WIRE_BELOW_MM = 1.0, 3.0  # plastic to wire, in plan or else upwards
_JAW_LEAD_MM = (1.5, 1.0)  # chamfer of the jaw's tip
_SHIFT_MM = 2.0
SOFT_WAY = "Hold the pieces down with tape or a weight while soldering."


@dataclass(frozen=True, slots=True, kw_only=True)
class _Grip:
    """What is gripped: v and height of the piece's back edge, u of its ends; the sheet's edge and lip."""

    frame: Frame
    back: float
    height: float
    low_u: float
    high_u: float
    edge: float
    lip_top: float
    spine: float  # v of the back's inner face
    shoulder: float  # height of a step before it that meets the edge; 0 where the back itself does
    stop: float


@dataclass(frozen=True, slots=True, kw_only=True)
class _Spring:
    depth: float
    press: float
    force: float
    strain: float


def plan_hold_downs(
    design: Design, sampled: Wires, discs: Sequence[Keepout], pieces: Sequence[BlockPiece]
) -> tuple[tuple[HoldDown, ...], tuple[str, ...]]:
    """One for each piece, alike in name where alike in shape; and a note for pieces that can have none."""
    made: list[HoldDown] = []
    without: dict[str, list[str]] = {}
    for piece in pieces:
        one = _plan(design, sampled, discs, piece)
        if isinstance(one, str):
            without.setdefault(one, []).append(piece.name)
        else:
            made.append(one)
    shapes = list(dict.fromkeys(_shape(h) for h in made))
    number = {shape: f"-{k}" if len(shapes) > 1 else "" for k, shape in enumerate(shapes, start=1)}
    named = tuple(replace(h, name=f"hold-down{number[_shape(h)]}") for h in made)
    notes = tuple(
        f"{', '.join(who)} can have no printed hold-down: {why}. {SOFT_WAY}" for why, who in without.items()
    )
    return named, notes


def _shape(h: HoldDown) -> tuple[object, ...]:
    corner = h.profile.vertices[0]
    moved = [(round(x - corner[0], 3), round(z - corner[1], 3)) for x, z, _ in h.profile.vertices]
    return (*moved, round(h.width_mm, 3))


def _plan(design: Design, sampled: Wires, discs: Sequence[Keepout], piece: BlockPiece) -> HoldDown | str:
    """The hold-down of one piece, or why it can have none."""
    grip = _grip(design, piece)
    if isinstance(grip, str):
        return grip
    spring = _spring(design, grip)
    if isinstance(spring, str):
        return spring
    profile = _profile(design, grip, spring)
    v0, z0, v1, z1 = profile.bounds()
    if not (fits_upright(design, v1 - v0, z1 - z0) or fits_upright(design, z1 - z0, v1 - v0)):
        return f"it would measure {v1 - v0:.0f} x {z1 - z0:.0f} mm and the bed is too small"
    width = min(WIDTH_MM, grip.high_u - grip.low_u)
    middle = _place(design, sampled, discs, grip, (v0, v1), width)
    if middle is None:
        return "wire, solder or a hole's hardware is where it would sit"
    text, lines = _marks(design, grip, spring)
    return HoldDown(
        name="hold-down",
        piece=piece.name,
        withdrawal=piece.withdrawal,
        middle_mm=middle,
        width_mm=width,
        profile=profile,
        contact_mm=(grip.back, grip.height),
        edge_mm=grip.edge,
        press_mm=spring.press,
        force_n=spring.force,
        strain=spring.strain,
        strain_limit=_strain_limit(design),
        off_mm=math.ceil(grip.edge - v0 + 1.0),
        text=text,
        marks=lines,
        marks_depth_mm=marks.DEPTH_MM,
        mark_width_mm=marks.line_mm(design.printer.nozzle_mm),
    )


def _grip(design: Design, piece: BlockPiece) -> _Grip | str:
    if design.reflector.own is not None:
        return "the dish's wall stands round it"
    frame = Frame(direction=piece.withdrawal)
    top = piece.layers[-1]
    uv = frame.local(top.contour.points())
    back = float(uv[:, 1].max())
    ends = uv[uv[:, 1] >= back - 1e-6, 0]
    axis, sign = axis_of(frame)
    edge, lip_top = lip_tip_mm(design, axis, sign)
    lip = lip_at(design, axis, sign)
    stop = edge + design.printer.clearance_mm
    spine = max(stop, back + LEAST_SPRING_MM)
    shoulder = 0.0
    if spine > stop:
        if lip is not None and abs(lip.angle_deg - 90.0) > 1e-6:
            return "the lip leans too near to it"
        # it must meet the lip's flat outside, above the fold's outer radius
        shoulder = design.reflector.thickness_mm if lip is None else design.reflector.inside_radius_mm + 2.0
        shoulder += 0.0 if lip is None else design.reflector.thickness_mm
    return _Grip(
        frame=frame,
        back=back,
        height=top.top_mm,
        low_u=float(ends.min()),
        high_u=float(ends.max()),
        edge=edge,
        lip_top=lip_top,
        spine=spine,
        shoulder=shoulder,
        stop=stop,
    )


def _strain_limit(design: Design) -> float:
    """Share of the allowable stress of printed parts over Young's modulus (table `plastics`)."""
    p = plastic(design.spacer.plastic)
    return STRAIN_SHARE * p.allowable_stress_mpa / (p.youngs_modulus_gpa * 1000.0)


def _spring(design: Design, g: _Grip) -> _Spring | str:
    """The thinnest C that pushes as wanted within the room over the lip and the plastic's strain.

    A C of one depth h, arm and jaw of length L from the load to the back's middle, H apart: a pair of forces
    F opens it by F (2 L^3 / 3 + L^2 H) / (E I), with the greatest moment F L in the back (Castigliano, from
    memory).
    """
    if g.spine - g.back > MOST_REACH_MM:
        return f"the sheet's edge is {g.spine - g.back:.0f} mm from it"
    wedge = math.tan(math.radians(WEDGE_DEG)) * BEFORE_MM
    most = min(PRESS_MM[1], g.height - g.lip_top - LIP_PLAY_MM - wedge)
    if most < PRESS_MM[0]:
        return (
            f"the lip ends {g.height - g.lip_top:.1f} mm below the grip's top and the arm must pass over it"
        )
    width = min(WIDTH_MM, g.high_u - g.low_u)
    e = plastic(design.spacer.plastic).youngs_modulus_gpa * 1000.0
    for h in DEPTHS_MM:
        length = g.spine + h / 2.0 - g.back
        apart = g.height + design.reflector.thickness_mm + h
        give = (2.0 / 3.0 * length**3 + length**2 * apart) / (e * width * h**3 / 12.0)
        press = max(FORCE_N * give, PRESS_MM[0])
        force = press / give
        strain = 6.0 * force * length / (e * width * h * h)
        if press > most or strain > _strain_limit(design) or h - press - LEAD_OVER_MM - wedge < LEAST_TIP_MM:
            continue
        if force > MOST_FORCE_N:
            break  # deeper ones are stiffer still
        return _Spring(depth=h, press=press, force=force, strain=strain)
    return "no springy shape of it is both strong and soft enough"


def _profile(design: Design, g: _Grip, s: _Spring) -> Contour:
    """Side view in v and z, counter-clockwise from the jaw's tip."""
    under = -design.reflector.thickness_mm
    slope, lead = math.tan(math.radians(WEDGE_DEG)), math.tan(math.radians(LEAD_DEG))
    at_back = g.height - s.press
    arm = at_back - BEFORE_MM * slope
    bearing = at_back + BEARING_MM * slope
    tip_z = max(g.height + LEAD_OVER_MM, bearing)
    tip = g.back - BEARING_MM - (tip_z - bearing) / lead
    jaw = g.back - BEARING_MM - _JAW_LEAD_MM[0]
    out = g.spine + s.depth
    points = [
        (jaw, under - s.depth),
        (out, under - s.depth),
        (out, arm + s.depth),
        (tip, arm + s.depth),
        (tip, tip_z),
        (g.back - BEARING_MM, bearing),
        (g.back + BEFORE_MM, arm),
        (g.spine, arm),
    ]
    if g.shoulder:
        points += [(g.spine, under + g.shoulder), (g.stop, under + g.shoulder), (g.stop, under)]
    else:
        points.append((g.spine, under))
    points += [(jaw + _JAW_LEAD_MM[0], under), (jaw, under - _JAW_LEAD_MM[1])]
    return Contour.polygon(points)


def _place(
    design: Design,
    sampled: Wires,
    discs: Sequence[Keepout],
    g: _Grip,
    reach: tuple[float, float],
    width: float,
) -> float | None:
    """u of its middle: the grip's own, or the nearest to it with nothing in the way above or below the sheet."""
    spots = [(d.x_mm, d.y_mm, d.radius_mm) for d in discs]
    spots += [
        (h.x_mm, h.y_mm, hardware_radius_mm(h.diameter_mm))
        for h in design.reflector.holes
        if h.purpose != "drain"
    ]
    at = g.frame.local(np.array([s[:2] for s in spots]).reshape(-1, 2))
    radii = np.array([s[2] for s in spots])
    # wire low enough passes below the arm, if it does not go through the sheet
    z, r = sampled.points[:, 2], sampled.radius_mm
    free = (z - r >= 0.0) & (z + r + WIRE_BELOW_MM <= g.height - PRESS_MM[1])
    at = np.vstack([at, g.frame.local(sampled.points[~free, :2])])
    radii = np.concatenate([radii, r[~free] + WIRE_BESIDE_MM])
    middle = (g.low_u + g.high_u) / 2.0
    spare = (g.high_u - g.low_u - width) / 2.0
    shifts = [0.0]
    for k in range(1, int(spare / _SHIFT_MM) + 1):
        shifts += [k * _SHIFT_MM, -k * _SHIFT_MM]
    for shift in shifts:
        du = np.maximum(np.abs(at[:, 0] - middle - shift) - width / 2.0, 0.0)
        dv = np.maximum(np.maximum(reach[0] - at[:, 1], at[:, 1] - reach[1]), 0.0)
        if not np.any(np.hypot(du, dv) < radii):
            return middle + shift
    return None


def _marks(design: Design, g: _Grip, s: _Spring) -> tuple[str, tuple[Stroke, ...]]:
    """Name and version along the arm's side, as much as fits."""
    line = marks.line_mm(design.printer.nozzle_mm)
    least, edge = marks.least_text_mm(design.printer.nozzle_mm), marks.edge_mm(design.printer.nozzle_mm)
    low = g.height - s.press
    v0, v1 = g.back + BEFORE_MM, g.spine + s.depth
    height = min(marks.MOST_TEXT_MM, s.depth - 2.0 * edge - line)
    state = f"V{version_code(design)}"
    for text in (f"{design.name} {state}", state):
        for size in (height, least):
            if not least - 1e-9 <= size <= height + 1e-9:
                continue
            wide = text_width_mm(text, size) + 2.0 * edge + line
            if wide <= v1 - v0:
                middle = low - BEFORE_MM * math.tan(math.radians(WEDGE_DEG)) + s.depth / 2.0
                return text, strokes(text, size, x_mm=(v0 + v1) / 2.0, y_mm=middle, align="centre")
    return "", ()
