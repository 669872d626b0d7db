"""A second way to a sheet: an equal-area wire grid in place of the triangles. Lengths in mm.

A. C. Ludwig, Wire grid modeling of surfaces, IEEE T-AP 35 (1987): a wire's surface equals the sheet's it
stands for, radius = spacing / 2 pi. It shares the wires' part of the solver and nothing of the sheet's:
no RWG functions, no attachment functions, no integrals over triangles.
"""

from __future__ import annotations

import itertools
import math

import numpy as np

from tests.field.antennas import biquad
from wavejig.field import Model, Wire
from wavejig.field.shapes import grid_lines

Array = np.ndarray


def grid_biquad(
    spacing_mm: float, *, base_mm: float = 123.0, lip_mm: float = 25.0, longest_mm: float = 6.0
) -> Model:
    """antennas.biquad with its tray as a wire grid; the feet stand on grid nodes."""
    half = base_mm / 2.0
    x = grid_lines([-half, 0.0, half], spacing_mm)
    y = grid_lines([-half, -2.0, 0.0, 2.0, half], spacing_mm)
    z = grid_lines([0.0, lip_mm], spacing_mm) if lip_mm else np.zeros(1)
    # developed across the tray: down one lip, over the base, up the other
    across = [(-half, h) for h in z[:0:-1]] + [(v, 0.0) for v in y] + [(half, h) for h in z[1:]]
    run = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(np.array(across), axis=0).T))])
    lines: list[tuple[Array, float]] = []
    for j, (v, h) in enumerate(across):
        lines += [(np.array([(a, v, h), (b, v, h)]), _strip(run, j)) for a, b in itertools.pairwise(x)]
    for i, u in enumerate(x):
        for (v0, h0), (v1, h1) in itertools.pairwise(across):
            lines.append((np.array([(u, v0, h0), (u, v1, h1)]), _strip(x, i)))
    element = biquad(longest_mm=longest_mm)
    return Model(wires=element.wires + tuple(_wire(*line) for line in lines), ports=element.ports)


def _strip(values: Array, i: int) -> float:
    """Width of the strip of sheet that line i stands for."""
    low = values[i] - values[i - 1] if i > 0 else 0.0
    high = values[i + 1] - values[i] if i + 1 < len(values) else 0.0
    return float(low + high) / 2.0


def _wire(ends_mm: Array, strip_mm: float) -> Wire:
    (a, b) = (ends_mm * 1e-3).tolist()
    return Wire(start=tuple(a), end=tuple(b), radius_m=strip_mm * 1e-3 / (2.0 * math.pi))
