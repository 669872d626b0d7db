"""The folded tray as one solid: flat base, bends with true radii, flanges. Loads the CAD kernel.

Lengths in mm.
"""

from __future__ import annotations

import math

import cadquery as cq
import numpy as np

from wavejig.geometry.plane import Circle, Contour
from wavejig.reflector.corners import base_corners, flange_corners
from wavejig.reflector.model import Tray, TrayError, TrayLip, along, outward
from wavejig.reflector.outline import rounded


def tray_solid(tray: Tray) -> cq.Solid:
    """One valid, closed solid of the folded sheet, base at z = -T..0.

    Raises TrayError when the kernel does not join base and lips into one valid solid.
    """
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
