"""A stand-in for the field solver: a resonant circuit whose parts are the article's dimensions.

Quick, exact and unlike any polynomial, so that surface, yield and fit can be tested without a solve.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from concurrent.futures import Executor, Future
from typing import Any

import numpy as np
from numpy.typing import NDArray

from tests.tuning.articles import near
from wavejig.recipe.models import Recipe
from wavejig.tuning.asbuilt import Nominal
from wavejig.tuning.explore import Explored, explore
from wavejig.tuning.spread import Spread, spread
from wavejig.tuning.sweepfile import BESIDE


def admittance(
    article: Nominal, values: Mapping[str, float], f: NDArray[np.float64]
) -> NDArray[np.complex128]:
    """Series resonance at the band's middle for nominal sizes; standoff sets resistance, the gap a capacitance."""
    drawn = article.values
    target = article.design.target
    middle = (target.band_low_hz + target.band_high_hz) / 2.0
    v = {**drawn, **values}
    resonance = middle * drawn["side"] / v["side"]
    resistance = 42.0 * (v["standoff"] / drawn["standoff"]) ** 1.5
    detune = f / resonance - resonance / f
    z = resistance + 1j * 260.0 * detune + 1j * 20.0 * (v["lobe_angle"] / drawn["lobe_angle"] - 1.0)
    capacitance = 0.06e-12 * (drawn["feed_gap"] / v["feed_gap"]) ** 0.7
    return np.asarray(1.0 / z + 2j * np.pi * f * capacitance)


class Bench(Executor):
    """An executor that answers every solve with the circuit, at once."""

    def __init__(self) -> None:
        self.solves = 0

    def submit(self, fn: Callable[..., Any], /, *args: Any, **kwargs: Any) -> Future[Any]:
        del fn, kwargs
        job = args[0]
        assert len(job.frequencies_hz) <= 5
        self.solves += 1
        future: Future[Any] = Future()
        future.set_result(admittance(job.nominal, job.values, np.array(job.frequencies_hz)))
        return future


def explored(*, wide: bool = False, recipe: Recipe | None = None) -> tuple[Explored, Spread, Bench]:
    """The boat shed's article with the circuit behind it."""
    drawn, article = near("boatshed-5g8")
    known = spread(recipe or drawn, article)
    bench = Bench()
    found = explore(article, known, bench, wide=wide, least_margin=BESIDE if wide else 0.0)
    return found, known, bench
