"""Posts that stay: one under the far corner of each lobe, screwed to the sheet from behind."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np

from wavejig.design.model import Conflict, Design, Point2
from wavejig.geometry.plane import Circle, Contour
from wavejig.radiator.model import Radiator
from wavejig.spacer.keepout import Keepout, Wires, edge_room_mm, flat_half_mm, keepouts
from wavejig.spacer.model import Post
from wavejig.stock.hardware import screw, tap_drill_mm

# Proportions: common practice, no source.
WALL_MM = 2.4  # plastic round the screw, and beside the channel
FLOOR_MM = 2.0  # plastic between the screw's end and the wire
SCREW_GRIP = 1.5  # least thread engaged, in screw diameters
MOST_GRIP = 4.0  # more thread than this holds no better
MOST_ASIDE_MM = 6.0  # the wire may round the corner this far from the post's axis


def plan_posts(
    design: Design, radiator: Radiator, sampled: Wires
) -> tuple[tuple[Post, ...], tuple[Conflict, ...]]:
    """A post at each of the design's places. One that cannot be had becomes a conflict and is left out."""
    posts: list[Post] = []
    conflicts: list[Conflict] = []
    discs = keepouts(design, radiator)
    for number, at in enumerate(design.spacer.posts, start=1):
        made = _post(design, sampled, discs, number, at)
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
    design: Design, sampled: Wires, discs: tuple[Keepout, ...], number: int, at: Point2
) -> Post | Conflict:
    r = design.radiator
    covered, height = r.covered_diameter_mm, r.standoff_mm
    width = covered + 2.0 * design.printer.clearance_mm
    thread = screw(design.spacer.post_screw)
    where = f"the post at ({at[0]:.1f}, {at[1]:.1f}) mm"
    away = np.hypot(*(sampled.points[:, :2] - np.array(at)).T)
    # the sheet's hole is under the corner; the wire rounds it, a little inside
    aside = float(away[sampled.flat].min())
    if aside > MOST_ASIDE_MM:
        return _conflict(
            "spacer.style",
            f"{where} is {aside:.1f} mm from the nearest wire in the standoff plane and may be "
            f"{MOST_ASIDE_MM:g} mm",
            'Use style = "block", or a smaller bend radius.',
        )
    hole = tap_drill_mm(design.spacer.post_screw) + design.printer.hole_allowance_mm
    # across the flats: the channel and its walls, and a wall all round the screw
    half = max(aside + width / 2.0 + WALL_MM, hole / 2.0 + WALL_MM)
    across = math.ceil(4.0 * half) / 2.0
    circle = across / math.sqrt(3.0)
    seat, top = height - covered / 2.0, height + covered / 2.0
    depth = min(seat - FLOOR_MM, MOST_GRIP * thread.diameter_mm)
    if depth < SCREW_GRIP * thread.diameter_mm:
        return _conflict(
            "radiator.standoff",
            f"{where} leaves {max(depth, 0.0):.1f} mm of thread for its {thread.name} screw and needs "
            f"{SCREW_GRIP * thread.diameter_mm:.1f} mm",
            'Use style = "block", or a larger standoff.',
        )
    if top > design.printer.bed_z_mm:
        return _conflict(
            "printer.bed",
            f"{where} is {top:.1f} mm tall and the printer holds {design.printer.bed_z_mm:g} mm",
            "Use a larger printer.",
        )
    stray = ~sampled.flat & (away < circle + sampled.radius_mm)
    if np.any(stray):
        off = sampled.points[stray, 2] - height
        worst = float(off[np.argmax(np.abs(off))])
        return _conflict(
            "spacer.style",
            f"over {where} a wire runs {abs(worst):.1f} mm {'above' if worst > 0 else 'below'} the standoff "
            "plane; a post needs it flat there",
            'Use style = "block".',
        )
    for disc in discs:
        room = math.dist(at, (disc.x_mm, disc.y_mm)) - disc.radius_mm
        if room < circle:
            return _conflict(
                "spacer.style",
                f"{where}, {2 * circle:.1f} mm over its corners, has {max(room, 0.0):.1f} mm beside "
                f"{disc.what} and needs {circle:.1f} mm",
                'Use style = "block", or a longer side.',
            )
    for axis, value in zip("xy", at, strict=True):
        room = flat_half_mm(design, axis, 1 if value > 0 else -1) - abs(value)
        if room < circle:
            return _conflict(
                "reflector.base",
                f"{where} stands {max(room, 0.0):.1f} mm from the end of the flat base along {axis} and "
                f"needs {circle:.1f} mm",
                "Make the base larger.",
            )
    if edge_room_mm(design, at) < circle:  # a round dish: along neither axis, but between them
        return _conflict(
            "reflector.own",
            f"{where} stands {max(edge_room_mm(design, at), 0.0):.1f} mm from the end of the dish's flat floor and "
            f"needs {circle:.1f} mm",
            "Take a larger dish.",
        )
    return Post(
        name=f"spacer-post-{number}",
        outline=_hexagon(at, circle),
        top_mm=top,
        seat_z_mm=seat,
        channels=_channels(sampled, at, circle + width),
        channel_width_mm=width,
        hole=Circle(x_mm=at[0], y_mm=at[1], diameter_mm=hole),
        hole_depth_mm=depth,
        screw=thread.name,
    )


def _hexagon(at: Point2, circle_mm: float) -> Contour:
    """A hexagon with two flats across the line to the sheet's middle, so that all posts look alike."""
    outward = math.atan2(at[1], at[0])
    turns = [outward + math.radians(30.0 + 60.0 * k) for k in range(6)]
    return Contour.polygon(
        [(at[0] + circle_mm * math.cos(t), at[1] + circle_mm * math.sin(t)) for t in turns]
    )


def _channels(sampled: Wires, at: Point2, reach_mm: float) -> tuple[tuple[Point2, ...], ...]:
    """The stretches of wire over a post, each from before the post to beyond it."""
    out = []
    for chain in sampled.chords:
        near = [i for i, (a, b) in enumerate(pairwise(chain)) if _distance(np.array(at), a, b) < reach_mm]
        for first, last in _stretches(near):
            out.append(tuple((float(x), float(y)) for x, y in chain[first : last + 2]))
    return tuple(out)


def _stretches(numbers: list[int]) -> list[tuple[int, int]]:
    """First and last of each run of consecutive numbers."""
    breaks = [k for k in range(1, len(numbers)) if numbers[k] != numbers[k - 1] + 1]
    starts, ends = [0, *breaks], [*(k - 1 for k in breaks), len(numbers) - 1]
    return [(numbers[a], numbers[b]) for a, b in zip(starts, ends, strict=True)] if numbers else []


def _distance(p: np.ndarray, a: np.ndarray, b: np.ndarray) -> float:
    """From a point to a chord."""
    along = b - a
    square = float(along @ along)
    t = 0.0 if square < 1e-18 else float(np.clip((p - a) @ along / square, 0.0, 1.0))
    return float(np.linalg.norm(a + t * along - p))


def _conflict(key: str, message: str, remedy: str) -> Conflict:
    return Conflict(topic="spacer", key=key, message=message, remedy=remedy)
