"""reflector/drill-template.pdf: the floor of a dish that is there already, 1:1, on as many pages as it takes."""

from __future__ import annotations

from pathlib import Path

from reportlab.lib.units import mm
from reportlab.pdfgen.canvas import Canvas

from wavejig.design.model import Design
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray
from wavejig.sheets.fonts import REGULAR, printable, use_fonts
from wavejig.sheets.frame import PAPERS_MM
from wavejig.sheets.pdf import draw
from wavejig.sheets.template import drill_templates

MARGIN_MM, FOOT_MM = 8.0, 12.0  # printers leave 4 to 6 mm white; common practice, no source


def write_drill_paper(design: Design, tray: Tray, pattern: FlatPattern, path: Path) -> int:
    """Write it and return its number of pages. Same input, same bytes. Raises OSError when it cannot be written."""
    use_fonts()
    wide, high = PAPERS_MM[design.sheet.paper]
    canvas = Canvas(
        str(path), pagesize=(wide * mm, high * mm), invariant=1, pageCompression=1, initialFontName=REGULAR
    )
    canvas.setTitle(printable(f"{design.name} drill template"))
    canvas.setCreator("wavejig")
    canvas.setAuthor("")
    canvas.setSubject("1:1")
    tiles = tuple(drill_templates(tray, pattern, (wide - 2.0 * MARGIN_MM, high - MARGIN_MM - FOOT_MM)))
    for number, tile in enumerate(tiles, start=1):
        canvas.saveState()
        canvas.translate(MARGIN_MM * mm, FOOT_MM * mm)
        draw(canvas, tile.drawn)
        canvas.restoreState()
        canvas.setFont(REGULAR, 7.5)
        canvas.drawString(MARGIN_MM * mm, 6.0 * mm, printable(f"{design.name}: drill template"))
        canvas.drawRightString((wide - MARGIN_MM) * mm, 6.0 * mm, f"page {number} of {len(tiles)}")
        canvas.showPage()
    canvas.save()
    return len(tiles)
