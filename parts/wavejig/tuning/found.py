"""What a measured sweep says about an article: its most plausible deviations, and how sure that is.

Bayesian least squares: the yield's spreads are the prior, the sweep's reflection the data, the response
surface the model; Gauss-Newton with damping (Levenberg 1944, Marquardt 1963) to the most plausible point,
and the inverse of the curvature there as the posterior's covariance (Tarantola 2005, chapter 3; from
memory). Along with the dimensions goes the measurement's reference plane: it may lie a little before or
behind the model's. So do what a desk calibration leaves: an error of tracking (a factor) and of directivity
(an addition), each the same over the sweep; without them a calibration half a decibel off would be taken
for deviations of the article.

The model's own error in frequency moves the match as the side does, so the sweep alone cannot part the two.
Both answers are given: deviations taking the model as right, and allowing for its error.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.tuning.explore import Explored
from wavejig.tuning.noise import FLOOR, noise_parts, thinned, widening
from wavejig.tuning.sweepfile import MeasuredSweep
from wavejig.tuning.yields import FREQUENCY

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Mask = NDArray[np.bool_]

LIGHT_MM_PER_S = 299_792_458_000.0  # exact (SI Brochure, 9th ed. 2019)
OFFSET = "reference_plane"
OFFSET_SIGMA_MM = 40.0  # a connector, an adapter or two; common practice, no source
OFFSET_MOST_MM = 150.0
# What a desk analyser's calibration leaves, real and imaginary part each; common practice, no source
TRACKING, DIRECTIVITY = 0.04, 0.01
_CALIBRATION = (
    ("tracking", TRACKING),
    ("tracking_turn", TRACKING),
    ("directivity", DIRECTIVITY),
    ("directivity_turn", DIRECTIVITY),
)
_CALIBRATED = {name for name, _ in _CALIBRATION}
LITTLE = 0.7  # of its prior's width: a posterior wider than this was hardly told by the sweep
ALIKE = 0.7  # correlation from which two are named as not told apart
MAIN = ("side", "lobe_diameter", "standoff", "feed_gap", OFFSET)
_Z95 = 1.959964


@dataclass(frozen=True, slots=True, kw_only=True)
class Deviation:
    """One unknown's deviation from nominal: most plausible value, standard error, the prior's width."""

    key: str
    unit: str
    value: float
    sigma: float
    prior_sigma: float

    @property
    def interval(self) -> tuple[float, float]:
        """95 %."""
        return (self.value - _Z95 * self.sigma, self.value + _Z95 * self.sigma)

    @property
    def told(self) -> bool:
        """Whether the sweep says more than was known before it."""
        return self.sigma < LITTLE * self.prior_sigma


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Fit:
    """Deviations of all unknowns at once. vague: pairs that the sweep cannot tell apart, with correlation."""

    deviations: tuple[Deviation, ...]
    covariance: Array
    vague: tuple[tuple[str, str, float], ...]
    noise: float  # rms of the reflection's noise, as found
    misfit: float  # rms residual over noise; far above 1: something else is different
    at_limit: tuple[str, ...]  # dimensions at the end of what the surface covers

    def get(self, key: str) -> Deviation:
        """By key. Raises KeyError."""
        for d in self.deviations:
            if d.key == key:
                return d
        raise KeyError(key)

    def has(self, key: str) -> bool:
        """Whether there is such an unknown."""
        return any(d.key == key for d in self.deviations)

    def cannot_tell(self, key: str) -> bool:
        """Whether the sweep leaves this one open: hardly narrowed, so the prior speaks instead."""
        return not self.get(key).told


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Findings:
    """Both answers for one sweep. right: taking the predicted frequency as right; open: allowing its error."""

    sweep: MeasuredSweep
    right: Fit
    open: Fit


def find(
    explored: Explored,
    sweep: MeasuredSweep,
    readings: Mapping[str, float] | None = None,
    reading_sigma: float = 0.05,
) -> Findings:
    """The most plausible deviations of the article that was swept.

    readings: dimensions taken with a calliper (mm), with their standard error; they replace the spread as
    what is known beforehand.
    """
    problem = _Problem(explored, sweep, readings or {}, reading_sigma)
    start = problem.start()
    right = problem.fit(start, 0.0)
    return Findings(sweep=sweep, right=right, open=problem.fit(start, explored.spread.frequency_sigma))


class _Problem:
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
        x = np.zeros(self.d + 2 + len(_CALIBRATION))
        x[: self.d] = np.clip(self.mean, -self.reach, self.reach)
        s = self.reflection(x)
        turns = np.exp(-4j * np.pi * np.outer(offsets, self.f) / LIGHT_MM_PER_S)
        cost = np.mean(np.abs(s * turns - self.s) ** 2, axis=1)
        # several valleys, a half wavelength apart: the nearest to none unless another is clearly deeper
        cost = cost + 1e-3 * (offsets / OFFSET_SIGMA_MM) ** 2
        x[self.d] = offsets[int(np.argmin(cost))]
        return x

    def fit(self, start: Array, frequency_sigma: float) -> Fit:
        """Most plausible unknowns; frequency_sigma 0 holds the model's frequency."""
        prior = np.concatenate([self.width, [OFFSET_SIGMA_MM, frequency_sigma], [q for _, q in _CALIBRATION]])
        free = prior > 0.0
        best: tuple[float, Array] | None = None
        noise = self._noise_at(np.abs(self.s), 1.0)
        for turn in (0.0, -0.25, 0.25):  # a start in the neighbouring valleys too
            x = start.copy()
            x[self.d] += turn * LIGHT_MM_PER_S / float(self.f.mean())
            cost, x = self._descend(x, prior, free, noise, most=10)
            if best is None or cost < best[0] - 1e-9:
                best = (cost, x)
        assert best is not None
        x = best[1]
        widen = 1.0
        for _ in range(3):  # the noise from what the fit leaves over
            left = self.reflection(x) - self.s
            widen = widening(left / self._noise_at(np.abs(self.reflection(x)), 1.0))
            noise = self._noise_at(np.abs(self.reflection(x)), widen)
            _, x = self._descend(x, prior, free, noise)
        jacobian = self._jacobian(x, noise)[:, free]
        precision = jacobian.T @ jacobian + np.diag(1.0 / prior[free] ** 2)
        covariance = np.zeros((len(x), len(x)))
        covariance[np.ix_(free, free)] = np.linalg.inv(precision)
        return self._told(x, covariance, prior, widen)

    def _told(self, x: Array, covariance: Array, prior: Array, widen: float) -> Fit:
        scale = np.concatenate([self.sigma, np.ones(len(x) - self.d)])
        names = [*(d.key for d in self.dimensions), OFFSET, FREQUENCY, *(name for name, _ in _CALIBRATION)]
        units = [*(d.unit for d in self.dimensions), "mm", *[""] * (len(x) - self.d - 1)]
        found = tuple(
            Deviation(
                key=names[i],
                unit=units[i],
                value=float(x[i] * scale[i]),
                sigma=float(math.sqrt(covariance[i, i]) * scale[i]),
                prior_sigma=float(prior[i] * scale[i]),
            )
            for i in range(len(names))
            if prior[i] > 0.0
        )
        kept = [i for i in range(len(names)) if prior[i] > 0.0]
        ends = tuple(names[i] for i in range(self.d) if abs(x[i]) > 0.98 * self.reach[i])
        left = self.reflection(x) - self.s
        plain = self._noise_at(np.abs(self.reflection(x)), 1.0)
        return Fit(
            deviations=found,
            covariance=covariance[np.ix_(kept, kept)] * np.outer(scale[kept], scale[kept]),
            vague=_alike([names[i] for i in kept], covariance[np.ix_(kept, kept)], prior[kept]),
            noise=float(np.sqrt(np.mean(plain**2))) * math.sqrt(2.0),
            misfit=float(np.sqrt(np.mean(np.abs(left / plain) ** 2) / 2.0)),
            at_limit=ends,
        )

    def _noise_at(self, size: Array, widen: float) -> Array:
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

    def _descend(
        self, x: Array, prior: Array, free: Mask, noise: Array, most: int = 60
    ) -> tuple[float, Array]:
        """Levenberg-Marquardt within what the surface covers."""
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
            if gained < 1e-9 * max(cost, 1.0):
                break
        return cost, x


def axes_centre(explored: Explored) -> Array:
    """(d,) nominal values."""
    return explored.surface.axes.centre


def _alike(names: list[str], covariance: Array, prior: Array) -> tuple[tuple[str, str, float], ...]:
    """Pairs whose posteriors go together so closely that one can stand for the other.

    Only pairs that matter: each still as wide as a quarter of what was known beforehand.
    """
    sigma = np.sqrt(np.diag(covariance))
    found = []
    for i in range(len(names)):
        for j in range(i + 1, len(names)):
            r = float(covariance[i, j] / (sigma[i] * sigma[j]))
            if names[i] in _CALIBRATED and names[j] in _CALIBRATED:
                continue
            if abs(r) >= ALIKE and sigma[i] > 0.25 * prior[i] and sigma[j] > 0.25 * prior[j]:
                found.append((names[i], names[j], r))
    return tuple(sorted(found, key=lambda pair: -abs(pair[2])))
