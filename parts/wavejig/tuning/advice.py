"""What to change after a measurement: in the recipe for the next articles, and on this one at the bench.

Levers are moved on the response surface by a pattern search (Hooke & Jeeves 1961) on the grid a shop can
hold, until the band's worst frequency is past the wanted return loss with something to spare, and no further
than that takes; a lever that brings little is left alone, and so is what cannot be put together.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from wavejig.design.starting import grid
from wavejig.radiator.feedlegs import PlanError
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.tuning.asbuilt import ArticleError
from wavejig.tuning.explore import Explored
from wavejig.tuning.surface import worst_return_loss_db

SPARE_DB = 1.5  # past the wanted return loss, for the spread; common practice, no source
COST_DB_PER_STEP = 0.02  # a move must bring more than this for every grid step
WORTH_DB = 0.3  # a lever that brings less is left alone
RECIPE_LEVERS = ("side", "lobe_diameter", "standoff", "feed_gap")
BENCH_LEVERS = ("standoff", "feed_gap", "lobe_angle")
_STEPS_MM = (0.4, 0.2, 0.1, 0.05)
_STEPS_DEG = (1.0, 0.5)
_EDGE = 0.95  # of the box: the surface is not asked beyond


@dataclass(frozen=True, slots=True, kw_only=True)
class Lever:
    """One dimension moved by so much."""

    key: str
    unit: str
    move: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Proposal:
    """Moves that together bring the in-band worst from before_db to after_db. Empty: nothing worth doing."""

    levers: tuple[Lever, ...]
    before_db: float
    after_db: float


def propose(
    explored: Explored,
    deviations: Mapping[str, float],
    frequency_share: float,
    keys: Sequence[str],
    wanted_db: float,
) -> Proposal:
    """The best moves of the levers in `keys` for articles with these deviations from nominal.

    frequency_share: of the true frequency over the (corrected) predicted one, less one.
    """
    search = _Search(explored, deviations, frequency_share, wanted_db + SPARE_DB)
    levers = [i for i, name in enumerate(explored.surface.axes.names) if name in keys]
    before = search.worst_db({})
    best = search.climb(levers)
    for i in sorted(best, key=lambda i: abs(best[i])):  # without it, the others searched again
        fewer = search.climb([k for k in best if k != i])
        if search.merit(best) - search.merit(fewer) < WORTH_DB:
            best = fewer
    after = search.worst_db(best)
    if after - before < WORTH_DB:
        best, after = {}, before
    names, dimensions = explored.surface.axes.names, explored.spread.dimensions
    found = tuple(
        Lever(key=names[i], unit=dimensions[i].unit, move=round(m, 3)) for i, m in sorted(best.items())
    )
    return Proposal(levers=found, before_db=before, after_db=after)


class _Search:
    """Moves by lever index, from an article with its deviations."""

    def __init__(
        self, explored: Explored, deviations: Mapping[str, float], frequency_share: float, goal_db: float
    ) -> None:
        self.explored = explored
        self.axes = explored.surface.axes
        self.units = [d.unit for d in explored.spread.dimensions]
        self.start = self.axes.centre + np.array([deviations.get(n, 0.0) for n in self.axes.names])
        self.factor = np.array([explored.spread.frequency * (1.0 + frequency_share)])
        self.goal_db = goal_db
        self._possible: dict[tuple[tuple[str, float], ...], bool] = {}

    def worst_db(self, moves: Mapping[int, float]) -> float:
        """In-band worst on the surface."""
        values = self.start.copy()
        for i, move in moves.items():
            values[i] += move
        s = self.explored.surface.reflection(values[None, :], self.explored.band_hz, self.factor)
        return float(worst_return_loss_db(s)[0])

    def merit(self, moves: Mapping[int, float]) -> float:
        """Return loss up to the goal, less what moving costs."""
        steps = sum(
            abs(m) / (_STEPS_DEG if self.units[i] == "deg" else _STEPS_MM)[-1] for i, m in moves.items()
        )
        return min(self.worst_db(moves), self.goal_db) - COST_DB_PER_STEP * steps

    def climb(self, levers: Sequence[int]) -> dict[int, float]:
        """Pattern search; moves of zero are left out."""
        moves = dict.fromkeys(levers, 0.0)
        reached = self.merit(moves)
        for level in range(len(_STEPS_MM)):
            better = True
            while better:
                better = False
                for i in levers:
                    steps = _STEPS_DEG if self.units[i] == "deg" else _STEPS_MM
                    for step in (steps[level], -steps[level]) if level < len(steps) else ():
                        tried = {**moves, i: round(moves[i] + step, 6)}
                        if self.merit(tried) > reached + 1e-6 and self._allowed(tried, i):
                            moves, reached, better = tried, self.merit(tried), True
                            break
        return {i: m for i, m in moves.items() if m != 0.0}

    def _allowed(self, moves: Mapping[int, float], i: int) -> bool:
        """Whether the surface covers it and the parts still go together."""
        if abs(self.start[i] + moves[i] - self.axes.centre[i]) > _EDGE * self.axes.half[i]:
            return False
        values = {self.axes.names[k]: float(self.axes.centre[k] + m) for k, m in moves.items() if m != 0.0}
        key = tuple(sorted(values.items()))
        if key not in self._possible:
            self._possible[key] = self._fits(values)
        return self._possible[key]

    def _fits(self, values: Mapping[str, float]) -> bool:
        article = self.explored.article
        try:
            design = article.moved(values)
            plan_radiator(design)
        except (ArticleError, PlanError):
            return False
        return len(design.conflicts) <= len(article.design.conflicts)


def new_value(nominal: float, move: float, unit: str) -> float:
    """A dimension moved, on the shop's grid."""
    return grid(nominal + move) if unit == "mm" else round(nominal + move, 1)
