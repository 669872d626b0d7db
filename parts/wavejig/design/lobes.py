"""Corners of each family's main wire: plane geometry of rhombic and round lobes about the feed.

A lobe lies to one side of the feed; its two sides start at the terminals, half the feed gap either
side of the x axis, and all its four sides are equal (design conventions, section 5). z is 0 here: the
standoff is added by the caller.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from wavejig.design.model import Corner

Point = tuple[float, float, float]

# Slope of the jogs where the four-lobe's wires cross: steep enough to be short, flat enough to need only
# slight bends. Common practice, no source.
JOG_SLOPE_DEG = 20.0
# Air wanted between the crossing wires beyond one wire diameter, for what springback leaves.
# Common practice, no source.
JOG_MARGIN_MM = 0.2


class LobeError(ValueError):
    """A lobe that cannot be drawn from its numbers."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Lobes:
    """Main-wire corners from the pin terminal on, and which of them is the ground terminal.

    ground: index into corners, or None when the walk ends there (one lobe). far: the corner opposite
    the feed of each lobe (of the outer ones in the four-lobe), where a post may stand.
    """

    corners: tuple[Corner, ...]
    ground: int | None
    far: tuple[tuple[float, float], ...]
    round_radius_mm: float = 0.0  # centreline radius of round lobes, else 0


def rhombus(side_mm: float, angle_deg: float, gap_mm: float) -> tuple[Point, Point, Point, Point]:
    """Upper side corner, far corner, lower side corner of a right-hand lobe, then its upper terminal.

    Four equal sides, `angle_deg` at the far corner, terminals at (0, +-gap/2).
    Raises LobeError when the gap is too wide for the sides to meet.
    """
    half = math.radians(angle_deg) / 2.0
    up = side_mm * math.sin(half)
    rise = up - gap_mm / 2.0
    if rise < 0 or rise >= side_mm:
        raise LobeError(
            f"a feed gap of {gap_mm:g} mm is too wide for sides of {side_mm:g} mm at a lobe angle of "
            f"{angle_deg:g} deg"
        )
    along = math.sqrt(side_mm**2 - rise**2)
    far = along + side_mm * math.cos(half)
    return (along, up, 0.0), (far, 0.0, 0.0), (along, -up, 0.0), (0.0, gap_mm / 2.0, 0.0)


def quad(side_mm: float, angle_deg: float, gap_mm: float, radius_mm: float) -> Lobes:
    """One lobe, centred over the origin; the walk ends at the ground terminal."""
    upper, far, lower, pin = rhombus(side_mm, angle_deg, gap_mm)
    ground = (pin[0], -pin[1], 0.0)
    shift = -far[0] / 2.0
    points = [(x + shift, y, z) for x, y, z in (pin, upper, far, lower, ground)]
    return Lobes(corners=_rounded(points, radius_mm), ground=None, far=(points[2][:2],))


def biquad(side_mm: float, angle_deg: float, gap_mm: float, radius_mm: float) -> Lobes:
    """Two lobes along x; out through the right one, back through the left one."""
    upper, far, lower, pin = rhombus(side_mm, angle_deg, gap_mm)
    ground = (0.0, -pin[1], 0.0)
    points = [pin, upper, far, lower, ground, _left(lower), _left(far), _left(upper), pin]
    return Lobes(corners=_rounded(points, radius_mm), ground=4, far=(far[:2], _left(far)[:2]))


def double_biquad(
    side_mm: float, angle_deg: float, gap_mm: float, radius_mm: float, diameter_mm: float
) -> Lobes:
    """Four lobes: the outer ones hang on the far corners of the inner, both wires running straight on.

    Where they cross, the wire that comes first is raised and the other lowered, so that their
    centrelines stay at least two diameters apart.
    """
    upper, cross, lower, pin = rhombus(side_mm, angle_deg, gap_mm)
    half = math.radians(angle_deg) / 2.0
    dx, dy = side_mm * math.cos(half), side_mm * math.sin(half)
    outer_lower = (cross[0] + dx, -dy, 0.0)
    outer_upper = (cross[0] + dx, dy, 0.0)
    end = (cross[0] + 2.0 * dx, 0.0, 0.0)
    lift, reach = jog(diameter_mm, radius_mm, angle_deg)
    if 2.0 * radius_mm + reach > side_mm:
        raise LobeError(
            f"sides of {side_mm:g} mm leave no room for the crossing's jog of {reach:.2f} mm beside bends of "
            f"{radius_mm:g} mm"
        )
    ground = (0.0, -pin[1], 0.0)
    right = [
        pin, upper, *_jog_points(upper, cross, outer_lower, lift, reach), outer_lower, end, outer_upper,
        *_jog_points(outer_upper, cross, lower, -lift, reach), lower, ground,
    ]  # fmt: skip
    # the other half is this one turned half round about the feed, so over and under fall alike
    left = [(-x, -y, z) for x, y, z in right]
    points = [*right, *left[1:]]
    return Lobes(
        corners=_rounded(points, radius_mm),
        ground=len(right) - 1,
        far=(end[:2], (-end[0], 0.0)),
    )


def twin_loop(diameter_mm: float, angle_deg: float, gap_mm: float, radius_mm: float) -> Lobes:
    """Two round lobes, each met from the terminals by two straights `angle_deg` apart, tangent to it."""
    rho = diameter_mm / 2.0
    half = math.radians(angle_deg) / 2.0
    centre_x = (rho - gap_mm / 2.0 * math.cos(half)) / math.sin(half)
    reach = centre_x**2 + (gap_mm / 2.0) ** 2 - rho**2
    if reach <= 0:
        raise LobeError(
            f"a feed gap of {gap_mm:g} mm lies inside the round lobe of {diameter_mm:g} mm; narrow it"
        )
    straight = math.sqrt(reach)
    # heading turns clockwise from half the angle above +x by half a turn plus the angle, in three steps
    turn = (math.pi + 2.0 * half) / 3.0
    setback = rho * math.tan(turn / 2.0)
    pin = (0.0, gap_mm / 2.0, 0.0)
    heading = half
    x, y = pin[0], pin[1]
    right: list[Point] = []
    step = straight + setback
    for _ in range(3):
        x, y = x + step * math.cos(heading), y + step * math.sin(heading)
        right.append((x, y, 0.0))
        heading -= turn
        step = 2.0 * setback
    ground = (0.0, -pin[1], 0.0)
    left = [(-px, -py, 0.0) for px, py, _ in right]
    points = [pin, *right, ground, *left, pin]
    radii = [0.0, rho, rho, rho, radius_mm, rho, rho, rho, 0.0]
    corners = tuple(Corner(at=p, radius_mm=r) for p, r in zip(points, radii, strict=True))
    far = centre_x + rho
    return Lobes(corners=corners, ground=4, far=((far, 0.0), (-far, 0.0)), round_radius_mm=rho)


def own(points: tuple[Point, ...], ground: int | None, radius_mm: float) -> Lobes:
    """The user's own corners, as given. ground: index of the ground terminal, None = the last."""
    at = points[len(points) // 2] if ground is None else points[ground]
    return Lobes(corners=_rounded(list(points), radius_mm), ground=ground, far=(at[:2],))


def jog(diameter_mm: float, radius_mm: float, angle_deg: float) -> tuple[float, float]:
    """Height of a jog's apex corner above the plane, and its half length, for wires crossing at `angle_deg`.

    The apex is rounded, which lowers it, and the wires slope away beside it, which brings them nearer
    than at the crossing itself: both are allowed for, so that the centrelines nowhere come closer than
    two diameters (plus JOG_MARGIN_MM).
    """
    slope = math.radians(JOG_SLOPE_DEG)
    wanted = 2.0 * diameter_mm + JOG_MARGIN_MM
    # points t from the crossing on both wires are 2 t sin(angle/2) apart in plan (or cos, whichever is
    # less) and wanted' - 2 t tan(slope) in height: least at the foot of that line's perpendicular
    spread = min(math.sin(math.radians(angle_deg) / 2.0), math.cos(math.radians(angle_deg) / 2.0))
    widened = wanted * math.hypot(spread, math.tan(slope)) / spread
    rounding = radius_mm * (1.0 / math.cos(slope) - 1.0)
    height = widened / 2.0 + rounding
    return height, height / math.tan(slope)


def _jog_points(start: Point, cross: Point, end: Point, lift: float, reach: float) -> list[Point]:
    length = math.dist(start, end)
    ux, uy = (end[0] - start[0]) / length, (end[1] - start[1]) / length
    return [
        (cross[0] - ux * reach, cross[1] - uy * reach, 0.0),
        (cross[0], cross[1], lift),
        (cross[0] + ux * reach, cross[1] + uy * reach, 0.0),
    ]


def _rounded(points: list[Point], radius_mm: float) -> tuple[Corner, ...]:
    last = len(points) - 1
    return tuple(Corner(at=p, radius_mm=0.0 if i in (0, last) else radius_mm) for i, p in enumerate(points))


def _left(p: Point) -> Point:
    return (-p[0], p[1], p[2])
