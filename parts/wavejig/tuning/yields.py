"""How many of a batch will pass: virtual articles on the response surface.

An article passes when its return loss is at least the recipe's over the whole band. Its dimensions vary
from article to article; the model's error in frequency is one unknown number for the whole batch.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.tuning.explore import Explored
from wavejig.tuning.points import cut_normal, random_articles, within
from wavejig.tuning.sensitivity import Share, shares
from wavejig.tuning.surface import worst_return_loss_db

Array = NDArray[np.float64]

ARTICLES = 20_000
SHARE_POINTS = 2048
WANTED = 0.95
_CHUNK = 4096
_Z95 = 1.959964  # two-sided 95 % of a normal distribution
_SEED = 402653  # any fixed number
FREQUENCY = "model_frequency"


@dataclass(frozen=True, slots=True, kw_only=True)
class Fraction:
    """A share of articles with its 95 % interval: sampling (Wilson 1927) and the surface's error together."""

    value: float
    low: float
    high: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Remedy:
    """The tolerance that would bring WANTED of the articles through; None: none would.

    key: of the dimension, or "all" (then plus_minus is a factor on every tolerance).
    """

    key: str
    now: float
    needed: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Yield:
    """What to expect of a batch. Return losses in dB, in-band worst.

    passing: with the model's error among the spreads; shop: if the predicted frequency were right;
    expected, batch_low, batch_high: articles of the batch that pass (mean, 5 % and 95 %); edges, counts:
    histogram of the virtual articles; shares, shop_shares: by dimension, with and without the model's
    error; remedies, shop_remedies: alike.
    """

    explored: Explored
    quantity: int
    wanted_db: float
    nominal_db: float
    passing: Fraction
    shop: Fraction
    expected: float
    batch_low: int
    batch_high: int
    edges: Array
    counts: NDArray[np.int64]
    worst_db: Array
    shop_worst_db: Array
    percentiles_db: tuple[float, float, float]
    shares: dict[str, Share]
    shop_shares: dict[str, Share]
    remedies: tuple[Remedy, ...]
    shop_remedies: tuple[Remedy, ...]

    @property
    def nominal_passes(self) -> bool:
        """Whether the article as drawn would pass."""
        return self.nominal_db >= self.wanted_db


class _Batch:
    """Worst return loss of articles given by numbers between 0 and 1, the last for the model's frequency."""

    def __init__(self, explored: Explored) -> None:
        self.explored = explored
        self.spread = explored.spread
        self.inputs = len(self.spread.dimensions) + 1

    def worst_db(self, uniform: Array, *, model: bool = True, factors: Array | None = None) -> Array:
        """(N,). factors: on each dimension's deviation, for tighter tolerances."""
        values = random_articles(self.spread.dimensions, uniform[:, :-1])
        if factors is not None:
            centre = self.explored.surface.axes.centre
            values = centre + factors * (values - centre)
            for i, d in enumerate(self.spread.dimensions):
                values[:, i] = within(d, values[:, i])
        share = cut_normal(uniform[:, -1], self.spread.frequency_sigma) if model else np.zeros(len(uniform))
        return self.at(values, self.spread.frequency * (1.0 + share))

    def at(self, values: Array, frequency_factor: Array) -> Array:
        """(N,) of articles (N, d) whose true frequencies are so much higher than predicted."""
        out = np.empty(len(values))
        for i in range(0, len(values), _CHUNK):
            part = slice(i, i + _CHUNK)
            s = self.explored.surface.reflection(values[part], self.explored.band_hz, frequency_factor[part])
            out[part] = worst_return_loss_db(s)
        return out


def find_yield(
    explored: Explored,
    quantity: int,
    wanted_db: float,
    articles: int = ARTICLES,
    share_points: int = SHARE_POINTS,
) -> Yield:
    """Virtual articles, their pass fraction, what decides it, and what would mend it.

    share_points: of each of the two matrices of the sensitivity, a power of two.
    """
    batch = _Batch(explored)
    uniform = np.random.default_rng(_SEED).random((articles, batch.inputs))
    worst, shop = batch.worst_db(uniform), batch.worst_db(uniform, model=False)
    centre = explored.surface.axes.centre[None, :]
    nominal = float(batch.at(centre, np.array([explored.spread.frequency]))[0])
    passing = _fraction(worst, wanted_db, explored.error_db)
    low, high = _batch_numbers(batch, quantity, wanted_db)
    edges = _edges(worst)
    names = [*explored.spread.names, FREQUENCY]

    def output(model: bool) -> Callable[[Array], Array]:
        return lambda u: batch.worst_db(u, model=model)

    both = shares(output(True), batch.inputs, share_points)
    alone = shares(output(False), batch.inputs, share_points)[:-1]
    some = uniform[: min(articles, 4000)]
    return Yield(
        explored=explored,
        quantity=quantity,
        wanted_db=wanted_db,
        nominal_db=nominal,
        passing=passing,
        shop=_fraction(shop, wanted_db, explored.error_db),
        expected=quantity * passing.value,
        batch_low=low,
        batch_high=high,
        edges=edges,
        counts=np.histogram(worst, edges)[0],
        worst_db=worst,
        shop_worst_db=shop,
        percentiles_db=tuple(float(v) for v in np.percentile(worst, [5, 50, 95])),  # type: ignore[arg-type]
        shares=dict(zip(names, both, strict=True)),
        shop_shares=dict(zip(names, alone, strict=False)),
        remedies=_remedies(batch, some, wanted_db, both, model=True),
        shop_remedies=_remedies(batch, some, wanted_db, alone, model=False),
    )


def _fraction(worst: Array, wanted_db: float, error_db: float) -> Fraction:
    """Passing share; its interval takes the surface wrong by two of its errors, the bad way and the good."""
    low = _wilson(float(np.mean(worst >= wanted_db + 2.0 * error_db)), len(worst))[0]
    high = _wilson(float(np.mean(worst >= wanted_db - 2.0 * error_db)), len(worst))[1]
    return Fraction(value=float(np.mean(worst >= wanted_db)), low=low, high=high)


def _wilson(p: float, n: int) -> tuple[float, float]:
    """95 % score interval of a share p found in n. Source: Wilson, JASA 22 (1927) 209."""
    z2 = _Z95**2
    middle = (p + z2 / (2 * n)) / (1 + z2 / n)
    half = _Z95 / (1 + z2 / n) * math.sqrt(p * (1 - p) / n + z2 / (4 * n * n))
    return max(0.0, middle - half), min(1.0, middle + half)


def _batch_numbers(batch: _Batch, quantity: int, wanted_db: float) -> tuple[int, int]:
    """5 % and 95 % of how many pass: the frequency's error is shared by all of them."""
    from scipy.stats import binom

    uniform = np.random.default_rng(_SEED + 1).random((1500, batch.inputs))
    places = (np.arange(41) + 0.5) / 41.0
    numbers = np.arange(quantity + 1)
    chances = np.zeros(quantity + 1)
    for place in places if batch.spread.frequency_sigma > 0.0 else places[20:21]:
        uniform[:, -1] = place
        p = float(np.mean(batch.worst_db(uniform) >= wanted_db))
        chances += binom.pmf(numbers, quantity, p)
    chances /= chances.sum()
    total = np.cumsum(chances)
    low, high = (int(np.searchsorted(total, q - 1e-9)) for q in (0.05, 0.95))
    return low, min(high, quantity)


def _remedies(
    batch: _Batch, uniform: Array, wanted_db: float, found: tuple[Share, ...], *, model: bool
) -> tuple[Remedy, ...]:
    """One factor on all tolerances, then the three dimensions that matter most, each alone."""
    dimensions = batch.spread.dimensions

    def passes(factors: Array) -> bool:
        worst = batch.worst_db(uniform, model=model, factors=factors)
        return float(np.mean(worst >= wanted_db)) >= WANTED

    def needed(which: Array) -> float | None:
        def at(k: float) -> Array:
            return np.where(which, k, 1.0)

        if passes(at(1.0)):
            return 1.0
        if not passes(at(0.0)):
            return None
        low, high = 0.0, 1.0
        for _ in range(8):
            middle = (low + high) / 2.0
            low, high = (middle, high) if passes(at(middle)) else (low, middle)
        return low

    rows = [Remedy(key="all", now=1.0, needed=needed(np.ones(len(dimensions), dtype=bool)))]
    order = sorted(range(len(dimensions)), key=lambda i: -found[i].total)
    for i in order[:3]:
        which = np.zeros(len(dimensions), dtype=bool)
        which[i] = True
        k = needed(which)
        now = dimensions[i].plus_minus
        rows.append(Remedy(key=dimensions[i].key, now=now, needed=None if k is None else k * now))
    return tuple(rows)


def _edges(worst: Array) -> Array:
    """Histogram edges on whole, half or tenth decibels, about a dozen of them and the few that tails need."""
    low, high = float(np.percentile(worst, 0.5)), float(np.percentile(worst, 99.5))
    step = next((s for s in (0.1, 0.2, 0.5, 1.0, 2.0) if (high - low) / s <= 14), 5.0)
    first, last = math.floor(worst.min() / step), math.ceil(worst.max() / step)
    return np.asarray(np.arange(first, max(last, first + 1) + 1) * step)
