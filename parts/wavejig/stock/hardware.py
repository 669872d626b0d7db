"""Screws with their holes, dowel pins, limits of fit."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Literal, get_args

from wavejig.stock.errors import StockError, unknown_name
from wavejig.stock.tables import column, records, table

Fit = Literal["fine", "medium", "coarse"]
FitClass = Literal["H7", "h6", "m6"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Screw:
    """One metric screw with its holes, heads, nut and washer; fields are the columns of table `screws`."""

    name: str
    diameter_mm: float
    pitch_mm: float
    clearance_fine_mm: float
    clearance_medium_mm: float
    clearance_coarse_mm: float
    cap_head_mm: float
    pan_head_mm: float
    nut_across_flats_mm: float
    nut_height_mm: float
    washer_mm: float
    washer_thickness_mm: float


def screw_through(hole_mm: float) -> str:
    """The largest screw with 0.1 mm of play in a hole of this diameter in mm; "" if none is that thin."""
    fits = [s.name for s in screws() if s.diameter_mm <= hole_mm - 0.1 + 1e-9]
    return fits[-1] if fits else ""


@cache
def screws() -> tuple[Screw, ...]:
    """All screws, thinnest first."""
    return records("screws", Screw)


def screw(name: str) -> Screw:
    """The screw `name`, "M3" for example. Raises StockError (a ValueError) that lists the names there are."""
    for row in screws():
        if row.name == name:
            return row
    raise unknown_name("screw", name, [row.name for row in screws()])


def clearance_hole_mm(screw_name: str, fit: Fit = "medium") -> float:
    """Diameter in mm of the hole a screw goes through. Source: ISO 273.

    Raises StockError for an unknown screw or fit.
    """
    found = screw(screw_name)
    if fit not in get_args(Fit):
        raise unknown_name("fit of a clearance hole", fit, get_args(Fit))
    return {
        "fine": found.clearance_fine_mm,
        "medium": found.clearance_medium_mm,
        "coarse": found.clearance_coarse_mm,
    }[fit]


def tap_drill_mm(screw_name: str) -> float:
    """Drill in mm for the coarse thread: diameter less pitch. Raises StockError for an unknown screw."""
    found = screw(screw_name)
    # the table's two decimals, not the binary dust of the difference
    return round(found.diameter_mm - found.pitch_mm, 6)


def dowel_diameters_mm(hardened_only: bool = False) -> tuple[float, ...]:
    """Stock dowel diameters in mm, rising. Source: table `dowels` (ISO 2338; hardened: ISO 8734)."""
    return tuple(
        float(row["diameter_mm"]) for row in table("dowels").rows if row["hardened"] or not hardened_only
    )


def dowel_length_mm(at_least_mm: float) -> float:
    """Shortest stock dowel of at least this length in mm. Source: table `dowel-lengths`.

    Raises StockError for more than the table holds.
    """
    lengths = [float(v) for v in column("dowel-lengths", "length_mm")]
    for length in lengths:
        if length >= at_least_mm - 1e-9:
            return length
    raise StockError(f"dowel length: got {at_least_mm:g} mm, need up to {lengths[-1]:g} mm.")


def fit_limits_mm(diameter_mm: float, fit_class: FitClass) -> tuple[float, float]:
    """Lower and upper deviation in mm from the nominal diameter. Source: table `fits` (ISO 286).

    Raises StockError for a diameter off the table or an unknown class.
    """
    if fit_class not in get_args(FitClass):
        raise unknown_name("class of fit", fit_class, get_args(FitClass))
    for row in table("fits").rows:
        if float(row["over_mm"]) < diameter_mm <= float(row["up_to_mm"]):
            low_um, high_um = row[f"{fit_class}_low_um"], row[f"{fit_class}_high_um"]
            return float(low_um) / 1000.0, float(high_um) / 1000.0
    top_mm = max(column("fits", "up_to_mm"))
    raise StockError(f"diameter of a fit: got {diameter_mm:g} mm, need above 0 and up to {top_mm:g} mm.")


def dowel_limits_mm(diameter_mm: float) -> tuple[float, float]:
    """Deviations in mm of a ground dowel pin, which is made to m6. Raises StockError as `fit_limits_mm`."""
    return fit_limits_mm(diameter_mm, "m6")
