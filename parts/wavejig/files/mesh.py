"""Closed triangle meshes, and the tessellation of solids into them. Lengths in mm.

Vocabulary: *chord error* = furthest distance between a curved face and its flat triangles; *watertight* =
every edge is run through exactly once in each direction, so the triangles bound a volume and agree on its
outside.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from OCP.BRep import BRep_Tool
from OCP.BRepBuilderAPI import BRepBuilderAPI_Copy
from OCP.BRepGProp import BRepGProp
from OCP.BRepMesh import BRepMesh_IncrementalMesh
from OCP.GProp import GProp_GProps
from OCP.IMeshTools import (
    IMeshTools_MeshAlgoType_Delabella,
    IMeshTools_MeshAlgoType_Watson,
    IMeshTools_Parameters,
)
from OCP.TopAbs import TopAbs_FACE, TopAbs_REVERSED
from OCP.TopExp import TopExp_Explorer
from OCP.TopLoc import TopLoc_Location
from OCP.TopoDS import TopoDS

from wavejig.files.box import tight_box
from wavejig.files.errors import MeshError

CHORD_ERROR_MM = 0.02  # common practice, no source: a tenth of what a desktop printer holds
ANGLE_DEG = 12.0  # common practice, no source: thin wires stay round to the eye
# Corners nearer than this in x, y and z are one corner. It is below the step of a 32-bit float at 200 mm, the
# best an STL file can hold, and above the kernel's own noise.
WELD_MM = 1e-5
_USUAL, _OTHER = IMeshTools_MeshAlgoType_Watson, IMeshTools_MeshAlgoType_Delabella


@dataclass(frozen=True, slots=True, kw_only=True)
class Measure:
    """Figures of a solid that its files must reproduce: volume, surface, box (x0, y0, z0, x1, y1, z1)."""

    volume_mm3: float
    area_mm2: float
    bounds_mm: tuple[float, float, float, float, float, float]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Mesh:
    """A closed surface: vertices (n, 3) float64 in mm, faces (m, 3) int64, counter-clockwise from outside.

    Both arrays are read-only copies. Raises MeshError unless every edge is used once in each direction, every
    number is finite and the enclosed volume is positive; `name` is the piece, for that message and for files.
    """

    name: str
    vertices: np.ndarray
    faces: np.ndarray

    def __post_init__(self) -> None:
        vertices = np.array(self.vertices, dtype=np.float64)
        faces = np.array(self.faces, dtype=np.int64)
        for array, what in ((vertices, "vertices"), (faces, "faces")):
            if array.ndim != 2 or array.shape[1:] != (3,) or not len(array):
                raise MeshError(f"{self.name}: got {what} of shape {array.shape}, need (n, 3) with n > 0.")
            array.flags.writeable = False
        if not np.isfinite(vertices).all():
            raise MeshError(f"{self.name}: got a vertex that is not finite, need numbers in mm.")
        if faces.min() < 0 or faces.max() >= len(vertices):
            raise MeshError(
                f"{self.name}: got a face with vertex {faces.max()}, need 0 to {len(vertices) - 1}."
            )
        object.__setattr__(self, "vertices", vertices)
        object.__setattr__(self, "faces", faces)
        _require_closed(self.name, vertices, faces)
        if self.volume_mm3 <= 0.0:
            raise MeshError(
                f"{self.name}: got an enclosed volume of {self.volume_mm3:g} mm3, need more than 0; "
                "the faces are inside out or the solid is flat."
            )

    @property
    def volume_mm3(self) -> float:
        """Enclosed volume, by the divergence theorem about the first vertex."""
        a, b, c = (self.vertices[self.faces[:, i]] - self.vertices[0] for i in range(3))
        return float(np.einsum("ij,ij->", a, np.cross(b, c)) / 6.0)

    @property
    def area_mm2(self) -> float:
        """Surface."""
        return float(np.linalg.norm(self._cross(), axis=1).sum() / 2.0)

    @property
    def normals(self) -> np.ndarray:
        """(m, 3) float64 outward unit normals; zero for a triangle without area."""
        cross = self._cross()
        length = np.linalg.norm(cross, axis=1, keepdims=True)
        normals: np.ndarray = np.divide(cross, length, out=np.zeros_like(cross), where=length > 0.0)
        return normals

    @property
    def bounds_mm(self) -> tuple[float, float, float, float, float, float]:
        """(x0, y0, z0, x1, y1, z1)."""
        low, high = self.vertices.min(axis=0), self.vertices.max(axis=0)
        return (*low.tolist(), *high.tolist())

    def _cross(self) -> np.ndarray:
        a, b, c = (self.vertices[self.faces[:, i]] for i in range(3))
        return np.cross(b - a, c - a)


def tessellate(
    shape: Any, *, name: str, chord_error_mm: float = CHORD_ERROR_MM, angle_deg: float = ANGLE_DEG
) -> Mesh:
    """Triangles of a solid, within `chord_error_mm` of its faces and `angle_deg` from facet to facet.

    shape: cadquery Shape holding closed solids; it is left untouched, and an earlier tessellation of it has
    no say (the kernel would keep a finer one). name: the piece, used in messages and files.
    Raises MeshError when a face cannot be meshed or the result does not close, ValueError for a chord error
    or angle that is not positive.
    """
    if not (chord_error_mm > 0.0 and 0.0 < angle_deg <= 90.0):
        raise ValueError(
            f"{name}: got a chord error of {chord_error_mm} mm and {angle_deg} deg, need more than 0 mm "
            "and an angle up to 90 deg."
        )
    try:
        return Mesh(name=name, **_weld(*_triangles(shape, name, chord_error_mm, angle_deg, _USUAL)))
    except MeshError:
        # the usual algorithm now and then leaves a piece of a large flat face with many holes unfilled
        return Mesh(name=name, **_weld(*_triangles(shape, name, chord_error_mm, angle_deg, _OTHER)))


def _triangles(
    shape: Any, name: str, chord_error_mm: float, angle_deg: float, algorithm: Any
) -> tuple[np.ndarray, np.ndarray]:
    """Corners (n, 3) and triangles (m, 3) of all faces, not welded yet."""
    copy = BRepBuilderAPI_Copy(shape.wrapped, True, False).Shape()
    parameters = IMeshTools_Parameters()
    parameters.Deflection, parameters.Angle = chord_error_mm, float(np.radians(angle_deg))
    parameters.Relative, parameters.InParallel, parameters.MeshAlgo = False, False, algorithm
    BRepMesh_IncrementalMesh(copy, parameters)
    vertices: list[np.ndarray] = []
    faces: list[np.ndarray] = []
    count = 0
    explorer = TopExp_Explorer(copy, TopAbs_FACE)
    while explorer.More():
        corners, triangles = _face_triangles(name, TopoDS.Face_s(explorer.Current()))
        vertices.append(corners)
        faces.append(triangles + count)
        count += len(corners)
        explorer.Next()
    if not vertices:
        raise MeshError(f"{name}: got a shape without faces, need a solid.")
    return np.vstack(vertices), np.vstack(faces)


def measure(shape: Any) -> Measure:
    """Volume, surface and tight box of a cadquery Shape, from its exact faces and not from triangles."""
    skin = GProp_GProps()
    BRepGProp.SurfaceProperties_s(shape.wrapped, skin)
    return Measure(volume_mm3=volume_mm3(shape), area_mm2=skin.Mass(), bounds_mm=tight_box(shape))


def volume_mm3(shape: Any) -> float:
    """Volume of a cadquery Shape, from its exact faces."""
    solid = GProp_GProps()
    BRepGProp.VolumeProperties_s(shape.wrapped, solid)
    return float(solid.Mass())


def _face_triangles(name: str, face: Any) -> tuple[np.ndarray, np.ndarray]:
    """Corners (n, 3) in mm and triangles (m, 3) of one meshed face, outward counter-clockwise."""
    location = TopLoc_Location()
    mesh = BRep_Tool.Triangulation_s(face, location)
    if mesh is None:
        raise MeshError(
            f"{name}: the kernel could not mesh one of its faces; simplify the solid or its chord error."
        )
    move = location.Transformation()
    points = (mesh.Node(i).Transformed(move) for i in range(1, mesh.NbNodes() + 1))
    corners = np.array([(p.X(), p.Y(), p.Z()) for p in points])
    triangles = np.array([mesh.Triangle(i).Get() for i in range(1, mesh.NbTriangles() + 1)], dtype=np.int64)
    triangles = triangles.reshape(-1, 3) - 1
    if face.Orientation() == TopAbs_REVERSED:
        triangles = triangles[:, ::-1]
    return corners, triangles


def _weld(vertices: np.ndarray, faces: np.ndarray) -> dict[str, np.ndarray]:
    """Merge corners that coincide, drop triangles this closes and corners no triangle uses.

    Along each axis, sorted values with no gap above WELD_MM are one value: unlike rounding, this parts no
    pair that lies across a rounding step.
    """
    keys = np.empty(vertices.shape, dtype=np.int64)
    for axis in range(3):
        order = np.argsort(vertices[:, axis], kind="stable")
        steps = np.diff(vertices[order, axis], prepend=vertices[order[0], axis]) > WELD_MM
        keys[order, axis] = np.cumsum(steps)
    _, first, label = np.unique(keys, axis=0, return_index=True, return_inverse=True)
    merged = label.reshape(-1)[faces]
    a, b, c = merged.T
    merged = merged[(a != b) & (b != c) & (c != a)]
    used, renumbered = np.unique(merged, return_inverse=True)
    return {"vertices": vertices[first[used]], "faces": renumbered.reshape(-1, 3)}


def _require_closed(name: str, vertices: np.ndarray, faces: np.ndarray) -> None:
    """Raise MeshError, saying where, unless each edge is run through once each way."""
    start = faces.reshape(-1)
    end = np.roll(faces, -1, axis=1).reshape(-1)
    n = len(vertices)
    forward, times = np.unique(start * n + end, return_counts=True)
    backward = np.unique(end * n + start)
    open_edges = np.setdiff1d(forward, backward)
    doubled = forward[times > 1]
    if len(open_edges) or len(doubled) or (start == end).any():
        bad = open_edges if len(open_edges) else doubled
        where = vertices[int(bad[0]) // n] if len(bad) else vertices[start[start == end][0]]
        at = ", ".join(f"{value:.3f}" for value in where)
        raise MeshError(
            f"{name}: the surface does not close: {len(open_edges)} open and {len(doubled)} doubled edges "
            f"among {len(forward)}, the first at ({at}) mm; need each edge used once in each direction."
        )
