"""Tables of the pack as CSV: the bend table of every piece. Plain text, kernel-free."""

from __future__ import annotations

import csv
from pathlib import Path

from wavejig.files.errors import FileCheckError
from wavejig.radiator.model import Radiator
from wavejig.radiator.stock import bought_length_mm

BEND_COLUMNS = (
    "piece",
    "wire_diameter_mm",
    "cut_length_mm",
    "developed_length_mm",
    "bend",
    "from_start_mm",
    "feed_mm",
    "rotation_deg",
    "angle_deg",
    "loaded_angle_deg",
    "inside_radius_mm",
    "loaded_inside_radius_mm",
    "plane",
)


def write_bend_table(radiator: Radiator, path: Path) -> None:
    """One row a bend; a piece without bends has one row, bend 0. Lengths in mm, angles in degrees."""
    with path.open("w", newline="", encoding="utf-8") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow(BEND_COLUMNS)
        for piece in radiator.pieces:
            cut = bought_length_mm(radiator, piece)
            head = (piece.role, *_mm(piece.diameter_mm, cut, piece.developed_length_mm))
            if not piece.bends:
                writer.writerow((*head, 0, "", "", "", "", "", "", "", "straight"))
            for b in piece.bends:
                writer.writerow(
                    (
                        *head,
                        b.number,
                        *_mm(b.from_start_mm, b.feed_mm, b.rotation_deg, b.angle_deg, b.loaded_angle_deg),
                        *_mm(b.inside_radius_mm, b.loaded_inside_radius_mm),
                        "board" if b.in_plane else "block",
                    )
                )


def check_bend_table(path: Path, radiator: Radiator) -> None:
    """Raise FileCheckError unless the file read back has each bend's figures to the printed digits."""
    with path.open(newline="", encoding="utf-8") as stream:
        rows = list(csv.DictReader(stream))
    expected = sum(max(len(p.bends), 1) for p in radiator.pieces)
    if len(rows) != expected:
        raise FileCheckError(path, f"{len(rows)} rows", f"{expected} rows")
    to_cut = {p.role: bought_length_mm(radiator, p) for p in radiator.pieces}
    for row in rows:
        if abs(float(row["cut_length_mm"]) - to_cut[row["piece"]]) > 0.0006:
            raise FileCheckError(path, f"cut length {row['cut_length_mm']}", f"{to_cut[row['piece']]:.3f}")
    found = iter(rows)
    for piece in radiator.pieces:
        for b in piece.bends:
            row = next(found)
            for key in ("from_start_mm", "feed_mm", "rotation_deg", "angle_deg", "loaded_angle_deg"):
                if abs(float(row[key]) - getattr(b, key)) > 0.0006:
                    raise FileCheckError(path, f"{key} {row[key]}", f"{getattr(b, key):.3f}")
        if not piece.bends:
            next(found)


def _mm(*values: float) -> tuple[str, ...]:
    # adding 0.0 turns a rounded -0.000 into 0.000
    return tuple(f"{round(v, 3) + 0.0:.3f}" for v in values)
