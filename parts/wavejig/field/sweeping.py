"""A band from few solves: rational interpolation of the admittance, checked against a solve it has not seen.

Interpolation: Y. Nakatsukasa, O. Sete, L. N. Trefethen, The AAA algorithm for rational approximation, SIAM
J. Sci. Comput. 40 (2018), as scipy.interpolate.AAA. An antenna's admittance is a sum of poles near the
band, so a rational function of low degree follows it; the admittance and not the impedance, because the
feed gap's own capacitance is then a mere straight line.
"""

from __future__ import annotations

import itertools
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from wavejig.field.compiling import announced
from wavejig.field.errors import ModelError
from wavejig.field.model import Model
from wavejig.field.response import Response
from wavejig.field.solver import Announce, check_frequencies, prepare, solve_prepared

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

MOST_SOLVES = 25


@dataclass(frozen=True, kw_only=True, eq=False)
class Sweep:
    """A band's admittance between the solved frequencies (responses, ascending).

    solves: how many there were; error: the largest change of a reflection coefficient that the last solve,
    not used for it, found in the interpolation before it; reached: whether that is within the tolerance.
    """

    responses: tuple[Response, ...]
    error: float
    reached: bool
    fits: tuple[tuple[Callable[[Array], Complex], ...], ...]

    @property
    def solves(self) -> int:
        return len(self.responses)

    @property
    def low_hz(self) -> float:
        return float(self.responses[0].frequencies_hz[0])

    @property
    def high_hz(self) -> float:
        return float(self.responses[-1].frequencies_hz[0])

    def admittance_s(self, frequencies_hz: ArrayLike) -> Complex:
        """(F, P, P) siemens, within the band only."""
        f = check_frequencies(frequencies_hz)
        slack = 1e-9 * self.high_hz
        if f.min() < self.low_hz - slack or f.max() > self.high_hz + slack:
            raise ModelError(
                "frequency",
                f"the sweep holds between {self.low_hz:.6g} and {self.high_hz:.6g} Hz, not beyond",
            )
        count = len(self.fits)
        out = np.empty((len(f), count, count), dtype=np.complex128)
        for p in range(count):
            for q in range(count):
                out[:, p, q] = self.fits[p][q](_unit(f, self.low_hz, self.high_hz))
        return out

    def impedance_ohm(self, frequencies_hz: ArrayLike) -> Complex:
        """(F,) for one port, (F, P, P) for several."""
        z: Complex = np.asarray(np.linalg.inv(self.admittance_s(frequencies_hz)), dtype=np.complex128)
        return z[:, 0, 0] if z.shape[1] == 1 else z

    def s11(self, frequencies_hz: ArrayLike, reference_ohm: float | None = None) -> Complex:
        """(F,): reflection at the first port, in its own reference or the one given."""
        return _scattering(self.admittance_s(frequencies_hz), self._references(reference_ohm))[:, 0, 0]

    def _references(self, reference_ohm: float | None) -> Array:
        own = self.responses[0].reference_ohm
        return own if reference_ohm is None else np.full_like(own, reference_ohm)


def sweep(
    model: Model,
    low_hz: float,
    high_hz: float,
    tolerance: float = 1e-4,
    *,
    mirrors: bool = True,
    announce: Announce | None = None,
    most: int = MOST_SOLVES,
) -> Sweep:
    """Solve few frequencies of a band and interpolate; tolerance: on any reflection coefficient.

    Starts with the ends and the middle; each further solve first checks the interpolation where it is least
    sure, then joins it. Stops when such a check is within the tolerance, or after `most` solves
    (Sweep.reached says which).
    """
    band = check_frequencies([low_hz, high_hz])
    if not band[0] < band[1]:
        raise ModelError(
            "frequency", f"a band's low end must be below its high end, got {low_hz} and {high_hz}"
        )
    with announced(announce):
        return _sweep(model, band, tolerance, mirrors, most)


def _sweep(model: Model, band: Array, tolerance: float, mirrors: bool, most: int) -> Sweep:
    prepared = prepare(model, float(band[1]), mirrors=mirrors)

    def at(unit: float) -> Response:
        return solve_prepared(prepared, np.array([band[0] + unit * (band[1] - band[0])]))

    known = {unit: at(unit) for unit in (0.0, 0.5, 1.0)}
    error, reached = np.inf, False
    while not reached and len(known) < most:
        unit = _doubtful(known)
        response = at(unit)
        references = response.reference_ohm
        guess = _scattering(_evaluate(_fit(known), np.array([unit])), references)
        error = float(np.abs(guess - response.scattering()).max())
        reached = error <= tolerance
        known[unit] = response
    return Sweep(
        responses=tuple(known[u] for u in sorted(known)), error=error, reached=reached, fits=_fit(known)
    )


def _unit(frequencies: Array, low: float, high: float) -> Array:
    return np.clip((frequencies - low) / (high - low), 0.0, 1.0)


def _fit(known: dict[float, Response]) -> tuple[tuple[Callable[[Array], Complex], ...], ...]:
    from scipy.interpolate import AAA

    units = np.array(sorted(known))
    values = np.array([known[u].admittance_s[0] for u in units])
    count = values.shape[1]
    # all the points: the solver's noise is far below the tolerance, so none is thrown away as noise
    return tuple(
        tuple(AAA(units, values[:, p, q], rtol=1e-13, clean_up=False) for q in range(count))
        for p in range(count)
    )


def _evaluate(fits: tuple[tuple[Callable[[Array], Complex], ...], ...], units: Array) -> Complex:
    rows = [[fit(units) for fit in row] for row in fits]
    return np.moveaxis(np.array(rows), 2, 0)


def _scattering(y: Complex, references: Array) -> Complex:
    root = np.sqrt(references)
    scaled = root[:, None] * y * root
    one = np.eye(len(references))
    return np.asarray(np.linalg.solve(one + scaled, one - scaled))


def _doubtful(known: dict[float, Response]) -> float:
    """The middle of the gap where the fits with and without the last point differ most; at first the widest."""
    units = sorted(known)
    middles = np.array([0.5 * (a + b) for a, b in itertools.pairwise(units)])
    widths = np.diff(units)
    references = next(iter(known.values())).reference_ohm
    if len(known) <= 3:
        return float(middles[np.argmax(widths)])
    full = _scattering(_evaluate(_fit(known), middles), references)
    last = list(known)[-1]
    fewer = {u: r for u, r in known.items() if u != last}
    less = _scattering(_evaluate(_fit(fewer), middles), references)
    doubt = np.abs(full - less).max(axis=(1, 2))
    # equal doubts go to the wider gap, and no gap narrower than a fifth of the widest is cut
    doubt = np.where(widths >= 0.2 * widths.max(), doubt * (1.0 + widths), -1.0)
    return float(middles[np.argmax(doubt)])
