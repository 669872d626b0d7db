"""Whether a printed part of the spacer lies on the printer's bed."""

from __future__ import annotations

from wavejig.design.model import Design

BED_MARGIN_MM = 5.0  # skirt and clips; common practice, no source


def fits_upright(design: Design, x_mm: float, y_mm: float) -> bool:
    """Whether a part of this plan size lies on the bed without turning it, with the margin left free."""
    room = (design.printer.bed_x_mm - 2.0 * BED_MARGIN_MM, design.printer.bed_y_mm - 2.0 * BED_MARGIN_MM)
    return x_mm <= room[0] and y_mm <= room[1]
