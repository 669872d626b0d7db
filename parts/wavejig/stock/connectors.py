"""Panel connectors and semi-rigid tubes: usual sizes to start from, each to be overridden by a calliper."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Literal

from wavejig.stock.errors import unknown_name
from wavejig.stock.tables import records


@dataclass(frozen=True, slots=True, kw_only=True)
class Connector:
    """One panel connector; a size of 0 = there is none, or it cannot be mounted that way.

    Two ways to mount: flange on the back of the sheet, boss, dielectric and pin coming through
    `rear_cutout_mm`; or flange (bulkhead: nut or shoulder) on the radiator side, the mating thread going
    through `front_cutout_mm` to the back. hole_pitch_mm: side of the square of the four flange holes.
    nut_mm, washer_mm: largest diameters on the radiator side of a bulkhead one, over corners; its
    flange_thickness_mm is how high that nut or shoulder stands above the sheet. pin_length_mm and
    dielectric_length_mm: from the flange, nut or shoulder face the pin rises from. pin_bore_mm: bore of a
    solder cup, 0 = solid pin.
    """

    name: str
    series: str
    mounting: Literal["flange", "bulkhead"]
    flange_mm: float
    flange_thickness_mm: float
    hole_pitch_mm: float
    hole_diameter_mm: float
    rear_cutout_mm: float
    front_cutout_mm: float
    nut_mm: float
    washer_mm: float
    pin_diameter_mm: float
    pin_bore_mm: float
    pin_length_mm: float
    dielectric_diameter_mm: float
    dielectric_length_mm: float
    source: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Tube:
    """One semi-rigid coaxial tube; its bore is the dielectric's diameter.

    inner_diameter_mm: inner conductor. min_bend_radius_mm: to the inside of the bend.
    """

    name: str
    outer_diameter_mm: float
    inner_diameter_mm: float
    dielectric_diameter_mm: float
    min_bend_radius_mm: float
    permittivity: float


@cache
def connectors() -> tuple[Connector, ...]:
    """All panel connectors, in the table's order."""
    return records("connectors", Connector)


def connector(name: str) -> Connector:
    """The panel connector `name`. Raises StockError (a ValueError) that lists the names there are."""
    for row in connectors():
        if row.name == name:
            return row
    raise unknown_name("panel connector", name, [row.name for row in connectors()])


@cache
def tubes() -> tuple[Tube, ...]:
    """All semi-rigid tubes, thinnest first."""
    return records("tubes", Tube)


def tube(name: str) -> Tube:
    """The semi-rigid tube `name`. Raises StockError (a ValueError) that lists the names there are."""
    for row in tubes():
        if row.name == name:
            return row
    raise unknown_name("semi-rigid tube", name, [row.name for row in tubes()])
