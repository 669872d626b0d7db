"""Meshes for the page's viewer: quantised, base64, and a line drawing for where nothing can be turned.

Nothing is decimated: every triangle of the solids' own meshes is there. A corner is three 16-bit steps of the
piece's longest side, so it is off by at most that side / 131070: about a micrometre.
"""

from __future__ import annotations

import base64
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from wavejig.files.glb import ColouredMesh
from wavejig.files.mesh import Mesh
from wavejig.sheets.report.axes import chain, picture
from wavejig.sheets.report.markup import Element, el, short

_STEPS = 65535
_CREASE_DEG = 30.0  # a sharper edge is drawn; the meshes' own facets turn by 12
# Looking from the right, the front and above; taste, no source.
_FROM = (0.45, -0.72, 0.53)


@dataclass(frozen=True, slots=True, kw_only=True)
class Shown:
    """A piece to turn around. group: "antenna" (shown together) or the part it is a tool for."""

    piece: ColouredMesh
    group: str

    @property
    def name(self) -> str:
        """Of the piece."""
        return self.piece.mesh.name


def packed(shown: Shown) -> dict[str, Any]:
    """One piece as plain data: corners 16-bit, three to a triangle 16- or 32-bit, both little-endian base64."""
    mesh = shown.piece.mesh
    low = mesh.vertices.min(axis=0)
    step = float((mesh.vertices.max(axis=0) - low).max()) / _STEPS
    corners = np.round((mesh.vertices - low) / step).astype("<u2")
    wide = len(corners) > 65536
    return {
        "name": mesh.name,
        "group": shown.group,
        "colour": [round(c, 3) for c in shown.piece.colour],
        "origin": [round(float(v), 5) for v in low],
        "step": float(f"{step:.9g}"),
        "corners": base64.b64encode(corners.tobytes()).decode("ascii"),
        "faces": base64.b64encode(mesh.faces.astype("<u4" if wide else "<u2").tobytes()).decode("ascii"),
        "wide": wide,
    }


def chosen(pieces: Sequence[Shown], most_bytes: int) -> tuple[tuple[dict[str, Any], ...], tuple[str, ...]]:
    """Packed pieces that together stay within most_bytes, in order, and the names of those left out.

    The antenna's own always go in; of the rest the small ones first.
    """
    data = [packed(p) for p in pieces]
    sizes = [len(d["corners"]) + len(d["faces"]) for d in data]
    order = sorted(range(len(data)), key=lambda i: (data[i]["group"] != "antenna", sizes[i], i))
    kept, total = set(), 0
    for i in order:
        if data[i]["group"] == "antenna" or total + sizes[i] <= most_bytes:
            kept.add(i)
            total += sizes[i]
    return (
        tuple(d for i, d in enumerate(data) if i in kept),
        tuple(d["name"] for i, d in enumerate(data) if i not in kept),
    )


def line_drawing(pieces: Iterable[Shown]) -> Element:
    """The antenna's sharp edges and outlines from the side the viewer begins at; hidden ones show through."""
    meshes = [s.piece.mesh for s in pieces if s.group == "antenna"]
    away = np.array(_FROM) / np.linalg.norm(_FROM)
    right = np.cross([0.0, 0.0, 1.0], away)
    right /= np.linalg.norm(right)
    frame = np.stack([right, -np.cross(away, right)])  # y down the page
    flat = [m.vertices @ frame.T for m in meshes]
    low = np.min([f.min(axis=0) for f in flat], axis=0)
    high = np.max([f.max(axis=0) for f in flat], axis=0)
    scale = min(400.0 / float(high[0] - low[0]), 300.0 / float(high[1] - low[1]))
    wide, tall = ((high - low) * scale + 20.0).tolist()
    parts = []
    for mesh, points in zip(meshes, flat, strict=True):
        at = (points - low) * scale + 10.0
        steps = [
            chain(((float(a[0]), float(a[1])), (float(b[0]), float(b[1])))) for a, b in at[_edges(mesh, away)]
        ]
        parts.append(el("path", d="".join(steps), class_="edge"))
    names = ", ".join(m.name for m in meshes)
    return picture(
        wide, tall, "parts-lines", "The antenna in outline",
        f"Line drawing from the right and above of: {names}.", parts, width=short(wide), height=short(tall),
    )  # fmt: skip


def _edges(mesh: Mesh, away: np.ndarray) -> np.ndarray:
    """(k, 2) corners of edges that are sharp, or part what is seen from what is not."""
    faces = mesh.faces
    start, end = faces.reshape(-1), np.roll(faces, -1, axis=1).reshape(-1)
    n = len(mesh.vertices)
    forward, backward = start * n + end, end * n + start
    order = np.argsort(forward)
    other = order[np.searchsorted(forward[order], backward)] // 3
    own = np.arange(len(start)) // 3
    normals = mesh.normals
    sharp = np.sum(normals[own] * normals[other], axis=1) < np.cos(np.radians(_CREASE_DEG))
    seen = normals @ away > 0.0
    wanted = (sharp | (seen[own] != seen[other])) & (start < end)
    return np.stack([start[wanted], end[wanted]], axis=1)
