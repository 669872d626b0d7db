"""Engraving by grafting: grooves are sunk into a flat top face without a boolean operation. Loads the kernel.

A boolean with some twenty letters costs the kernel ten times what the part itself does. The grooves lie
inside one flat face, so the new boundary is known: that face with their outlines as holes, their walls
and floors, and the islands inside closed letters. Edges are shared as they are, nothing is sewn.
"""

from __future__ import annotations

from collections.abc import Sequence

import cadquery as cq
import numpy as np
from OCP.BRep import BRep_Builder
from OCP.BRepLib import BRepLib
from OCP.ShapeFix import ShapeFix_Shell
from OCP.TopoDS import TopoDS_Shell

from wavejig.geometry.region import Region

_LEVEL_MM = 1e-5


def ring(points: np.ndarray, z_mm: float) -> cq.Wire:
    """A closed polygon of (n, 2) x, y at a height."""
    return cq.Wire.makePolygon([cq.Vector(float(x), float(y), z_mm) for x, y in points], close=True)


def prism(region: Region, bottom_mm: float, top_mm: float) -> cq.Solid:
    """A region between two heights."""
    face = cq.Face.makeFromWires(
        ring(region.outer, bottom_mm), [ring(hole, bottom_mm) for hole in region.holes]
    )
    return cq.Solid.extrudeLinear(face, cq.Vector(0.0, 0.0, top_mm - bottom_mm))


def engrave(solid: cq.Solid, grooves: Sequence[Region], floor_mm: float, top_mm: float) -> cq.Solid:
    """Sink grooves from the flat faces at height `top_mm` down to `floor_mm`.

    Each groove must lie inside one of those faces, apart from the others and from its edges. Raises
    ValueError for one that lies in none.
    """
    faces = solid.Faces()
    tops = [f for f in faces if f.geomType() == "PLANE" and _at_height(f, top_mm)]
    kept = [f for f in faces if not any(f.isSame(top) for top in tops)]
    holes: list[list[cq.Wire]] = [[] for _ in tops]
    for groove in grooves:
        owner = _owner(tops, groove, top_mm)
        sides = prism(groove, floor_mm, top_mm).Faces()
        (lid,) = [f for f in sides if _at_height(f, top_mm)]
        holes[owner].append(lid.outerWire())
        kept += [f for f in sides if not f.isSame(lid)]
        kept += [cq.Face.makeFromWires(island) for island in lid.innerWires()]
    for top, wires in zip(tops, holes, strict=True):
        kept.append(cq.Face.makeFromWires(top.outerWire(), [*top.innerWires(), *wires]) if wires else top)
    return _closed(kept)


def _owner(tops: Sequence[cq.Face], groove: Region, top_mm: float) -> int:
    """Which top face a groove lies in."""
    x, y = groove.outer[0]
    point = cq.Vertex.makeVertex(float(x), float(y), top_mm)
    if len(tops) == 1:
        return 0
    for number, top in enumerate(tops):
        box = top.BoundingBox()
        if box.xmin <= x <= box.xmax and box.ymin <= y <= box.ymax and point.distance(top) < _LEVEL_MM:
            return number
    raise ValueError(f"engraving at ({x:.2f}, {y:.2f}) mm lies in no flat face at height {top_mm:g} mm")


def _closed(faces: Sequence[cq.Face]) -> cq.Solid:
    shell = TopoDS_Shell()
    builder = BRep_Builder()
    builder.MakeShell(shell)
    for face in faces:
        builder.Add(shell, face.wrapped)
    turned = ShapeFix_Shell()
    turned.FixFaceOrientation(shell)
    solid = cq.Solid.makeSolid(cq.Shell(turned.Shell()))
    BRepLib.OrientClosedSolid_s(solid.wrapped)
    return solid


def _at_height(face: cq.Face, z_mm: float) -> bool:
    box = face.BoundingBox()
    return bool(max(abs(box.zmin - z_mm), abs(box.zmax - z_mm)) < _LEVEL_MM)
