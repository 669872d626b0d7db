"""Second reading of mesh files by trimesh, which had no part in writing them. Lengths in mm."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import trimesh

from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import Measure


def load_meshes(path: Path, file_type: str) -> tuple[dict[str, Any], dict[str, Any]]:
    """Every piece of a mesh file by node name, moved to its place, and the file's metadata.

    Raises OSError when the file cannot be opened, FileCheckError when the reader cannot make sense of it.
    """
    with path.open("rb") as stream:
        try:
            scene = trimesh.load_scene(stream, file_type=file_type)
            pieces: dict[str, Any] = {}
            for node in scene.graph.nodes_geometry:
                move, geometry = scene.graph[node]
                pieces[node] = scene.geometry[geometry].copy().apply_transform(move)
        except Exception as err:  # a reader meets a broken file with whatever it stumbles over
            reason = f"{type(err).__name__}: {err}"
            raise FileCheckError(
                path, f"a file its reader refuses ({reason})", f"a complete {file_type.upper()}"
            ) from err
    if not pieces:
        raise FileCheckError(path, "no mesh", "at least one")
    return pieces, dict(scene.metadata)


def check_names(path: Path, found: set[str], expected: set[str]) -> None:
    """Raise FileCheckError unless the pieces are called as expected."""
    if found != expected:
        raise FileCheckError(path, f"pieces {sorted(found)}", f"{sorted(expected)}")


def check_piece(
    path: Path, name: str, mesh: Any, expected: Measure, chord_error_mm: float, bodies: int | None = None
) -> None:
    """Raise FileCheckError unless a read piece (in mm) is closed, consistent and the expected solid.

    The volume may differ by the skin between faces and chords, at most chord_error_mm times the surface; the
    box by chord_error_mm. bodies: how many separate shells, None for any.
    """
    if not mesh.is_watertight:
        raise FileCheckError(path, f"{name} with open edges", "a closed surface")
    if not mesh.is_winding_consistent:
        raise FileCheckError(path, f"{name} with triangles that disagree on the outside", "one outside")
    if bodies is not None and mesh.body_count != bodies:
        raise FileCheckError(path, f"{name} in {mesh.body_count} bodies", f"{bodies}")
    volume_mm3 = float(mesh.volume)
    bound_mm3 = chord_error_mm * expected.area_mm2
    if not abs(volume_mm3 - expected.volume_mm3) <= bound_mm3:
        raise FileCheckError(
            path,
            f"{name} with a volume of {volume_mm3:.3f} mm3",
            f"{expected.volume_mm3:.3f} within {bound_mm3:.3f} mm3 (chord error times surface)",
        )
    box = np.asarray(mesh.bounds, dtype=float).reshape(6)
    if not np.abs(box - expected.bounds_mm).max() <= chord_error_mm:
        raise FileCheckError(
            path,
            f"{name} in the box {_box(box)} mm",
            f"{_box(np.array(expected.bounds_mm))} mm within {chord_error_mm:g} mm",
        )


def _box(bounds: np.ndarray) -> str:
    low, high = (" ".join(f"{v:.3f}" for v in corner) for corner in (bounds[:3], bounds[3:]))
    return f"({low}) to ({high})"
