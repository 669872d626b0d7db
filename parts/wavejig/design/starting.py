"""Closed forms that give `auto` its starting values, until a tuning replaces them.

All are rules of thumb for wire lobes before a sheet: "common practice, no source", checked against
the ranges that practice quotes at 2.4 GHz (tests/published/test_starting_values.py).
"""

from __future__ import annotations

import math

# The speed of light is exact (SI Brochure, 9th ed. 2019).
LIGHT_M_PER_S = 299_792_458.0
GRID_MM = 0.05  # what a shop can hold; starting values are rounded to it


def wavelength_mm(frequency_hz: float) -> float:
    """Free-space wavelength."""
    return LIGHT_M_PER_S / frequency_hz * 1000.0


def side_mm(wavelength: float, wire_diameter_mm: float) -> float:
    """Centreline side: a quarter wave over the outside of the wire (common practice, no source)."""
    return grid(wavelength / 4.0 - wire_diameter_mm)


def lobe_diameter_mm(wavelength: float, angle_deg: float) -> float:
    """Centreline diameter of a round lobe one wavelength round (common practice, no source).

    Perimeter of two tangents and the arc between: rho (2 cot(angle/2) + pi + angle).
    """
    angle = math.radians(angle_deg)
    rho = wavelength / (2.0 / math.tan(angle / 2.0) + math.pi + angle)
    return grid(2.0 * rho)


def standoff_mm(wavelength: float) -> float:
    """An eighth of a wavelength (common practice, no source)."""
    return grid(wavelength / 8.0)


def feed_gap_mm(wavelength: float, wire_diameter_mm: float) -> float:
    """A thirtieth of a wavelength up to 4 mm, two wire diameters at least (common practice, no source)."""
    return grid(max(min(wavelength / 30.0, 4.0), 2.0 * wire_diameter_mm))


def base_mm(wavelength: float, extent_mm: float) -> float:
    """One wavelength, or the radiator's extent and an eighth of a wavelength each side (common practice)."""
    return float(math.ceil(max(wavelength, extent_mm + wavelength / 4.0) - 1e-9))


def lip_height_mm(wavelength: float) -> float:
    """A fifth of a wavelength (common practice, no source)."""
    return float(round(wavelength / 5.0))


def grid(value: float) -> float:
    """Rounded to GRID_MM; halves go up (the tie rule)."""
    return round(math.floor(value / GRID_MM + 0.5) * GRID_MM, 6)
