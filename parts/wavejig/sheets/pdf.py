"""Drawings as PDF: laid-out strokes and words on a page, fonts embedded, no clock in the file."""

from __future__ import annotations

import math
from collections.abc import Iterable
from pathlib import Path
from typing import Any

from reportlab.lib.units import mm
from reportlab.pdfgen.canvas import FILL_EVEN_ODD, Canvas

from wavejig.files.errors import FileCheckError
from wavejig.geometry.plane import Contour
from wavejig.sheets.fonts import BOLD, CAP_HEIGHT, REGULAR, printable, use_fonts
from wavejig.sheets.frame import everything
from wavejig.sheets.marks import DimGroup, Drawn, Head, Stroke, Word
from wavejig.sheets.model import Pen, Sheet

# Line widths in mm after ISO 128-2's series (0.5 wide, 0.25 narrow), from memory, one step thinner on A4;
# dashes in mm.
_WIDTHS: dict[Pen, float] = {
    "outline": 0.35, "thin": 0.18, "centre": 0.18, "hidden": 0.18, "bend": 0.25, "mark": 0.18, "frame": 0.35,
    "wire": 0.35, "grey": 0.18,
}  # fmt: skip
_DASHES: dict[Pen, tuple[float, ...]] = {
    "centre": (6.0, 1.0, 1.0, 1.0),
    "hidden": (2.0, 1.0),
    "bend": (5.0, 1.0, 1.0, 1.0, 1.0, 1.0),
}
_FILL_GREY, _LINE_GREY = 0.87, 0.6


def write_sheet_pdf(sheet: Sheet, path: Path, recipe: str) -> None:
    """One drawing on one page. Same sheet, same bytes. Raises OSError when it cannot be written."""
    use_fonts()
    wide, high = sheet.paper_mm
    canvas = Canvas(
        str(path), pagesize=(wide * mm, high * mm), invariant=1, pageCompression=1, initialFontName=REGULAR
    )
    canvas.setTitle(printable(f"{recipe} {sheet.block.title}"))
    canvas.setCreator("wavejig")
    canvas.setAuthor("")
    canvas.setSubject("dimensions in mm")
    draw(canvas, everything(sheet))
    canvas.showPage()
    canvas.save()


def draw(canvas: Canvas, drawn: Iterable[Drawn]) -> None:
    """Put laid-out things on a canvas; their paper mm from the canvas's present origin."""
    for thing in drawn:
        match thing:
            case DimGroup():
                draw(canvas, thing.parts)
            case Stroke():
                _stroke(canvas, thing)
            case Head():
                _head(canvas, thing)
            case Word():
                _word(canvas, thing)


def _stroke(canvas: Canvas, stroke: Stroke) -> None:
    canvas.saveState()
    canvas.setLineWidth(_WIDTHS[stroke.pen] * mm)
    canvas.setLineCap(1 if stroke.pen not in _DASHES else 0)
    canvas.setLineJoin(1)
    if stroke.pen in _DASHES:
        canvas.setDash([d * mm for d in _DASHES[stroke.pen]])
    if stroke.pen == "grey":
        canvas.setStrokeGray(_LINE_GREY)
    fill = 1 if stroke.filled else 0
    if fill:
        canvas.setFillGray(_FILL_GREY)
    if stroke.circle is not None:
        c = stroke.circle
        canvas.circle(c.x_mm * mm, c.y_mm * mm, c.diameter_mm / 2.0 * mm, stroke=1, fill=fill)
    else:
        path = canvas.beginPath()
        if stroke.contour is not None:
            for contour in (stroke.contour, *stroke.holes):
                _trace(path, contour)
        else:
            path.moveTo(stroke.points[0][0] * mm, stroke.points[0][1] * mm)
            for x, y in stroke.points[1:]:
                path.lineTo(x * mm, y * mm)
        canvas.drawPath(path, stroke=1, fill=fill, fillMode=FILL_EVEN_ODD)
    canvas.restoreState()


def _trace(path: Any, contour: Contour) -> None:
    """The contour as straights and Bezier arcs of at most a quarter turn."""
    vertices = contour.vertices
    path.moveTo(vertices[0][0] * mm, vertices[0][1] * mm)
    for (x0, y0, bulge), (x1, y1, _) in zip(vertices, (*vertices[1:], vertices[0]), strict=True):
        if not bulge:
            path.lineTo(x1 * mm, y1 * mm)
            continue
        theta = 4.0 * math.atan(bulge)
        offset = (1.0 - bulge**2) / (4.0 * bulge)
        cx, cy = (x0 + x1) / 2.0 - (y1 - y0) * offset, (y0 + y1) / 2.0 + (x1 - x0) * offset
        pieces = max(1, math.ceil(abs(theta) / (math.pi / 2.0) - 1e-9))
        step = theta / pieces
        k = 4.0 / 3.0 * math.tan(step / 4.0)
        px, py = x0 - cx, y0 - cy
        for _i in range(pieces):
            qx = px * math.cos(step) - py * math.sin(step)
            qy = px * math.sin(step) + py * math.cos(step)
            path.curveTo(
                (cx + px - k * py) * mm, (cy + py + k * px) * mm,
                (cx + qx + k * qy) * mm, (cy + qy - k * qx) * mm,
                (cx + qx) * mm, (cy + qy) * mm,
            )  # fmt: skip
            px, py = qx, qy
    path.close()


def _head(canvas: Canvas, head: Head) -> None:
    path = canvas.beginPath()
    path.moveTo(head.tip[0] * mm, head.tip[1] * mm)
    for x, y in head.back:
        path.lineTo(x * mm, y * mm)
    path.close()
    canvas.setFillGray(0.0)
    canvas.drawPath(path, stroke=0, fill=1)


def _word(canvas: Canvas, word: Word) -> None:
    canvas.saveState()
    canvas.setFillGray(0.0)
    canvas.setFont(BOLD if word.bold else REGULAR, word.height_mm / CAP_HEIGHT * mm)
    canvas.translate(word.at[0] * mm, word.at[1] * mm)
    canvas.rotate(word.rotation_deg)
    text = printable(word.text)
    match word.anchor:
        case "left":
            canvas.drawString(0, 0, text)
        case "centre":
            canvas.drawCentredString(0, 0, text)
        case "right":
            canvas.drawRightString(0, 0, text)
    canvas.restoreState()


def check_pdf(path: Path, recipe: str, paper_mm: tuple[float, float]) -> int:
    """Raise FileCheckError unless a second reader finds the pages as they should be; returns how many.

    Every page has the paper's size and the recipe's name as text that can be selected, and every font is
    embedded.
    """
    from pypdf import PdfReader
    from pypdf.errors import PyPdfError

    try:
        reader = PdfReader(path)
        pages = list(reader.pages)
        for page in pages:
            _check_page(path, page, recipe, paper_mm)
    except PyPdfError as err:
        raise FileCheckError(path, f"a file its reader refuses ({err})", "a complete PDF") from err
    if not pages:
        raise FileCheckError(path, "no page", "one at least")
    return len(pages)


def _check_page(path: Path, page: Any, recipe: str, paper_mm: tuple[float, float]) -> None:
    size = (float(page.mediabox.width) / mm, float(page.mediabox.height) / mm)
    if max(abs(a - b) for a, b in zip(size, paper_mm, strict=True)) > 0.01:
        raise FileCheckError(
            path, f"paper of {size[0]:.2f} x {size[1]:.2f} mm", f"{paper_mm[0]:g} x {paper_mm[1]:g}"
        )
    wanted = "".join(printable(recipe).split())
    if wanted not in "".join(page.extract_text().split()):
        raise FileCheckError(path, "a page without the recipe's name", f"{wanted!r} on each")
    for name, font in page["/Resources"]["/Font"].items():
        described = font.get_object().get("/FontDescriptor")
        if described is None or "/FontFile2" not in described.get_object():
            raise FileCheckError(path, f"font {name} not embedded", "all fonts in the file")
