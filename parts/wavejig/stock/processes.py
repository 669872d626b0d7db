"""What machines usually do: printers, cutters, folding, printing plastics, general tolerances."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from typing import Literal, Protocol, TypeVar, get_args

from wavejig.stock.errors import StockError, unknown_name
from wavejig.stock.tables import column, records, table

Grade = Literal["f", "m", "c"]
PrintFit = Literal["press", "slide", "loose"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Printer:
    """A desktop printer. clearance_mm: whole gap of a sliding fit. hole_allowance_mm: add to diameters."""

    name: str
    bed_x_mm: float
    bed_y_mm: float
    height_mm: float
    margin_mm: float
    nozzle_mm: float
    layer_mm: float
    clearance_mm: float
    hole_allowance_mm: float
    tolerance_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Cutter:
    """A sheet cutting process. takes_copper: usually takes copper, brass and bronze too."""

    name: str
    kerf_mm: float
    smallest_hole_mm: float
    smallest_hole_factor: float
    inside_corner_radius_mm: float
    tolerance_mm: float
    cuts_holes: bool
    takes_copper: bool
    takes_laminate: bool
    spacing_mm: float
    edge_margin_mm: float

    def smallest_hole_in_mm(self, thickness_mm: float) -> float:
        """Smallest hole diameter in mm in a sheet of this thickness."""
        return max(self.smallest_hole_mm, self.smallest_hole_factor * thickness_mm)

    def spacing_in_mm(self, thickness_mm: float, kerf_mm: float) -> float:
        """Usual distance in mm between two parts: what is left between two cuts is no narrower than thick."""
        return max(self.spacing_mm, thickness_mm + kerf_mm)


@dataclass(frozen=True, slots=True, kw_only=True)
class Folding:
    """A way of folding sheet. min_flange_factor: times the thickness."""

    name: str
    tooling_radius_mm: float
    min_flange_factor: float
    angle_tolerance_deg: float
    position_tolerance_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Plastic:
    """A printing plastic; permittivities are of prints, at 1 to 10 GHz."""

    name: str
    glass_transition_c: float
    permittivity_low: float
    permittivity_high: float
    loss_tangent: float
    youngs_modulus_gpa: float
    allowable_stress_mpa: float
    density_g_per_cm3: float
    outdoors: bool
    source: str


@cache
def printers() -> tuple[Printer, ...]:
    """All printers, smallest bed first."""
    return records("printers", Printer)


def printer(name: str) -> Printer:
    """The printer `name`. Raises StockError (a ValueError) that lists the names there are."""
    return _named("printer", name, printers())


@cache
def cutters() -> tuple[Cutter, ...]:
    """All cutting processes."""
    return records("cutters", Cutter)


def cutter(name: str) -> Cutter:
    """The cutting process `name`. Raises StockError (a ValueError) that lists the names there are."""
    return _named("cutter", name, cutters())


@cache
def foldings() -> tuple[Folding, ...]:
    """All ways of folding."""
    return records("folding", Folding)


def folding(name: str) -> Folding:
    """The way of folding `name`. Raises StockError (a ValueError) that lists the names there are."""
    return _named("folding", name, foldings())


@cache
def plastics() -> tuple[Plastic, ...]:
    """All printing plastics."""
    return records("plastics", Plastic)


def plastic(name: str) -> Plastic:
    """The printing plastic `name`. Raises StockError (a ValueError) that lists the names there are."""
    return _named("plastic", name, plastics())


def brake_radii_mm() -> tuple[float, ...]:
    """Usual punch radii in mm, rising. Source: table `brake-radii`."""
    return tuple(float(value) for value in column("brake-radii", "radius_mm"))


def print_clearance_mm(fit: PrintFit) -> float:
    """Whole gap in mm between printed parts that should go together so. Source: table `print-fits`."""
    for row in table("print-fits").rows:
        if row["fit"] == fit:
            return float(row["clearance_mm"])
    raise unknown_name("fit of printed parts", fit, get_args(PrintFit))


def iso2768_linear_mm(size_mm: float, grade: Grade) -> float:
    """General tolerance in mm, plus or minus, on a length of 0.5 to 1000 mm. Source: ISO 2768-1 table 1.

    Raises StockError for another length (below 0.5 mm the standard wants it beside the dimension).
    """
    first = float(table("iso2768-linear").rows[0]["over_mm"])
    # only the first range holds its lower end
    return _by_range("iso2768-linear", "length", size_mm, grade, lower_end_mm=first)


def iso2768_angle_deg(short_leg_mm: float, grade: Grade) -> float:
    """General tolerance in degrees, plus or minus, on an angle whose shorter leg is this long, to 400 mm.

    Source: ISO 2768-1 table 3, from memory. Raises StockError for another length.
    """
    return _by_range("iso2768-angle", "shorter leg", short_leg_mm, grade) / 60.0


def _by_range(name: str, what: str, size_mm: float, grade: Grade, lower_end_mm: float | None = None) -> float:
    if grade not in get_args(Grade):
        raise unknown_name("tolerance grade", grade, get_args(Grade))
    for row in table(name).rows:
        low, high = float(row["over_mm"]), float(row["up_to_mm"])
        if low < size_mm <= high or (size_mm == low == lower_end_mm):
            return float(row[grade])
    low, high = min(column(name, "over_mm")), max(column(name, "up_to_mm"))
    start = f"from {low:g}" if lower_end_mm is not None else f"above {low:g}"
    raise StockError(
        f"general tolerance, {what}: got {size_mm:g} mm, need {start} up to {high:g} mm. "
        "State a tolerance of its own for this dimension."
    )


class _Named(Protocol):
    @property
    def name(self) -> str: ...


_Row = TypeVar("_Row", bound=_Named)


def _named(what: str, name: str, rows: Sequence[_Row]) -> _Row:
    for row in rows:
        if row.name == name:
            return row
    raise unknown_name(what, name, [row.name for row in rows])
