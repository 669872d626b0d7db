"""Tables of the radiator's drawing: its pieces, and a path's corners. Lengths in mm."""

from __future__ import annotations

import math

from wavejig.design.model import Design
from wavejig.radiator.model import Radiator
from wavejig.radiator.stock import bought_length_mm
from wavejig.sheets.model import (
    Table,
    number,
)


def pieces_table(radiator: Radiator, left: float, top: float) -> Table:
    return Table(
        title="PIECES, mm",
        head=("piece", "wire", "cut length", "bends"),
        rows=tuple(
            (
                "inner, bared" if p.role == "inner" else p.role,
                f"\u00d8{number(p.diameter_mm, 3)}",
                # the inner conductor is part of the tube's length
                f"({number(p.cut_length_mm, 1)})"
                if p.role == "inner"
                else number(bought_length_mm(radiator, p), 1),
                str(len(p.bends)),
            )
            for p in radiator.pieces
        ),
        widths_mm=(26.0, 18.0, 20.0, 14.0),
        at=(left, top),
        name="pieces",
    )


def corner_tables(design: Design, left: float, top: float) -> list[Table]:
    """The corners of paths of the user's own and of four lobes, which the plan's sizes do not pin down."""
    r = design.radiator
    if r.family not in ("path", "double-biquad"):
        return []
    rows = [(str(i), *(number(v) for v in c.at)) for i, c in enumerate(r.corners, start=1)]
    half = len(rows) if len(rows) <= 12 else math.ceil(len(rows) / 2)
    widths = (6.5, 11.8, 11.8, 10.4)
    title = f"CORNERS of the centreline, mm; all R{number(r.inside_radius_mm)} inside"
    return [
        Table(
            title=title if i == 0 else " ",
            head=("no.", "x", "y", "z"),
            rows=tuple(part),
            widths_mm=widths,
            at=(left - 3.0 + i * sum(widths), top),
            name=f"corners-{i + 1}",
        )
        for i, part in enumerate((rows[:half], rows[half:]))
        if part
    ]
