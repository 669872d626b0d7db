"""A printable test record of measured articles, as text or as a table for a spreadsheet."""

from __future__ import annotations

import csv
import io
from pathlib import Path

from wavejig.recipe.cells import safe_cell
from wavejig.recipe.errors import visible
from wavejig.tuning.found import MAIN
from wavejig.tuning.measured import Measured
from wavejig.tuning.measuredtext import title

KINDS = (".csv", ".txt")


def write_record(m: Measured, path: Path) -> None:
    """Write it; the name's ending says which kind. Raises OSError."""
    text = record_csv(m) if path.suffix.lower() == ".csv" else record_text(m)
    path.write_text(text, encoding="utf-8", newline="")


def record_csv(m: Measured) -> str:
    """One row an article."""
    keys = [k for k in MAIN if m.articles[0].findings.right.has(k)]
    out = io.StringIO()
    writer = csv.writer(out)
    header = ["serial", "sweep", "verdict", "worst_return_loss_db", "at_mhz", "wanted_db"]
    for k in keys:
        header += [f"{k}_mm", f"{k}_low_mm", f"{k}_high_mm"]
    writer.writerow(header)
    for a in m.articles:
        row = [
            safe_cell(a.sweep.serial),
            safe_cell(a.sweep.path.name),
            "passes" if a.passes else "fails",
            f"{a.worst_db:.2f}",
            f"{a.worst_hz / 1e6:.3f}",
            f"{m.wanted_db:g}",
        ]
        for k in keys:
            d = a.findings.right.get(k)
            row += [f"{d.value:.3f}", f"{d.interval[0]:.3f}", f"{d.interval[1]:.3f}"]
        writer.writerow(row)
    return out.getvalue()


def record_text(m: Measured) -> str:
    """To print and sign."""
    design = m.explored.article.design
    target = design.target
    lines = [
        f"TEST RECORD   {design.name}",
        f"band {target.band_low_hz / 1e6:.6g} to {target.band_high_hz / 1e6:.6g} MHz, return loss at least "
        f"{m.wanted_db:g} dB in {target.reference_ohm:g} ohm",
        "",
        "date ______________   analyser ______________   calibrated ______________   tested by ______________",
        "",
        f"{'serial':<10} {'verdict':<8} {'worst':>8} {'at':>12}   sweep",
    ]
    lines += [
        f"{a.sweep.serial:<10} {'passes' if a.passes else 'FAILS':<8} {a.worst_db:>5.1f} dB "
        f"{a.worst_hz / 1e6:>8.2f} MHz   {visible(a.sweep.path.name)}"
        for a in m.articles
    ]
    lines += ["", f"{m.passing} of {len(m.articles)} pass"]
    failing = [a for a in m.articles if not a.passes]
    for a in failing:
        moved = [
            f"{title(m, d.key)} {d.value:+.2f} {d.unit}".rstrip()
            for d in a.findings.right.deviations
            if d.key in MAIN and d.told and not d.interval[0] <= 0.0 <= d.interval[1]
        ]
        lines.append(f"  serial {a.sweep.serial}: {', '.join(moved) or 'no deviation stands out'}")
    lines += ["", "signed ______________________", ""]
    return "\n".join(lines)
