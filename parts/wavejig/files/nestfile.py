"""nest-N.dxf: the blanks of one stock sheet, to cut in one go; and its reading back.

The full sheets of a batch differ in nothing but the running numbers, so one is made by the library and judged
entity by entity; the next ones are its bytes with other digits, and reading back compares them with it.
"""

from __future__ import annotations

import io
from dataclasses import dataclass
from itertools import count
from pathlib import Path

from ezdxf.document import Drawing as DxfDocument
from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.entities.line import Line
from ezdxf.entities.lwpolyline import LWPolyline
from ezdxf.lldxf.tagwriter import TagWriter

from wavejig.batch.model import NestedShapes
from wavejig.files.dxf import (
    BendLine,
    Drawing,
    Layer,
    check_layers,
    document_bytes,
    encoded,
    entity_fault,
    entity_numbers,
    fixed_metadata,
    is_ring,
    make_document,
)
from wavejig.files.dxfcheck import check_dxf
from wavejig.files.errors import DrawingError, FileCheckError
from wavejig.geometry.plane import Stroke

STOCK_LAYER = "stock-sheet"
"""The sheet's edge and the arrow of its grain: to lay the nest by, not to run."""

MARK_LAYER = "marks"

# Handles kept free for a sheet's digits; a sheet of a thousand blanks of seven digits takes a tenth of it.
_SPARE_HANDLES = 0x20000


def nest_layers(shapes: NestedShapes) -> tuple[Layer, ...]:
    """`cut`, a layer for each kind of bend, the stock sheet, and `marks` with the running numbers at its end."""
    drawing = Drawing(
        cut=shapes.cut,
        bends=tuple(
            BendLine(start=start, end=end, direction="up", angle_deg=angle)
            for start, end, angle in shapes.bends
        ),
    )
    marks = (*shapes.marks, *shapes.numbers)
    return (
        *drawing.layers(),
        Layer(name=STOCK_LAYER, entities=shapes.stock, colour=8, linetype="DASHED"),
        *((Layer(name=MARK_LAYER, entities=marks, colour=3),) if marks else ()),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Judged:
    """A sheet that was made and judged whole: its shapes, and its bytes before and after the digits.

    first_handle: of those kept free for other sheets' digits.
    """

    shapes: NestedShapes
    document: DxfDocument
    first_handle: int
    head: bytes
    tail: bytes


class NestFiles:
    """Writes the sheets of one batch and reads each back."""

    def __init__(self, title: str, *, blank_area_mm2: float) -> None:
        """title: of all files; blank_area_mm2: of one blank as cut, outline less holes."""
        self._title = title
        self._area = blank_area_mm2
        self._judged: _Judged | None = None

    def write(self, shapes: NestedShapes, path: Path, *, blanks: int) -> None:
        """Write one sheet and read it back.

        Raises FileCheckError when the file does not hold `blanks` closed outlines of the blank's area apart
        from each other, DrawingError for shapes no machine should get, OSError when it cannot be written.
        """
        judged = self._judged
        if judged is None or not _alike(judged.shapes, shapes):
            judged = self._judged = self._write_whole(shapes, path, blanks)
        else:
            for number, stroke in enumerate(shapes.numbers, start=1):
                if fault := entity_fault(stroke, cut=False):
                    raise DrawingError(f"layer {MARK_LAYER}, digit {number}: {fault}")
            path.write_bytes(judged.head + _digits(judged, shapes.numbers) + judged.tail)
        check_digits(path, judged.head, judged.tail, shapes.numbers)

    def _write_whole(self, shapes: NestedShapes, path: Path, blanks: int) -> _Judged:
        layers = nest_layers(shapes)
        check_layers(layers)
        with fixed_metadata():
            document = make_document(layers, title=self._title)
            drawn = list(document.modelspace())
            digits = drawn[len(drawn) - len(shapes.numbers) :]
            handles = document.entitydb.handles
            first = int(str(handles), 16)
            handles.reset(f"{first + _SPARE_HANDLES:X}")
            whole = document_bytes(document)
            written = encoded(_exported(digits, document), document)
        head, _, tail = whole.partition(written) if written else (whole, b"", b"")
        path.write_bytes(whole)
        check_dxf(path, layers, cut_area_mm2=blanks * self._area, blanks=blanks)
        return _Judged(shapes=shapes, document=document, first_handle=first, head=head, tail=tail)


def _alike(a: NestedShapes, b: NestedShapes) -> bool:
    """Everything but the numbers is the same; quick for shapes that share their tuples."""
    return (a.cut, a.bends, a.marks, a.stock) == (b.cut, b.bends, b.marks, b.stock) and bool(
        a.numbers
    ) == bool(b.numbers)


def _digits(judged: _Judged, numbers: tuple[Stroke, ...]) -> bytes:
    """The digits of another sheet as tags, under the handles kept free for them."""
    if len(numbers) > _SPARE_HANDLES:
        raise DrawingError(f"layer {MARK_LAYER}: {len(numbers)} strokes of digits, at most {_SPARE_HANDLES}.")
    document = judged.document
    owner = document.modelspace().layout_key
    made: list[DXFGraphic] = []
    for handle, stroke in zip(count(judged.first_handle), numbers):
        n = entity_numbers(stroke)
        entity: DXFGraphic
        if len(n) == 6:
            ends = {"start": (n[0], n[1]), "end": (n[3], n[4]), "layer": MARK_LAYER}
            entity = Line.new(handle=f"{handle:X}", owner=owner, dxfattribs=ends, doc=document)
        else:
            entity = LWPolyline.new(
                handle=f"{handle:X}", owner=owner, dxfattribs={"layer": MARK_LAYER}, doc=document
            )
            entity.set_points(list(zip(n[0::3], n[1::3], n[2::3], strict=True)), format="xyb")
            entity.closed = is_ring(stroke)
        made.append(entity)
    return encoded(_exported(made, document), document)


def _exported(entities: list[DXFGraphic], document: DxfDocument) -> str:
    stream = io.StringIO()
    writer = TagWriter(stream, dxfversion=document.dxfversion)
    for entity in entities:
        entity.export_dxf(writer)
    return stream.getvalue()


def check_digits(path: Path, head: bytes, tail: bytes, numbers: tuple[Stroke, ...]) -> None:
    """Raise FileCheckError unless the file is the judged sheet with these strokes for its running numbers.

    Reads the tags by itself: group 0 begins an entity, 8 is its layer, 10 and 20 (11 and 21 of a line's end)
    its corners (DXF Reference, Autodesk 2012, from memory).
    """
    data = path.read_bytes()
    if not (data.startswith(head) and data.endswith(tail) and len(data) >= len(head) + len(tail)):
        raise FileCheckError(path, "bytes unlike the first sheet's", "the same but for the running numbers")
    lines = data[len(head) : len(data) - len(tail)].decode("ascii").split("\r\n")
    found: list[list[float]] = []
    for code, value in zip(lines[0:-1:2], lines[1::2], strict=True):
        group = int(code)
        if group == 0:
            found.append([])
        elif group in (10, 20, 11, 21):
            found[-1].append(float(value))
        elif group == 8 and value != MARK_LAYER:
            raise FileCheckError(path, f"a digit on layer {value}", MARK_LAYER)
    wanted = [[v for i, v in enumerate(entity_numbers(s)) if i % 3 < 2] for s in numbers]
    if len(found) != len(wanted):
        raise FileCheckError(path, f"{len(found)} strokes of digits", f"{len(wanted)}")
    for number, (got, want) in enumerate(zip(found, wanted, strict=True), start=1):
        if len(got) != len(want) or any(abs(a - b) > 1e-9 for a, b in zip(got, want, strict=True)):
            raise FileCheckError(path, f"stroke {number} of the digits elsewhere", "where they were drawn")
