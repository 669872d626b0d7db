"""A drawing as data: views of curves, dimensions and notes on a sheet of paper.

Vocabulary: a *view* has coordinates of its own in true mm and a scale (paper / true); everything else on a
*sheet* is in paper mm from its lower left corner. Offsets of dimension lines are in paper mm, so that they
look alike at any scale. Imports nothing heavy.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from wavejig.geometry.plane import Circle, Contour

Pt = tuple[float, float]
Pen = Literal["outline", "thin", "centre", "hidden", "bend", "mark", "frame", "wire", "grey"]
Anchor = Literal["left", "centre", "right"]

# Lettering heights on paper (capitals), from the series of ISO 3098-1, from memory.
DIM_TEXT_MM, SMALL_TEXT_MM, TITLE_TEXT_MM = 2.5, 1.8, 3.5


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """A straight."""

    a: Pt
    b: Pt
    pen: Pen = "thin"


@dataclass(frozen=True, slots=True, kw_only=True)
class Chain:
    """Straights through points."""

    points: tuple[Pt, ...]
    pen: Pen = "thin"
    closed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Shape:
    """A closed contour of straights and arcs, with holes in it. filled: light grey between."""

    contour: Contour
    pen: Pen = "outline"
    filled: bool = False
    holes: tuple[Contour, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Ring:
    """A circle. cross: centre lines through it."""

    circle: Circle
    pen: Pen = "outline"
    cross: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Text:
    """One line of lettering; `at` is on the base line. shift: paper mm on top of `at`."""

    at: Pt
    text: str
    height_mm: float = SMALL_TEXT_MM
    anchor: Anchor = "left"
    rotation_deg: float = 0.0
    bold: bool = False
    shift: Pt = (0.0, 0.0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Arrow:
    """An arrow from tail to tip."""

    tail: Pt
    tip: Pt
    pen: Pen = "thin"


@dataclass(frozen=True, slots=True, kw_only=True)
class LinearDim:
    """The distance of `a` and `b` along the direction `angle_deg`.

    offset_mm: paper distance of the dimension line from `a`, to the left of that direction. before, after:
    text round the number, such as "2x " and " +-0.3". reference: in brackets, not to be checked.
    """

    a: Pt
    b: Pt
    offset_mm: float
    angle_deg: float = 0.0
    before: str = ""
    after: str = ""
    reference: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class DiameterDim:
    """A circle's diameter on a leader that leaves the centre at `angle_deg`; reach_mm: paper, past the rim."""

    circle: Circle
    angle_deg: float = 45.0
    reach_mm: float = 8.0
    before: str = ""
    after: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class RadiusDim:
    """An arc's radius; the leader points at the arc in direction `angle_deg` from its centre.

    inside: the leader comes from the centre's side, else from outside.
    """

    centre: Pt
    radius_mm: float
    angle_deg: float
    reach_mm: float = 8.0
    inside: bool = False
    before: str = ""
    after: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class AngleDim:
    """The angle at `vertex` from direction `from_deg` counter-clockwise to `to_deg`; radius_mm: paper.

    outside: the number stands on the vertex's other side, where there is no room between the sides.
    """

    vertex: Pt
    from_deg: float
    to_deg: float
    radius_mm: float = 14.0
    outside: bool = False
    before: str = ""
    after: str = ""


Mark = Line | Chain | Shape | Ring | Text | Arrow
Dim = LinearDim | DiameterDim | RadiusDim | AngleDim
Item = Mark | Dim


@dataclass(frozen=True, slots=True, kw_only=True)
class View:
    """One view. title: what, and from which side it is seen. at: paper mm of its origin; scale: paper / true.

    title_at: paper mm of the title's base line, centred.
    """

    title: str
    items: tuple[Item, ...]
    at: Pt
    scale: float
    title_at: Pt


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """Rows of text in columns. at: paper mm of the upper left corner; widths_mm: of the columns."""

    title: str
    head: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    widths_mm: tuple[float, ...]
    at: Pt
    name: str = "table"

    @property
    def height_mm(self) -> float:
        """Height on paper, title included."""
        return ROW_MM * (len(self.rows) + 1) + (TITLE_ROW_MM if self.title else 0.0)


ROW_MM, TITLE_ROW_MM = 4.0, 5.0


@dataclass(frozen=True, slots=True, kw_only=True)
class TitleBlock:
    """What the corner of a sheet says."""

    recipe: str
    title: str
    part: str
    material: str
    quantity: str
    scale: str
    tolerance: str
    projection: Literal["first", "third"]
    note: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """One drawing: landscape paper, main view first (its scale is the one of the title block)."""

    name: str
    paper_mm: tuple[float, float]
    views: tuple[View, ...]
    tables: tuple[Table, ...]
    notes: tuple[str, ...]
    notes_at: Pt
    block: TitleBlock


def number(value: float, places: int = 2) -> str:
    """A length or angle as drawings print it: at most `places` decimals, no trailing zeros, no minus zero."""
    text = f"{value:.{places}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def scale_text(scale: float) -> str:
    """ "1:2", "5:1"."""
    return f"1:{number(1.0 / scale)}" if scale < 1.0 else f"{number(scale)}:1"
