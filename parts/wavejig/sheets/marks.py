"""What a laid-out sheet is made of, in paper mm: strokes, arrow heads, words, whole dimensions."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

from wavejig.geometry.plane import Circle, Contour
from wavejig.sheets.model import (
    Anchor,
    Pen,
    Pt,
)

# Arrow, gap to the part and overshoot of extension lines: after ISO 129-1, from memory.
ARROW_MM, GAP_MM, OVER_MM, TEXT_OFF_MM = 2.5, 0.8, 1.5, 0.8


@dataclass(frozen=True, slots=True, kw_only=True)
class Stroke:
    """A chain of straights on paper, a closed contour with its holes, or a circle."""

    points: tuple[Pt, ...] = ()
    contour: Contour | None = None
    holes: tuple[Contour, ...] = ()
    circle: Circle | None = None
    pen: Pen = "thin"
    filled: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Head:
    """A filled arrow head: tip, then the two corners of its back."""

    tip: Pt
    back: tuple[Pt, Pt]


@dataclass(frozen=True, slots=True, kw_only=True)
class Word:
    """One line of lettering on paper."""

    at: Pt
    text: str
    height_mm: float
    anchor: Anchor
    rotation_deg: float = 0.0
    bold: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class DimGroup:
    """One dimension: its parts, what it measures, and its definition points on paper.

    kind: "linear", "diameter", "radius" or "angle". points: linear: a, b, on the dimension line; diameter: two
    opposite rim points; radius: centre, rim; angle: vertex, a point on each side, one on the arc. value: true
    mm or deg. factor: true mm for one paper mm.
    """

    kind: Literal["linear", "diameter", "radius", "angle"]
    parts: tuple[Stroke | Head | Word, ...]
    points: tuple[Pt, ...]
    angle_deg: float
    value: float
    text: str
    factor: float


Drawn = Stroke | Head | Word | DimGroup


def arrow_head(tip: Pt, direction_rad: float) -> Head:
    """An arrow head that points in a direction: slender, 15 degrees from side to side or so."""
    back = []
    for side in (1.0, -1.0):
        a = direction_rad + math.pi + side * math.radians(8.0)
        back.append((tip[0] + ARROW_MM * math.cos(a), tip[1] + ARROW_MM * math.sin(a)))
    return Head(tip=tip, back=(back[0], back[1]))
