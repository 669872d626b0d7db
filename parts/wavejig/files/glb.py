"""GLB: coloured named meshes in one file to look at, for browsers and viewers.

Source: glTF 2.0 Specification, Khronos Group 2021 (ISO/IEC 12113:2022, from memory): metres, y up, linear
base colours, 12-byte header, then a JSON and a binary chunk, each padded to four bytes. Our mm become metres,
and our +z (the main beam) becomes +y: (x, y, z) -> (x, z, -y).
"""

from __future__ import annotations

import json
import struct
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import CHORD_ERROR_MM, Measure, Mesh
from wavejig.files.names import clean_name, clean_unique_names
from wavejig.files.reread import check_names, check_piece, load_meshes

Colour = tuple[float, float, float]
_ROUGHNESS = 0.55  # a satin look
_FLOAT, _UINT32, _VERTEX_BUFFER, _INDEX_BUFFER = 5126, 5125, 34962, 34963  # names of the specification
# rows: what x, y and z of the file are made of
_TO_FILE = np.array([[1.0, 0.0, 0.0], [0.0, 0.0, 1.0], [0.0, -1.0, 0.0]])


@dataclass(frozen=True, slots=True, kw_only=True)
class ColouredMesh:
    """A mesh and its colour: red, green, blue from 0 to 1 as a screen shows them (sRGB)."""

    mesh: Mesh
    colour: Colour


def write_glb(pieces: Sequence[ColouredMesh], path: Path) -> None:
    """Write meshes, each a node under its mesh's name.

    Raises ValueError for no piece or two of one name, OSError when the file cannot be written.
    """
    names = clean_unique_names((piece.mesh.name for piece in pieces), path.name)
    views: list[dict[str, Any]] = []
    accessors: list[dict[str, Any]] = []
    chunks: list[bytes] = []
    offset = 0

    def add(array: np.ndarray, target: int, accessor: dict[str, Any]) -> int:
        nonlocal offset
        chunks.append(array.tobytes())
        views.append({"buffer": 0, "byteOffset": offset, "byteLength": len(chunks[-1]), "target": target})
        accessors.append({"bufferView": len(views) - 1, **accessor})
        offset += len(chunks[-1])
        return len(accessors) - 1

    meshes = []
    for number, (name, piece) in enumerate(zip(names, pieces, strict=True)):
        points = (piece.mesh.vertices @ _TO_FILE.T / 1000.0 + 0.0).astype("<f4")
        corners = piece.mesh.faces.astype("<u4").ravel()
        position = {"componentType": _FLOAT, "count": len(points), "type": "VEC3"}
        # the box of the numbers as stored: a 32-bit float is exact as the 64-bit one that gets printed
        position |= {"min": points.min(axis=0).tolist(), "max": points.max(axis=0).tolist()}
        index = {"componentType": _UINT32, "count": len(corners), "type": "SCALAR"}
        primitive = {
            "attributes": {"POSITION": add(points, _VERTEX_BUFFER, position)},
            "indices": add(corners, _INDEX_BUFFER, index),
            "material": number,
        }
        meshes.append({"name": name, "primitives": [primitive]})
    tree = {
        "asset": {"version": "2.0", "generator": "wavejig"},
        "scene": 0,
        "scenes": [{"nodes": list(range(len(names)))}],
        "nodes": [{"name": name, "mesh": number} for number, name in enumerate(names)],
        "meshes": meshes,
        "materials": [_material(name, piece.colour) for name, piece in zip(names, pieces, strict=True)],
        "accessors": accessors,
        "bufferViews": views,
        "buffers": [{"byteLength": offset}],
    }
    text = json.dumps(tree, separators=(",", ":"), ensure_ascii=True).encode("ascii")
    text += b" " * (-len(text) % 4)
    data = b"".join(chunks)  # whole 4-byte numbers, so it needs no padding
    with path.open("wb") as stream:
        stream.write(struct.pack("<4sII", b"glTF", 2, 12 + 8 + len(text) + 8 + len(data)))
        stream.write(struct.pack("<I4s", len(text), b"JSON") + text)
        stream.write(struct.pack("<I4s", len(data), b"BIN\0") + data)


def check_glb(
    path: Path,
    expected: Sequence[tuple[str, Measure, Colour]],
    *,
    chord_error_mm: float = CHORD_ERROR_MM,
) -> None:
    """Raise FileCheckError unless the file holds just the expected (name, figures in mm, colour) pieces.

    Closed, volume within chord_error_mm times the surface, box within chord_error_mm once turned back to mm
    and z up, colour within the reader's 1/255. Second reader: trimesh.
    """
    head = path.read_bytes()[:12]
    size = path.stat().st_size
    if len(head) < 12 or head[:4] != b"glTF" or struct.unpack("<II", head[4:]) != (2, size):
        raise FileCheckError(path, f"{size} bytes that begin {head!r}", "a glTF 2 header with that length")
    pieces, _ = load_meshes(path, "glb")
    check_names(path, set(pieces), {clean_name(name) for name, _, _ in expected})
    for name, figures, colour in expected:
        mesh = pieces[clean_name(name)]
        mesh.vertices = np.asarray(mesh.vertices) @ _TO_FILE * 1000.0
        check_piece(path, name, mesh, figures, chord_error_mm)
        found = np.asarray(mesh.visual.material.baseColorFactor, dtype=float)[:3] / 255.0
        wanted = np.array(_linear(colour))
        if not np.abs(found - wanted).max() <= 1.0 / 255.0:
            raise FileCheckError(path, f"{name} coloured {found.round(3)}", f"{wanted.round(3)} (linear)")


def _material(name: str, colour: Colour) -> dict[str, Any]:
    factor = [round(value, 6) for value in _linear(colour)]
    return {
        "name": name,
        "pbrMetallicRoughness": {
            "baseColorFactor": [*factor, 1.0],
            "metallicFactor": 0.0,  # metals look black where a viewer brings no surroundings to mirror
            "roughnessFactor": _ROUGHNESS,
        },
    }


def _linear(colour: Colour) -> Colour:
    """Linear light from a screen colour. Source: IEC 61966-2-1:1999 (sRGB), inverse transfer function."""
    if not all(0.0 <= value <= 1.0 for value in colour):
        raise ValueError(f"colour: got {colour}, need red, green and blue from 0 to 1.")
    red, green, blue = (v / 12.92 if v <= 0.04045 else ((v + 0.055) / 1.055) ** 2.4 for v in colour)
    return red, green, blue
