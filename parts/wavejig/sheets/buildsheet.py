"""build-sheet.pdf: what the person at the bench reads, from the list of materials to the check template."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path
from typing import Any

from reportlab.lib.units import mm
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import (
    BaseDocTemplate,
    Frame,
    NextPageTemplate,
    PageBreak,
    PageTemplate,
)

from wavejig.sheets.buildmodel import BuildSheet
from wavejig.sheets.flow import Picture, pages_canvas
from wavejig.sheets.fonts import REGULAR, printable, use_fonts
from wavejig.sheets.frame import PAPERS_MM
from wavejig.sheets.making import making_story
from wavejig.sheets.proving import proving_story
from wavejig.sheets.template import templates

__all__ = ["BuildSheet", "write_build_sheet"]

# Round the text; printers leave 4 to 6 mm white, so templates may come nearer. Common practice, no source.
MARGIN_MM, TOP_MM, FOOT_MM, TEMPLATE_MARGIN_MM = 14.0, 12.0, 14.0, 8.0


def write_build_sheet(sheet: BuildSheet, path: Path) -> None:
    """Typeset the sheet. Same input, same bytes. Raises OSError when it cannot be written."""
    use_fonts()
    design = sheet.design
    wide, high = PAPERS_MM[design.sheet.paper]
    document = BaseDocTemplate(
        str(path),
        pagesize=(wide * mm, high * mm),
        title=printable(f"{design.name}: build sheet"),
        author="",
        subject="",
        creator="wavejig",
        invariant=1,
        pageCompression=1,
        initialFontName=REGULAR,
    )
    text = (wide - 2.0 * MARGIN_MM, high - TOP_MM - FOOT_MM)
    full = (wide - 2.0 * TEMPLATE_MARGIN_MM, high - TEMPLATE_MARGIN_MM - FOOT_MM)
    document.addPageTemplates(
        [
            PageTemplate(id="text", frames=[_frame(MARGIN_MM, text)]),
            PageTemplate(id="template", frames=[_frame(TEMPLATE_MARGIN_MM, full)]),
        ]
    )
    story = [*making_story(sheet, text[0]), *proving_story(sheet, text[0]), *_templates(sheet, full)]

    def footer(canvas: Canvas, page: int, pages: int) -> None:
        canvas.saveState()
        canvas.setFont(REGULAR, 7.5)
        y = 7.0 * mm
        canvas.setLineWidth(0.2 * mm)
        canvas.line(MARGIN_MM * mm, y + 3.6 * mm, (wide - MARGIN_MM) * mm, y + 3.6 * mm)
        canvas.drawString(MARGIN_MM * mm, y, printable(f"{design.name}: build sheet"))
        canvas.drawRightString((wide - MARGIN_MM) * mm, y, f"page {page} of {pages}")
        canvas.restoreState()

    document.build(story, canvasmaker=pages_canvas(footer))


def _frame(left_mm: float, size_mm: tuple[float, float]) -> Frame:
    """A page's field above the footer."""
    w, h = size_mm
    return Frame(
        left_mm * mm,
        FOOT_MM * mm,
        w * mm,
        h * mm,
        leftPadding=0,
        rightPadding=0,
        topPadding=0,
        bottomPadding=0,
    )


def _templates(sheet: BuildSheet, field_mm: tuple[float, float]) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.tray
    room = (field_mm[0], field_mm[1] - 0.5)
    yield NextPageTemplate("template")
    for tile in templates(i.radiator, i.tray, sheet.pattern, room):
        yield PageBreak()
        yield Picture(tile.drawn, *room)
