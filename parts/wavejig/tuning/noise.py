"""How noisy a measured sweep is, and what a fit's leftovers say about it."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

FLOOR = 2e-3  # of the reflection's noise: no desk calibration is better; common practice, no source


def thinned(f: Array, s: Complex, most: int = 401) -> tuple[Array, Complex]:
    """At most so many points: more tell nothing new about so smooth a curve. Neighbours are averaged."""
    group = math.ceil(len(f) / most)
    if group == 1:
        return f, s
    n = len(f) // group * group
    return f[:n].reshape(-1, group).mean(axis=1), s[:n].reshape(-1, group).mean(axis=1)


def noise_parts(s: Complex) -> tuple[float, float]:
    """An even part and a share of the reflection, from second differences, in which the curve itself is small.

    For white noise of standard deviation q in real and imaginary part each, the second difference's mean
    square is 12 q^2. The two parts come from a least-squares line of that over |s|^2, neither negative.
    """
    from scipy.optimize import nnls

    if len(s) < 5:
        return FLOOR, 0.0
    second = np.abs(s[:-2] - 2.0 * s[1:-1] + s[2:]) ** 2 / 12.0
    size = np.abs(s[:-2] + s[1:-1] + s[2:]) / 3.0
    design = np.column_stack([np.ones(len(size)), size**2])
    # squares of noise scatter in measure of themselves: weighed by what they are about
    weight = 1.0 / np.maximum(float(np.mean(second)) * (size**2 / np.mean(size**2) + 0.1), 1e-12)
    parts, _ = nnls(design * weight[:, None], second * weight)
    return math.sqrt(parts[0]), math.sqrt(parts[1])


def widening(left: Complex) -> float:
    """How much wider than white noise the fit's leftovers ask the intervals to be; at least 1.

    Their size, and their correlation from point to point (one independent point in (1 + r)/(1 - r)).
    """
    power = float(np.mean(np.abs(left) ** 2) / 2.0)
    near = float(np.real(np.mean(left[1:] * np.conj(left[:-1])))) / max(
        float(np.mean(np.abs(left) ** 2)), 1e-30
    )
    near = min(max(near, 0.0), 0.95)
    return math.sqrt(max(power, 1.0) * (1.0 + near) / (1.0 - near))
