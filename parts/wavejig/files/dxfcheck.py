"""Read a DXF back and judge it as a cutter's operator would: closed, simple, nested, nothing lost; in mm."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
from ezdxf.document import Drawing as DxfDocument
from ezdxf.filemanagement import readfile
from ezdxf.math import bulge_to_arc
from shapely import Polygon, STRtree

from wavejig.files.dxf import Entity, Layer, Version, entity_numbers, is_cut_layer
from wavejig.files.errors import FileCheckError
from wavejig.geometry.plane import Circle, Contour

CHORD_MM = 1e-3
CLEARANCE_MM = 0.01  # nearer than this two contours touch, as far as any cutter goes
AREA_TOLERANCE = 1e-6
_ACADVER = {"R2010": "AC1024", "R12": "AC1009"}
_KINDS = {"LWPOLYLINE", "POLYLINE", "CIRCLE", "LINE"}
Corner = tuple[float, float, float]


def check_dxf(
    path: Path,
    layers: Sequence[Layer],
    *,
    version: Version = "R2010",
    cut_area_mm2: float | None = None,
    blanks: int = 1,
) -> None:
    """Raise FileCheckError unless the file is what `layers` say and can be cut.

    Compared: version and units in the header; the auditor finds nothing; the same entities, number for
    number, on the same layers and on no other; only polylines, circles and lines. On the layers to cut:
    contours closed and simple, `blanks` outer ones, the rest holes inside them, none touching; outer minus
    holes equal to cut_area_mm2 within 1e-6 of it (None: the area of the contours in `layers`).
    Raises OSError when the file cannot be opened.
    """
    document = _read(path, version)
    groups = document.modelspace().groupby(dxfattrib="layer")
    wanted = {layer.name: layer for layer in layers if layer.entities}
    if set(groups) != set(wanted):
        raise FileCheckError(path, f"entities on layers {sorted(groups)}", f"{sorted(wanted)}")
    for name, layer in wanted.items():
        _check_layer(path, layer, list(groups[name]))
    _check_extents(path, document)
    cut = [entity for name in wanted if is_cut_layer(name) for entity in groups[name]]
    if cut:
        areas, chords = zip(*(_area_and_chords(entity) for entity in cut), strict=True)
        shapes = [_shape(path, number, points) for number, points in enumerate(chords, start=1)]
        signs = _nesting(path, shapes, blanks)
        found = sum(area * sign for area, sign in zip(areas, signs, strict=True))
        if cut_area_mm2 is None:
            drawn = [e for name, layer in wanted.items() if is_cut_layer(name) for e in layer.entities]
            cut_area_mm2 = sum(
                abs(entity.area_mm2) * sign
                for entity, sign in zip(drawn, signs, strict=True)
                if isinstance(entity, Contour | Circle)
            )
        if not abs(found - cut_area_mm2) <= AREA_TOLERANCE * cut_area_mm2:
            raise FileCheckError(
                path,
                f"an area of {found:.6f} mm2 (outer contours less holes)",
                f"{cut_area_mm2:.6f} within {AREA_TOLERANCE:g} of it",
            )


def _read(path: Path, version: Version) -> DxfDocument:
    """The document, with header and audit in order."""
    with path.open("rb") as stream:
        if not stream.read().rstrip().endswith(b"EOF"):
            raise FileCheckError(path, "a file cut short", "EOF at its end")
    try:
        document = readfile(path)
    except Exception as err:  # a reader meets a broken file with whatever it stumbles over
        reason = f"{type(err).__name__}: {err}"
        raise FileCheckError(path, f"a file its reader refuses ({reason})", f"a DXF {version}") from err
    if document.dxfversion != _ACADVER[version]:
        raise FileCheckError(path, f"DXF version {document.dxfversion}", f"{_ACADVER[version]} ({version})")
    if version != "R12":
        units = document.header.get("$INSUNITS"), document.header.get("$MEASUREMENT")
        if units != (4, 1):
            raise FileCheckError(path, f"$INSUNITS, $MEASUREMENT of {units}", "(4, 1): mm, metric")
    audit = document.audit()
    if audit.errors or audit.fixes:
        first = (*audit.errors, *audit.fixes)[0].message
        count = len(audit.errors) + len(audit.fixes)
        raise FileCheckError(path, f"{count} faults, the first: {first}", "none from the auditor")
    return document


def _check_layer(path: Path, layer: Layer, found: list[Any]) -> None:
    """Raise unless a layer's entities are the drawn ones in order, to the digits they were written with."""
    odd = sorted({entity.dxftype() for entity in found} - _KINDS)
    if odd:
        raise FileCheckError(path, f"{', '.join(odd)} on layer {layer.name}", "polylines, circles and lines")
    if len(found) != len(layer.entities):
        raise FileCheckError(path, f"{len(found)} entities on layer {layer.name}", f"{len(layer.entities)}")
    for number, (entity, drawn) in enumerate(zip(found, layer.entities, strict=True), start=1):
        if isinstance(drawn, Contour) and not entity.is_closed:
            raise FileCheckError(path, f"an open contour, {layer.name} {number}", "a closed one")
        got, want = _numbers(entity), entity_numbers(drawn)
        if len(got) != len(want) or not all(abs(a - b) <= 1e-9 for a, b in zip(got, want, strict=True)):
            raise FileCheckError(
                path,
                f"{entity.dxftype()} {number} on layer {layer.name} with {_short(got)}",
                f"{_kind(drawn)} with {_short(want)}",
            )


def _check_extents(path: Path, document: DxfDocument) -> None:
    points = np.vstack([_area_and_chords(entity)[1] for entity in document.modelspace()])
    found = np.array([points.min(axis=0), points.max(axis=0)])
    corners = (document.header[key] for key in ("$EXTMIN", "$EXTMAX"))
    header = np.array([(corner[0], corner[1]) for corner in corners], dtype=float)
    if not np.abs(header - found).max() <= CLEARANCE_MM:
        raise FileCheckError(path, f"extents {header.tolist()} in the header", f"{found.tolist()}, as drawn")


def _nesting(path: Path, shapes: Sequence[Polygon], blanks: int) -> list[int]:
    """+1 for each outer contour, -1 for each hole; raises when contours touch, cross or nest deeper."""
    tree = STRtree(shapes)
    rings = [shape.exterior for shape in shapes]
    near = STRtree(rings).query(rings, predicate="dwithin", distance=CLEARANCE_MM)
    for i, j in near.T.tolist():
        if i < j:
            x, y = shapes[j].representative_point().coords[0]
            raise FileCheckError(
                path, f"contours {i + 1} and {j + 1} touching, near ({x:.2f}, {y:.2f}) mm", "clear ones"
            )
    depth = [0] * len(shapes)
    for outer, inner in tree.query(shapes, predicate="contains").T.tolist():
        depth[inner] += outer != inner
    if max(depth) > 1:
        raise FileCheckError(path, f"contour {depth.index(max(depth)) + 1} inside a hole", "holes only")
    if depth.count(0) != blanks:
        raise FileCheckError(path, f"{depth.count(0)} outer contours", f"{blanks}, all else inside them")
    return [1 if level == 0 else -1 for level in depth]


def _shape(path: Path, number: int, chords: np.ndarray) -> Polygon:
    shape = Polygon(chords)
    if not shape.is_valid:
        x, y = chords[0]
        raise FileCheckError(
            path, f"contour {number}, from ({x:.2f}, {y:.2f}) mm, crossing itself", "a simple contour"
        )
    return shape


def _area_and_chords(entity: Any) -> tuple[float, np.ndarray]:
    """Exact area as if closed, arcs included; and (n, 2) corners of chords within CHORD_MM.

    Arcs come from the reader's own reckoning, not from the code that drew them.
    """
    numbers = _numbers(entity)
    if entity.dxftype() == "CIRCLE":
        x, y, radius = numbers
        return math.pi * radius**2, np.array(list(_arc_points(x, y, radius, 0.0, 2.0 * math.pi))[:-1])
    corners = list(zip(numbers[0::3], numbers[1::3], numbers[2::3], strict=True))
    area = 0.0
    points = []
    for (x0, y0, bulge), (x1, y1, _) in pairwise((*corners, corners[0])):
        area += (x0 * y1 - x1 * y0) / 2.0
        points.append((x0, y0))
        if bulge:
            centre, start, end, radius = bulge_to_arc((x0, y0), (x1, y1), bulge)
            turn = (end - start) % (2.0 * math.pi)  # the reader gives arcs counter-clockwise
            area += math.copysign(radius**2 / 2.0 * (turn - math.sin(turn)), bulge)
            chords = list(_arc_points(centre.x, centre.y, radius, start, turn))[1:-1]
            points += chords if bulge > 0.0 else chords[::-1]
    return abs(area), np.array(points)


def _arc_points(
    x: float, y: float, radius: float, start: float, turn: float
) -> Iterator[tuple[float, float]]:
    step = 2.0 * math.acos(max(0.5, 1.0 - CHORD_MM / radius))
    count = max(2, math.ceil(turn / step))
    for i in range(count + 1):
        angle = start + turn * i / count
        yield x + radius * math.cos(angle), y + radius * math.sin(angle)


def _numbers(entity: Any) -> list[float]:
    """As `entity_numbers`, from what was read."""
    kind = entity.dxftype()
    if kind == "CIRCLE":
        return [entity.dxf.center.x, entity.dxf.center.y, entity.dxf.radius]
    if kind == "LINE":
        return [n for end in (entity.dxf.start, entity.dxf.end) for n in (end.x, end.y, 0.0)]
    if kind == "LWPOLYLINE":
        return [float(n) for corner in entity.get_points("xyb") for n in corner]
    return [
        n
        for vertex in entity.vertices
        for n in (vertex.dxf.location.x, vertex.dxf.location.y, vertex.dxf.get("bulge", 0.0))
    ]


def _kind(entity: Entity) -> str:
    return type(entity).__name__.lower()


def _short(numbers: Sequence[float]) -> str:
    head = ", ".join(f"{n:g}" for n in numbers[:6])
    return f"{len(numbers)} numbers ({head}{', ...' if len(numbers) > 6 else ''})"
