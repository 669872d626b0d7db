"""The tight box of a shape, from its exact faces.

The kernel's own tight box is right but for some parts of a torus, where it grows by millimetres with the
place the face's seam happens to have; those faces are bounded here by their closed form.
"""

from __future__ import annotations

import math
from typing import Any

from OCP.Bnd import Bnd_Box
from OCP.BRepAdaptor import BRepAdaptor_Surface
from OCP.BRepBndLib import BRepBndLib
from OCP.GeomAbs import GeomAbs_Torus
from OCP.gp import gp_Pnt

Box = tuple[float, float, float, float, float, float]


def tight_box(shape: Any) -> Box:
    """(x0, y0, z0, x1, y1, z1) of a cadquery Shape in mm."""
    box = Bnd_Box()
    for face in shape.Faces():
        surface = BRepAdaptor_Surface(face.wrapped)
        if surface.GetType() == GeomAbs_Torus:
            for edge in face.Edges():
                BRepBndLib.AddOptimal_s(edge.wrapped, box, False, False)
            for point in _torus_extremes(surface):
                box.Add(point)
        else:
            BRepBndLib.AddOptimal_s(face.wrapped, box, False, False)
    found: Box = box.Get()
    return found


def _torus_extremes(surface: Any) -> list[Any]:
    """Points inside a torus face, between its bounds, where a coordinate has an extreme.

    P(u, v) = C + (R + r cos v) (cos u X + sin u Y) + r sin v Z. A coordinate along e is stationary where
    tan u = e.Y / e.X, and, with a = e.(cos u X + sin u Y), where tan v = e.Z / a.
    """
    torus = surface.Torus()
    axes = torus.Position()
    directions = (axes.XDirection(), axes.YDirection(), axes.Direction())
    u0, u1 = surface.FirstUParameter(), surface.LastUParameter()
    v0, v1 = surface.FirstVParameter(), surface.LastVParameter()
    out = []
    for coordinate in ("X", "Y", "Z"):
        ex, ey, ez = (getattr(d, coordinate)() for d in directions)
        for u in (math.atan2(ey, ex), math.atan2(-ey, -ex)):
            outward = ex * math.cos(u) + ey * math.sin(u)
            for v in (math.atan2(ez, outward), math.atan2(-ez, -outward)):
                if _within(u, u0, u1) and _within(v, v0, v1):
                    point = gp_Pnt()
                    surface.D0(u, v, point)
                    out.append(point)
    return out


def _within(angle: float, low: float, high: float) -> bool:
    turned = low + (angle - low) % (2.0 * math.pi)
    return turned <= high + 1e-12
