"""Posts that stay: one under the far corner of each lobe, screwed to the sheet from behind."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np

from wavejig.design.model import Conflict, Design, Point2
from wavejig.geometry.plane import Circle, Contour
from wavejig.spacer.keepout import Keepout, Wires, flat_half_mm, keepouts
from wavejig.spacer.model import Post
from wavejig.radiator.model import Radiator
from wavejig.stock.hardware import screw, tap_drill_mm

# Proportions: common practice, no source.
WALL_MM = 2.4  # plastic round the screw, and beside the channel
FLOOR_MM = 2.0  # plastic between the screw's end and the wire
SCREW_GRIP = 1.5  # least thread engaged, in screw diameters
MOST_GRIP = 4.0  # more thread than this holds no better
OFF_WIRE_MM = 0.5  # the wire must cross the post this near its middle, or the channel breaks its edge


def plan_posts(
    design: Design, radiator: Radiator, wires: Wires
) -> tuple[tuple[Post, ...], tuple[Conflict, ...]]:
    """A post at each of the design's places; what cannot be had becomes a conflict and that post is left out."""
    posts: list[Post] = []
    conflicts: list[Conflict] = []
    discs = keepouts(design, radiator)
    for number, at in enumerate(design.spacer.posts, start=1):
        made = _post(design, wires, discs, number, at)
        if isinstance(made, Conflict):
            conflicts.append(made)
        else:
            posts.append(made)
    if not design.spacer.posts:
        conflicts.append(
            _conflict(
                "spacer.style",
                "no place for a post is known for this radiator",
                'Use style = "block".',
            )
        )
    return tuple(posts), tuple(conflicts)


def _post(
    design: Design, wires: Wires, discs: tuple[Keepout, ...], number: int, at: Point2
) -> Post | Conflict:
    r = design.radiator
    covered, height = r.covered_diameter_mm, r.standoff_mm
    width = covered + 2.0 * design.printer.clearance_mm
    thread = screw(design.spacer.post_screw)
    where = f"the post at ({at[0]:.1f}, {at[1]:.1f}) mm"
    away = np.hypot(*(wires.points[:, :2] - np.array(at)).T)
    nearest = int(np.argmin(np.where(wires.flat, away, np.inf)))
    # the wire rounds the corner inside the point the post is asked for: stand under the wire itself
    middle = (float(wires.points[nearest, 0]), float(wires.points[nearest, 1]))
    rounding = r.bend_radius_mm if r.lobe_diameter_mm is None else r.lobe_diameter_mm
    if away[nearest] > max(rounding, covered):
        return _conflict(
            "spacer.style",
            f"{where} misses the wire in the standoff plane by {away[nearest]:.1f} mm",
            'Use style = "block", or move the corner.',
        )
    hole = tap_drill_mm(design.spacer.post_screw) + design.printer.hole_allowance_mm
    # flats: the channel and both walls, and a wall all round the screw
    across = math.ceil(2.0 * max(width + 2.0 * WALL_MM, hole + 2.0 * WALL_MM, 2.5 * thread.diameter_mm)) / 2.0
    circle = across / math.sqrt(3.0)
    seat = height - covered / 2.0
    depth = min(seat - FLOOR_MM, MOST_GRIP * thread.diameter_mm)
    if depth < SCREW_GRIP * thread.diameter_mm:
        return _conflict(
            "radiator.standoff",
            f"{where} leaves {max(depth, 0.0):.1f} mm of thread for its {thread.name} screw and needs "
            f"{SCREW_GRIP * thread.diameter_mm:.1f} mm",
            'Use style = "block", or a larger standoff.',
        )
    over = np.hypot(*(wires.points[:, :2] - np.array(middle)).T) < circle + wires.radius_mm
    stray = over & ~wires.flat
    if np.any(stray):
        off = wires.points[stray, 2] - height
        worst = float(off[np.argmax(np.abs(off))])
        return _conflict(
            "spacer.style",
            f"over {where} a wire runs {abs(worst):.1f} mm {'above' if worst > 0 else 'below'} the standoff "
            "plane; a post needs it flat there",
            'Use style = "block".',
        )
    for disc in discs:
        room = math.dist(middle, (disc.x_mm, disc.y_mm)) - disc.radius_mm
        if room < circle:
            return _conflict(
                "spacer.style",
                f"{where}, {2 * circle:.1f} mm over its corners, has {max(room, 0.0):.1f} mm beside {disc.what} and "
                f"needs {circle:.1f} mm",
                'Use style = "block", or a longer side.',
            )
    for axis, value in zip("xy", middle, strict=True):
        room = flat_half_mm(design, axis, 1 if value > 0 else -1) - abs(value)
        if room < circle:
            return _conflict(
                "reflector.base",
                f"{where} stands {max(room, 0.0):.1f} mm from the end of the flat base along {axis} and needs {circle:.1f} mm",
                "Make the base larger.",
            )
    outward = math.atan2(middle[1], middle[0])
    corners = [
        (
            middle[0] + circle * math.cos(outward + math.radians(30.0 + 60.0 * k)),
            middle[1] + circle * math.sin(outward + math.radians(30.0 + 60.0 * k)),
        )
        for k in range(6)
    ]
    return Post(
        name=f"spacer-post-{number}",
        outline=Contour.polygon(corners),
        top_mm=height + covered / 2.0,
        seat_z_mm=seat,
        channel=_channel(wires, middle, circle + width),
        channel_width_mm=width,
        hole=Circle(x_mm=middle[0], y_mm=middle[1], diameter_mm=hole),
        hole_depth_mm=depth,
        screw=thread.name,
    )


def _channel(wires: Wires, middle: Point2, reach_mm: float) -> tuple[Point2, ...]:
    """The stretch of wire that passes `middle`, as far as `reach_mm` from it."""
    for chain in wires.chords:
        away = np.hypot(*(chain - np.array(middle)).T)
        hits = [i for i, (a, b) in enumerate(pairwise(chain)) if _distance(np.array(middle), a, b) < reach_mm]
        if hits and float(away[max(hits[0], 0) : hits[-1] + 2].min()) < reach_mm:
            part = chain[hits[0] : hits[-1] + 2]
            return tuple((float(x), float(y)) for x, y in part)
    raise AssertionError("the post's middle was taken from this wire")


def _distance(p: np.ndarray, a: np.ndarray, b: np.ndarray) -> float:
    along = b - a
    square = float(along @ along)
    t = 0.0 if square < 1e-18 else float(np.clip((p - a) @ along / square, 0.0, 1.0))
    return float(np.linalg.norm(a + t * along - p))


def _conflict(key: str, message: str, remedy: str) -> Conflict:
    return Conflict(topic="spacer", key=key, message=message, remedy=remedy)
