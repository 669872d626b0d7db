"""Articles for tests and benchmarks: demo recipes set to sizes that nearly match, and planted sweeps.

A plant is solved directly (never read off the surface that is to find it), then noised and looked at from
a plane some way off, as a bench would.
"""

from __future__ import annotations

from concurrent.futures import Executor
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from wavejig.design import resolve
from wavejig.pack import inspect_recipe
from wavejig.recipe.models import Recipe
from wavejig.tuning.asbuilt import Nominal, nominal
from wavejig.tuning.fitting import LIGHT_MM_PER_S
from wavejig.tuning.points import random_articles
from wavejig.tuning.solving import Job, solve_all
from wavejig.tuning.spread import spread
from wavejig.tuning.surface import chebyshev_nodes, interpolate, reflection
from wavejig.tuning.sweepfile import MeasuredSweep
from wavejig.tuning.vary import with_values

RECIPES = Path(__file__).parents[2] / "recipes"
# Sizes (centreline, mm) that bring the demo recipes near their bands; found by trying.
NEAR = {
    "boatshed-5g8": {"side": 11.4, "standoff": 6.45, "feed_gap": 3.6},
    "ridge-868": {"side": 83.8, "standoff": 43.25, "feed_gap": 6.0},
    "saltmarsh-2g4": {
        "side": 26.15, "standoff": 19.65, "feed_gap": 4.4, "lobe_angle": 129.5, "leg_spacing": 7.8,
    },
    "creek-915-round": {},
    "slipway-path": {},
    "causeway-2g4-double": {"side": 29.5, "standoff": 15.35, "feed_gap": 4.0},
}  # fmt: skip
_PLANT_POINTS = 15
# What a first article is out by at most when something went wrong, of the size: a line mistaken, a washer left out.
SLIPS = {"side": 0.035, "lobe_diameter": 0.012, "standoff": 0.07, "feed_gap": 0.12}


def near(name: str) -> tuple[Recipe, Nominal]:
    """The recipe near its band, and its article to vary about, meshed."""
    recipe_file, _ = inspect_recipe(RECIPES / f"{name}.toml")
    recipe = with_values(recipe_file.recipe, NEAR[name])
    return recipe, nominal(recipe, resolve(recipe)).meshed()


@dataclass(frozen=True, kw_only=True, eq=False)
class Plants:
    """Articles with known deviations (n, d) by name, and their clean reflection (n, F)."""

    names: tuple[str, ...]
    deviations: NDArray[np.float64]
    frequencies_hz: NDArray[np.float64]
    clean: NDArray[np.complex128]
    reference_ohm: float

    def sweep(
        self,
        i: int,
        rng: np.random.Generator,
        *,
        noise_db: float = 0.5,
        offset_mm: float = 20.0,
        kind: str = "point",
    ) -> MeasuredSweep:
        """One plant as measured. kind: "point", noise of its own at each point; "sweep", one error throughout."""
        f = self.frequencies_hz
        size = 10.0 ** (noise_db / 20.0) - 1.0
        noise = size * (rng.standard_normal(len(f)) + 1j * rng.standard_normal(len(f)))
        if kind == "sweep":
            noise = np.full(len(f), noise[0])
        turned = self.clean[i] * np.exp(-4j * np.pi * f / LIGHT_MM_PER_S * offset_mm)
        return MeasuredSweep(
            path=Path(f"plant-{i}.s1p"),
            serial=str(i),
            frequencies_hz=f,
            reflection=turned * (1.0 + noise),
            reference_ohm=self.reference_ohm,
        )


def plants(
    recipe: Recipe,
    article: Nominal,
    executor: Executor,
    which: list[tuple[str, ...]],
    points: int = 201,
    slips: bool = False,
) -> Plants:
    """One article for each entry of `which`: the dimensions named there drawn from the spread; "*" is all.

    slips: those named are off by SLIPS instead, a seeded half to all of it either way, and all others by the spread.
    """
    known = spread(recipe, article)
    centre = np.array([d.nominal for d in known.dimensions])
    drawn = random_articles(known.dimensions, np.random.default_rng(11).random((len(which), len(centre))))
    rng = np.random.default_rng(12)
    for row, names in zip(drawn, which, strict=True):
        for i, name in enumerate(known.names):
            if slips and name in names:
                row[i] = centre[i] + rng.choice([-1.0, 1.0]) * rng.uniform(0.5, 1.0) * SLIPS[name] * centre[i]
            elif not slips and "*" not in names and name not in names:
                row[i] = centre[i]
    target = article.design.target
    low, high = 0.94 * target.band_low_hz, 1.06 * target.band_high_hz
    nodes = chebyshev_nodes(low * 0.998, high * 1.002, _PLANT_POINTS)
    jobs = [
        Job(
            nominal=article,
            values={n: float(v) for n, v in zip(known.names, row, strict=True)},
            frequencies_hz=tuple(float(f) for f in nodes),
        )
        for row in drawn
    ]
    f = np.linspace(low, high, points)
    solved = reflection(np.array(solve_all(executor, jobs)), target.reference_ohm)
    return Plants(
        names=known.names,
        deviations=drawn - centre,
        frequencies_hz=f,
        clean=interpolate(nodes, solved, np.broadcast_to(f, (len(which), points))),
        reference_ohm=target.reference_ohm,
    )


def thirty(size: str = "side") -> list[tuple[str, ...]]:
    """Thirty plants: six of each dimension alone, six of the three together, six of everything.

    size: "side" or "lobe_diameter", as the family has it.
    """
    singles = (size, "standoff", "feed_gap")
    alone = [(name,) for name in singles for _ in range(6)]
    return [*alone, *[singles] * 6, *[("*",)] * 6]


def twenty(size: str = "side") -> list[tuple[str, ...]]:
    """Twenty slips: six of the size, eight of the standoff, four of the gap, two of size and standoff."""
    return [*[(size,)] * 6, *[("standoff",)] * 8, *[("feed_gap",)] * 4, *[(size, "standoff")] * 2]
