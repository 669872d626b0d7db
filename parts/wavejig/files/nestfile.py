"""nest-N.dxf: the blanks of one stock sheet, to cut in one go; and its reading back."""

from __future__ import annotations

from pathlib import Path

from wavejig.batch.model import NestedShapes
from wavejig.files.dxf import BendLine, Drawing, Layer, write_dxf
from wavejig.files.dxfcheck import check_dxf

STOCK_LAYER = "stock-sheet"
"""The sheet's edge and the arrow of its grain: to lay the nest by, not to run."""


def nest_layers(shapes: NestedShapes) -> tuple[Layer, ...]:
    """`cut`, a layer for each kind of bend, `marks` and the stock sheet."""
    drawing = Drawing(
        cut=shapes.cut,
        bends=tuple(
            BendLine(start=start, end=end, direction="up", angle_deg=angle)
            for start, end, angle in shapes.bends
        ),
        marks=shapes.marks,
    )
    return (
        *drawing.layers(),
        Layer(name=STOCK_LAYER, entities=shapes.stock, colour=8, linetype="DASHED"),
    )


def write_nest(shapes: NestedShapes, path: Path, title: str, *, blanks: int, blank_area_mm2: float) -> None:
    """Write one sheet and read it back.

    blank_area_mm2: of one blank as cut, outline less holes. Raises FileCheckError when the file does not hold
    `blanks` closed outlines of that area apart from each other, OSError when it cannot be written.
    """
    layers = nest_layers(shapes)
    write_dxf(layers, path, title=title)
    check_dxf(path, layers, cut_area_mm2=blanks * blank_area_mm2, blanks=blanks)
