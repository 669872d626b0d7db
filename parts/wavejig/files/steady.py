"""Solids brought to one exact state, so that equal solids give equal bytes. Lengths in mm.

The kernel's booleans walk maps ordered by memory address. Where two cutters share a plane or an edge, the
address decides whose copy of it stays, and the two differ in the last bit of a double: enough to flip a
triangle where several are as good as each other, and now and then a printed digit. So the numbers of a
solid's geometry are rounded, far above that noise and far below what the kernel calls the same place
(1e-7 mm); and the solid goes once through the kernel's binary form, which leaves nothing of how it came
about. What is read back from an earlier build's bytes is then the same solid, bit for bit.
"""

from __future__ import annotations

import io
import math
from dataclasses import dataclass
from typing import Any

import cadquery as cq
from OCP.BinTools import BinTools
from OCP.BRep import BRep_Builder, BRep_Tool
from OCP.BRepBuilderAPI import BRepBuilderAPI_Copy, BRepBuilderAPI_Transform
from OCP.Geom import (
    Geom_Circle,
    Geom_CylindricalSurface,
    Geom_Line,
    Geom_Plane,
    Geom_ToroidalSurface,
    Geom_TrimmedCurve,
)
from OCP.Geom2d import Geom2d_Line
from OCP.gp import gp_Ax1, gp_Ax2, gp_Ax3, gp_Dir, gp_Dir2d, gp_Pnt, gp_Pnt2d
from OCP.ShapeUpgrade import ShapeUpgrade_RemoveLocations
from OCP.TopAbs import TopAbs_EDGE, TopAbs_FACE, TopAbs_VERTEX
from OCP.TopExp import TopExp
from OCP.TopLoc import TopLoc_Location
from OCP.TopoDS import TopoDS, TopoDS_Shape
from OCP.TopTools import TopTools_IndexedMapOfShape

from wavejig.files.step import NamedSolid

PLACE_DIGITS = 9  # 1e-9 mm: a hundredth of the kernel's own tolerance, a thousand times the noise at 500 mm
TURN_DIGITS = 12  # of a direction's parts and of radians: 1e-9 mm at the far end of a metre
_USUAL_TOLERANCE = 1e-7  # the kernel's "same place"
_SURFACES = (Geom_Plane, Geom_CylindricalSurface, Geom_ToroidalSurface)


@dataclass(frozen=True, slots=True, kw_only=True)
class SteadySolid:
    """A named and coloured solid, held as the bytes that give it. bodies: always made anew from them."""

    name: str
    data: bytes
    colour: tuple[float, float, float]

    def named(self) -> NamedSolid:
        """The solid itself."""
        shape = TopoDS_Shape()
        BinTools.Read_s(shape, io.BytesIO(self.data))
        return NamedSolid(name=self.name, shape=cq.Shape.cast(shape), colour=self.colour)


def steady(name: str, shape: cq.Shape, colour: tuple[float, float, float]) -> SteadySolid:
    """The solid in one exact state; the shape given is left as it is."""
    place = shape.wrapped.Location()
    bare = BRepBuilderAPI_Copy(shape.wrapped.Located(TopLoc_Location()), True, False).Shape()
    inner = ShapeUpgrade_RemoveLocations()  # of its faces and edges, where cutters were moved into place
    if inner.Remove(bare):
        bare = inner.GetResult()
    if not place.IsIdentity():
        bare = BRepBuilderAPI_Transform(bare, place.Transformation(), True).Shape()
    _round(bare)
    stream = io.BytesIO()
    BinTools.Write_s(bare, stream)
    return SteadySolid(name=name, data=stream.getvalue(), colour=colour)


def _round(shape: Any) -> None:
    """Round the numbers of a shape's own geometry in place. The ends of its edges' stretches go with them."""
    here, builder = TopLoc_Location(), BRep_Builder()
    for found in _each(shape, TopAbs_FACE):
        face = TopoDS.Face_s(found)
        surface = BRep_Tool.Surface_s(face, here)
        for at in _each(face, TopAbs_EDGE):
            # a seam has a line for each way; a plane has no seam
            for way in (at,) if isinstance(surface, Geom_Plane) else (at, at.Reversed()):
                edge = TopoDS.Edge_s(way)
                _flat(BRep_Tool.CurveOnSurface_s(edge, surface, here, 0.0, 0.0))
        if isinstance(surface, _SURFACES):
            surface.SetPosition(_axes(surface.Position()))
            _radii(surface)
        _tolerance(found.TShape())
    for found in _each(shape, TopAbs_EDGE):
        edge = TopoDS.Edge_s(found)
        _curve(BRep_Tool.Curve_s(edge, here, 0.0, 0.0))
        first, last = BRep_Tool.Range_s(edge)
        builder.Range(edge, round(first, TURN_DIGITS) + 0.0, round(last, TURN_DIGITS) + 0.0)
        _tolerance(found.TShape())
    for found in _each(shape, TopAbs_VERTEX):
        corner = found.TShape()
        corner.Pnt(_place(corner.Pnt()))
        _tolerance(corner)


def _each(shape: Any, kind: Any) -> list[Any]:
    """Every face, edge or vertex, once."""
    found = TopTools_IndexedMapOfShape()
    TopExp.MapShapes_s(shape, kind, found)
    return [found.FindKey(i) for i in range(1, found.Extent() + 1)]


def _curve(curve: Any) -> None:
    """An edge's line or circle in space."""
    if isinstance(curve, Geom_TrimmedCurve):
        curve = curve.BasisCurve()
    if isinstance(curve, Geom_Line):
        axis = curve.Position()
        curve.SetPosition(gp_Ax1(_place(axis.Location()), _turn(axis.Direction())))
    elif isinstance(curve, Geom_Circle):
        axes = _axes(gp_Ax3(curve.Position()))
        curve.SetPosition(gp_Ax2(axes.Location(), axes.Direction(), axes.XDirection()))
        curve.SetRadius(round(curve.Radius(), PLACE_DIGITS))


def _radii(surface: Any) -> None:
    """Of a cylinder or torus."""
    if isinstance(surface, Geom_CylindricalSurface):
        surface.SetRadius(round(surface.Radius(), PLACE_DIGITS))
    elif isinstance(surface, Geom_ToroidalSurface):
        surface.SetMajorRadius(round(surface.MajorRadius(), PLACE_DIGITS))
        surface.SetMinorRadius(round(surface.MinorRadius(), PLACE_DIGITS))


def _flat(line: Any) -> None:
    """An edge's line in the plane of a face's parameters."""
    if isinstance(line, Geom2d_Line):
        at, way = line.Location(), line.Direction()
        line.SetLocation(gp_Pnt2d(round(at.X(), TURN_DIGITS) + 0.0, round(at.Y(), TURN_DIGITS) + 0.0))
        line.SetDirection(gp_Dir2d(round(way.X(), TURN_DIGITS) + 0.0, round(way.Y(), TURN_DIGITS) + 0.0))


def _tolerance(part: Any) -> None:
    """Up to three digits; the kernel's own 1e-7 stays what it is."""
    now = part.Tolerance()
    if now != _USUAL_TOLERANCE:
        size = 10.0 ** (math.floor(math.log10(now)) - 2)
        part.Tolerance(float(f"{math.ceil(now / size - 1e-6) * size:.3g}"))


def _place(p: Any) -> Any:
    x, y, z = p.X(), p.Y(), p.Z()  # and 0.0 more, which makes -0.0 the same nought
    return gp_Pnt(round(x, PLACE_DIGITS) + 0.0, round(y, PLACE_DIGITS) + 0.0, round(z, PLACE_DIGITS) + 0.0)


def _turn(d: Any) -> Any:
    x, y, z = d.X(), d.Y(), d.Z()
    return gp_Dir(round(x, TURN_DIGITS) + 0.0, round(y, TURN_DIGITS) + 0.0, round(z, TURN_DIGITS) + 0.0)


def _axes(axes: Any) -> Any:
    """A frame with its hand kept."""
    out = gp_Ax3(_place(axes.Location()), _turn(axes.Direction()), _turn(axes.XDirection()))
    if not axes.Direct():
        out.YReverse()
    return out
