"""Free dimensions worked out for the antenna as it will be made: best match over the band, or most gain.

Method: the impedance at a few frequencies of the band is solved and modelled as a quadratic of the free
dimensions (tuning/steps.py), first from one solve along each, then from every further one; the worst
reflection of that model is made least within a trust region, and the step is solved. The answer is rounded
to what a shop can hold and solved again as rounded.
"""

from __future__ import annotations

import itertools
import warnings
from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.design import resolve
from wavejig.design.model import Design
from wavejig.field.errors import ModelError, ModelWarning
from wavejig.recipe.errors import RecipeError
from wavejig.recipe.models import Recipe
from wavejig.shop import Inspection, inspect
from wavejig.tuning.freedom import GRID_MM, Freedom, freedoms
from wavejig.tuning.steps import Surrogate, best_corner, best_step, merit_db
from wavejig.tuning.vary import held, with_values

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Told = Callable[[str], None]

MOST_SOLVES = 38  # of one tuning; the two more that a user is promised are for the rounded answer
WIDE_BAND = 0.05  # of the middle: a wider band is solved at five frequencies, a narrower one at three
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
class Solve:
    """One geometry solved: its free values, impedance (F,) ohm, gain straight ahead (dBi) at the middle."""

    values: Mapping[str, float]
    impedance_ohm: Complex
    gain_dbi: float
    worst_db: float  # least return loss among the frequencies


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


class NothingFreeError(Exception):
    """The recipe gives every number itself."""


class CannotStartError(Exception):
    """The starting design cannot be made; its inspection says why."""

    def __init__(self, inspection: Inspection) -> None:
        self.inspection = inspection
        super().__init__(f"{inspection.design.name} cannot be made as it starts")


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


def band_frequencies(design: Design) -> Array:
    """Three frequencies of a narrow band, five of a wide one."""
    low, high = design.target.band_low_hz, design.target.band_high_hz
    return np.linspace(low, high, 5 if (high - low) > WIDE_BAND * (high + low) / 2.0 else 3)


class _Search:
    def __init__(
        self, recipe: Recipe, aim: str, grid_mm: float, most: int, told: Told, announce: Told
    ) -> None:
        self.recipe, self.aim, self.most, self.told, self.announce = recipe, aim, most, told, announce
        start = inspect(resolve(recipe))
        if not start.can_be_made:
            raise CannotStartError(start)
        self.start = start.design
        self.free = freedoms(recipe, self.start, grid_mm)
        if not self.free:
            raise NothingFreeError(self.start.name)
        self.pinned = held(self.start)
        self.frequencies = band_frequencies(self.start)
        self.reference = self.start.target.reference_ohm
        self.wanted = self.start.target.return_loss_db
        self.origin = np.array([f.start for f in self.free])
        self.steps = np.array([f.step for f in self.free])
        self.low = (np.array([f.low for f in self.free]) - self.origin) / self.steps
        self.high = (np.array([f.high for f in self.free]) - self.origin) / self.steps
        self.solves = 0
        self.start_gain = 0.0
        self.refused: list[str] = []
        tray = np.array([f.name in TRAY for f in self.free])
        # the sheet is left as practice has it unless it must change, or gain is wanted of it
        self.active = ~tray if self.aim == "match" and not tray.all() else np.ones_like(tray)

    # -- one geometry -------------------------------------------------------------------------------

    def values(self, u: Array) -> dict[str, float]:
        """Free dimensions at u; one that follows the others stands that much beyond what it then needs."""
        out = {f.name: float(v) for f, v in zip(self.free, self.origin + u * self.steps, strict=True)}
        for f in self.free:
            if f.follows:
                out[f.name] = self._needed(f.name, out) + (out[f.name] - f.start)
        return out

    def _needed(self, name: str, values: Mapping[str, float]) -> float:
        rest = {k: v for k, v in (self.pinned | dict(values)).items() if k != name}
        design = resolve(with_values(self.recipe, rest))
        return next(v.value for key, v in design.values if key == name)

    def design(self, u: Array) -> Design:
        return resolve(with_values(self.recipe, self.pinned | self.values(u)))

    def allowed(self, u: Array) -> bool:
        """Whether the shop can make it; what speaks against it is kept for the report."""
        try:
            found = inspect(self.design(u)).findings
        except RecipeError:
            self.refused.append("sides-do-not-meet")
            return False
        errors = [f.code for f in found if f.severity == "error"]
        self.refused += errors
        return not errors

    def solve(self, u: Array, frequencies: Array | None = None) -> Solve:
        from wavejig.field.from_design import model_from_design
        from wavejig.field.solver import solve

        design = self.design(u)
        model = model_from_design(design)
        with warnings.catch_warnings():
            warnings.simplefilter("ignore", ModelWarning)  # the prediction of the answer tells them
            at = self.frequencies if frequencies is None else frequencies
            response = solve(model, at / self.start.target.frequency_factor, announce=self.announce)
        self.solves += 1
        z = np.asarray(response.impedance_ohm)
        gain = float(response.gain_dbi([[0.0, 0.0, 1.0]])[len(z) // 2, 0])
        worst = worst_return_loss_db(z, self.reference)
        self.told(f"solve {self.solves}: worst {worst:.1f} dB, gain {gain:.1f} dBi")
        return Solve(values=self.values(u), impedance_ohm=z, gain_dbi=gain, worst_db=worst)

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
            limits=self._limits(at),
            refused=tuple(sorted(set(self.refused))),
        )

    def _limits(self, u: Array) -> dict[str, str]:
        out = {}
        for f, value in zip(self.free, self.origin + u * self.steps, strict=True):
            if value <= f.low + f.grid and (f.low < f.start or f.follows):
                out[f.name] = f"at its least: {f.why_low}"
            elif value >= f.high - f.grid and f.high > f.start:
                out[f.name] = f"at its most, {f.high:.4g}: {f.why_high}"
        return out


def worst_return_loss_db(impedance_ohm: Complex, reference_ohm: float) -> float:
    """Least return loss of impedances (F,)."""
    gamma = np.abs((impedance_ohm - reference_ohm) / (impedance_ohm + reference_ohm))
    return float(min(-20.0 * np.log10(max(float(gamma.max()), 1e-6)), 60.0))
