"""Corner points of the feed's wires: legs down to the sheet, jogs, laps, the tube's inner conductor."""

from __future__ import annotations

import math

from wavejig.geometry.path import Point

# A jog leans 45 degrees where it can: steep enough to be short, flat enough to bend by hand; up to 75 when
# the height is short. Common practice, no source.
JOG_LEANS_DEG = (45.0, 55.0, 65.0, 75.0)
# Straight left above the landing, to stand in a hole or on a flange. Common practice, no source.
STRAIGHT_FOOT_MM = 1.0
# A smaller step aside is not bent: the leg leans by it, unseen, where a jog would be two bends of a few degrees
# with no straight between. Less than half of what a leg's place is held to; common practice, no source.
LEAST_JOG_MM = 0.1


class PlanError(ValueError):
    """A radiator that cannot be laid out; the message says where and what to change."""


def leg_points(
    top: tuple[float, float], foot: tuple[float, float], top_z: float, bottom_z: float, radius_mm: float
) -> list[Point]:
    """Corners of a leg below its top bend: straight down (or nearly), or jogged aside to `foot` and down.

    top, foot: x, y at the upper and lower end; top_z: where the leg's straight may begin; bottom_z: its
    lower end; radius_mm: centreline radius of the jog's two bends. The jog stands as high as it can, so
    that the legs run at their final spacing most of the way. Returns the points below the top bend,
    lower end last. Raises PlanError when the height does not hold the jog.
    """
    aside = math.dist(top, foot)
    if aside < LEAST_JOG_MM:
        return [(foot[0], foot[1], bottom_z)]
    landing = max(bottom_z, 0.0) + STRAIGHT_FOOT_MM
    needed = math.inf
    for lean_deg in JOG_LEANS_DEG:
        lean = math.radians(lean_deg)
        if aside < 2.0 * radius_mm * (1.0 - math.cos(lean)):
            lean = math.acos(1.0 - aside / (2.0 * radius_mm)) * (1.0 - 1e-9)
        setback = radius_mm * math.tan(lean / 2.0)
        drop = aside / math.tan(lean)
        needed = min(needed, drop + 2.0 * setback)
        upper = top_z - setback - 1e-6
        lower = upper - drop
        if lower - setback >= landing:
            return [(top[0], top[1], upper), (foot[0], foot[1], lower), (foot[0], foot[1], bottom_z)]
    raise PlanError(
        f"the ground leg must step aside by {aside:.2f} mm, which takes {needed:.2f} mm of height between "
        f"{top_z:.2f} and {landing:.2f} mm above the sheet; use a smaller connector, a tube, a wider feed "
        "gap or a larger standoff"
    )


def aside_from(origin: Point, towards: Point, distance_mm: float) -> Point:
    """The point `distance_mm` from `origin` on the way to `towards`."""
    length = math.dist(origin, towards)
    t = distance_mm / length
    return (
        origin[0] + (towards[0] - origin[0]) * t,
        origin[1] + (towards[1] - origin[1]) * t,
        origin[2] + (towards[2] - origin[2]) * t,
    )
