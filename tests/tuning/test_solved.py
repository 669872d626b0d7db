"""The promises on solved antennas: the surface on articles it has not seen, planted deviations found again.

By default a sample on one small antenna, whose surface all its tests share; the whole with --whole.
"""

from __future__ import annotations

from collections.abc import Iterator
from concurrent.futures import Executor

import numpy as np
import pytest

from tests.tuning.articles import Plants, near, plants, thirty, twenty
from wavejig.tuning.asbuilt import Nominal
from wavejig.tuning.explore import MOST_SOLVES, Explored, explore
from wavejig.tuning.found import Findings, find
from wavejig.tuning.points import random_articles
from wavejig.tuning.solving import Job, solve_all, workers
from wavejig.tuning.spread import spread
from wavejig.tuning.surface import reflection, worst_return_loss_db
from wavejig.tuning.sweepfile import BESIDE

SMALL = "boatshed-5g8"


@pytest.fixture(scope="module")
def executor() -> Iterator[Executor]:
    with workers() as pool:
        yield pool


@pytest.fixture(scope="module")
def small(executor: Executor) -> Explored:
    recipe, article = near(SMALL)
    return explore(article, spread(recipe, article), executor, wide=True, least_margin=BESIDE)


def unseen_miss_db(found: Explored, article: Nominal, executor: Executor, count: int) -> np.ndarray:
    """Error of the in-band worst return loss on so many random articles, solved directly at nine frequencies."""
    known, target = found.spread, article.design.target
    values = random_articles(known.dimensions, np.random.default_rng(5).random((count, len(known.names))))
    f = np.linspace(target.band_low_hz, target.band_high_hz, 9)
    jobs = [
        Job(
            nominal=article,
            values={n: float(v) for n, v in zip(known.names, row, strict=True)},
            frequencies_hz=tuple(float(x) for x in f),
        )
        for row in values
    ]
    truth = worst_return_loss_db(reflection(np.array(solve_all(executor, jobs)), target.reference_ohm))
    return np.asarray(worst_return_loss_db(found.surface.reflection(values, f)) - truth)


def rms(values: np.ndarray) -> float:
    return float(np.sqrt(np.mean(values**2)))


def test_unseen_articles_a_sample(small: Explored, executor: Executor) -> None:
    """The promise is 0.5 dB rms; the surface does far better, so ask for 0.1."""
    assert small.solves <= MOST_SOLVES
    assert rms(unseen_miss_db(small, small.article, executor, 5)) < 0.1


@pytest.mark.slow
@pytest.mark.parametrize("name", ["boatshed-5g8", "ridge-868", "saltmarsh-2g4", "causeway-2g4-double"])
def test_fifty_unseen_articles(name: str, executor: Executor) -> None:
    recipe, article = near(name)
    found = explore(article, spread(recipe, article), executor)
    assert found.solves <= MOST_SOLVES
    assert rms(unseen_miss_db(found, article, executor, 50)) < 0.1


def found_again(explored: Explored, planted: Plants, kind: str = "point") -> list[Findings]:
    rng = np.random.default_rng(2)
    return [find(explored, planted.sweep(i, rng, kind=kind)) for i in range(len(planted.clean))]


def counts(found: list[Findings], planted: Plants, key: str, limit: float) -> tuple[int, int, int]:
    """How many are near enough, how many intervals hold the truth, how many are left open."""
    got = [f.right.get(key) for f in found]
    true = planted.deviations[:, planted.names.index(key)]
    near_enough = sum(abs(d.value - t) <= limit for d, t in zip(got, true, strict=True))
    held = sum(d.interval[0] <= t <= d.interval[1] for d, t in zip(got, true, strict=True))
    return near_enough, held, sum(not d.told for d in got)


def test_planted_deviations_a_sample(small: Explored, executor: Executor) -> None:
    """One of the size alone, one of everything; and a standoff that slipped by several tolerances."""
    recipe, _ = near(SMALL)
    spread_out = plants(recipe, small.article, executor, [("side",), ("*",)])
    slipped = plants(recipe, small.article, executor, [("standoff",)], slips=True)
    assert abs(slipped.deviations[0, slipped.names.index("standoff")]) > 0.2
    for planted in (spread_out, slipped):
        found = found_again(small, planted)
        for key, limit in (("side", 0.15), ("standoff", 0.3)):
            n = len(found)
            assert counts(found, planted, key, limit) == (n, n, 0)


@pytest.mark.slow
@pytest.mark.parametrize("kind", ["point", "sweep"])
def test_thirty_plants(kind: str, small: Explored, executor: Executor) -> None:
    recipe, _ = near(SMALL)
    planted = plants(recipe, small.article, executor, thirty())
    found = found_again(small, planted, kind)
    for key, limit in (("side", 0.15), ("standoff", 0.3)):
        near_enough, held, left_open = counts(found, planted, key, limit)
        assert near_enough >= 24
        assert held >= 27
        assert left_open <= 6


@pytest.mark.slow
def test_twenty_slips(small: Explored, executor: Executor) -> None:
    """Out by several tolerances, and found to the same limits; without slips in the prior half are not."""
    recipe, _ = near(SMALL)
    planted = plants(recipe, small.article, executor, twenty(), slips=True)
    found = found_again(small, planted)
    for key, limit in (("side", 0.15), ("standoff", 0.3)):
        near_enough, held, _ = counts(found, planted, key, limit)
        assert near_enough >= 18
        assert held >= 17


@pytest.mark.slow
def test_leg_fed_plants_are_found_and_the_standoff_is_left_to_the_calliper(executor: Executor) -> None:
    """Side and standoff are one figure to a leg-fed element's reflection: said so, and never a wrong interval."""
    recipe, article = near("saltmarsh-2g4")
    explored = explore(article, spread(recipe, article), executor, wide=True, least_margin=BESIDE)
    planted = plants(recipe, article, executor, thirty())
    found = found_again(explored, planted)
    for key, limit in (("side", 0.15), ("standoff", 0.3)):
        near_enough, held, left_open = counts(found, planted, key, limit)
        assert near_enough >= 24
        assert held >= 27
        if key == "side":
            assert left_open <= 6
    drawn = explored.surface.axes.centre[explored.spread.names.index("standoff")]
    true = planted.deviations[0, planted.names.index("standoff")]
    sweep = planted.sweep(0, np.random.default_rng(2))
    assert find(explored, sweep, {"standoff": drawn + true}, 0.05).right.get("standoff").told
