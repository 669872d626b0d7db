"""Wire sizes: gauge numbers and cross-sections to diameters in mm.

Gauges are whole numbers. American gauges above 0 are written 00, 000, 0000 in the trade, or 2/0, 3/0,
4/0; here they are -1, -2, -3, as in the formula.
"""

from __future__ import annotations

import math

from wavejig.stock.errors import StockError, unknown_number
from wavejig.stock.tables import column, table

_MM_PER_INCH = 25.4  # exact since 1959
_AWG_LAST = 40


def awg_diameter_mm(gauge: int) -> float:
    """Diameter in mm of an American gauge, -3 (4/0) to 40: 0.127 mm x 92^((36 - gauge)/39).

    Source: ASTM B258. Raises StockError for another gauge.
    """
    if gauge not in range(-3, _AWG_LAST + 1):
        raise unknown_number("wire gauge AWG (0000 to 0 are -3 to 0)", gauge, range(-3, _AWG_LAST + 1))
    return float(0.127 * 92.0 ** ((36.0 - gauge) / 39.0))


def swg_diameter_mm(number: int) -> float:
    """Diameter in mm of a British standard gauge, 1 to 30. Source: table `swg` (BS 3737).

    Raises StockError for another number.
    """
    for row in table("swg").rows:
        if row["gauge"] == number:
            return float(row["diameter_in"]) * _MM_PER_INCH
    raise unknown_number("wire gauge SWG", number, column("swg", "gauge"))


def area_diameter_mm(area_mm2: float) -> float:
    """Diameter in mm of the solid round wire with this cross-section, sqrt(4 A/pi).

    A cable's nominal cross-section is set by its resistance (IEC 60228), so the wire inside can be
    thinner by some per cent: a measured diameter is better. Raises StockError unless positive, finite.
    """
    if not 0.0 < area_mm2 < math.inf:
        usual = ", ".join(f"{value:g}" for value in column("mm2", "area_mm2"))
        raise StockError(
            f"wire cross-section: got {area_mm2:g} mm2, need a positive one; usual are {usual} mm2."
        )
    return math.sqrt(4.0 * area_mm2 / math.pi)


def metric_diameters_mm() -> tuple[float, ...]:
    """Preferred metric wire diameters in mm, rising. Source: table `metric-wire`."""
    return tuple(float(value) for value in column("metric-wire", "diameter_mm"))
