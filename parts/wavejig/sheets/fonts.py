"""The typeface of everything printed: Bitstream Vera, which the typesetting library brings along.

It is embedded as a subset, so the text can be selected and searched and looks the same everywhere. It has
the signs drawings need (diameter, degree, plus-minus, multiply, micro, ohm) but no arrows and few Greek
letters: those are drawn or spelt out. Characters it lacks are replaced, never printed as an empty box.
"""

from __future__ import annotations

import unicodedata
from functools import cache

from reportlab.pdfbase import pdfmetrics
from reportlab.pdfbase.ttfonts import TTFont

REGULAR, BOLD = "wavejig-regular", "wavejig-bold"
CAP_HEIGHT = 0.729
"""Height of a capital / size of the type, of this face (its capitals reach 1493 of 2048 units)."""


@cache
def use_fonts() -> None:
    """Tell the typesetting library about the faces; once is enough."""
    pdfmetrics.registerFont(TTFont(REGULAR, "Vera.ttf"))
    pdfmetrics.registerFont(TTFont(BOLD, "VeraBd.ttf"))
    pdfmetrics.registerFontFamily(REGULAR, normal=REGULAR, bold=BOLD, italic=REGULAR, boldItalic=BOLD)


def width_mm(text: str, height_mm: float, *, bold: bool = False) -> float:
    """Width of a line with capitals `height_mm` high; mm in, mm out, whatever the library's own unit."""
    use_fonts()
    return float(pdfmetrics.stringWidth(printable(text), BOLD if bold else REGULAR, height_mm / CAP_HEIGHT))


def printable(text: str) -> str:
    """The text with every character the face lacks replaced: without its accent, else by "?"."""
    return "".join(_shown(c) for c in text)


@cache
def _shown(character: str) -> str:
    have = _characters()
    if ord(character) in have:
        return character
    plain = "".join(c for c in unicodedata.normalize("NFKD", character) if ord(c) in have)
    return plain or ("" if unicodedata.category(character) in ("Cc", "Cf") else "?")


@cache
def _characters() -> frozenset[int]:
    use_fonts()
    return frozenset(c for c in pdfmetrics.getFont(REGULAR).face.charToGlyph if c >= 32)
