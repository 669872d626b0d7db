"""The response surface: complex admittance of an article over frequency, from a designed set of solves.

Three things keep what is fitted mild. Frequencies are scaled by the article's size (its side, or its round
lobe's diameter): a structure made larger by some factor shows the same admittance at frequencies lower by
it. The nominal article's curve is known at many frequencies, and only the difference from it is fitted.
And the fit is made on that one of impedance, admittance and reflection which a few frequencies describe
best on the nominal curve; they are one another's Moebius transforms, so nothing is lost either way.

At each of a few scaled frequencies the difference is a quadratic in the dimensions, fitted by penalised
least squares: linear terms are free, squares and products are drawn towards zero in measure of how little
their dimensions matter, by a strength that leave-one-out residuals choose (ridge regression, Hoerl &
Kennard 1970; closed-form leave-one-out, Allen's PRESS 1974; from memory). Between the scaled frequencies
stands the polynomial through Chebyshev nodes.
"""

from __future__ import annotations

from collections.abc import Callable
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
class Curve:
    """The nominal article's admittance at many frequencies, and the form it is best described in."""

    nodes_hz: Array
    admittance_s: Complex
    form: str  # "impedance", "admittance" or "reflection"
    reference_ohm: float

    def shape(self, admittance_s: Complex) -> Complex:
        """An admittance in the curve's form."""
        return _SHAPES[self.form](admittance_s, self.reference_ohm)

    def unshape(self, shaped: Complex) -> Complex:
        """The admittance again."""
        return _UNSHAPES[self.form](shaped, self.reference_ohm)

    def at(self, frequencies_hz: Array) -> Complex:
        """Shaped values at frequencies of any shape."""
        shaped = self.shape(self.admittance_s)[None, :]
        flat = frequencies_hz.reshape(1, -1)
        return interpolate(self.nodes_hz, shaped, flat).reshape(frequencies_hz.shape)


@dataclass(frozen=True, slots=True, kw_only=True)
class Surface:
    """Admittance at the port as a function of the dimensions and of frequency.

    coefficients: (terms, K) of the difference from the nominal curve, in its form; press: leave-one-out
    rms residual of the fit, in that form; strength: of the penalty.
    """

    axes: Axes
    curve: Curve
    coefficients: Complex
    strength: float
    press: float

    def admittance_s(
        self, values: Array, frequencies_hz: Array, frequency_factor: Array | None = None
    ) -> Complex:
        """(N, F) siemens of N articles (N, d) at F frequencies.

        frequency_factor: (N,) of the true article's frequencies over the model's, for the model's own error.
        """
        scale = self.axes.scale(values)
        if frequency_factor is not None:
            scale = scale / frequency_factor
        at = scale[:, None] * frequencies_hz[None, :]
        difference = terms(self.axes.coded(values)) @ self.coefficients
        return self.curve.unshape(self.curve.at(at) + interpolate(self.axes.nodes_hz, difference, at))

    def reflection(
        self, values: Array, frequencies_hz: Array, frequency_factor: Array | None = None
    ) -> Complex:
        """(N, F): as admittance_s, as reflection in the curve's reference."""
        return reflection(
            self.admittance_s(values, frequencies_hz, frequency_factor), self.curve.reference_ohm
        )


def best_curve(nodes_hz: Array, admittance_s: Complex, few_hz: Array, reference_ohm: float) -> Curve:
    """The nominal curve in the form that a polynomial through the few frequencies follows best."""
    checks = chebyshev_nodes(float(nodes_hz[0]), float(nodes_hz[-1]), 41)
    truth: Complex | None = None
    best: tuple[float, Curve] | None = None
    for form in _SHAPES:
        curve = Curve(nodes_hz=nodes_hz, admittance_s=admittance_s, form=form, reference_ohm=reference_ohm)
        if truth is None:
            truth = reflection(curve.unshape(curve.at(checks)), reference_ohm)
        few = interpolate(few_hz, curve.at(few_hz)[None, :], checks[None, :])[0]
        error = float(np.abs(reflection(curve.unshape(few), reference_ohm) - truth).max())
        if best is None or error < best[0]:
            best = (error, curve)
    assert best is not None
    return best[1]


def fit(axes: Axes, curve: Curve, values: Array, admittances_s: Complex) -> Surface:
    """Fit a surface to solves: values (n, d), admittances (n, K) at the axes' nodes."""
    x = axes.coded(values)
    y = curve.shape(admittances_s) - curve.at(axes.nodes_hz)[None, :]
    # the nominal article itself is known: no difference
    x = np.concatenate([np.zeros((1, x.shape[1])), x])
    y = np.concatenate([np.zeros((1, y.shape[1])), y])
    linear = np.column_stack([np.ones(len(x)), x])
    first = np.linalg.lstsq(linear, y, rcond=None)[0]
    weight = np.sqrt(np.mean(np.abs(first[1:]) ** 2, axis=1))
    level = float(np.sqrt(np.mean(np.abs(curve.at(axes.nodes_hz)) ** 2))) or 1.0
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
    return Surface(axes=axes, curve=curve, coefficients=best[2], strength=best[1], press=best[0])


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


def _from_reflection(shaped: Complex, reference_ohm: float) -> Complex:
    return np.asarray((1.0 - shaped) / (1.0 + shaped) / reference_ohm)


_SHAPES: dict[str, Callable[[Complex, float], Complex]] = {
    "reflection": reflection,
    "impedance": lambda y, _: np.asarray(1.0 / y),
    "admittance": lambda y, _: y,
}
_UNSHAPES: dict[str, Callable[[Complex, float], Complex]] = {
    "reflection": _from_reflection,
    "impedance": lambda z, _: np.asarray(1.0 / z),
    "admittance": lambda y, _: y,
}


def worst_return_loss_db(reflections: Complex) -> Array:
    """(N, F) to (N,): least return loss over the frequencies."""
    return np.asarray(-20.0 * np.log10(np.maximum(np.abs(reflections).max(axis=-1), 1e-6)))
