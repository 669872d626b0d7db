"""Typesetting helpers: paragraphs that never read recipe text as markup, tables, pictures, page numbers."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import Any
from xml.sax.saxutils import escape

from reportlab.lib.colors import Color, black, white
from reportlab.lib.enums import TA_LEFT
from reportlab.lib.styles import ParagraphStyle
from reportlab.lib.units import mm
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Flowable, Paragraph, Table

from wavejig.sheets.fonts import BOLD, REGULAR, printable, use_fonts
from wavejig.sheets.marks import Drawn
from wavejig.sheets.pdf import draw

GREY, PALE = Color(0.45, 0.45, 0.45), Color(0.92, 0.92, 0.92)
PLAIN = (
    ("VALIGN", (0, 0), (-1, -1), "TOP"),
    ("LEFTPADDING", (0, 0), (-1, -1), 0),
    ("FONTNAME", (0, 0), (-1, -1), REGULAR),  # empty cells name a font too, and it must be one we embed
)
"""Style of a table that only sets things side by side."""

# Type sizes in points; taste, no source.
_BODY, _SMALL, _HEAD, _TITLE = 8.5, 7.3, 11.0, 17.0


def style(
    size: float = _BODY, *, bold: bool = False, after: float = 1.5, before: float = 0.0
) -> ParagraphStyle:
    """A paragraph style of the house; distances in mm."""
    use_fonts()
    return ParagraphStyle(
        f"s{size}{bold}{after}{before}",
        fontName=BOLD if bold else REGULAR,
        fontSize=size,
        leading=size * 1.28,
        spaceAfter=after * mm,
        spaceBefore=before * mm,
        alignment=TA_LEFT,
        textColor=black,
    )


def safe(text: str) -> str:
    """Text for a paragraph: what the face lacks replaced, the signs of markup escaped."""
    return escape(printable(text.replace("\n", " ")))


def para(text: str, *, bold: bool = False, small: bool = False, after: float = 1.5) -> Paragraph:
    """A paragraph of plain text."""
    return Paragraph(safe(text), style(_SMALL if small else _BODY, bold=bold, after=after))


def lead(word: str, text: str, *, small: bool = False, after: float = 1.5) -> Paragraph:
    """A paragraph that begins with a bold word; both are plain text."""
    return Paragraph(f"<b>{safe(word)}</b> {safe(text)}", style(_SMALL if small else _BODY, after=after))


def heading(text: str) -> Paragraph:
    """A section's heading; it stays with what follows."""
    made = style(_HEAD, bold=True, after=1.6, before=4.0)
    made.keepWithNext = 1
    return Paragraph(safe(text), made)


def title(text: str) -> Paragraph:
    """The sheet's title."""
    return Paragraph(safe(text), style(_TITLE, bold=True, after=1.0))


def table(
    head: Sequence[str],
    rows: Iterable[Sequence[str]],
    widths_mm: Sequence[float],
    *,
    high_mm: float | None = None,
    boxes: Sequence[int] = (),
) -> Table:
    """A ruled table of plain text; the head repeats on every page. boxes: columns to write in, left white."""
    cells = [[Paragraph(safe(c), style(_SMALL, bold=True, after=0.0)) for c in head]]
    cells += [[Paragraph(safe(c), style(_SMALL, after=0.0)) for c in row] for row in rows]
    heights = None if high_mm is None else [None, *([high_mm * mm] * (len(cells) - 1))]
    made = Table(
        cells, colWidths=[w * mm for w in widths_mm], rowHeights=heights, repeatRows=1, hAlign="LEFT"
    )
    commands: list[tuple[Any, ...]] = [
        ("FONTNAME", (0, 0), (-1, -1), REGULAR),
        ("GRID", (0, 0), (-1, -1), 0.25 * mm, GREY),
        ("BACKGROUND", (0, 0), (-1, 0), PALE),
        ("VALIGN", (0, 0), (-1, -1), "MIDDLE"),
        ("TOPPADDING", (0, 0), (-1, -1), 1.6),
        ("BOTTOMPADDING", (0, 0), (-1, -1), 2.2),
        ("LEFTPADDING", (0, 0), (-1, -1), 3),
        ("RIGHTPADDING", (0, 0), (-1, -1), 2),
    ]
    commands += [("BOX", (c, 1), (c, -1), 0.5 * mm, black) for c in boxes]
    commands += [("BACKGROUND", (c, 1), (c, -1), white) for c in boxes]
    made.setStyle(commands)
    return made


class Picture(Flowable):  # type: ignore[misc]
    """Laid-out strokes in a box of paper mm; its origin is the box's lower left corner."""

    def __init__(self, drawn: Iterable[Drawn], wide_mm: float, high_mm: float) -> None:
        super().__init__()
        self.drawn = tuple(drawn)
        self.width, self.height = wide_mm * mm, high_mm * mm

    def wrap(self, available_wide: float, available_high: float) -> tuple[float, float]:
        """Its size in points, whatever room there is."""
        del available_wide, available_high
        return self.width, self.height

    def draw(self) -> None:
        """Draw on the canvas it has been given."""
        draw(self.canv, self.drawn)


class Ticks(Flowable):  # type: ignore[misc]
    """A square to tick."""

    def __init__(self, side_mm: float = 3.2) -> None:
        super().__init__()
        self.width = self.height = side_mm * mm

    def wrap(self, available_wide: float, available_high: float) -> tuple[float, float]:
        """Its size in points."""
        del available_wide, available_high
        return self.width, self.height

    def draw(self) -> None:
        """Draw the square."""
        self.canv.setLineWidth(0.25 * mm)
        self.canv.rect(0, 0, self.width, self.height)


def numbered(steps: Sequence[str], wide_mm: float) -> Table:
    """Numbered sentences with a box to tick before each."""
    rows = [
        [Ticks(), Paragraph(str(i), style(bold=True, after=0.0)), Paragraph(safe(text), style(after=0.0))]
        for i, text in enumerate(steps, start=1)
    ]
    made = Table(rows, colWidths=[6 * mm, 7 * mm, (wide_mm - 13.0) * mm], hAlign="LEFT")
    made.setStyle(
        [*PLAIN, ("TOPPADDING", (0, 0), (-1, -1), 1.5), ("BOTTOMPADDING", (0, 0), (-1, -1), 2.0)]
    )  # fmt: skip
    return made


def pages_canvas(footer: Callable[[Canvas, int, int], None]) -> type[Canvas]:
    """A canvas class that knows how many pages there are when it draws each page's footer."""

    class Counted(Canvas):  # type: ignore[misc]
        def __init__(self, *args: Any, **kwargs: Any) -> None:
            super().__init__(*args, **kwargs)
            self._kept: list[dict[str, Any]] = []

        def showPage(self) -> None:
            self._kept.append(dict(self.__dict__))
            self._startPage()

        def save(self) -> None:
            for number, state in enumerate(self._kept, start=1):
                self.__dict__.update(state)
                footer(self, number, len(self._kept))
                super().showPage()
            super().save()

    return Counted
