"""What to print for a batch and how it goes on the bed: plates of one plastic, by the packing library."""

from __future__ import annotations

from collections.abc import Sequence

from wavejig.batch.model import Plate, PrintPiece, PrintPlan, Spot
from wavejig.batch.rectangles import Laid, bins_of, most_equal
from wavejig.design.model import Design
from wavejig.stock.processes import plastic

# Common practice, no source.
SPACING_MM = 4.0  # between pieces: room for the nozzle and a brim's last line
BED_MARGIN_MM = 5.0  # as single pieces keep it: skirt and clips
BLOCK_SETS = 2  # one to solder on while the other cools


def spacer_sets(design: Design) -> int:
    """Sets of removable blocks to print; posts stay in, so there is a set for each antenna."""
    if design.spacer.style == "posts":
        return design.quantity
    if design.spacer.sets is not None:
        return design.spacer.sets
    return min(design.quantity, BLOCK_SETS)


def print_plan(design: Design, pieces: Sequence[PrintPiece]) -> PrintPlan:
    """Lay the pieces out. Raises ValueError naming a piece that does not fit the bed."""
    bed = (design.printer.bed_x_mm, design.printer.bed_y_mm)
    room = (bed[0] - 2.0 * BED_MARGIN_MM, bed[1] - 2.0 * BED_MARGIN_MM)
    plates: list[Plate] = []
    for kind in dict.fromkeys(piece.plastic for piece in pieces):
        plates += _plates([p for p in pieces if p.plastic == kind], kind, room)
    return PrintPlan(
        bed_mm=bed,
        margin_mm=BED_MARGIN_MM,
        spacing_mm=SPACING_MM,
        pieces=tuple(pieces),
        plates=tuple(plates),
        spacer_sets=0 if design.spacer.style == "posts" else spacer_sets(design),
        mass_g=tuple(
            (
                kind,
                sum(p.volume_mm3 * p.count for p in pieces if p.plastic == kind)
                * plastic(kind).density_g_per_cm3
                / 1000.0,
            )
            for kind in dict.fromkeys(p.plastic for p in pieces)
        ),
    )


def _plates(pieces: Sequence[PrintPiece], kind: str, room: tuple[float, float]) -> list[Plate]:
    """Full plates of one piece first, printed over and over; the rest together, large and small mixed."""
    plates: list[Plate] = []
    rest: list[PrintPiece] = []
    for piece in pieces:
        left = piece.count
        if left > 1:
            full = most_equal(piece.size_mm, room, SPACING_MM, turns=("none", "all", "any"))
            if full and left >= len(full):
                spots = tuple(_spot(piece, laid) for laid in full)
                plates.append(Plate(plastic=kind, spots=spots, times=left // len(full)))
                left %= len(full)
        rest += [piece] * left
    for one in bins_of([p.size_mm for p in rest], room, SPACING_MM):
        plates.append(
            Plate(plastic=kind, spots=tuple(_spot(rest[laid.number], laid) for laid in one), times=1)
        )
    return plates


def _spot(piece: PrintPiece, laid: Laid) -> Spot:
    w, h = piece.size_mm[::-1] if laid.turned else piece.size_mm
    return Spot(
        name=piece.name,
        x_mm=BED_MARGIN_MM + laid.x_mm + w / 2.0,
        y_mm=BED_MARGIN_MM + laid.y_mm + h / 2.0,
        turn_deg=90.0 if laid.turned else 0.0,
    )
