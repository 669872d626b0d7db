"""The swept wire as solids. Loads the CAD kernel.

Each straight is a cylinder and each bend a torus sector, built from the same centreline as the bend
table and joined face to face: exact analytic surfaces, with no sweep that could twist or self-cross.
"""

from __future__ import annotations

import math

import cadquery as cq
from OCP.BRepBuilderAPI import BRepBuilderAPI_Sewing
from OCP.TopoDS import TopoDS

from wavejig.geometry.path import Line, Path, Point, tangent_at_start
from wavejig.radiator.model import Piece


class SolidError(RuntimeError):
    """The kernel could not make a solid; says which piece."""


def piece_solid(piece: Piece) -> cq.Solid:
    """The piece as one closed solid of its finished shape (untrimmed end cut off), mm.

    Raises SolidError when the kernel gives anything but one valid solid of the volume that Pappus'
    theorem gives (section area times centreline length).
    """
    solid = _sweep(piece.path, piece.diameter_mm)
    area = math.pi * piece.diameter_mm**2 / 4.0
    expected = area * piece.path.length_mm
    if not solid.isValid() or abs(solid.Volume() - expected) > 1e-6 * expected:
        raise SolidError(
            f"{piece.role}: the kernel made a wire of {solid.Volume():.3f} mm3 instead of {expected:.3f}"
        )
    return solid


def _sweep(path: Path, diameter_mm: float) -> cq.Solid:
    sewing = BRepBuilderAPI_Sewing(1e-6)
    last = len(path.segments) - 1
    for number, segment in enumerate(path.segments):
        # each segment starts from a disc of its own: dragging one disc along would gather rounding, and a
        # straight a hair off its disc's normal is no longer a cylinder to the kernel
        heading = cq.Vector(*tangent_at_start(segment))
        disc = cq.Face.makeFromWires(
            cq.Wire.makeCircle(diameter_mm / 2.0, cq.Vector(*segment.start), heading), []
        )
        if isinstance(segment, Line):
            swept = cq.Solid.extrudeLinear(disc, heading * segment.length_mm)
        else:
            centre = cq.Vector(*segment.centre)
            swept = cq.Solid.revolve(disc, segment.angle_deg, centre, centre + cq.Vector(*segment.normal))
        flat = [f for f in swept.Faces() if f.geomType() == "PLANE"]
        for side in swept.Faces():
            if side.geomType() != "PLANE":
                sewing.Add(side.wrapped)
        if number == 0:
            sewing.Add(_nearest(flat, segment.start).wrapped)
        if number == last:
            sewing.Add(_nearest(flat, segment.end).wrapped)
    sewing.Perform()
    solid = cq.Solid.makeSolid(cq.Shell(TopoDS.Shell_s(sewing.SewedShape())))
    return cq.Solid(solid.wrapped.Reversed()) if solid.Volume() < 0 else solid


def _nearest(faces: list[cq.Face], point: Point) -> cq.Face:
    at = cq.Vector(*point)
    return min(faces, key=lambda f: (f.Center() - at).Length)
