"""The user's own dish as one solid, for the assembly. Loads the CAD kernel. Lengths in mm.

The wall is as thick as the floor, measured square to it. The radius between floor and wall is modelled on a
round dish; a box's edges stay sharp.
"""

from __future__ import annotations

import math

import cadquery as cq

from wavejig.geometry.plane import Contour
from wavejig.reflector.model import Tray, TrayError
from wavejig.reflector.own import floor_outline, profile

_OVER_MM = 1.0  # how far cutters reach past what they cut


def own_solid(tray: Tray) -> cq.Solid:
    """One valid, closed solid, floor at z = -T..0. Raises TrayError when the kernel gives anything else."""
    own = tray.own
    assert own is not None
    body = _round(tray) if own.shape == "round" else _box(tray)
    t = tray.thickness_mm
    holes = [
        cq.Solid.makeCylinder(
            c.diameter_mm / 2.0, t + 2.0 * _OVER_MM, cq.Vector(c.x_mm, c.y_mm, -t - _OVER_MM)
        )
        for c in tray.circles
    ]
    made = (body.cut(*holes) if holes else body).clean()
    solids = made.Solids()
    if len(solids) != 1 or not solids[0].isValid():
        raise TrayError(
            f"own dish: the kernel made {len(solids)} solids of it, need one valid one; change its radius or slope "
            "slightly"
        )
    solid: cq.Solid = solids[0]
    return solid


def _outside(tray: Tray) -> tuple[float, float]:
    """How much further out the outside of the wall stands than its inside (at one height), and at z = -T."""
    own = tray.own
    assert own is not None
    s = math.radians(own.slope_deg)
    wall = tray.thickness_mm / math.cos(s)
    return wall, wall - tray.thickness_mm * math.tan(s)


def _round(tray: Tray) -> cq.Shape:
    """The profile turned about z: rounded between floor and wall, inside and outside."""
    own = tray.own
    assert own is not None
    r, t, depth = tray.half_x_mm, tray.thickness_mm, own.depth_mm
    wall, foot = _outside(tray)
    points = profile(own)
    s = math.radians(own.slope_deg)

    def rounded(radius: float, corner: float, level: float) -> list[cq.Edge]:
        """Floor and wall meeting at (corner, level): floor's end, arc, and the wall's begin."""
        inset = radius * math.tan((math.pi / 2.0 - s) / 2.0)
        centre = (corner - inset, level + radius)
        begin = (corner - inset, level)
        end = (corner + inset * math.sin(s), level + inset * math.cos(s))
        half = (math.pi / 2.0 - s) / 2.0
        middle = (centre[0] + radius * math.sin(half), centre[1] - radius * math.cos(half))
        return [cq.Edge.makeThreePointArc(*(cq.Vector(x, 0.0, z) for x, z in (begin, middle, end)))]

    inner = rounded(own.radius_mm, r, 0.0) if own.radius_mm > 0.0 else []
    outer = rounded(own.radius_mm + t, r + foot, -t)
    top = [(r + x, z) for x, z in points[1:]]
    if own.rim_mm > 0.0:
        top += [(top[-1][0], depth - t), (r + own.reach_mm(depth - t) + wall, depth - t)]
    else:
        top.append((top[-1][0] + wall, depth))
    start = inner[0].endPoint().toTuple() if inner else (r, 0.0, 0.0)
    chain = [(start[0], start[2]), *top, (outer[0].endPoint().x, outer[0].endPoint().z)]
    foot_at, axis = (outer[0].startPoint().x, -t), 0.0
    floor_end = (inner[0].startPoint().x, 0.0) if inner else (r, 0.0)
    lines = [_line(a, b) for a, b in zip(chain, chain[1:], strict=False)]
    edges = [_line((axis, 0.0), floor_end), *inner, *lines, *outer]
    edges += [_line(foot_at, (axis, -t)), _line((axis, -t), (axis, 0.0))]
    wire = cq.Wire.assembleEdges(edges)
    return cq.Solid.revolve(wire, [], 360.0, cq.Vector(0.0, 0.0, 0.0), cq.Vector(0.0, 0.0, 1.0))


def _line(a: tuple[float, float], b: tuple[float, float]) -> cq.Edge:
    return cq.Edge.makeLine(cq.Vector(a[0], 0.0, a[1]), cq.Vector(b[0], 0.0, b[1]))


def _box(tray: Tray) -> cq.Shape:
    own = tray.own
    assert own is not None
    half, t, depth = (tray.half_x_mm, tray.half_y_mm), tray.thickness_mm, own.depth_mm
    wall, foot = _outside(tray)
    above = own.reach_mm(_OVER_MM)
    body = _frustum(
        floor_outline(own, half, foot), -t, floor_outline(own, half, own.reach_mm(depth) + wall), depth
    )
    if own.rim_mm > 0.0:
        rim = floor_outline(own, half, own.reach_mm(depth) + own.rim_mm)
        body = body.fuse(_frustum(rim, depth - t, rim, depth))
    top = floor_outline(own, half, own.reach_mm(depth) + above)
    return body.cut(_frustum(floor_outline(own, half), 0.0, top, depth + _OVER_MM))


def _frustum(low: Contour, z_low: float, high: Contour, z_high: float) -> cq.Shape:
    wires = [
        cq.Wire.makePolygon([cq.Vector(x, y, z) for x, y, _ in c.vertices], close=True)
        for c, z in ((low, z_low), (high, z_high))
    ]
    return cq.Solid.makeLoft(wires, True)
