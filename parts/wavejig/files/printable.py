"""Whether a mesh prints without support: overhangs, bridges, bodies, bed. Lengths in mm. Imports numpy only.

Vocabulary: *overhang* of a face = its lean outwards from upright, 0 for a wall, 90 for a ceiling; a *ceiling*
is an unbroken patch of faces that lean more than STEEPEST_DEG and do not lie on the bed. A ceiling can be
printed as a *bridge* when, along one direction, threads laid across it end on plastic at both ends; its span
is the longest thread of the best direction.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from wavejig.files.errors import MeshError
from wavejig.files.mesh import Mesh

BED_MARGIN_MM = 5.0  # skirt and clips; common practice, no source
# Common practice, no source: what desktop printers lay without support.
STEEPEST_DEG = 50.0
LONGEST_BRIDGE_MM = 10.0
ON_BED_MM = 1e-3
# A ledge narrower than half the thinnest usual line is printed with the wall beside it; common practice.
_LEDGE_MM = 0.1
_TURNS = 36  # directions in which a bridge is tried
_THREADS = 48  # threads laid across a ceiling in each


@dataclass(frozen=True, slots=True, kw_only=True)
class Printability:
    """What was measured on the mesh of one piece.

    size_mm: along x, y, z as it lies; overhang_deg: steepest face that is no bridge; bridge_mm: longest
    bridge (0: none); ledge_mm: widest ceiling that no bridge spans (0: none); bodies: unconnected ones.
    """

    name: str
    size_mm: tuple[float, float, float]
    overhang_deg: float
    bridge_mm: float
    ledge_mm: float
    bodies: int

    def faults(self, bed_mm: tuple[float, float, float], margin_mm: float) -> tuple[str, ...]:
        """What keeps it from being printed on this bed without support; empty when nothing does."""
        out = []
        room = (bed_mm[0] - 2.0 * margin_mm, bed_mm[1] - 2.0 * margin_mm, bed_mm[2])
        if any(s > r + 1e-6 for s, r in zip(self.size_mm, room, strict=True)):
            size = " x ".join(f"{s:.1f}" for s in self.size_mm)
            out.append(f"measures {size} mm and the bed, less {margin_mm:g} mm all round, holds "
                       f"{room[0]:g} x {room[1]:g} x {room[2]:g} mm")  # fmt: skip
        if self.ledge_mm > _LEDGE_MM:
            out.append(f"has a ceiling of {self.ledge_mm:.2f} mm that rests on one side only")
        if self.bridge_mm > LONGEST_BRIDGE_MM:
            out.append(f"bridges {self.bridge_mm:.1f} mm and may bridge {LONGEST_BRIDGE_MM:g} mm")
        if self.bodies != 1:
            out.append(f"falls into {self.bodies} bodies")
        return tuple(out)


def printability(mesh: Mesh) -> Printability:
    """Measure a closed mesh that lies on z = 0 as it prints.

    Raises MeshError when its lowest point is not on the bed.
    """
    v, f = mesh.vertices, mesh.faces
    if abs(float(v[:, 2].min())) > ON_BED_MM:
        raise MeshError(f"{mesh.name}: its lowest point is at z = {v[:, 2].min():.4f} mm, need 0.")
    lean = np.degrees(np.arcsin(np.clip(-mesh.normals[:, 2], -1.0, 1.0)))
    on_bed = v[f][:, :, 2].max(axis=1) <= ON_BED_MM
    area = np.linalg.norm(np.cross(v[f[:, 1]] - v[f[:, 0]], v[f[:, 2]] - v[f[:, 0]]), axis=1) / 2.0
    ceiling = (lean > STEEPEST_DEG) & ~on_bed & (area > 1e-9)
    neighbour = _neighbours(f)
    bridge, ledge = 0.0, 0.0
    for patch in _patches(np.flatnonzero(ceiling), neighbour, ceiling):
        span = _bridge_mm(v, f, patch, neighbour, ceiling)
        if np.isfinite(span):
            bridge = max(bridge, span)
        else:
            ledge = max(ledge, _width_mm(v, f, patch))
    plain = lean[~ceiling & ~on_bed & (area > 1e-9)]
    low, high = v.min(axis=0), v.max(axis=0)
    x, y, z = (high - low).tolist()
    steepest = max(0.0, float(plain.max())) if plain.size else 0.0
    return Printability(
        name=mesh.name,
        size_mm=(x, y, z),
        overhang_deg=90.0 if ledge > _LEDGE_MM else steepest,
        bridge_mm=bridge,
        ledge_mm=ledge,
        bodies=len(_patches(np.arange(len(f)), neighbour, np.ones(len(f), dtype=bool))),
    )


def require_printable(mesh: Mesh, bed_mm: tuple[float, float, float], margin_mm: float) -> Printability:
    """The measured piece. Raises MeshError, naming it and its faults, when it needs support or a larger bed."""
    found = printability(mesh)
    faults = found.faults(bed_mm, margin_mm)
    if faults:
        raise MeshError(f"{mesh.name}: cannot be printed as it lies: it {'; it '.join(faults)}.")
    return found


def _neighbours(faces: np.ndarray) -> np.ndarray:
    """(m, 3) int: the face across each edge (from corner i to i + 1). The mesh is closed."""
    m = len(faces)
    start, end = faces.reshape(-1), np.roll(faces, -1, axis=1).reshape(-1)
    n = int(faces.max()) + 1
    forward, backward = start * n + end, end * n + start
    order = np.argsort(forward, kind="stable")
    found = order[np.searchsorted(forward[order], backward)]
    across: np.ndarray = (found // 3).reshape(m, 3)
    return across


def _patches(start: np.ndarray, neighbour: np.ndarray, member: np.ndarray) -> list[np.ndarray]:
    """Connected sets among the member faces."""
    label = np.full(len(member), -1, dtype=np.int64)
    out: list[np.ndarray] = []
    for seed in start:
        if label[seed] >= 0:
            continue
        label[seed] = len(out)
        front, found = np.array([seed]), [np.array([seed])]
        while front.size:
            near = np.unique(neighbour[front].reshape(-1))
            front = near[member[near] & (label[near] < 0)]
            label[front] = len(out)
            found.append(front)
        out.append(np.concatenate(found))
    return out


def _rim(
    v: np.ndarray, f: np.ndarray, patch: np.ndarray, neighbour: np.ndarray, ceiling: np.ndarray
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """The patch's border in plan: starts (k, 2), ends (k, 2), and whether plastic stands below each edge."""
    faces, sides = np.nonzero(~ceiling[neighbour[patch]])
    a = v[f[patch[faces], sides]]
    b = v[f[patch[faces], (sides + 1) % 3]]
    other = v[f[neighbour[patch[faces], sides]]].mean(axis=1)
    held = other[:, 2] < (a[:, 2] + b[:, 2]) / 2.0 - 1e-6
    return a[:, :2], b[:, :2], held


def _bridge_mm(
    v: np.ndarray, f: np.ndarray, patch: np.ndarray, neighbour: np.ndarray, ceiling: np.ndarray
) -> float:
    """Longest thread in the best direction of a bridge over this patch; inf when none spans it."""
    a, b, held = _rim(v, f, patch, neighbour, ceiling)
    best = np.inf
    for turn in np.pi * np.arange(_TURNS) / _TURNS:
        across = np.array([-np.sin(turn), np.cos(turn)])
        along = np.array([np.cos(turn), np.sin(turn)])
        pa, pb = a @ across, b @ across
        low, high = min(pa.min(), pb.min()), max(pa.max(), pb.max())
        if high - low < 1e-9:
            continue
        # odd places, so that no thread runs along an edge or through a corner
        levels = low + (high - low) * (np.arange(_THREADS) + 0.4713) / _THREADS
        thread, edge = np.nonzero((pa < levels[:, None]) != (pb < levels[:, None]))
        crossings = np.bincount(thread, minlength=_THREADS)
        sound = crossings[thread] % 2 == 0  # a thread that grazes a corner says nothing
        thread, edge = thread[sound], edge[sound]
        t = (levels[thread] - pa[edge]) / (pb[edge] - pa[edge])
        at = (a @ along)[edge] * (1.0 - t) + (b @ along)[edge] * t
        order = np.lexsort((at, thread))
        at, ends = at[order], held[edge[order]]
        lengths = at[1::2] - at[::2]
        loose = (~ends[::2] | ~ends[1::2]) & (lengths > _LEDGE_MM)
        worst = np.inf if np.any(loose) else float(lengths.max(initial=0.0))
        best = min(best, worst)
    return best


def _width_mm(v: np.ndarray, f: np.ndarray, patch: np.ndarray) -> float:
    """Narrowest width of the patch in plan, over all directions."""
    points = v[np.unique(f[patch])][:, :2]
    turns = np.pi * np.arange(_TURNS) / _TURNS
    spread = points @ np.array([np.cos(turns), np.sin(turns)])
    return float(np.ptp(spread, axis=0).min())
