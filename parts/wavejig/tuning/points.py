"""Where to solve: balanced corners and a quasi-random sequence; and random articles."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from wavejig.tuning.spread import CUT_SIGMAS, Dimension

Array = NDArray[np.float64]
_SEED = 20240229  # any fixed number: the same points every time


def designed_points(dimensions: int, count: int, corners: int) -> Array:
    """(count, dimensions) in -1 to 1: the middle, balanced corners at 0.7, then a Sobol sequence.

    Corners: columns of a Hadamard matrix (Sylvester), each dimension as often high as low. The sequence
    is scrambled with a fixed seed (Owen), so that it is the same every time.
    """
    from scipy.stats import qmc

    size = 1
    while size < max(corners, dimensions + 1):
        size *= 2
    hadamard = np.array([[1.0]])
    while len(hadamard) < size:
        hadamard = np.block([[hadamard, hadamard], [hadamard, -hadamard]])
    middle = np.zeros((1, dimensions))
    corner = 0.7 * hadamard[: max(corners, size) if corners else 0, 1 : dimensions + 1]
    rest = count - 1 - len(corner)
    if rest < 0:
        raise ValueError(f"{count} points do not hold {len(corner)} corners")
    power = max(1, int(np.ceil(np.log2(max(rest, 2)))))
    sobol = qmc.Sobol(dimensions, scramble=True, seed=_SEED).random_base2(power)[:rest]
    return np.concatenate([middle, corner, 2.0 * sobol - 1.0])


def random_articles(dimensions: tuple[Dimension, ...], uniform: Array) -> Array:
    """(n, d) dimensions of articles from (n, d) numbers between 0 and 1, by each one's distribution.

    Past a dimension's limit the deviation is turned back (a lip cannot lean inwards).
    """
    from scipy.special import ndtr, ndtri

    out = np.zeros_like(uniform)
    tail = float(ndtr(-CUT_SIGMAS))
    for i, d in enumerate(dimensions):
        if d.distribution == "uniform":
            deviation = (2.0 * uniform[:, i] - 1.0) * d.plus_minus
        else:
            deviation = ndtri(tail + (1.0 - 2.0 * tail) * uniform[:, i]) * d.sigma
        out[:, i] = within(d, d.nominal + deviation)
    return out


def within(dimension: Dimension, values: Array) -> Array:
    """Values folded back below the dimension's limit, if it has one."""
    if dimension.limit is None:
        return values
    return np.asarray(np.where(values > dimension.limit, 2.0 * dimension.limit - values, values))


def cut_normal(uniform: Array, sigma: float) -> Array:
    """Normal deviations, cut off as the dimensions' are, from numbers between 0 and 1."""
    from scipy.special import ndtr, ndtri

    tail = float(ndtr(-CUT_SIGMAS))
    return np.asarray(ndtri(tail + (1.0 - 2.0 * tail) * uniform) * sigma)
