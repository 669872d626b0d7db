"""One frequency of the field solver over LAPACK's zgesv of the same size, for the suite: see bench_field.py."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from tests.bench.bench_field import run

PARTS = ("fill", "solve", "far field", "solve, mirrors", "prepare")


def bench(*, quick: bool = False) -> dict[str, Any]:
    """Median and range over fresh processes; each takes the medians of ours and LAPACK's in turn."""
    out: dict[str, Any] = {}
    for size in (600,) if quick else (600, 1200):
        runs = [run("speed", size, 3 if quick else 5) for _ in range(2 if quick else 3)]
        totals = sorted((r["fill"] + r["solve"] + r["far field"]) / r["zgesv"] for r in runs)
        parts = {p: sorted(r[p] / r["zgesv"] for r in runs)[len(runs) // 2] for p in PARTS}
        middle = totals[len(totals) // 2]
        out[f"{runs[0]['unknowns']:.0f} unknowns"] = {
            "median": middle, "low": totals[0], "high": totals[-1], "parts": parts
        }  # fmt: skip
        print(
            f"one frequency / zgesv, {runs[0]['unknowns']:.0f} unknowns: {middle:.2f} ({totals[0]:.2f} to "
            f"{totals[-1]:.2f}); " + ", ".join(f"{k} {v:.2f}" for k, v in parts.items())
        )
    return out


if __name__ == "__main__":
    bench(quick="--quick" in sys.argv)
