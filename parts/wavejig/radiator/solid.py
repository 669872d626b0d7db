"""The swept wire as solids. Loads the CAD kernel.

Each straight is a cylinder and each bend a torus sector, built from the same centreline as the bend
table and joined face to face: exact analytic surfaces, with no sweep that could twist or self-cross.
"""

from __future__ import annotations

import math

import cadquery as cq
from OCP.BRepBuilderAPI import BRepBuilderAPI_Sewing
from OCP.TopoDS import TopoDS

from wavejig.geometry.path import Line, Path, tangent_at_start
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
    start = cq.Vector(*path.start)
    heading = cq.Vector(*path.start_direction())
    disc = cq.Face.makeFromWires(cq.Wire.makeCircle(diameter_mm / 2.0, start, heading), [])
    sewing = BRepBuilderAPI_Sewing(1e-6)
    sewing.Add(disc.wrapped)
    edge = disc.outerWire().Edges()[0]
    end_cap = disc
    for segment in path.segments:
        if isinstance(segment, Line):
            along = cq.Vector(*segment.end) - cq.Vector(*segment.start)
            swept = cq.Solid.extrudeLinear(end_cap, along)
        else:
            centre = cq.Vector(*segment.centre)
            axis_end = centre + cq.Vector(*segment.normal)
            swept = _revolved(end_cap, segment.angle_deg, centre, axis_end)
        sides, end_cap = _sides_and_end(swept, segment, diameter_mm)
        for side in sides:
            sewing.Add(side.wrapped)
    sewing.Add(end_cap.wrapped)
    sewing.Perform()
    del edge
    shell = cq.Shell(TopoDS.Shell_s(sewing.SewedShape()))
    solid = cq.Solid.makeSolid(shell)
    if solid.Volume() < 0:
        solid = cq.Solid(solid.wrapped.Reversed())
    return solid


def _revolved(face: cq.Face, angle_deg: float, centre: cq.Vector, axis_end: cq.Vector) -> cq.Shape:
    return cq.Solid.revolve(face, angle_deg, centre, axis_end)


def _sides_and_end(swept: cq.Shape, segment: object, diameter_mm: float) -> tuple[list[cq.Face], cq.Face]:
    sides = [f for f in swept.Faces() if f.geomType() != "PLANE"]
    caps = [f for f in swept.Faces() if f.geomType() == "PLANE"]
    end = segment.end  # type: ignore[attr-defined]
    cap = min(caps, key=lambda f: (f.Center() - cq.Vector(*end)).Length)
    return sides, cap


def start_heading(path: Path) -> tuple[float, float, float]:
    """Unit heading at the path's start."""
    return tangent_at_start(path.segments[0])
