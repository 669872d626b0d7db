"""The linear model of a tuning and the steps taken on it. No solver here: numbers in, numbers out."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterator
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

# The weights of the search's merit; taste, no source.
NEAREST = 0.1  # dB: of equal matches the one nearest to practice, but far away it hardly pulls
MARGIN_DB = 0.5  # kept above the wanted return loss when gain is aimed at
GAIN_SPARED_DB = 0.2  # of gain that a better match may cost
SAMPLES = 1024
CLOSING = (1.0, 0.5, 0.25, 0.12, 0.06, 0.03, 0.015)
GAIN_PRICE = 8.0  # dB of match for each dB of gain lost beyond that


class Solved(Protocol):
    """What the model learns from."""

    @property
    def impedance_ohm(self) -> Complex: ...
    @property
    def gain_dbi(self) -> float: ...


class Goal(Protocol):
    """What is wanted of the model."""

    aim: str
    wanted: float
    reference: float
    start_gain: float


def merit_db(goal: Goal, worst_loss_db: Array, gain_dbi: Array, u: Array) -> Array:
    """What a search makes least, dB (...): of reflections (...), negative dB, and gains (...), dBi.

    u (..., n): how far from the start, in first-look steps.
    """
    near = NEAREST * np.sum(np.log1p(u * u), axis=-1)
    if goal.aim == "gain":
        short = np.maximum(worst_loss_db + goal.wanted + MARGIN_DB, 0.0)
        return np.asarray(3.0 * short + near - gain_dbi)
    # a better match is not bought with gain
    lost = np.maximum(0.0, goal.start_gain - GAIN_SPARED_DB - gain_dbi)
    return np.asarray(worst_loss_db + near + GAIN_PRICE * lost)


class Surrogate:
    """Impedance (F,) and gain as quadratics of the free dimensions, through the solves nearest to the best.

    Of all quadratics through them the one whose second derivatives are least (in Frobenius norm) is taken,
    so that fewer solves than coefficients will do: A. R. Conn, K. Scheinberg, L. N. Vicente, Introduction
    to Derivative-Free Optimization, SIAM 2009, section 5.3 (from memory).
    """

    def __init__(self, count: int) -> None:
        self.count = count
        self.points: list[Array] = []
        self.outputs: list[Complex] = []
        self.at: Array = np.zeros(count)

    def add(self, u: Array, there: Solved) -> None:
        """Learn a solve at u."""
        if all(float(np.abs(u - p).max()) > 1e-6 for p in self.points):
            self.points.append(u.copy())
            self.outputs.append(np.append(np.asarray(there.impedance_ohm), there.gain_dbi))

    def centre(self, u: Array) -> None:
        """Fit again, about u (one of the points)."""
        self.at = u.copy()
        steps = np.array(self.points) - u
        far = np.abs(steps).max(axis=1)
        order = np.argsort(far, kind="stable")[: 2 * self.count + 4]
        x = steps[order]
        y = np.array(self.outputs)[order]
        self.scale = max(float(np.abs(x).max()), 1e-9)
        x = x / self.scale
        m, n = x.shape
        system = np.zeros((m + n + 1, m + n + 1))
        system[:m, :m] = 0.5 * (x @ x.T) ** 2
        system[:m, m] = system[m, :m] = 1.0
        system[:m, m + 1 :] = x
        system[m + 1 :, :m] = x.T
        right = np.zeros((m + n + 1, y.shape[1]), dtype=np.complex128)
        right[:m] = y
        solution = np.linalg.lstsq(system, right, rcond=1e-9)[0]
        self.x, self.weights = x, solution[:m]
        self.constant, self.slope = solution[m], solution[m + 1 :]

    def predict(self, u: Array) -> tuple[Complex, Array]:
        """Impedances (..., F) and gains (...) at points u (..., n)."""
        step = (u - self.at) / self.scale
        curved = 0.5 * (step @ self.x.T) ** 2 @ self.weights
        out = np.asarray(self.constant + step @ self.slope + curved, dtype=np.complex128)
        return out[..., :-1], out[..., -1].real

    def merit(self, u: Array, goal: Goal) -> Array:
        """merit_db (...) of what is predicted at points u (..., n)."""
        z, gain = self.predict(u)
        reflected = np.abs((z - goal.reference) / (z + goal.reference)).max(axis=-1)
        return merit_db(goal, 20.0 * np.log10(np.maximum(reflected, 1e-3)), gain, u)


def best_step(merit: Callable[[Array], Array], low: Array, high: Array) -> Array:
    """The step (n,) within its box of least merit: quasi-random points, closing in on the best.

    The largest of several reflections has kinks that a gradient stumbles over, and the model costs next to
    nothing, so it is simply looked at: SAMPLES Sobol points in boxes of CLOSING sizes (no step among them).
    """
    from scipy.stats import qmc

    unit = qmc.Sobol(d=len(low), scramble=False).random(SAMPLES) - 0.5
    best = np.zeros_like(low)
    for size in CLOSING:
        points = np.clip(best + size * (high - low) * unit, low, high)
        if size == 1.0:
            points = low + (high - low) * (unit + 0.5)
        points = np.vstack([best, points])
        best = points[int(np.argmin(merit(points)))]
    return best


def best_corner(
    exact: Array, grids: Array, low: Array, high: Array, merit: Callable[[Array], Array]
) -> Iterator[Array]:
    """Grid points about `exact`, the one of least merit first; ties go to the smaller dimensions."""
    choices = []
    for value, grid, least, most in zip(exact, grids, low, high, strict=True):
        below = np.floor(value / grid + 1e-9) * grid
        near = sorted({round(float(v), 6) for v in (below, below + grid) if least - 1e-9 <= v <= most + 1e-9})
        choices.append(near or [round(float(value), 6)])
    corners = [np.array(c) for c in itertools.product(*choices)]
    ranked = sorted(corners, key=lambda c: (round(float(merit(c)), 6), *c))
    yield from ranked
