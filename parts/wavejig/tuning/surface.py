"""The response surface: complex admittance of an article over frequency, from a designed set of solves.

Frequencies are scaled by the article's size (its side, or its round lobe's diameter) before anything is
fitted: a structure made larger by some factor shows the same admittance at frequencies lower by it, so
that what is left for the surface to describe is mild. At each of a few such scaled frequencies the
admittance is a quadratic in the dimensions, fitted by penalised least squares: linear terms are free,
squares and products are drawn towards zero in measure of how little their dimensions matter, by a strength
that leave-one-out residuals choose (ridge regression; Hoerl & Kennard 1970; closed-form leave-one-out:
Allen's PRESS, 1974, from memory). Between the scaled frequencies a polynomial through the Chebyshev nodes.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

_STRENGTHS = np.logspace(-3.0, 3.0, 25)
_FINEST = 1e-12


@dataclass(frozen=True, slots=True, kw_only=True)
class Axes:
    """What the surface is a function of. size: index of the dimension that scales frequency, or None.

    centre, half: nominal values and half-widths of the box the surface is meant for; nodes_hz: the scaled
    frequencies, ascending.
    """

    names: tuple[str, ...]
    centre: Array
    half: Array
    nodes_hz: Array
    size: int | None

    def coded(self, values: Array) -> Array:
        """(N, d) dimensions to (N, d) in units of the box."""
        return np.asarray((values - self.centre) / self.half)

    def scale(self, values: Array) -> Array:
        """(N,): what the frequency of an article is multiplied by to give its scaled frequency."""
        if self.size is None:
            return np.ones(len(values))
        return np.asarray(values[:, self.size] / self.centre[self.size])

    def frequencies_hz(self, values: Array) -> Array:
        """(N, K): where each article is to be solved."""
        return np.asarray(self.nodes_hz[None, :] / self.scale(values)[:, None])


@dataclass(frozen=True, slots=True, kw_only=True)
class Surface:
    """Admittance at the port as a function of the dimensions and of frequency.

    coefficients: (terms, K) complex, siemens; pairs: the products among the terms; press_s: leave-one-out
    rms residual of the fit, siemens; strength: of the penalty.
    """

    axes: Axes
    coefficients: Complex
    strength: float
    press_s: float

    def at_nodes(self, values: Array) -> Complex:
        """(N, K) siemens at each article's own scaled frequencies."""
        return np.asarray(terms(self.axes.coded(values)) @ self.coefficients)

    def admittance_s(self, values: Array, frequencies_hz: Array, frequency_factor: Array | None = None) -> Complex:
        """(N, F) siemens of N articles (N, d) at F frequencies.

        frequency_factor: (N,) of the true article's frequencies over the model's, for the model's own error.
        """
        scale = self.axes.scale(values)
        if frequency_factor is not None:
            scale = scale / frequency_factor
        return interpolate(self.axes.nodes_hz, self.at_nodes(values), scale[:, None] * frequencies_hz[None, :])


def fit(axes: Axes, values: Array, admittances_s: Complex) -> Surface:
    """Fit a surface to solves: values (n, d), admittances (n, K) at the axes' nodes."""
    x = axes.coded(values)
    y = admittances_s
    linear = np.column_stack([np.ones(len(x)), x])
    first = np.linalg.lstsq(linear, y, rcond=None)[0]
    weight = np.sqrt(np.mean(np.abs(first[1:]) ** 2, axis=1))
    level = float(np.sqrt(np.mean(np.abs(y) ** 2)))
    prior = _prior(weight, level)
    design = terms(x)
    free = 1 + x.shape[1]
    best: tuple[float, float, Complex] | None = None
    for strength in _STRENGTHS:
        penalty = np.zeros(design.shape[1])
        penalty[free:] = strength / np.maximum(prior, _FINEST * level) ** 2 * (1e-2 * level) ** 2
        solved, loo = _ridge(design, y, penalty)
        press = float(np.sqrt(np.mean(np.abs(loo) ** 2)))
        if best is None or press < best[0]:
            best = (press, float(strength), solved)
    assert best is not None
    return Surface(axes=axes, coefficients=best[2], strength=best[1], press_s=best[0])


def terms(x: Array) -> Array:
    """(n, d) to (n, 1 + d + d (d + 1) / 2): one, the dimensions, their squares and products."""
    i, j = np.triu_indices(x.shape[1])
    return np.column_stack([np.ones(len(x)), x, x[:, i] * x[:, j]])


def _prior(weight: Array, level: float) -> Array:
    """Size a square or product may be expected to have: the product of its linear terms, by the level."""
    i, j = np.triu_indices(len(weight))
    return np.asarray(weight[i] * weight[j] / level + 1e-2 * np.sqrt(weight[i] * weight[j]))


def _ridge(design: Array, y: Complex, penalty: Array) -> tuple[Complex, Complex]:
    """Coefficients and leave-one-out residuals of penalised least squares."""
    gram = design.T @ design + np.diag(penalty)
    inverse = np.linalg.pinv(gram, hermitian=True)
    solved = inverse @ (design.T @ y)
    hat = np.einsum("ni,ij,nj->n", design, inverse, design)
    return solved, (y - design @ solved) / np.maximum(1.0 - hat, 1e-3)[:, None]


def interpolate(nodes: Array, values: Complex, at: Array) -> Complex:
    """(N, K) at (K,) nodes to (N, F) at (N, F): the polynomial through the nodes, barycentric.

    Source: Berrut & Trefethen, SIAM Review 46 (2004).
    """
    gaps = nodes[:, None] - nodes[None, :]
    np.fill_diagonal(gaps, 1.0)
    gaps /= float(nodes[-1] - nodes[0]) / 4.0  # keeps the products near one
    weight = 1.0 / np.prod(gaps + 0.0, axis=1)
    difference = at[..., None] - nodes
    exact = difference == 0.0
    ratio = weight / np.where(exact, 1.0, difference)
    ratio = np.where(exact.any(axis=-1, keepdims=True), exact.astype(float), ratio)
    return np.asarray(np.einsum("nfk,nk->nf", ratio, values) / ratio.sum(axis=-1))


def chebyshev_nodes(low: float, high: float, count: int) -> Array:
    """Nodes of the first kind, ascending, inside low to high."""
    k = np.arange(count)
    return np.asarray((low + high) / 2.0 - (high - low) / 2.0 * np.cos((2 * k + 1) * np.pi / (2 * count)))


def reflection(admittance_s: Complex, reference_ohm: float) -> Complex:
    """Reflection coefficient of an admittance in a reference resistance."""
    return np.asarray((1.0 / reference_ohm - admittance_s) / (1.0 / reference_ohm + admittance_s))


def worst_return_loss_db(reflections: Complex) -> Array:
    """(N, F) to (N,): least return loss over the frequencies."""
    return np.asarray(-20.0 * np.log10(np.maximum(np.abs(reflections).max(axis=-1), 1e-6)))


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
    sobol = qmc.Sobol(dimensions, scramble=True, seed=20240229).random_base2(power)[:rest]
    return np.concatenate([middle, corner, 2.0 * sobol - 1.0])


def stack(names: Sequence[str], rows: Sequence[dict[str, float]]) -> Array:
    """Dimensions by name to (n, d)."""
    return np.array([[row[name] for name in names] for row in rows], dtype=np.float64)
