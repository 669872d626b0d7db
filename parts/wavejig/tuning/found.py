"""What a measured sweep says about an article: its most plausible deviations, and how sure that is.

`fitting` descends to them, `slips` holds what is known beforehand. The model's own error in frequency moves
the match as the side does, so the sweep alone cannot part the two. Both answers are given: deviations taking
the model as right, and allowing for its error.

How far to sweep: on a leg-fed element a standoff does to the reflection what 0.37 of it does to the side,
in size and phase, within 3 % of that from 6 % below the band to 4 % above it, and 0.32 to 0.40 from 12 %
below to 8 % above (solved, a 2.4 GHz biquad). A sweep of a few per cent either side therefore sees one
figure of the two whatever its noise, and one of 20 % hardly more; at 40 % they part, if the noise is low and
the model is trusted to half a per cent of reflection so far from its band, which it is not. So the fit looks
a little beside the band, says which dimensions go together, and asks for a calliper.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.tuning.explore import Explored
from wavejig.tuning.fitting import CALIBRATION, OFFSET, TURNS, Point, Problem
from wavejig.tuning.slips import Case, Mixture, before, cases, chance_of_one, slip_width
from wavejig.tuning.sweepfile import MeasuredSweep
from wavejig.tuning.yields import FREQUENCY

Array = NDArray[np.float64]

LITTLE = 0.7  # of the 95 % interval beforehand: one wider than this was hardly told
ALIKE = 0.7  # correlation from which two are named as not told apart
OR_ELSE = 0.1  # probability from which another explanation is told
MAIN = ("side", "lobe_diameter", "standoff", "feed_gap", OFFSET)
_CALIBRATED = {name for name, _ in CALIBRATION}


@dataclass(frozen=True, slots=True, kw_only=True)
class Deviation:
    """One unknown's deviation from nominal: most plausible value, 95 % interval, standard error.

    prior_sigma: of the process's spread (or the calliper's error); before: half-width of the 95 % interval
    that a first article's slips and spread leave before any sweep or reading; tolerance: plus or minus, as the
    process or the recipe has it; None where there is none.
    """

    key: str
    unit: str
    value: float
    interval: tuple[float, float]
    sigma: float
    prior_sigma: float
    before: float
    tolerance: float | None

    @property
    def told(self) -> bool:
        """Whether sweep and readings answer for this one.

        Two things a person at the bench needs of an answer: that it is clearly narrower than what had to be
        expected of a first article anyway (else the process speaks, not the sweep), and that it is no wider
        than the tolerance, so that it can be said whether this dimension is in order.
        """
        half = (self.interval[1] - self.interval[0]) / 2.0
        return half < LITTLE * self.before and (self.tolerance is None or half <= self.tolerance)


@dataclass(frozen=True, slots=True, kw_only=True)
class OrElse:
    """Another explanation: deviations of what slipped in it, and how probable it is."""

    slipped: tuple[tuple[str, float], ...]
    chance: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Fit:
    """Deviations of all unknowns at once. vague: pairs that the sweep cannot tell apart, with correlation.

    slipped: dimensions that are out by more than the spread explains; chance: of this explanation;
    or_else: the others worth telling.
    """

    deviations: tuple[Deviation, ...]
    covariance: Array
    vague: tuple[tuple[str, str, float], ...]
    noise: float  # rms of the reflection's noise, as found
    misfit: float  # rms residual over noise; far above 1: something else is different
    at_limit: tuple[str, ...]  # dimensions at the end of what the surface covers
    slipped: tuple[str, ...]
    chance: float
    or_else: tuple[OrElse, ...]

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
        """Whether this one is left open."""
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

    readings: dimensions taken with a calliper (mm), with their standard error; they replace spread and slips
    as what is known beforehand.
    """
    problem = Problem(explored, sweep, readings or {}, reading_sigma)
    read = set(readings or {})
    right, x = _fit(problem, read, problem.start(), 0.0)
    # the plane is known by now, and with it the valley
    allowing, _ = _fit(problem, read, x, explored.spread.frequency_sigma, turns=(0.0,))
    return Findings(sweep=sweep, right=right, open=allowing)


def _fit(
    problem: Problem, read: set[str], start: Array, frequency_sigma: float, turns: Sequence[float] = TURNS
) -> tuple[Fit, Array]:
    """The answer, and the most plausible unknowns."""
    names = [d.key for d in problem.dimensions]
    may_slip = [i for i, key in enumerate(names) if key in MAIN and key not in read]
    slips = {i: slip_width(float(problem.reach[i])) for i in may_slip}

    def prior(case: Case) -> Array:
        widths = problem.width.copy()
        for i in case.slipped:
            widths[i] = slips[i]
        return problem.prior(widths, frequency_sigma)

    every = cases(may_slip)
    # the noise is what not even slips explain, and the same for all explanations
    x, noise = problem.settle(start, prior(every[-1]), turns)
    points = [problem.fit(x, prior(case), noise) for case in every]
    weights = _weights(every, points)
    best = int(np.argmax(weights))
    told = _Told(problem, prior(every[0]))
    return told.fit(every, points, weights, best), points[best].x


def _weights(every: tuple[Case, ...], points: list[Point]) -> Array:
    logs = np.array([math.log(c.chance) + p.log_evidence for c, p in zip(every, points, strict=True)])
    weights = np.exp(logs - logs.max())
    return np.asarray(weights / weights.sum())


class _Told:
    """Points of all explanations put into a person's units."""

    def __init__(self, problem: Problem, prior: Array) -> None:
        self.problem, self.prior = problem, prior
        main = sum(k.key in MAIN for k in problem.dimensions)
        self.one = chance_of_one(main)
        d, rest = problem.d, len(prior) - problem.d
        self.scale = np.concatenate([problem.sigma, np.ones(rest)])
        self.names = [*(k.key for k in problem.dimensions), OFFSET, FREQUENCY, *(n for n, _ in CALIBRATION)]
        self.units = [*(k.unit for k in problem.dimensions), "mm", *[""] * (rest - 1)]
        self.kept = [i for i in range(d + rest) if prior[i] > 0.0]

    def fit(self, every: tuple[Case, ...], points: list[Point], weights: Array, best: int) -> Fit:
        problem, kept = self.problem, self.kept
        x = points[best].x
        covariances = np.array([p.covariance for p in points])
        mixture = Mixture(
            weights=weights,
            means=np.array([p.x for p in points]),
            sigmas=np.sqrt(np.array([np.diag(c) for c in covariances])),
        )
        low, high = mixture.interval()
        whole = mixture.covariance(covariances)
        left = problem.reflection(x) - problem.s
        plain = problem.noise_at(np.abs(problem.reflection(x)), 1.0)
        others = [
            OrElse(slipped=self._slipped(every[k], points[k]), chance=float(weights[k]))
            for k in np.argsort(-weights, kind="stable")
            if k != best and weights[k] >= OR_ELSE and self._differs(points[k].x, x)
        ]
        return Fit(
            deviations=tuple(self._deviation(i, x, whole, low, high) for i in kept),
            covariance=whole[np.ix_(kept, kept)] * np.outer(self.scale[kept], self.scale[kept]),
            vague=_alike([self.names[i] for i in kept], whole[np.ix_(kept, kept)], self.prior[kept]),
            noise=float(np.sqrt(np.mean(plain**2))) * math.sqrt(2.0),
            misfit=float(np.sqrt(np.mean(np.abs(left / plain) ** 2) / 2.0)),
            at_limit=tuple(self.names[i] for i in range(problem.d) if abs(x[i]) > 0.98 * problem.reach[i]),
            slipped=tuple(key for key, _ in self._slipped(every[best], points[best])),
            chance=float(weights[best]),
            or_else=tuple(others),
        )

    def _deviation(self, i: int, x: Array, whole: Array, low: Array, high: Array) -> Deviation:
        name, scale, sigma = self.names[i], float(self.scale[i]), float(self.prior[i])
        dimension = self.problem.dimensions[i] if i < self.problem.d else None
        # what had to be expected before any reading
        spread = sigma if dimension is None else 1.0
        slip = spread
        if dimension is not None and name in MAIN:
            slip = slip_width(float(self.problem.reach[i]))
        return Deviation(
            key=name,
            unit=self.units[i],
            value=float(x[i]) * scale,
            interval=(float(low[i]) * scale, float(high[i]) * scale),
            sigma=float(math.sqrt(whole[i, i])) * scale,
            prior_sigma=sigma * scale,
            before=before(spread, slip, self.one) * scale,
            tolerance=None if dimension is None else dimension.plus_minus,
        )

    def _slipped(self, case: Case, point: Point) -> tuple[tuple[str, float], ...]:
        return tuple((self.names[i], float(point.x[i] * self.scale[i])) for i in case.slipped)

    def _differs(self, one: Array, other: Array) -> bool:
        """Whether two explanations put some main dimension elsewhere by more than the spread."""
        main = [i for i in range(self.problem.d) if self.names[i] in MAIN]
        return bool(np.any(np.abs(one[main] - other[main]) > 1.0))


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
