"""Sheet stock: gauges, usual thicknesses, sheet sizes and the smallest radius a sheet bends to."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import cache
from itertools import pairwise
from typing import Literal

from wavejig.stock.errors import StockError, unknown_name, unknown_number
from wavejig.stock.metals import Metal, sheet_metal
from wavejig.stock.tables import column, records, table

_MM_PER_INCH = 25.4


@dataclass(frozen=True, slots=True, kw_only=True)
class SheetSize:
    """A stock sheet as it is sold, longer side first."""

    name: str
    kind: Literal["metal", "laminate"]
    length_mm: float
    width_mm: float


def gauge_thickness_mm(gauge: int, metal_name: str) -> float:
    """Thickness in mm of sheet `gauge` of this metal; one number means another thickness for each kind.

    Source: table `sheet-gauge`. Raises StockError for a gauge off the table (8 to 30), an unknown metal,
    or one that is not sold by gauge.
    """
    metal = sheet_metal(metal_name)
    if metal.gauge_series == "none":
        raise StockError(
            f"sheet gauge: {metal.name} is not sold by gauge; write its thickness, "
            f"usual are {', '.join(f'{t:g}' for t in usual_thicknesses_mm(metal.name))} mm."
        )
    for row in table("sheet-gauge").rows:
        if row["gauge"] == gauge:
            return float(row[metal.gauge_series]) * _MM_PER_INCH
    raise unknown_number("sheet gauge", gauge, column("sheet-gauge", "gauge"))


def usual_thicknesses_mm(metal_name: str) -> tuple[float, ...]:
    """Thicknesses in mm that stockists usually hold of this metal. Raises StockError for an unknown one."""
    name = sheet_metal(metal_name).name
    family = "aluminium" if name.startswith("aluminium") else name
    return tuple(float(row["thickness_mm"]) for row in table("sheet-thickness").rows if row["name"] == family)


def minimum_inside_radius_mm(metal: Metal, thickness_mm: float) -> float:
    """Smallest inside radius in mm of a 90 deg bend in this sheet.

    From table `aluminium-bend-radius` where it lists the alloy and temper, its factor interpolated
    between the listed thicknesses (our choice) and held beyond them; else the metal's own factor times
    the thickness.
    Raises StockError for a sheet that cannot be folded.
    """
    if not metal.foldable:
        raise StockError(f"{metal.name} cannot be folded; keep it flat (no lips) or choose a sheet metal.")
    listed = [
        (float(row["thickness_in"]) * _MM_PER_INCH, float(row["radius_factor"]))
        for row in table("aluminium-bend-radius").rows
        if (row["name"], row["temper"]) == (metal.name, metal.temper)
    ]
    if metal.form != "sheet" or not listed:
        return metal.min_inside_radius_factor * thickness_mm
    factor = listed[0][1] if thickness_mm < listed[0][0] else listed[-1][1]
    for (thin_mm, thin_factor), (thick_mm, thick_factor) in pairwise(listed):
        if thin_mm <= thickness_mm <= thick_mm:
            share = (thickness_mm - thin_mm) / (thick_mm - thin_mm)
            factor = thin_factor + share * (thick_factor - thin_factor)
    return factor * thickness_mm


@cache
def sheet_sizes() -> tuple[SheetSize, ...]:
    """All stock sheet sizes, in the table's order."""
    return records("sheet-size", SheetSize)


def sheet_size(name: str) -> SheetSize:
    """The stock sheet `name`. Raises StockError for an unknown one."""
    for size in sheet_sizes():
        if size.name == name:
            return size
    raise unknown_name("sheet size", name, [size.name for size in sheet_sizes()])


def heat_flow_w(
    metal_name: str, thickness_mm: float, joint_radius_mm: float, sheet_radius_mm: float, rise_k: float
) -> float:
    """Watts that flow from a round joint out to the sheet's rim when the joint is `rise_k` hotter than the rim.

    Steady conduction in a disc, P = 2 pi k t dT / ln(R / r) (textbook, from memory); what the air takes on the
    way comes on top. Source of k: table `heat-conductivity`. Raises StockError for a metal off the table.
    """
    for row in table("heat-conductivity").rows:
        if row["name"] == metal_name:
            carrying_um = float(row["carrying_um"])
            thick_m = (carrying_um / 1000.0 if carrying_um else thickness_mm) / 1000.0
            spread = math.log(max(sheet_radius_mm / joint_radius_mm, 1.01))
            return 2.0 * math.pi * float(row["conductivity_w_per_mk"]) * thick_m * rise_k / spread
    raise unknown_name("sheet metal", metal_name, [str(r["name"]) for r in table("heat-conductivity").rows])
