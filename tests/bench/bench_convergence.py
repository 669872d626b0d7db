"""Does the default mesh say what a finer one says? python tests/bench/bench_convergence.py [RECIPE...]

For each demo recipe: the peak of Re Y about the band and where it lies, on the default mesh and with every
edge halved. Wanted: resonance within 0.7 %, peak within 4 %.
"""

from __future__ import annotations

import sys
import time
from pathlib import Path

import numpy as np

from wavejig.design import Design, resolve
from wavejig.field import Model, sweep
from wavejig.field.from_design import model_from_design
from wavejig.recipe import read_recipe

ROOT = Path(__file__).resolve().parents[2]


def peak(model: Model, low: float, high: float) -> tuple[float, float, int]:
    """Frequency and height of the largest Re Y in the span, and the solves it took."""
    swept = sweep(model, low, high)
    f = np.linspace(low, high, 4001)
    g = swept.admittance_s(f)[:, 0, 0].real
    k = int(np.argmax(g))
    return float(f[k]), float(g[k]), swept.solves


def span(design: Design) -> tuple[float, float]:
    """Frequencies that hold the resonance of the untuned antenna."""
    middle = (design.target.band_low_hz + design.target.band_high_hz) / 2.0
    return 0.72 * middle, 1.18 * middle


def compare(design: Design) -> dict[str, float]:
    """Shift of resonance and of the peak of Re Y, in percent, from the default mesh to all edges halved."""
    low, high = span(design)
    coarse_f, coarse_g, _ = peak(model_from_design(design), low, high)
    fine_f, fine_g, _ = peak(model_from_design(design, refine=2.0), low, high)
    return {
        "resonance_hz": fine_f,
        "resonance_shift": 100.0 * (coarse_f / fine_f - 1.0),
        "peak_ms": 1000.0 * fine_g,
        "peak_shift": 100.0 * (coarse_g / fine_g - 1.0),
        "inside": float(low * 1.01 < fine_f < high * 0.99),
    }


def main() -> None:
    paths = [Path(a) for a in sys.argv[1:]] or sorted((ROOT / "recipes").glob("*.toml"))
    print(f"{'recipe':<22} {'resonance':>10} {'shift':>8} {'peak Re Y':>10} {'shift':>8}  seconds")
    for path in paths:
        began = time.perf_counter()
        c = compare(resolve(read_recipe(path).recipe))
        edge = "" if c["inside"] else "  (at the edge)"
        print(
            f"{path.stem:<22} {c['resonance_hz'] / 1e6:>6.0f} MHz {c['resonance_shift']:>+7.2f}% "
            f"{c['peak_ms']:>7.2f} mS {c['peak_shift']:>+7.2f}%  {time.perf_counter() - began:.1f}{edge}",
            flush=True,
        )


if __name__ == "__main__":
    main()
