"""Sheet by RWG triangles or by an equal-area wire grid: accuracy against time for a biquad before a tray.

A. C. Ludwig, Wire grid modeling of surfaces, IEEE T-AP 35 (1987): a wire's surface equals the sheet's it
stands for, radius = spacing / 2 pi. Run: PYTHONPATH=parts python -m tests.bench.wire_grid
"""

from __future__ import annotations

import itertools
import math
import time
import warnings

import numpy as np

from tests.field.antennas import biquad
from wavejig.field import Model, ModelWarning, Wire, solve
from wavejig.field.shapes import grid_lines

FREQUENCY_HZ = 2.44e9
UP = [(0.0, 0.0, 1.0)]


def grid_biquad(spacing_mm: float, *, base_mm: float = 123.0, lip_mm: float = 25.0) -> Model:
    """The same antenna with its tray as a wire grid; the feet stand on grid nodes."""
    half, spacing = base_mm / 2.0, spacing_mm
    x = grid_lines([-half, 0.0, half], spacing)
    y = grid_lines([-half, -2.0, 2.0, half], spacing)
    z = grid_lines([0.0, lip_mm], spacing)
    lines: list[tuple[np.ndarray, float]] = []

    def width(values: np.ndarray, i: int) -> float:
        """Of the strip that line i stands for."""
        low = values[i] - values[i - 1] if i > 0 else 0.0
        high = values[i + 1] - values[i] if i + 1 < len(values) else 0.0
        return float(low + high) / 2.0

    # developed across the tray: down one lip, over the base, up the other
    across = [(-half, h) for h in z[:0:-1]] + [(v, 0.0) for v in y] + [(half, h) for h in z[1:]]
    run = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(np.array(across), axis=0).T))])
    for j, (v, h) in enumerate(across):
        for a, b in itertools.pairwise(x):
            lines.append((np.array([(a, v, h), (b, v, h)]), width(run, j)))
    for i, u in enumerate(x):
        for (v0, h0), (v1, h1) in itertools.pairwise(across):
            lines.append((np.array([(u, v0, h0), (u, v1, h1)]), width(x, i)))
    element = biquad()
    wires = element.wires + tuple(
        Wire(
            start=tuple(float(c) for c in ends[0] * 1e-3),
            end=tuple(float(c) for c in ends[1] * 1e-3),
            radius_m=wide * 1e-3 / (2.0 * math.pi),
        )
        for ends, wide in lines
    )
    return Model(wires=wires, ports=element.ports)


def row(name: str, model: Model) -> None:
    solve(model, [FREQUENCY_HZ])
    start = time.perf_counter()
    response = solve(model, [FREQUENCY_HZ], mirrors=False)
    seconds = time.perf_counter() - start
    y = response.admittance_s[0, 0, 0] * 1e3
    print(
        f"{name:18} {response.unknowns:6d} {seconds:7.3f} s  Y = {y.real:6.3f} {y.imag:+7.3f}j mS  "
        f"D = {response.directivity_dbi(UP)[0, 0]:6.3f} dBi  balance {response.power_balance[0]:.5f}"
    )


def main() -> None:
    warnings.simplefilter("ignore", ModelWarning)
    for mesh in (14.0, 10.0, 8.0, 6.0, 4.5):
        row(f"RWG {mesh:g} mm", biquad(mesh_mm=mesh))
    for spacing in (14.0, 10.0, 8.0, 6.0, 4.5):
        row(f"wire grid {spacing:g} mm", grid_biquad(spacing))


if __name__ == "__main__":
    main()
