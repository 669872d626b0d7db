"""A dish, box or lid that is there already: its floor as a plan, and the inside of its wall.

Seen as everywhere: the floor's radiator-side face is z = 0, the wall rises towards the radiator. Lengths in mm.
"""

from __future__ import annotations

import math

from wavejig.design.model import OwnShape, ReflectorDesign
from wavejig.design.own import floor_outline
from wavejig.geometry.plane import Contour
from wavejig.reflector.model import CornerPractice, Tray, TrayError


def own_tray(reflector: ReflectorDesign, practice: CornerPractice) -> Tray:
    """The dish as a tray without lips whose outline is the inside floor, sharp edge to sharp edge.

    Raises TrayError for sizes that make no dish.
    """
    own = reflector.own
    assert own is not None
    for what, value in (
        ("sheet thickness", reflector.thickness_mm),
        ("floor along x", reflector.base_x_mm),
        ("floor along y", reflector.base_y_mm),
        ("depth", own.depth_mm),
    ):
        if not 0.0 < value < math.inf:
            raise TrayError(f"{what}: got {value:g} mm, need more than 0")
    half = (reflector.base_x_mm / 2.0, reflector.base_y_mm / 2.0)
    return Tray(
        kind="own",
        thickness_mm=reflector.thickness_mm,
        inside_radius_mm=own.radius_mm,
        half_x_mm=half[0],
        half_y_mm=half[1],
        lips=(),
        corner_style=reflector.corner_style,
        holes=reflector.holes,
        up=reflector.up,
        practice=practice,
        outline=floor_outline(own, half),
        own=own,
    )


def profile(own: OwnShape) -> tuple[tuple[float, float], ...]:
    """(outward from the floor's sharp edge, height) of the inside: floor's edge, wall's top, rim's end."""
    out = [(0.0, 0.0), (own.reach_mm(own.depth_mm), own.depth_mm)]
    if own.rim_mm > 0.0:
        out.append((out[-1][0] + own.rim_mm, own.depth_mm))
    return tuple(out)


def floor_room_mm(tray: Tray, x_mm: float, y_mm: float) -> float:
    """From a point of the floor to its sharp edge (below 0 outside)."""
    if tray.own is not None and tray.own.shape == "round":
        return tray.half_x_mm - math.hypot(x_mm, y_mm)
    return min(tray.half_x_mm - abs(x_mm), tray.half_y_mm - abs(y_mm))


def surface_mm2(tray: Tray) -> float:
    """Area of the inside of floor, wall and rim, sharp between floor and wall, holes closed."""
    own = tray.own
    assert own is not None
    a, b = tray.half_x_mm, tray.half_y_mm

    def round_area(d: float) -> float:
        return math.pi * (a + d) ** 2

    def box_area(d: float) -> float:
        return 4.0 * (a + d) * (b + d)

    seen = round_area if own.shape == "round" else box_area
    top = own.reach_mm(own.depth_mm)
    # a slanted strip is larger than its plan by 1 / sin(slope); an upright one is its edge times the depth
    if own.slope_deg > 0.0:
        wall = (seen(top) - seen(0.0)) / math.sin(math.radians(own.slope_deg))
    else:
        wall = (2.0 * math.pi * a if own.shape == "round" else 4.0 * (a + b)) * own.depth_mm
    return seen(0.0) + wall + seen(top + own.rim_mm) - seen(top)


def outside_mm(tray: Tray) -> tuple[float, float]:
    """How much further out the outside of the wall stands than its inside (at one height), and at z = -T."""
    own = tray.own
    assert own is not None
    s = math.radians(own.slope_deg)
    wall = tray.thickness_mm / math.cos(s)
    return wall, wall - tray.thickness_mm * math.tan(s)


def section(tray: Tray, axis: str) -> Contour:
    """The dish cut through its middle: (across, height), sharp between floor and wall, counter-clockwise."""
    own = tray.own
    assert own is not None
    half, t, depth = tray.half_mm(f"{axis}+"), tray.thickness_mm, own.depth_mm
    wall, foot = outside_mm(tray)
    top = half + own.reach_mm(depth)
    if own.rim_mm > 0.0:
        far = top + own.rim_mm
        side = [(half + own.reach_mm(depth - t) + wall, depth - t), (far, depth - t), (far, depth)]
    else:
        side = [(top + wall, depth)]
    right = [(half + foot, -t), *side, (top, depth), (half, 0.0)]
    return Contour.polygon([*right, *((-x, z) for x, z in reversed(right))])
