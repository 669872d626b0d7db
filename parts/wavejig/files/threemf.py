"""3MF: several named closed meshes with their unit, for slicers.

Source: 3MF Core Specification 1.x, 3MF Consortium (from memory): package parts, namespace, model, object,
build. The archive carries a fixed date and order, so that the same meshes give the same bytes.
"""

from __future__ import annotations

import io
import zipfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from xml.sax.saxutils import escape, quoteattr

import numpy as np

from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import CHORD_ERROR_MM, Measure, Mesh
from wavejig.files.names import clean_name, clean_unique_names
from wavejig.files.reread import check_names, check_piece, load_meshes

_MODEL = "3D/3dmodel.model"
_CORE = "http://schemas.microsoft.com/3dmanufacturing/core/2015/02"
_XML = '<?xml version="1.0" encoding="UTF-8"?>\n'
_CONTENT_TYPES = (
    f'{_XML}<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types">'
    '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
    '<Default Extension="model" ContentType="application/vnd.ms-package.3dmanufacturing-3dmodel+xml"/>'
    "</Types>\n"
)
_RELATIONS = (
    f'{_XML}<Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships">'
    f'<Relationship Target="/{_MODEL}" Id="rel0" '
    'Type="http://schemas.microsoft.com/3dmanufacturing/2013/01/3dmodel"/></Relationships>\n'
)
_PARTS = ("[Content_Types].xml", "_rels/.rels", _MODEL)


@dataclass(frozen=True, slots=True, kw_only=True)
class Item:
    """One object on the bed: which mesh, turned by 0 or 90 deg about its own z axis, then moved."""

    mesh: int
    x_mm: float = 0.0
    y_mm: float = 0.0
    turn_deg: float = 0.0


def write_3mf(meshes: Sequence[Mesh], path: Path, title: str, items: Sequence[Item] = ()) -> None:
    """Write meshes, each an object under its own name, placed as it stands or as the `items` say.

    Raises ValueError for no mesh or two of one name, OSError when the file cannot be written.
    """
    names = clean_unique_names((mesh.name for mesh in meshes), path.name)
    objects = "".join(
        _object_xml(number, name, mesh)
        for number, (name, mesh) in enumerate(zip(names, meshes, strict=True), start=1)
    )
    placed = items or [Item(mesh=number) for number in range(len(names))]
    build = "".join(_item_xml(item) for item in placed)
    model = (
        f'{_XML}<model unit="millimeter" xml:lang="en" xmlns="{_CORE}">\n'
        f'<metadata name="Title">{escape(clean_name(title))}</metadata>\n'
        '<metadata name="Application">wavejig</metadata>\n'
        f"<resources>\n{objects}</resources>\n<build>{build}</build>\n</model>\n"
    )
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w") as archive:
        for part, text in zip(_PARTS, (_CONTENT_TYPES, _RELATIONS, model), strict=True):
            entry = zipfile.ZipInfo(part, date_time=(1980, 1, 1, 0, 0, 0))
            entry.create_system = 3  # else the writing machine's system gets into the file
            entry.external_attr = 0o644 << 16
            entry.compress_type = zipfile.ZIP_DEFLATED
            archive.writestr(entry, text.encode("utf-8"), compresslevel=6)
    path.write_bytes(buffer.getvalue())


def check_3mf(path: Path, expected: Mapping[str, Measure], *, chord_error_mm: float = CHORD_ERROR_MM) -> None:
    """Raise FileCheckError unless the file holds just the `expected` pieces, by name, closed, in mm.

    Volume within chord_error_mm times the surface, box within chord_error_mm. Second reader: trimesh.
    """
    try:
        with zipfile.ZipFile(path) as archive:
            parts = tuple(archive.namelist())
            broken = archive.testzip()
    except zipfile.BadZipFile as err:
        raise FileCheckError(path, f"a broken archive ({err})", "a complete 3MF") from err
    if parts != _PARTS or broken is not None:
        found = f"the part {broken} damaged" if broken else f"parts {', '.join(parts)}"
        raise FileCheckError(path, found, f"sound parts {', '.join(_PARTS)}")
    pieces, metadata = load_meshes(path, "3mf")
    if metadata.get("units") != "millimeter":
        raise FileCheckError(path, f"the unit {metadata.get('units')!r}", "'millimeter'")
    check_names(path, set(pieces), {clean_name(name) for name in expected})
    for name, figures in expected.items():
        check_piece(path, name, pieces[clean_name(name)], figures, chord_error_mm)


def _item_xml(item: Item) -> str:
    """Rows of the matrix that a row vector (x, y, z, 1) is multiplied by, last column left out."""
    if item == Item(mesh=item.mesh):
        return f'<item objectid="{item.mesh + 1}"/>'
    turn = "0 1 0 -1 0 0" if item.turn_deg else "1 0 0 0 1 0"
    at = f"{item.x_mm:.6f} {item.y_mm:.6f} 0"
    return f'<item objectid="{item.mesh + 1}" transform="{turn} 0 0 1 {at}"/>'


def _object_xml(number: int, name: str, mesh: Mesh) -> str:
    # one format string over all numbers: ten times quicker than an element at a time
    corners = np.round(mesh.vertices, 6) + 0.0  # + 0 turns -0 into 0
    vertices = ('<vertex x="%.6f" y="%.6f" z="%.6f"/>\n' * len(corners)) % tuple(corners.ravel().tolist())
    faces = mesh.faces.ravel().tolist()
    triangles = ('<triangle v1="%d" v2="%d" v3="%d"/>\n' * len(mesh.faces)) % tuple(faces)
    return (
        f'<object id="{number}" type="model" name={quoteattr(name)}>\n<mesh>\n'
        f"<vertices>\n{vertices}</vertices>\n<triangles>\n{triangles}</triangles>\n</mesh>\n</object>\n"
    )
