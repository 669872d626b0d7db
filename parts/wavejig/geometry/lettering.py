"""Single-stroke lettering for marks: text as open chains of straight strokes, never as live text.

The alphabet is data (data/lettering.toml, an original design on a 4 x 6 grid). Lengths in mm.
Loads no CAD kernel.
"""

from __future__ import annotations

import math
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Literal

from wavejig.geometry.plane import Stroke

Points = tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Glyph:
    """One character in grid units: its box width and its strokes."""

    width: float
    strokes: tuple[Points, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Alphabet:
    """All glyphs, with the box that stands for any other character; lengths in grid units."""

    cap_height: float
    gap: float
    unknown: Glyph
    glyphs: Mapping[str, Glyph]

    def glyph(self, character: str) -> Glyph:
        """The glyph of a character: its own, else its capital's, else the empty box."""
        return self.glyphs.get(character) or self.glyphs.get(character.upper()) or self.unknown


@cache
def alphabet() -> Alphabet:
    """The alphabet, read once from its data file."""
    raw = tomllib.loads((files("wavejig.geometry") / "data" / "lettering.toml").read_text(encoding="utf-8"))
    glyphs = {name: _glyph(chains) for name, chains in raw["glyphs"].items()}
    glyphs[" "] = Glyph(width=float(raw["space_width"]), strokes=())
    return Alphabet(
        cap_height=float(raw["cap_height"]),
        gap=float(raw["gap"]),
        unknown=_glyph(raw["unknown"]),
        glyphs=MappingProxyType(glyphs),
    )


def text_width_mm(text: str, height_mm: float) -> float:
    """Width of one line of text from the left of its first box to the right of its last, in mm.

    height_mm: height of a capital. Raises ValueError when it is not a positive length.
    """
    letters = alphabet()
    widths = [letters.glyph(character).width for character in text]
    return (sum(widths) + letters.gap * max(0, len(widths) - 1)) * _unit_mm(letters, height_mm)


def strokes(
    text: str,
    height_mm: float,
    x_mm: float = 0.0,
    y_mm: float = 0.0,
    rotation_deg: float = 0.0,
    align: Literal["left", "centre"] = "left",
) -> tuple[Stroke, ...]:
    """One line of text as strokes.

    height_mm: height of a capital. (x_mm, y_mm): with "left", the left end of the baseline; with "centre",
    the middle of the line's box (half its width, half a capital's height). rotation_deg turns the text about
    that point, counter-clockwise. A character that is not in the alphabet is drawn as an empty box; so are
    line breaks and tabs. Raises ValueError when a number is not finite, the height not positive, or `align`
    something else.
    """
    letters = alphabet()
    unit_mm = _unit_mm(letters, height_mm)
    if not all(math.isfinite(value) for value in (x_mm, y_mm, rotation_deg)):
        raise ValueError(
            f"lettering: got position ({x_mm}, {y_mm}) mm, rotation {rotation_deg} deg; need finite numbers."
        )
    if align not in ("left", "centre"):
        raise ValueError(f'lettering: got align "{align}", need "left" or "centre".')
    shift = (0.0, 0.0) if align == "left" else (-text_width_mm(text, height_mm) / 2.0, -height_mm / 2.0)
    turn = math.radians(rotation_deg)
    cosine, sine = math.cos(turn), math.sin(turn)
    out: list[Stroke] = []
    pen = 0.0
    for character in text:
        glyph = letters.glyph(character)
        for chain in glyph.strokes:
            local = [(shift[0] + (pen + gx) * unit_mm, shift[1] + gy * unit_mm) for gx, gy in chain]
            out.append(
                Stroke(
                    points=tuple(
                        (x_mm + u * cosine - v * sine, y_mm + u * sine + v * cosine) for u, v in local
                    )
                )
            )
        pen += glyph.width + letters.gap
    return tuple(out)


def _unit_mm(letters: Alphabet, height_mm: float) -> float:
    if not (math.isfinite(height_mm) and height_mm > 0.0):
        raise ValueError(f"lettering: got a height of {height_mm} mm, need more than 0.")
    return height_mm / letters.cap_height


def _glyph(chains: list[str]) -> Glyph:
    parsed = tuple(tuple(_corner(corner) for corner in chain.split()) for chain in chains)
    return Glyph(width=max(x for chain in parsed for x, _ in chain), strokes=parsed)


def _corner(text: str) -> tuple[float, float]:
    x, y = text.split(",")
    return float(x), float(y)
