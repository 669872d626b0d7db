"""The folded tray as one solid: flat base, bends with true radii, flanges. Loads the CAD kernel.

A dish of the user's own: its wall is as thick as its floor, measured square to it. The radius between floor and
wall is modelled on a round dish; a box's edges stay sharp.

Lengths in mm.
"""

from __future__ import annotations

import itertools
import math

import cadquery as cq
import numpy as np

from wavejig.design.own import floor_outline
from wavejig.geometry.plane import Circle, Contour
from wavejig.reflector.corners import base_corners, flange_corners
from wavejig.reflector.model import Tray, TrayError, TrayLip, along, outward
from wavejig.reflector.outline import rounded
from wavejig.reflector.own import outside_mm, profile

_OVER_MM = 1.0  # how far cutters reach past what they cut


def tray_solid(tray: Tray) -> cq.Solid:
    """One valid, closed solid of the folded sheet, base at z = -T..0.

    Raises TrayError when the kernel does not join base and lips into one valid solid.
    """
    if tray.own is not None:
        return _own_solid(tray)
    t = tray.thickness_mm
    base = _slab(rounded(base_corners(tray)), tray.circles, np.eye(3), np.zeros(3), t)
    parts = [piece for lip in tray.lips for piece in (_bend(tray, lip), _flange(tray, lip))]
    if not parts:
        return base
    joined = base.fuse(*parts).clean()
    solids = joined.Solids()
    if len(solids) != 1 or not solids[0].isValid():
        raise TrayError(
            f"folded tray: the kernel made {len(solids)} solids of base and {len(tray.lips)} lips, need one "
            "valid one; change the inside bend radius or the lip angle slightly"
        )
    solid: cq.Solid = solids[0]
    return solid


def _slab(
    outline: Contour, holes: tuple[Circle, ...], axes: np.ndarray, origin: np.ndarray, thickness: float
) -> cq.Solid:
    """A flat piece: `outline` in the plane of axes[0], axes[1] through origin, thickness along -axes[2]."""

    def at(x: float, y: float) -> cq.Vector:
        return cq.Vector(*(origin + x * axes[0] + y * axes[1]).tolist())

    edges = []
    vertices = outline.vertices
    for i, (x, y, bulge) in enumerate(vertices):
        x1, y1, _ = vertices[(i + 1) % len(vertices)]
        if bulge:
            # the arc's middle stands off the chord's middle by bulge * half the chord, to the right
            mx, my = (x + x1 + bulge * (y1 - y)) / 2.0, (y + y1 - bulge * (x1 - x)) / 2.0
            edges.append(cq.Edge.makeThreePointArc(at(x, y), at(mx, my), at(x1, y1)))
        else:
            edges.append(cq.Edge.makeLine(at(x, y), at(x1, y1)))
    normal = cq.Vector(*axes[2].tolist())
    inner = [
        cq.Wire.assembleEdges([cq.Edge.makeCircle(h.diameter_mm / 2.0, at(h.x_mm, h.y_mm), normal)])
        for h in holes
    ]
    outer = cq.Wire.assembleEdges(edges)
    return cq.Solid.extrudeLinear(outer, inner, normal * -thickness)


def _frame(edge: str) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Outward, along and upward unit vectors of an edge; right-handed."""
    return np.array([*outward(edge), 0.0]), np.array([*along(edge), 0.0]), np.array([0.0, 0.0, 1.0])


def _flange(tray: Tray, lip: TrayLip) -> cq.Solid:
    n, u, z = _frame(lip.edge)
    b = math.radians(lip.angle_deg)
    r = tray.inside_radius_mm
    up = math.cos(b) * n + math.sin(b) * z
    inward = math.cos(b) * z - math.sin(b) * n
    foot = n * (lip.tangent_mm + r * math.sin(b)) + z * (r - r * math.cos(b))
    return _slab(
        rounded(flange_corners(lip, tray.practice)), (), np.array([up, u, inward]), foot, tray.thickness_mm
    )


def _bend(tray: Tray, lip: TrayLip) -> cq.Solid:
    """The bend: a sector between inside and outside radius, drawn along the edge; sharp inside when R = 0."""
    n, u, z = _frame(lip.edge)
    b = math.radians(lip.angle_deg)
    r, t = tray.inside_radius_mm, tray.thickness_mm
    start = -lip.left.half_mm

    def at(radius: float, angle: float) -> cq.Vector:
        across, high = lip.tangent_mm + radius * math.sin(angle), r - radius * math.cos(angle)
        return cq.Vector(*(n * across + u * start + z * high).tolist())

    edges = [
        cq.Edge.makeLine(at(r, 0.0), at(r + t, 0.0)),
        cq.Edge.makeThreePointArc(at(r + t, 0.0), at(r + t, b / 2.0), at(r + t, b)),
        cq.Edge.makeLine(at(r + t, b), at(r, b)),
    ]
    if r > 0.0:
        edges.append(cq.Edge.makeThreePointArc(at(r, b), at(r, b / 2.0), at(r, 0.0)))
    width = lip.left.half_mm + lip.right.half_mm
    return cq.Solid.extrudeLinear(cq.Wire.assembleEdges(edges), [], cq.Vector(*(u * width).tolist()))


def _own_solid(tray: Tray) -> cq.Solid:
    """One valid, closed solid, floor at z = -T..0. Raises TrayError when the kernel gives anything else."""
    own = tray.own
    assert own is not None
    body = _turned(tray) if own.shape == "round" else _box(tray)
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


def _turned(tray: Tray) -> cq.Shape:
    """The profile turned about z: rounded between floor and wall, inside and outside."""
    own = tray.own
    assert own is not None
    r, t, depth = tray.half_x_mm, tray.thickness_mm, own.depth_mm
    wall, foot = outside_mm(tray)
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
    lines = [_line(a, b) for a, b in itertools.pairwise(chain)]
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
    wall, foot = outside_mm(tray)
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
