"""From a design and its spread to a response surface with its measured error, in a counted number of solves."""

from __future__ import annotations

import math
from concurrent.futures import Executor
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.radiator.feedlegs import PlanError
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.tuning.asbuilt import ArticleError, Nominal
from wavejig.tuning.points import designed_points, random_articles, within
from wavejig.tuning.solving import Job, Told, solve_all
from wavejig.tuning.spread import CUT_SIGMAS, Dimension, Spread
from wavejig.tuning.surface import (
    Axes,
    Surface,
    best_curve,
    chebyshev_nodes,
    fit,
    reflection,
    worst_return_loss_db,
)

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

NODES = 5  # frequencies of one solve
DENSE = 3  # solves spent on the nominal article's own curve
MOST_SOLVES = 80
HELD_OUT = 12
CORNERS = 16
# What a wide box covers, of the nominal size, and at most in reaches of the spread
_WIDE_SHARE = {"side": 0.04, "lobe_diameter": 0.04, "standoff": 0.12, "feed_gap": 0.15}
_WIDE_REACHES = 4.0
_MARGIN = 0.004  # share of frequency beyond what the articles reach
_PULLS = 8  # times that a point is pulled in
_SEED = 715517  # any fixed number


@dataclass(frozen=True, slots=True, kw_only=True)
class Explored:
    """A surface and how wrong it is on articles it has not seen.

    solves: geometries solved, at five frequencies or fewer each; error_reflection: rms of the reflection
    coefficient's error; error_db, bias_db: rms and mean error of the in-band worst return loss;
    band_hz: the band's frequencies that return loss is judged at.
    """

    article: Nominal
    spread: Spread
    surface: Surface
    solves: int
    error_reflection: float
    error_db: float
    bias_db: float
    band_hz: Array


def explore(
    article: Nominal,
    spread: Spread,
    executor: Executor,
    *,
    wide: bool = False,
    least_margin: float = 0.0,
    most_solves: int = MOST_SOLVES,
    told: Told = lambda done, of: None,
) -> Explored:
    """Solve a designed set of articles and fit the surface.

    article: meshed (its neighbours are solved on its mesh); wide: cover what a first article may be off by,
    not only what the spread lets expect; least_margin: share of frequency to cover beyond the band at least.
    Raises ArticleError when an article of the box cannot be drawn.
    """
    target = article.design.target
    axes = _axes(article, spread, wide, least_margin)
    fitted = _fit_points(len(axes.names), most_solves)
    points = axes.centre + axes.half * designed_points(len(axes.names), fitted + 1, CORNERS)[1:]
    for i, d in enumerate(spread.dimensions):
        points[:, i] = within(d, points[:, i])
    unseen = random_articles(spread.dimensions, _halton(HELD_OUT, len(axes.names)))
    points, unseen = _drawable(article, axes, points), _drawable(article, axes, unseen)
    few = np.linspace(target.band_low_hz, target.band_high_hz, NODES) / spread.frequency
    dense = chebyshev_nodes(*_range(axes), DENSE * NODES)
    jobs = [
        *(_job(article, axes, axes.centre, dense[i::DENSE]) for i in range(DENSE)),
        *(_job(article, axes, v, f) for v, f in zip(points, axes.frequencies_hz(points), strict=True)),
        *(_job(article, axes, v, few) for v in unseen),
    ]
    done = solve_all(executor, jobs, told)
    curve = np.empty(len(dense), dtype=np.complex128)
    for i in range(DENSE):
        curve[i::DENSE] = done[i]
    nominal = best_curve(dense, curve, axes.nodes_hz, target.reference_ohm)
    surface = fit(axes, nominal, points, np.array(done[DENSE : DENSE + len(points)]))
    truth = reflection(np.array(done[DENSE + len(points) :]), target.reference_ohm)
    guess = surface.reflection(unseen, few)
    miss = worst_return_loss_db(guess) - worst_return_loss_db(truth)
    return Explored(
        article=article,
        spread=spread,
        surface=surface,
        solves=len(jobs),
        error_reflection=float(np.sqrt(np.mean(np.abs(guess - truth) ** 2))),
        error_db=float(np.sqrt(np.mean(miss**2))),
        bias_db=float(np.mean(miss)),
        band_hz=np.linspace(target.band_low_hz, target.band_high_hz, 21),
    )


def _axes(article: Nominal, spread: Spread, wide: bool, least_margin: float) -> Axes:
    names = spread.names
    centre = np.array([d.nominal for d in spread.dimensions])
    half = np.array([_half(d, wide) for d in spread.dimensions])
    size = next((i for i, n in enumerate(names) if n in ("side", "lobe_diameter")), None)
    size_share = 0.0 if size is None else half[size] / centre[size]
    margin = max(CUT_SIGMAS * spread.frequency_sigma + size_share, least_margin) + _MARGIN
    target = article.design.target
    low = target.band_low_hz / spread.frequency * (1.0 - margin)
    high = target.band_high_hz / spread.frequency * (1.0 + margin)
    return Axes(names=names, centre=centre, half=half, nodes_hz=_nodes(low, high), size=size)


def _drawable(article: Nominal, axes: Axes, points: Array) -> Array:
    """Points that break a rule of the drawing (a lap too near the sheet, say) pulled towards the middle.

    The rule is the designer's; an article may come out beyond it all the same, and the surface goes on
    smoothly there.
    """
    out = points.copy()
    for row in out:
        for _ in range(_PULLS):
            if can_be_drawn(article, _values(axes, row)):
                break
            row[:] = axes.centre + 0.7 * (row - axes.centre)
        else:
            row[:] = axes.centre
    return out


def can_be_drawn(article: Nominal, values: dict[str, float]) -> bool:
    """Whether an article with these dimensions can be laid out."""
    try:
        plan_radiator(article.moved(values))
    except (ArticleError, PlanError):
        return False
    return True


def _half(dimension: Dimension, wide: bool) -> float:
    """Half-width of the box. A first article's main sizes may be off by several times the tolerance."""
    share = _WIDE_SHARE.get(dimension.key, 0.0) if wide else 0.0
    return max(dimension.reach, min(share * abs(dimension.nominal), _WIDE_REACHES * dimension.reach))


def _nodes(low: float, high: float) -> Array:
    """Chebyshev nodes stretched so that the outer ones stand on the ends: no extrapolation."""
    nodes = chebyshev_nodes(-1.0, 1.0, NODES)
    return np.asarray((low + high) / 2.0 + (high - low) / 2.0 * nodes / nodes[-1])


def _range(axes: Axes) -> tuple[float, float]:
    return float(axes.nodes_hz[0]), float(axes.nodes_hz[-1])


def _fit_points(dimensions: int, most_solves: int) -> int:
    """Solves to fit. Fewer than a quadratic has terms will do, since most of its products are next to nothing."""
    terms = 1 + dimensions + dimensions * (dimensions + 1) // 2
    return min(most_solves - DENSE - HELD_OUT, CORNERS + math.ceil(0.4 * terms))


def _job(article: Nominal, axes: Axes, values: Array, frequencies_hz: Array) -> Job:
    return Job(
        nominal=article,
        values=_values(axes, values),
        frequencies_hz=tuple(float(f) for f in frequencies_hz),
    )


def _values(axes: Axes, row: Array) -> dict[str, float]:
    return {n: float(v) for n, v in zip(axes.names, row, strict=True)}


def _halton(count: int, dimensions: int) -> Array:
    from scipy.stats import qmc

    return np.asarray(qmc.Halton(dimensions, scramble=True, seed=_SEED).random(count))
