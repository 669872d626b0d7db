"""Sheet by RWG triangles or wire grid, accuracy against time: python tests/bench/bench_sheet_methods.py

The two loops of tests/field/antennas.py before a flat sheet one wave square. Truth is the finest triangle
mesh; for each mesh its misses of resonance, of the peak of Re Y and of directivity, and what one frequency
costs (median of several, no mirrors), in multiples of the first row's. Uniform: equal cells all over;
graded: as designs are meshed, fine at the feet only.
"""

from __future__ import annotations

import statistics
import sys
import time
import warnings
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from tests.field.antennas import biquad
from tests.field.test_second_way import UP, over_sheet, peak
from tests.field.wire_grid import grid_biquad
from wavejig.field import Model, ModelWarning, solve

FREQUENCY_HZ = 2.44e9
ROUNDS = 3


def one(model: Model) -> tuple[int, float, float, float, float]:
    """Unknowns, resonance (Hz), peak (S), directivity (dBi), seconds of one frequency with its far field."""
    times = []
    for _ in range(ROUNDS):
        began = time.perf_counter()
        response = solve(model, [FREQUENCY_HZ], mirrors=False)
        dbi = float(response.directivity_dbi(UP)[0, 0])
        times.append(time.perf_counter() - began)
    return (response.unknowns, *peak(model), dbi, statistics.median(times))


def main() -> None:
    warnings.simplefilter("ignore", ModelWarning)
    models = {
        "triangles, graded 13.6 mm": over_sheet(123.0),
        "triangles, graded 9 mm": over_sheet(123.0, largest_mm=9.0),
        **{f"triangles, uniform {m:g} mm": biquad(mesh_mm=m, lip_mm=0.0) for m in (12.0, 9.0, 7.0)},
        **{f"wire grid {m:g} mm": grid_biquad(m, lip_mm=0.0) for m in (14.0, 10.0, 7.0, 5.0)},
    }
    best = one(over_sheet(123.0, largest_mm=5.5))
    print(f"truth: {best[0]} unknowns, {best[1] / 1e9:.4f} GHz, {best[2] * 1e3:.2f} mS, {best[3]:.3f} dBi")
    print(f"{'':26} {'unknowns':>8} {'resonance':>10} {'peak Re Y':>10} {'gain':>9} {'time':>6}")
    first = 0.0
    for name, model in models.items():
        n, f, g, dbi, seconds = one(model)
        first = first or seconds
        print(
            f"{name:26} {n:8d} {100.0 * (f / best[1] - 1.0):+9.2f}% {100.0 * (g / best[2] - 1.0):+9.2f}% "
            f"{dbi - best[3]:+6.2f} dB {seconds / first:6.2f}",
            flush=True,
        )


if __name__ == "__main__":
    main()
