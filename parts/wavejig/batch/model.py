"""What a batch is made of. Lengths in mm, areas in mm2, angles in deg, masses in g.

Vocabulary: a *nest* is the blanks of a batch laid out on stock sheets; a *pattern* is one way of cutting a
spool or bar, done so many times; a *plate* is what one print puts on the bed.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from wavejig.geometry.plane import Circle, Contour, Stroke

Box = tuple[float, float, float, float]
"""x0, y0, x1, y1."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Placement:
    """One blank on its sheet: its running number, where its own origin lands, how far it is turned."""

    number: int
    x_mm: float
    y_mm: float
    turn_deg: float  # 0 or 90; a blank of one outline gains nothing by half a turn


@dataclass(frozen=True, slots=True, kw_only=True)
class NestSheet:
    """One stock sheet. box: over all its blanks; utilisation: blanks' area, holes counted in, over the sheet's."""

    placements: tuple[Placement, ...]
    box: Box
    utilisation: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Nest:
    """The blanks of a batch on stock sheets; the sheet's lower left corner is the origin.

    per_sheet: blanks on a full sheet; fewest_sheets: what no layout can beat, by area alone. grain: of the
    stock, "x", "y" or "none"; blank_grain: which way it then runs in every blank, "x", "y" or "any".
    bends_along_grain, bends_across_grain: edges whose folds run along it, and across.
    """

    stock_mm: tuple[float, float]
    margin_mm: float
    spacing_mm: float
    grain: str
    blank_grain: str
    bends_along_grain: tuple[str, ...]
    bends_across_grain: tuple[str, ...]
    per_sheet: int
    sheets: tuple[NestSheet, ...]
    fewest_sheets: int
    utilisation: float

    @property
    def offcut_mm(self) -> tuple[float, float]:
        """The larger whole strip of the last sheet, beside or above its blanks and one spacing, along x and y."""
        (w, h), box = self.stock_mm, self.sheets[-1].box
        beside = (max(0.0, w - box[2] - self.spacing_mm), h)
        above = (w, max(0.0, h - box[3] - self.spacing_mm))
        return max(beside, above, key=lambda strip: strip[0] * strip[1])


@dataclass(frozen=True, slots=True, kw_only=True)
class NestedShapes:
    """What one sheet's file holds: contours to cut, fold lines as (start, end, angle), marks, the sheet itself.

    marks: alike on every blank; numbers: the running numbers' digits, all that differs between full sheets.
    """

    cut: tuple[Contour | Circle, ...]
    bends: tuple[tuple[tuple[float, float], tuple[float, float], float], ...]
    marks: tuple[Stroke, ...]
    numbers: tuple[Stroke, ...]
    stock: tuple[Stroke, ...]
    unmarked: tuple[int, ...] = ()  # running numbers that found no room


@dataclass(frozen=True, slots=True, kw_only=True)
class CutPattern:
    """One way to cut a length: (role, pieces of it) and how many lengths are cut so. rest_mm: what is left."""

    pieces: tuple[tuple[str, int], ...]
    times: int
    rest_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class WirePlan:
    """The cutting of one stock. kind: "wire", "leg-wire" or "tube".

    pieces: (role, length_mm, how many). stock_mm: of one length; None where the recipe names none, then the
    plan is one length of needed_mm. lengths: how many to buy; fewest: what no plan can beat.
    """

    kind: str
    material: str
    diameter_mm: float
    pieces: tuple[tuple[str, float, int], ...]
    stock_mm: float | None
    cut_loss_mm: float
    end_waste_mm: float
    needed_mm: float
    patterns: tuple[CutPattern, ...]
    lengths: int
    fewest: int

    @property
    def used_mm(self) -> float:
        """What ends up in antennas, trims included."""
        return sum(length * count for _, length, count in self.pieces)

    @property
    def bought_mm(self) -> float:
        """What has to be bought."""
        return self.needed_mm if self.stock_mm is None else self.stock_mm * self.lengths

    @property
    def waste(self) -> float:
        """Share of what is bought that no piece is cut from; the last length's rest may well be kept."""
        return 1.0 - self.used_mm / self.bought_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class PrintPiece:
    """A printed piece as it lies on the bed: its box about the origin, how many the batch needs.

    volume_mm3: solid, so that its mass is the most it can take.
    """

    part: str
    name: str
    plastic: str
    size_mm: tuple[float, float]
    height_mm: float
    volume_mm3: float
    count: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Spot:
    """One piece on a plate: where the middle of its box stands, the bed's corner being the origin."""

    name: str
    x_mm: float
    y_mm: float
    turn_deg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Plate:
    """One print of one plastic, done `times` times."""

    plastic: str
    spots: tuple[Spot, ...]
    times: int


@dataclass(frozen=True, slots=True, kw_only=True)
class PrintPlan:
    """All plates. spacer_sets: how many sets of removable blocks, 0 where posts stay in."""

    bed_mm: tuple[float, float]
    margin_mm: float
    spacing_mm: float
    pieces: tuple[PrintPiece, ...]
    plates: tuple[Plate, ...]
    spacer_sets: int
    mass_g: tuple[tuple[str, float], ...]  # plastic, at most

    @property
    def prints(self) -> int:
        """How often the printer is started."""
        return sum(plate.times for plate in self.plates)


@dataclass(frozen=True, slots=True, kw_only=True)
class BillLine:
    """One line of the bill. key: of [prices]; each: per antenna, None for what the batch shares.

    count is in `unit`; price: of one unit, None where the recipe gives none.
    """

    key: str
    item: str
    material: str
    size: str
    each: float | None
    count: float
    unit: str
    remark: str = ""
    price: float | None = None

    @property
    def cost(self) -> float | None:
        """Of the line, to the hundredth."""
        return None if self.price is None else round(self.price * self.count + 1e-9, 2)


@dataclass(frozen=True, slots=True, kw_only=True)
class Bill:
    """The bill of materials. currency: the recipe's label."""

    lines: tuple[BillLine, ...]
    currency: str

    @property
    def total(self) -> float | None:
        """Of the lines that have a price; None when none has."""
        priced = [line.cost for line in self.lines if line.cost is not None]
        return round(sum(priced), 2) if priced else None

    @property
    def unpriced(self) -> int:
        """Lines without a price."""
        return sum(line.price is None for line in self.lines)


@dataclass(frozen=True, slots=True, kw_only=True)
class Batch:
    """Everything. nest: None where no blank is cut; prints: None before the printed parts have been made."""

    quantity: int
    nest: Nest | None
    wires: tuple[WirePlan, ...]
    bill: Bill
    prints: PrintPlan | None = None
    unmarked: tuple[int, ...] = field(default=())
