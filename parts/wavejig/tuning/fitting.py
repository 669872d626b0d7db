"""One sweep laid over the response surface: unknowns, residuals, and the descent to their most plausible values.

Bayesian least squares: what is known beforehand is the prior, the sweep's reflection the data, the response
surface the model; Gauss-Newton with damping (Levenberg 1944, Marquardt 1963) to the most plausible point,
and the inverse of the curvature there as the posterior's covariance (Tarantola 2005, chapter 3; from
memory). Along with the dimensions goes the measurement's reference plane: it may lie a little before or
behind the model's. So do what a desk calibration leaves: an error of tracking (a factor) and of directivity
(an addition), each the same over the sweep; without them a calibration half a decibel off would be taken
for deviations of the article.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.tuning.explore import Explored
from wavejig.tuning.noise import FLOOR, noise_parts, thinned, widening
from wavejig.tuning.sweepfile import MeasuredSweep

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Mask = NDArray[np.bool_]

LIGHT_MM_PER_S = 299_792_458_000.0  # exact (SI Brochure, 9th ed. 2019)
OFFSET = "reference_plane"
OFFSET_SIGMA_MM = 40.0  # a connector, an adapter or two; common practice, no source
OFFSET_MOST_MM = 150.0
TURNS = (0.0, -0.25, 0.25, -0.5, 0.5)  # half a wavelength apart the planes look alike
# What a desk analyser's calibration leaves, real and imaginary part each; common practice, no source
TRACKING, DIRECTIVITY = 0.04, 0.01
CALIBRATION = (
    ("tracking", TRACKING),
    ("tracking_turn", TRACKING),
    ("directivity", DIRECTIVITY),
    ("directivity_turn", DIRECTIVITY),
)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Point:
    """Where a descent ended: unknowns, their covariance (zeros where held), and the logarithm of the evidence.

    Evidence: how probable the sweep is under the prior, by Laplace's approximation, up to a factor that all
    priors of one sweep share (MacKay 1992; from memory).
    """

    x: Array
    covariance: Array
    log_evidence: float


class Problem:
    """Unknowns: the dimensions in units of their sigma, the plane's offset in mm, the model's share, calibration."""

    def __init__(
        self, explored: Explored, sweep: MeasuredSweep, readings: Mapping[str, float], reading_sigma: float
    ) -> None:
        self.explored = explored
        self.surface = explored.surface
        self.dimensions = explored.spread.dimensions
        self.d = len(self.dimensions)
        axes = self.surface.axes
        factor = explored.spread.frequency
        # the surface covers its nodes' range for the smallest and the largest article alike
        share = 0.0 if axes.size is None else axes.half[axes.size] / axes.centre[axes.size] / 2.0
        low, high = axes.nodes_hz[0] * (1.0 + share) * factor, axes.nodes_hz[-1] * (1.0 - share) * factor
        self.f, self.s = thinned(*sweep.near(low, high))
        self.noise_parts = noise_parts(self.s)
        self.sigma = np.array([d.sigma for d in self.dimensions])
        self.centre = np.array([d.nominal for d in self.dimensions])
        self.reach = axes.half / self.sigma
        # what is known beforehand, in units of sigma: the spread, or a reading
        self.mean, self.width = np.zeros(self.d), np.ones(self.d)
        for i, d in enumerate(self.dimensions):
            if d.key in readings:
                self.mean[i] = (readings[d.key] - d.nominal) / d.sigma
                self.width[i] = reading_sigma / d.sigma

    def reflection(self, x: Array) -> Complex:
        """(F,) as measured, for unknowns (d + 6,)."""
        return self._seen(self._article(x[None, :])[0], x)

    def _article(self, x: Array) -> Complex:
        """(N, F) at the model's own plane, for unknowns (N, d + 6)."""
        values = self.centre + x[:, : self.d] * self.sigma
        factor = self.explored.spread.frequency * (1.0 + x[:, self.d + 1])
        return self.surface.reflection(values, self.f, factor)

    def _seen(self, s: Complex, x: Array) -> Complex:
        """The same through the analyser, from its plane."""
        track, direct = complex(*x[self.d + 2 : self.d + 4]), complex(*x[self.d + 4 : self.d + 6])
        return np.asarray(direct + (1.0 + track) * s * self._turn(x))

    def _turn(self, x: Array) -> Complex:
        return np.asarray(np.exp(-4j * np.pi * self.f / LIGHT_MM_PER_S * x[self.d]))

    def start(self) -> Array:
        """Nominal dimensions, and the plane's offset that fits them best."""
        offsets = np.arange(-OFFSET_MOST_MM, OFFSET_MOST_MM + 0.1, 1.0)
        x = np.zeros(self.d + 2 + len(CALIBRATION))
        x[: self.d] = np.clip(self.mean, -self.reach, self.reach)
        s = self.reflection(x)
        turns = np.exp(-4j * np.pi * np.outer(offsets, self.f) / LIGHT_MM_PER_S)
        cost = np.mean(np.abs(s * turns - self.s) ** 2, axis=1)
        # several valleys, a half wavelength apart: the nearest to none unless another is clearly deeper
        cost = cost + 1e-3 * (offsets / OFFSET_SIGMA_MM) ** 2
        x[self.d] = offsets[int(np.argmin(cost))]
        return x

    def prior(self, widths: Array, frequency_sigma: float) -> Array:
        """Standard deviations of all unknowns; widths: (d,) of the dimensions, in units of their spread."""
        return np.concatenate([widths, [OFFSET_SIGMA_MM, frequency_sigma], [q for _, q in CALIBRATION]])

    def settle(self, start: Array, prior: Array, turns: Sequence[float] = TURNS) -> tuple[Array, Array]:
        """Unknowns from the best of several starts, and the sweep's noise (F,) there.

        turns: by how many wavelengths each start's plane is moved.
        """
        best: tuple[float, Array] | None = None
        noise = self.noise_at(np.abs(self.s), 1.0)
        for turn in turns:
            x = start.copy()
            x[self.d] += turn * LIGHT_MM_PER_S / float(self.f.mean())
            cost, x = self._descend(x, prior, noise, most=10)
            if best is None or cost < best[0] - 1e-9:
                best = (cost, x)
        assert best is not None
        x = best[1]
        for _ in range(3):  # the noise from what the fit leaves over
            left = self.reflection(x) - self.s
            widen = widening(left / self.noise_at(np.abs(self.reflection(x)), 1.0))
            noise = self.noise_at(np.abs(self.reflection(x)), widen)
            _, x = self._descend(x, prior, noise)
        return x, noise

    def fit(self, start: Array, prior: Array, noise: Array) -> Point:
        """Most plausible unknowns from there; a prior of nothing holds an unknown where it is."""
        cost, x = self._descend(start, prior, noise)
        free = prior > 0.0
        jacobian = self._jacobian(x, noise)[:, free]
        precision = jacobian.T @ jacobian + np.diag(1.0 / prior[free] ** 2)
        covariance = np.zeros((len(x), len(x)))
        covariance[np.ix_(free, free)] = np.linalg.inv(precision)
        _, curvature = np.linalg.slogdet(precision * np.outer(prior[free], prior[free]))
        return Point(x=x, covariance=covariance, log_evidence=-0.5 * (cost + float(curvature)))

    def noise_at(self, size: Array, widen: float) -> Array:
        """(F,) standard deviation of real and imaginary part each."""
        even, share = self.noise_parts
        error = self.explored.error_reflection
        return np.asarray(np.sqrt(even**2 + (share * size) ** 2 + FLOOR**2 + error**2) * widen)

    def _residual(self, x: Array, noise: Array, prior: Array, free: Mask) -> Array:
        left = (self.reflection(x) - self.s) / noise
        known = np.zeros(len(x))
        known[: self.d] = self.mean
        return np.concatenate([left.real, left.imag, (x - known)[free] / prior[free]])

    def _jacobian(self, x: Array, noise: Array) -> Array:
        """(2 F, d + 6): by central differences on the surface (a formula, so steps may be small), else exact."""
        moved = [*range(self.d), self.d + 1]
        steps = np.array([*[1e-4] * self.d, 1e-6])
        around = np.repeat(x[None, :], 2 * len(moved), axis=0)
        for row, (i, step) in enumerate(zip(moved, steps, strict=True)):
            around[2 * row, i] += step
            around[2 * row + 1, i] -= step
        s = self._article(around)
        turn, track = self._turn(x), 1.0 + complex(*x[self.d + 2 : self.d + 4])
        slopes = np.empty((len(x), len(self.f)), dtype=np.complex128)
        slopes[moved] = (s[0::2] - s[1::2]) / (2.0 * steps[:, None]) * track * turn
        plain = self._article(x[None, :])[0] * turn
        slopes[self.d] = -4j * np.pi * self.f / LIGHT_MM_PER_S * track * plain
        slopes[self.d + 2], slopes[self.d + 3] = plain, 1j * plain
        slopes[self.d + 4], slopes[self.d + 5] = 1.0, 1j
        slopes /= noise
        return np.concatenate([slopes.real, slopes.imag], axis=1).T

    def _descend(self, x: Array, prior: Array, noise: Array, most: int = 60) -> tuple[float, Array]:
        """Levenberg-Marquardt within what the surface covers."""
        free = prior > 0.0
        damping = 1e-3
        residual = self._residual(x, noise, prior, free)
        cost = float(residual @ residual)
        for _ in range(most):
            jacobian = np.vstack([self._jacobian(x, noise)[:, free], np.diag(1.0 / prior[free])])
            gram, slope = jacobian.T @ jacobian, jacobian.T @ residual
            moved = False
            while damping < 1e8:
                step = np.zeros(len(x))
                step[free] = -np.linalg.solve(gram + damping * np.diag(np.diag(gram)), slope)
                new = x + step
                new[: self.d] = np.clip(new[: self.d], -self.reach, self.reach)
                new[self.d] = np.clip(new[self.d], -2 * OFFSET_MOST_MM, 2 * OFFSET_MOST_MM)
                tried = self._residual(new, noise, prior, free)
                if float(tried @ tried) < cost:
                    moved = True
                    break
                damping *= 4.0
            if not moved:
                break
            gained = cost - float(tried @ tried)
            x, residual, cost = new, tried, float(tried @ tried)
            damping = max(damping / 6.0, 1e-9)
            if gained < 1e-7 * max(cost, 1.0):
                break
        return cost, x
