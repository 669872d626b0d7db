"""What surrounds the views: border, title block, projection symbol, tables, notes. All in paper mm."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.geometry.plane import Circle, Contour
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.layout import lay_out
from wavejig.sheets.marks import Drawn, Stroke, Word
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    ROW_MM,
    SMALL_TEXT_MM,
    TITLE_ROW_MM,
    TITLE_TEXT_MM,
    Pt,
    Sheet,
    Table,
    TitleBlock,
)

# Sizes of paper: ISO 216 A4; Letter: ANSI X3.151, 8.5 x 11 in; from memory.
PAPERS_MM = {"A4": (210.0, 297.0), "Letter": (215.9, 279.4)}
BORDER_MM = 8.0
# Title block: 180 mm wide as in ISO 7200, from memory; rows of our own.
BLOCK_WIDE_MM, BLOCK_HIGH_MM = 180.0, 26.0
PROJECTION_WORDS = {"first": "first-angle projection", "third": "third-angle projection"}


def landscape(paper: str) -> tuple[float, float]:
    """Width and height in mm of a paper lying on its side."""
    short, long = PAPERS_MM[paper]
    return (long, short)


def room(paper_mm: tuple[float, float]) -> tuple[float, float, float, float]:
    """x0, y0, x1, y1 of the field for views: inside the border, above the title block."""
    wide, high = paper_mm
    return (BORDER_MM + 2.0, BORDER_MM + BLOCK_HIGH_MM + 2.0, wide - BORDER_MM - 2.0, high - BORDER_MM - 2.0)


def everything(sheet: Sheet) -> Iterator[Drawn]:
    """The whole sheet, laid out."""
    wide, high = sheet.paper_mm
    yield _box(BORDER_MM, BORDER_MM, wide - BORDER_MM, high - BORDER_MM)
    yield from _block(sheet.block, wide - BORDER_MM - BLOCK_WIDE_MM, BORDER_MM)
    for view in sheet.views:
        yield from lay_out(view)
    for table in sheet.tables:
        yield from table_marks(table)
    x, y = sheet.notes_at
    beside_mm = wide - BORDER_MM - BLOCK_WIDE_MM - 2.0 - x  # notes stand left of the title block
    for note in sheet.notes:
        for line in wrapped(note, beside_mm):
            yield Word(at=(x, y), text=line, height_mm=SMALL_TEXT_MM, anchor="left")
            y -= SMALL_TEXT_MM * 1.5
        y -= 0.5


def wrapped(text: str, wide_mm: float, height_mm: float = SMALL_TEXT_MM) -> Iterator[str]:
    """The text in lines no wider than `wide_mm` (a single word may be)."""
    line = ""
    for word in text.split():
        longer = f"{line} {word}".strip()
        if line and width_mm(longer, height_mm) > wide_mm:
            yield line
            line = word
        else:
            line = longer
    if line:
        yield line


def table_marks(table: Table) -> Iterator[Drawn]:
    """A table's lines and cells."""
    x0, y = table.at
    wide = sum(table.widths_mm)
    if table.title:
        yield Word(at=(x0, y - 3.2), text=table.title, height_mm=SMALL_TEXT_MM, anchor="left", bold=True)
        y -= TITLE_ROW_MM
    top = y
    for i, row in enumerate((table.head, *table.rows)):
        x = x0
        for cell, w in zip(row, table.widths_mm, strict=True):
            at = (x + 0.9, y - ROW_MM + 1.1)
            yield Word(at=at, text=cell, height_mm=SMALL_TEXT_MM, anchor="left", bold=i == 0)
            x += w
        y -= ROW_MM
        yield Stroke(points=((x0, y), (x0 + wide, y)))
    yield Stroke(points=((x0, top), (x0 + wide, top)))
    x = x0
    for w in (0.0, *table.widths_mm):
        x += w
        yield Stroke(points=((x, top), (x, y)))


def _block(block: TitleBlock, x: float, y: float) -> Iterator[Drawn]:
    w, h = BLOCK_WIDE_MM, BLOCK_HIGH_MM
    yield _box(x, y, x + w, y + h)
    third = h / 3.0
    for i in (1, 2):
        yield Stroke(points=((x, y + i * third), (x + w - 34.0, y + i * third)))
    for column in (60.0, 104.0):
        yield Stroke(points=((x + column, y), (x + column, y + 2.0 * third)))
    yield Stroke(points=((x + w - 34.0, y), (x + w - 34.0, y + h)))
    cells = (
        (0.0, 2, "recipe and drawing", f"{block.recipe}: {block.title}", TITLE_TEXT_MM),
        (0.0, 1, "material", block.material, DIM_TEXT_MM),
        (60.0, 1, "part", block.part, DIM_TEXT_MM),
        (104.0, 1, "quantity", block.quantity, DIM_TEXT_MM),
        (0.0, 0, "general tolerances", block.tolerance, DIM_TEXT_MM),
        (60.0, 0, "scale (on this paper)", block.scale, DIM_TEXT_MM),
        (104.0, 0, "", block.note, SMALL_TEXT_MM),
    )
    room_mm = {
        (0.0, 2): w - 36.0,
        (0.0, 1): 58.0,
        (60.0, 1): 42.0,
        (104.0, 1): 40.0,
        (0.0, 0): 58.0,
        (60.0, 0): 42.0,
    }
    for column, row, label, text, size in cells:
        at = (x + column + 1.0, y + row * third)
        fits = size
        wide = room_mm.get((column, row), 40.0)
        if (now := width_mm(text, fits, bold=row == 2)) > wide:
            fits *= wide / now
        yield Word(at=(at[0], at[1] + third - 2.4), text=label, height_mm=1.3, anchor="left")
        yield Word(at=(at[0], at[1] + 1.6), text=text, height_mm=fits, anchor="left", bold=row == 2)
    middle = (x + w - 17.0, y + 16.0)
    yield from _projection(block.projection, middle)
    yield Word(
        at=(middle[0], y + 6.0),
        text=PROJECTION_WORDS[block.projection],
        height_mm=SMALL_TEXT_MM * 0.85,
        anchor="centre",
    )
    yield Word(
        at=(middle[0], y + 2.4), text="dimensions in mm", height_mm=SMALL_TEXT_MM * 0.85, anchor="centre"
    )


def _projection(kind: str, middle: Pt) -> Iterator[Drawn]:
    """The truncated cone of ISO 5456-2 (from memory), beside its end view.

    In first angle the circles stand right of a cone that narrows to the left; in third angle left of it.
    """
    x, y = middle
    side = 1.0 if kind == "first" else -1.0
    cone, ends = x - side * 6.5, x + side * 6.5
    narrow, wide = 1.5, 3.0
    # the cone narrows to the left in both
    yield Stroke(
        contour=Contour.polygon(
            [
                (cone - 4.0, y - narrow),
                (cone + 4.0, y - wide),
                (cone + 4.0, y + wide),
                (cone - 4.0, y + narrow),
            ]
        ),
        pen="outline",
    )
    for r in (narrow, wide):
        yield Stroke(circle=Circle(x_mm=ends, y_mm=y, diameter_mm=2.0 * r), pen="outline")
    yield Stroke(points=((cone - 5.0, y), (cone + 5.0, y)), pen="centre")
    yield Stroke(points=((ends - 4.0, y), (ends + 4.0, y)), pen="centre")
    yield Stroke(points=((ends, y - 4.0), (ends, y + 4.0)), pen="centre")


def _box(x0: float, y0: float, x1: float, y1: float) -> Stroke:
    return Stroke(contour=Contour.rectangle(x0, y0, x1, y1), pen="frame")
