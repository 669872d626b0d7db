"""Quadrature rules: triangles in barycentric coordinates, Gauss-Legendre on [0, 1], product rule on the sphere.

Triangle rules: D. A. Dunavant, High degree efficient symmetrical Gaussian quadrature rules for the
triangle, Int. J. Numer. Meth. Eng. 21 (1985), from memory; the tests integrate every monomial up to the
stated degree, so a wrong digit shows.
"""

from __future__ import annotations

from functools import cache
from itertools import permutations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

# degree: ((weight, barycentric coordinates of one point of the orbit), ...)
_ORBITS: dict[int, tuple[tuple[float, tuple[float, float, float]], ...]] = {
    2: ((1.0 / 3.0, (2.0 / 3.0, 1.0 / 6.0, 1.0 / 6.0)),),
    5: (
        (0.225, (1.0 / 3.0, 1.0 / 3.0, 1.0 / 3.0)),
        (
            (155.0 + 15.0**0.5) / 1200.0,
            ((9.0 - 2.0 * 15.0**0.5) / 21.0, (6.0 + 15.0**0.5) / 21.0, (6.0 + 15.0**0.5) / 21.0),
        ),
        (
            (155.0 - 15.0**0.5) / 1200.0,
            ((9.0 + 2.0 * 15.0**0.5) / 21.0, (6.0 - 15.0**0.5) / 21.0, (6.0 - 15.0**0.5) / 21.0),
        ),
    ),
    8: (
        (0.144315607677787, (1.0 / 3.0, 1.0 / 3.0, 1.0 / 3.0)),
        (0.095091634267285, (0.081414823414554, 0.459292588292723, 0.459292588292723)),
        (0.103217370534718, (0.658861384496480, 0.170569307751760, 0.170569307751760)),
        (0.032458497623198, (0.898905543365938, 0.050547228317031, 0.050547228317031)),
        (0.027230314174435, (0.008394777409958, 0.263112829634638, 0.728492392955404)),
    ),
}


@cache
def triangle_rule(degree: int) -> tuple[Array, Array]:
    """Barycentric points (n, 3) and weights (n,) summing to 1; degree is 2, 5 or 8 (3, 7, 16 points)."""
    points: list[tuple[float, float, float]] = []
    weights: list[float] = []
    for weight, seed in _ORBITS[degree]:
        for point in sorted(set(permutations(seed))):
            points.append((point[0], point[1], point[2]))
            weights.append(weight)
    return _fixed(np.array(points)), _fixed(np.array(weights) / sum(weights))


@cache
def unit_rule(count: int) -> tuple[Array, Array]:
    """Gauss-Legendre nodes and weights (count,) on [0, 1]."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    return _fixed((nodes + 1.0) / 2.0), _fixed(weights / 2.0)


@cache
def sphere_rule(degree: int) -> tuple[Array, Array]:
    """Directions (n, 3) and weights (n,) summing to 4 pi, exact for spherical harmonics up to the degree.

    Gauss-Legendre in the cosine of the polar angle, equal steps in azimuth.
    """
    cosine, wc = np.polynomial.legendre.leggauss(degree // 2 + 1)
    count = degree + 1
    azimuth = (np.arange(count) + 0.5) * (2.0 * np.pi / count)
    sine = np.sqrt(1.0 - cosine**2)
    directions = np.stack(
        [
            np.outer(sine, np.cos(azimuth)),
            np.outer(sine, np.sin(azimuth)),
            np.outer(cosine, np.ones(count)),
        ],
        axis=-1,
    ).reshape(-1, 3)
    return _fixed(directions), _fixed(np.repeat(wc * 2.0 * np.pi / count, count))


def _fixed(array: Array) -> Array:
    array.setflags(write=False)
    return array
