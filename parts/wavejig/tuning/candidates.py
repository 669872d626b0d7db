"""The geometries a tuning may try: free dimensions put into a design, asked of the shop, and solved."""

from __future__ import annotations

import warnings
from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.design import resolve
from wavejig.design.model import Design
from wavejig.field.errors import ModelWarning
from wavejig.recipe.errors import RecipeError
from wavejig.recipe.models import Recipe
from wavejig.shop import Inspection, inspect
from wavejig.tuning.freedom import freedoms
from wavejig.tuning.keptsolves import kept_solve
from wavejig.tuning.vary import held, with_values

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Told = Callable[[str], None]

WIDE_BAND = 0.05  # of the middle: a wider band is solved at five frequencies, a narrower one at three


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Solve:
    """One geometry solved: its free values, impedance (F,) ohm, gain straight ahead (dBi) at the middle."""

    values: Mapping[str, float]
    impedance_ohm: Complex
    gain_dbi: float
    worst_db: float  # least return loss among the frequencies


class NothingFreeError(Exception):
    """The recipe gives every number itself."""


class CannotStartError(Exception):
    """The starting design cannot be made; its inspection says why."""

    def __init__(self, inspection: Inspection) -> None:
        self.inspection = inspection
        super().__init__(f"{inspection.design.name} cannot be made as it starts")


def band_frequencies(design: Design) -> Array:
    """Three frequencies of a narrow band, five of a wide one."""
    low, high = design.target.band_low_hz, design.target.band_high_hz
    return np.linspace(low, high, 5 if (high - low) > WIDE_BAND * (high + low) / 2.0 else 3)


class Candidates:
    """Free dimensions u are in first-look steps from where they start.

    Raises CannotStartError, NothingFreeError, and RecipeError for names the stock tables do not hold.
    """

    def __init__(self, recipe: Recipe, grid_mm: float, told: Told, announce: Told) -> None:
        self.recipe, self.told, self.announce = recipe, told, announce
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
        self.origin = np.array([f.start for f in self.free])
        self.steps = np.array([f.step for f in self.free])
        self.low = (np.array([f.low for f in self.free]) - self.origin) / self.steps
        self.high = (np.array([f.high for f in self.free]) - self.origin) / self.steps
        self.solves = 0
        self.refused: list[str] = []

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
            true_hz = at / self.start.target.frequency_factor

            def now() -> tuple[Complex, float]:
                response = solve(model, true_hz, announce=self.announce)
                z = np.asarray(response.impedance_ohm)
                return z, float(response.gain_dbi([[0.0, 0.0, 1.0]])[len(z) // 2, 0])

            z, gain = kept_solve(model, true_hz, now)
        self.solves += 1
        worst = worst_return_loss_db(z, self.reference)
        self.told(f"solve {self.solves}: worst {worst:.1f} dB, gain {gain:.1f} dBi")
        return Solve(values=self.values(u), impedance_ohm=z, gain_dbi=gain, worst_db=worst)

    def limits(self, u: Array) -> dict[str, str]:
        """Dimensions that could go no further, and why."""
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
