"""Free dimensions worked out for the antenna as it will be made: best match over the band, or most gain.

Method: the impedance at a few frequencies of the band is solved and modelled as a quadratic of the free
dimensions (tuning/steps.py), first from one solve along each, then from every further one; the worst
reflection of that model is made least within a trust region, and the step is solved. The answer is rounded
to what a shop can hold and solved again as rounded.
"""

from __future__ import annotations

import itertools
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.errors import ModelError
from wavejig.recipe.errors import RecipeError
from wavejig.recipe.models import Recipe
from wavejig.tuning.candidates import (
    Candidates,
    Solve,
    Told,
    worst_return_loss_db,
)
from wavejig.tuning.freedom import GRID_MM, Freedom
from wavejig.tuning.steps import Surrogate, best_corner, best_step, merit_db

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

MOST_SOLVES = 38  # of one tuning; the two more that a user is promised are for the rounded answer
ENOUGH_DB = 0.05  # a step that promises less is not worth a solve
FIRST_LOOK, SECOND_LOOK, LOOKS = 0.6, 0.4, 2  # in first-look steps; how often
FIRST_TRUST, LEAST_TRUST, MOST_TRUST = 1.5, 0.12, 6.0  # of the trust region, in first-look steps
# what one antenna scaled by these does at the band's middle (steps of 6 %, towards the smaller that legs ask for)
SCALES = np.array([0.82, 0.88, 0.94, 1.0, 1.06])
AMPLE_DB = 2.0  # above the wanted return loss: then the sheet stays as it is
TRAY = ("base_x", "base_y", "lip_height")
MOST_CORNERS = 64  # of the grid cell about the answer that are asked whether the shop can make them
AIMS = ("match", "gain")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Tuned:
    """The answer: values (mm, deg) on their grids, the solves before and after, what stood in the way.

    limits: dimension -> why it could go no further; refused: codes of shop findings that stopped a step.
    """

    aim: str
    free: tuple[Freedom, ...]
    values: Mapping[str, float]
    before: Solve
    after: Solve
    solves: int
    wanted_db: float
    frequencies_hz: Array
    limits: Mapping[str, str]
    refused: tuple[str, ...]

    @property
    def meets_target(self) -> bool:
        return self.after.worst_db >= self.wanted_db


def tune(
    recipe: Recipe,
    *,
    aim: str = "match",
    grid_mm: float = GRID_MM,
    most_solves: int = MOST_SOLVES,
    told: Told = lambda _: None,
    announce: Told = lambda _: None,
) -> Tuned:
    """Work out what the recipe leaves free.

    told: after each solve. Raises NothingFreeError, CannotStartError, ModelError, and RecipeError for names
    the stock tables do not hold.
    """
    search = _Search(recipe, aim, grid_mm, most_solves, told, announce)
    return search.run()


class _Search(Candidates):
    def __init__(
        self, recipe: Recipe, aim: str, grid_mm: float, most: int, told: Told, announce: Told
    ) -> None:
        super().__init__(recipe, grid_mm, told, announce)
        self.aim, self.most = aim, most
        self.wanted = self.start.target.return_loss_db
        self.start_gain = 0.0
        tray = np.array([f.name in TRAY for f in self.free])
        # the sheet is left as practice has it unless it must change, or gain is wanted of it
        self.active = ~tray if self.aim == "match" and not tray.all() else np.ones_like(tray)

    def merit(self, solve: Solve, u: Array) -> float:
        """What is made least, dB."""
        return float(merit_db(self, np.array(-solve.worst_db), np.array(solve.gain_dbi), u))

    # -- the walk -----------------------------------------------------------------------------------

    def run(self) -> Tuned:
        u = np.zeros(len(self.free))
        before = best = self.solve(u)
        self.start_gain = before.gain_dbi
        scaled = self._scaled(u, before)
        if scaled is not None:
            u, best = scaled
        model = Surrogate(len(self.free))
        model.add(np.zeros(len(self.free)), before)
        u, best = self._look_around(model, u, best, FIRST_LOOK)
        trust, looks = FIRST_TRUST, 1
        while self.solves < self.most:
            step = self._step(model, u, trust)
            promised = float(model.merit(u, self) - model.merit(u + step, self))
            if promised < ENOUGH_DB or trust < LEAST_TRUST:
                # nothing promised: look at the sheet too, or once more and closer; then believe it
                spread = not self.active.all() and best.worst_db < self.wanted + AMPLE_DB
                if (looks >= LOOKS and not spread) or self.solves + self.active.sum() + 3 >= self.most:
                    break
                if spread:
                    fresh, self.active = ~self.active, np.ones_like(self.active)
                else:
                    fresh, looks = self.active, looks + 1
                u, best = self._look_around(model, u, best, -SECOND_LOOK, fresh)
                trust = FIRST_TRUST / 2.0
                continue
            step = self._within_shop(u, step)
            if not np.abs(step).max() > 1e-6:
                trust /= 3.0
                continue
            try:
                tried = self.solve(u + step)
            except ModelError:
                trust /= 2.0
                continue
            gained = self.merit(best, u) - self.merit(tried, u + step)
            model.add(u + step, tried)
            if gained > 0.7 * promised:
                trust = min(1.8 * trust, MOST_TRUST)
            elif gained < 0.25 * promised:
                trust = 0.5 * min(trust, float(np.abs(step).max()))
            if gained > 0.0:
                u, best = u + step, tried
            model.centre(u)
        return self._rounded(model, u, before)

    def _scaled(self, u: Array, before: Solve) -> tuple[Array, Solve] | None:
        """The start made larger or smaller as a whole, where a look over the frequencies says that it helps.

        An antenna scaled by s does at f what it did at s f: one solve over a wide span tells what size
        would do, and no step along single dimensions finds that from far away.
        """
        sized = [i for i, f in enumerate(self.free) if f.name in ("side", "lobe_diameter", "standoff")]
        if not any(self.free[i].name != "standoff" for i in sized):
            return None
        middle = float(self.frequencies.mean())
        try:
            z = self.solve(u, middle * SCALES).impedance_ohm
        except ModelError:
            return None
        losses = [worst_return_loss_db(z[i : i + 1], self.reference) for i in range(len(SCALES))]
        best = int(np.argmax(losses))
        if losses[best] < before.worst_db + 1.0:
            return None
        moved = u.copy()
        for i in sized:
            value = (self.origin[i] * SCALES[best] - self.origin[i]) / self.steps[i]
            moved[i] = float(np.clip(value, self.low[i], self.high[i]))
        if not self.allowed(moved):
            return None
        try:
            tried = self.solve(moved)
        except ModelError:
            return None
        return (moved, tried) if self.merit(tried, moved) < self.merit(before, u) else None

    def _look_around(
        self, model: Surrogate, u: Array, here: Solve, reach: float, along: NDArray[np.bool_] | None = None
    ) -> tuple[Array, Solve]:
        """One solve along each dimension, inwards where its range ends; returns the best of them and here."""
        model.add(u, here)
        best_u, best = u, here
        for i in np.flatnonzero(self.active if along is None else along):
            side = u.copy()
            up, down = self.high[i] - u[i], u[i] - self.low[i]
            wanted = min(abs(reach), up) if reach > 0 else -min(abs(reach), down)
            if abs(wanted) < 0.5 * abs(reach):  # no room that way
                wanted = -min(abs(reach), down) if reach > 0 else min(abs(reach), up)
            side[i] += wanted
            if abs(wanted) < 1e-3 or not self.allowed(side):
                continue
            try:
                there = self.solve(side)
            except (ModelError, RecipeError):
                continue
            model.add(side, there)
            if self.merit(there, side) < self.merit(best, best_u):
                best_u, best = side, there
        model.centre(best_u)
        return best_u, best

    def _step(self, model: Surrogate, u: Array, trust: float) -> Array:
        low = np.where(self.active, np.maximum(self.low - u, -trust), 0.0)
        high = np.where(self.active, np.minimum(self.high - u, trust), 0.0)
        return best_step(lambda s: model.merit(u + s, self), low, high)

    def _within_shop(self, u: Array, step: Array) -> Array:
        for share in (1.0, 0.5, 0.25):
            if self.allowed(u + share * step):
                return share * step
        return np.zeros_like(step)

    def _rounded(self, model: Surrogate, u: Array, before: Solve) -> Tuned:
        """The corner of the grid cell about u that the model likes best, solved as rounded."""
        grids = np.array([f.grid for f in self.free])
        exact = self.origin + u * self.steps

        def merit(values: Array) -> Array:
            return model.merit((values - self.origin) / self.steps, self)

        low = self.origin + self.low * self.steps
        high = self.origin + self.high * self.steps
        at, after = np.zeros_like(u), before  # the start, unless rounded better values can be made
        for values in itertools.islice(best_corner(exact, grids, low, high, merit), MOST_CORNERS):
            corner = (values - self.origin) / self.steps
            if not self.allowed(corner):
                continue
            rounded = self.solve(corner)
            if self.merit(rounded, corner) < self.merit(before, at):
                at, after = corner, rounded
            break
        final = {name: round(v, 6) + 0.0 for name, v in self.values(at).items()}
        return Tuned(
            aim=self.aim,
            free=self.free,
            values=final,
            before=before,
            after=after,
            solves=self.solves,
            wanted_db=self.wanted,
            frequencies_hz=self.frequencies,
            limits=self.limits(at),
            refused=tuple(sorted(set(self.refused))),
        )
