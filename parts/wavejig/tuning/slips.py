"""Slips: what is known of a first article's dimensions beforehand, and what is left of it after a sweep.

A first article is measured because something may have gone wrong: a washer left out, a stop set to the
wrong line, a board printed too small. So each main dimension is either within the process's spread or,
once in so often, anywhere that the surface covers. That is the contaminated normal distribution (Tukey,
"A survey of sampling from contaminated distributions", 1960). With the spread alone, a standoff a
millimetre out would be shared among all dimensions until none of them looked unusual.

Which of the main dimensions slipped is not known, so every combination is tried, and each answer counts in
measure of how probable it makes the sweep.
"""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

CHANCE = 0.1  # that something slipped on a first article; as Tukey's own example, common practice, no source
WITHIN = 0.5  # of what the surface covers: a slip's standard deviation; common practice, no source
_TAILS = (0.025, 0.975)
_HALVINGS = 60


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """Which dimensions slipped (their indices), and how probable that is."""

    slipped: tuple[int, ...]
    chance: float


def chance_of_one(dimensions: int) -> float:
    """That one of so many dimensions slipped."""
    return CHANCE / max(dimensions, 1)


def cases(may_slip: Sequence[int]) -> tuple[Case, ...]:
    """Every combination, none first."""
    found = []
    one = chance_of_one(len(may_slip))
    for count in range(len(may_slip) + 1):
        for slipped in itertools.combinations(may_slip, count):
            chance = one**count * (1.0 - one) ** (len(may_slip) - count)
            found.append(Case(slipped=slipped, chance=chance))
    return tuple(found)


def slip_width(reach: float) -> float:
    """Standard deviation of a slip, in the unit of `reach`, to which the surface goes; never below the spread's."""
    return max(WITHIN * reach, 1.0)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Mixture:
    """Normal distributions with weights (k,), means (k, n) and standard deviations (k, n); n unknowns."""

    weights: Array
    means: Array
    sigmas: Array

    def interval(self) -> tuple[Array, Array]:
        """95 %: (n,) where a fortieth lies below, (n,) where a fortieth lies above."""
        from scipy.special import ndtr

        wide = 10.0 * self.sigmas
        ends = []
        for tail in _TAILS:
            low, high = (self.means - wide).min(axis=0), (self.means + wide).max(axis=0)
            for _ in range(_HALVINGS):
                middle = (low + high) / 2.0
                below = self.weights @ ndtr((middle - self.means) / np.maximum(self.sigmas, 1e-300)) < tail
                low, high = np.where(below, middle, low), np.where(below, high, middle)
            ends.append((low + high) / 2.0)
        return ends[0], ends[1]

    def covariance(self, covariances: Array) -> Array:
        """(n, n) of the whole, from each one's own (k, n, n)."""
        mean = self.weights @ self.means
        apart = self.means - mean
        return np.asarray(
            np.einsum("k,kij->ij", self.weights, covariances)
            + np.einsum("k,ki,kj->ij", self.weights, apart, apart)
        )


def before(sigma: float, slip: float, chance: float) -> float:
    """Half-width of the 95 % interval of one dimension before any sweep; slip: of one, with its chance."""
    both = Mixture(
        weights=np.array([1.0 - chance, chance]),
        means=np.zeros((2, 1)),
        sigmas=np.array([[sigma], [slip]]),
    )
    return float(both.interval()[1][0])
