"""Binary STL: one closed mesh, 84 + 50 n bytes, little-endian, mm by custom (the format has no unit).

Source of the layout: StereoLithography Interface Specification, 3D Systems, 1988 (from memory): 80-byte
header, 32-bit count, then per triangle the normal, three corners (12 x 32-bit float) and two bytes of
nothing.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np

from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import CHORD_ERROR_MM, Measure, Mesh
from wavejig.files.names import ascii_name
from wavejig.files.reread import check_piece, load_meshes

HEADER_BYTES = 80
_RECORD = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])


def write_stl(mesh: Mesh, path: Path, title: str) -> None:
    """Write one mesh. The title goes into the header in ASCII, cut to fit.

    Raises OSError when the file cannot be written.
    """
    records = np.zeros(len(mesh.faces), dtype=_RECORD)
    records["normal"] = mesh.normals
    records["corners"] = mesh.vertices[mesh.faces]
    with path.open("wb") as stream:
        stream.write(_header(title))
        stream.write(np.array([len(records)], dtype="<u4").tobytes())
        stream.write(records.tobytes())


def read_stl(path: Path) -> tuple[str, np.ndarray]:
    """Header text and the corners (n, 3, 3) float32 of a binary STL, as they stand in the file.

    Raises FileCheckError when the length does not fit the count, as in a truncated file.
    """
    data = path.read_bytes()
    count = int(np.frombuffer(data[80:84], dtype="<u4")[0]) if len(data) >= HEADER_BYTES + 4 else 0
    expected = HEADER_BYTES + 4 + _RECORD.itemsize * count
    if len(data) != expected:
        raise FileCheckError(path, f"{len(data)} bytes", f"84 + 50 x {count} triangles = {expected} bytes")
    if data[:5].lower() == b"solid":
        raise FileCheckError(path, 'a header that begins with "solid"', "one that no reader takes for text")
    corners = np.frombuffer(data, dtype=_RECORD, offset=HEADER_BYTES + 4)["corners"]
    return data[:HEADER_BYTES].decode("ascii", "replace").rstrip("\0 "), corners


def check_stl(
    path: Path, expected: Measure, *, chord_error_mm: float = CHORD_ERROR_MM, bodies: int = 1
) -> None:
    """Raise FileCheckError unless the file is the solid `expected`, closed, consistent, in `bodies` bodies.

    Volume within chord_error_mm times the surface, box within chord_error_mm. Second reader: trimesh.
    """
    _, corners = read_stl(path)
    if not len(corners):
        raise FileCheckError(path, "no triangle", "a closed surface")
    pieces, _ = load_meshes(path, "stl")
    (mesh,) = pieces.values()
    check_piece(path, "the piece", mesh, expected, chord_error_mm, bodies)


def _header(title: str) -> bytes:
    # "solid" at the front means the text form of STL; some readers look for COLOR= and MATERIAL= anywhere
    text = "mm; " + ascii_name(title).replace("=", "-")
    return text.encode("ascii")[:HEADER_BYTES].ljust(HEADER_BYTES)
