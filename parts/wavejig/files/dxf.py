"""DXF of plane drawings for laser, waterjet and sheet shops: mm, closed polylines with arcs, process layers.

Two versions: "R2010" with the units in its header, and "R12" for old machines, which has no units (the file's
name must say mm). No splines, no live text, nothing twice. Same layers, same bytes.
Source of the names and group codes: DXF Reference, Autodesk 2012 (from memory), as ezdxf writes them.
"""

from __future__ import annotations

import io
import math
import re
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Literal

import ezdxf
from ezdxf.document import Drawing as DxfDocument
from ezdxf.layouts.layout import Modelspace

from wavejig.files.errors import DrawingError
from wavejig.files.names import clean_name
from wavejig.files.overlap import overlapping, pieces_of
from wavejig.geometry.plane import Circle, Contour, Stroke

Entity = Contour | Circle | Stroke
Version = Literal["R2010", "R12"]
Linetype = Literal["CONTINUOUS", "CENTER", "DASHED"]

# R12 allows letters, digits, "$", "_" and "-", 31 of them (DXF Reference, R12)
_LAYER_NAME = re.compile(r"[A-Za-z0-9_$-]{1,31}")
# dash and gap lengths in mm, after their total; common practice, no source
_DASHES = {"CENTER": (12.0, 8.0, -1.5, 1.0, -1.5), "DASHED": (4.0, 2.5, -1.5)}
SHORTEST_MM = 1e-3
_PLACES = 6  # coordinates are written to 1e-6 mm, so that no noise of the last digit reaches the file
_BULGE_PLACES = 12


@dataclass(frozen=True, slots=True, kw_only=True)
class Layer:
    """Entities of one process. A name that contains "cut" takes contours and circles only.

    colour: DXF colour index 1 to 255 (7 is black or white, whichever shows).
    """

    name: str
    entities: tuple[Entity, ...]
    colour: int = 7
    linetype: Linetype = "CONTINUOUS"


@dataclass(frozen=True, slots=True, kw_only=True)
class BendLine:
    """A straight line to fold along; "up" folds towards the reader. angle_deg: 0 flat, 90 square."""

    start: tuple[float, float]
    end: tuple[float, float]
    direction: Literal["up", "down"]
    angle_deg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Drawing:
    """A flat part: contours to cut (the outside first), lines to fold along, strokes to mark."""

    cut: tuple[Contour | Circle, ...]
    bends: tuple[BendLine, ...] = ()
    marks: tuple[Stroke, ...] = ()

    def layers(self) -> tuple[Layer, ...]:
        """Layer `cut`, a layer for each bend direction and angle, layer `marks`; only those with entities."""
        out = [Layer(name="cut", entities=self.cut)]
        for name in sorted({bend_layer_name(bend) for bend in self.bends}):
            lines = [b for b in self.bends if bend_layer_name(b) == name]
            strokes = tuple(Stroke(points=(line.start, line.end)) for line in lines)
            colour = 5 if lines[0].direction == "up" else 1
            out.append(Layer(name=name, entities=strokes, colour=colour, linetype="CENTER"))
        out.append(Layer(name="marks", entities=self.marks, colour=3))
        return tuple(layer for layer in out if layer.entities)


def bend_layer_name(bend: BendLine) -> str:
    """ "bend-up-90", "bend-down-32_5": direction and angle to a hundredth of a degree, legal in R12."""
    return f"bend-{bend.direction}-{round(bend.angle_deg, 2):g}".replace(".", "_")


def is_cut_layer(name: str) -> bool:
    """Whether a layer holds contours to cut."""
    return "cut" in name.lower()


def write_dxf(layers: Sequence[Layer], path: Path, *, version: Version = "R2010", title: str = "") -> None:
    """Write layers in order. The title goes into the file's properties where the version has them.

    Raises DrawingError, naming the layer, for a name R12 cannot carry or given twice, an open entity on a cut
    layer, an entity that is no curve, and anything drawn twice; OSError when the file cannot be written.
    """
    check_layers(layers)
    with fixed_metadata():
        document = make_document(layers, version=version, title=title)
        path.write_bytes(document_bytes(document))


def make_document(layers: Sequence[Layer], *, version: Version = "R2010", title: str = "") -> DxfDocument:
    """The layers as a document of the library's; to be called and written under `fixed_metadata`."""
    document = DxfDocument.new(version)
    if version != "R12":
        document.header["$INSUNITS"] = 4  # mm
        document.header["$MEASUREMENT"] = 1  # metric
        document.header.custom_vars.append("Title", clean_name(title))
    _add_layers(document, layers)
    low, high = _extents(layers)
    modelspace = document.modelspace()
    modelspace.reset_extents((*low, 0.0), (*high, 0.0))
    modelspace.reset_limits(low, high)
    document.header["$EXTMIN"], document.header["$EXTMAX"] = (*low, 0.0), (*high, 0.0)
    centre = ((low[0] + high[0]) / 2.0, (low[1] + high[1]) / 2.0)
    document.set_modelspace_vport(1.1 * max(high[0] - low[0], high[1] - low[1]), centre)
    for kind in sorted(document.entitydb.dxf_types_in_use()):
        document.classes.add_class(kind)  # left to itself, the library adds them in the order of a set
    return document


def document_bytes(document: DxfDocument) -> bytes:
    """The document as a file, its lines ended as old readers expect, whatever system writes."""
    stream = io.StringIO()
    document.write(stream)
    return encoded(stream.getvalue(), document)


def encoded(text: str, document: DxfDocument) -> bytes:
    """Tags of the document as they stand in its file."""
    return text.replace("\n", "\r\n").encode(document.output_encoding, errors="dxfreplace")


def check_layers(layers: Sequence[Layer]) -> None:
    """Raise DrawingError for layers that should not reach a machine; see `write_dxf`."""
    names = [layer.name.lower() for layer in layers]
    for layer in layers:
        if not _LAYER_NAME.fullmatch(layer.name) or names.count(layer.name.lower()) > 1:
            raise DrawingError(
                f"layer {layer.name!r}: need a name of its own of 1 to 31 letters, digits, - and _, "
                "which is what R12 can carry."
            )
        if not 1 <= layer.colour <= 255:
            raise DrawingError(f"layer {layer.name}: got colour {layer.colour}, need 1 to 255.")
        for number, entity in enumerate(layer.entities, start=1):
            fault = entity_fault(entity, is_cut_layer(layer.name))
            if fault:
                raise DrawingError(f"layer {layer.name}, entity {number}: {fault}")
    if not any(layer.entities for layer in layers):
        raise DrawingError("drawing: got no entity on any layer, need at least one.")
    # where a machine follows the lines, nothing may lie on anything; in a view for people two parts may touch
    cut = any(is_cut_layer(layer.name) for layer in layers)
    for group in [layers] if cut else [[layer] for layer in layers]:
        pair = overlapping(
            piece for layer in group for entity in layer.entities for piece in pieces_of(entity, layer.name)
        )
        if not pair:
            continue
        a, b = pair
        raise DrawingError(
            f"layers {a.owner} and {b.owner}: drawn twice near ({b.middle[0]:.3f}, {b.middle[1]:.3f}) mm; "
            "need every line once, or the cutter runs it twice."
        )


def entity_numbers(entity: Entity) -> list[float]:
    """The numbers an entity is written with: centre and radius, or x, y and bulge of each corner."""
    if isinstance(entity, Circle):
        return [_mm(entity.x_mm), _mm(entity.y_mm), _mm(entity.diameter_mm / 2.0)]
    if isinstance(entity, Contour):
        return [n for x, y, b in entity.vertices for n in (_mm(x), _mm(y), round(b, _BULGE_PLACES) + 0.0)]
    points = entity.points[:-1] if is_ring(entity) else entity.points
    return [n for x, y in points for n in (_mm(x), _mm(y), 0.0)]


def is_ring(stroke: Stroke) -> bool:
    """A stroke that ends where it begins: written as a closed polyline."""
    return len(stroke.points) > 3 and math.dist(stroke.points[0], stroke.points[-1]) < SHORTEST_MM


def _mm(value: float) -> float:
    return round(float(value), _PLACES) + 0.0  # + 0 turns -0 into 0


def entity_fault(entity: Entity, cut: bool) -> str | None:
    """What is wrong with an entity, or None."""
    numbers = entity_numbers(entity)
    if not numbers or not all(math.isfinite(number) for number in numbers):
        return "got no points or a number that is not finite, need coordinates in mm."
    if cut and isinstance(entity, Stroke):
        return "got an open stroke, need closed contours and circles on a layer to cut."
    if isinstance(entity, Circle):
        return None if entity.diameter_mm > SHORTEST_MM else f"got a diameter of {entity.diameter_mm} mm."
    if isinstance(entity, Contour) and len(entity.vertices) < 3 and not all(b for *_, b in entity.vertices):
        return f"got a contour of {len(entity.vertices)} corners, need 3, or 2 with arcs between."
    if isinstance(entity, Contour) and len(entity.vertices) < 2:
        return "got a contour of one corner; a full circle is a Circle."
    if isinstance(entity, Stroke) and len(entity.points) < 2:
        return "got a stroke of one point, need two."
    for piece in pieces_of(entity, ""):
        if math.dist(piece.start, piece.end) < SHORTEST_MM:
            return f"got an edge shorter than {SHORTEST_MM:g} mm near {piece.start}, need corners apart."
    return None


def _extents(layers: Sequence[Layer]) -> tuple[tuple[float, float], tuple[float, float]]:
    xs: list[float] = []
    ys: list[float] = []
    for layer in layers:
        for entity in layer.entities:
            if isinstance(entity, Circle):
                r = entity.diameter_mm / 2.0
                box = (entity.x_mm - r, entity.y_mm - r, entity.x_mm + r, entity.y_mm + r)
            elif isinstance(entity, Contour):
                box = entity.bounds()
            else:
                px, py = zip(*entity.points, strict=True)
                box = (min(px), min(py), max(px), max(py))
            xs += [box[0], box[2]]
            ys += [box[1], box[3]]
    return (_mm(min(xs)), _mm(min(ys))), (_mm(max(xs)), _mm(max(ys)))


def _add_layers(document: DxfDocument, layers: Sequence[Layer]) -> None:
    for name in sorted({layer.linetype for layer in layers} - {"CONTINUOUS"}):
        document.linetypes.add(name, pattern=list(_DASHES[name]), description=f"{name.lower()}, mm")
    modelspace = document.modelspace()
    for layer in layers:
        document.layers.add(layer.name, color=layer.colour, linetype=layer.linetype)
        for entity in layer.entities:
            _add_entity(modelspace, entity, layer.name, old=document.dxfversion == "AC1009")


def _add_entity(modelspace: Modelspace, entity: Entity, layer: str, *, old: bool) -> None:
    attributes = {"layer": layer}
    numbers = entity_numbers(entity)
    if isinstance(entity, Circle):
        modelspace.add_circle((numbers[0], numbers[1]), numbers[2], dxfattribs=attributes)
        return
    corners = list(zip(numbers[0::3], numbers[1::3], numbers[2::3], strict=True))
    if isinstance(entity, Stroke) and len(corners) == 2:
        modelspace.add_line(corners[0][:2], corners[1][:2], dxfattribs=attributes)
        return
    close = isinstance(entity, Contour) or is_ring(entity)
    if old:
        modelspace.add_polyline2d(corners, format="xyb", close=close, dxfattribs=attributes)
    else:
        modelspace.add_lwpolyline(corners, format="xyb", close=close, dxfattribs=attributes)


@contextmanager
def fixed_metadata() -> Iterator[None]:
    """Have ezdxf leave clock and random numbers out; its option is the process's, so put it back."""
    options = ezdxf.options  # type: ignore[attr-defined]
    before = options.write_fixed_meta_data_for_testing
    options.write_fixed_meta_data_for_testing = True
    try:
        yield
    finally:
        options.write_fixed_meta_data_for_testing = before
