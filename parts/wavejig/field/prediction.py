"""What a design's match and pattern will be: the figures people ask for, from few solves.

The band is solved with some room on both sides, so that the resonance and the edges of the match show even
when they lie outside. Nothing here is fitted to a measurement.
"""

from __future__ import annotations

import warnings
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.design.model import Design
from wavejig.field.errors import ModelWarning, Remark
from wavejig.field.from_design import model_from_design, reference_plane
from wavejig.field.model import Model
from wavejig.field.pattern import Pattern, read_pattern
from wavejig.field.solver import Announce
from wavejig.field.sweeping import Sweep, sweep

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

ROOM = 0.06  # of the middle frequency shown on either side, at least
SPAN_POINTS = 401  # of the printed sweep
BAND_POINTS = 201  # at which the worst return loss in the band is looked for
SWEEP_TOLERANCE = 1e-4  # of a reflection coefficient: 0.03 dB at 20 dB of return loss
_MOST_DB = 60.0  # better than any bench can tell


@dataclass(frozen=True, slots=True, kw_only=True)
class MatchPoint:
    """The match at one frequency."""

    frequency_hz: float
    impedance_ohm: complex
    return_loss_db: float
    standing_wave_ratio: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Prediction:
    """Predicted match and radiation of one design.

    points: at the band's low end, middle and high end. worst: the least return loss in the band.
    resonance_hz: where the reactance passes through zero nearest to the band's middle, None if nowhere in
    the span. best: the greatest return loss in the span. frequencies_hz (n,), s11 (n,): the span.
    pattern: at the band's middle; gain_dbi includes losses, not mismatch. power_balance: power in over
    power radiated and lost at each solve, the nearer to 1 the better.
    """

    design_name: str
    reference_ohm: float
    reference_plane: str
    wanted_db: float
    low_hz: float
    high_hz: float
    points: tuple[MatchPoint, MatchPoint, MatchPoint]
    worst: MatchPoint
    best: MatchPoint
    resonance_hz: float | None
    frequencies_hz: Array
    s11: Complex
    pattern: Pattern
    gain_dbi: float
    solves: int
    sweep_error: float
    unknowns: int
    power_balance: tuple[float, ...]
    remarks: tuple[Remark, ...]  # of the solver on the model, the ones that make it less sure

    @property
    def meets_target(self) -> bool:
        """The worst return loss in the band is the wanted one, or better."""
        return self.worst.return_loss_db >= self.wanted_db

    @property
    def middle_hz(self) -> float:
        return (self.low_hz + self.high_hz) / 2.0


def predict(
    design: Design, *, model: Model | None = None, refine: float = 1.0, announce: Announce | None = None
) -> Prediction:
    """Solve the band of a design. model: its model, if made already; refine: 2 halves every edge.

    Raises ModelError for a model that cannot be solved.
    """
    model = model_from_design(design, refine) if model is None else model
    target = design.target
    middle = (target.band_low_hz + target.band_high_hz) / 2.0
    half = max(target.band_high_hz - target.band_low_hz, ROOM * middle)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", ModelWarning)  # told as the prediction's remarks
        factor = target.frequency_factor
        low, high = (middle - half) / factor, (middle + half) / factor
        swept = sweep(model, low, high, SWEEP_TOLERANCE, announce=announce)
    return from_sweep(design, swept)


def from_sweep(design: Design, swept: Sweep) -> Prediction:
    """The figures of a solved span that holds the design's band, its middle among the solves.

    Frequencies are true ones: where an article has been measured, the solver's times its correction.
    """
    target = design.target
    middle = (target.band_low_hz + target.band_high_hz) / 2.0
    factor = target.frequency_factor
    solved = min(swept.responses, key=lambda r: abs(float(r.frequencies_hz[0]) * factor - middle))
    frequencies = np.linspace(swept.low_hz, swept.high_hz, SPAN_POINTS) * factor
    s11 = swept.s11(frequencies / factor, target.reference_ohm)
    band = np.linspace(target.band_low_hz, target.band_high_hz, BAND_POINTS)
    in_band = np.abs(swept.s11(band / factor, target.reference_ohm))
    pattern = read_pattern(solved)
    gain = float(solved.gain_dbi([[0.0, 0.0, 1.0]])[0, 0])

    def point(frequency: float) -> MatchPoint:
        return match_point(
            frequency, complex(swept.impedance_ohm([frequency / factor])[0]), target.reference_ohm
        )

    return Prediction(
        design_name=design.name,
        reference_ohm=target.reference_ohm,
        reference_plane=reference_plane(design),
        wanted_db=target.return_loss_db,
        low_hz=target.band_low_hz,
        high_hz=target.band_high_hz,
        points=(point(target.band_low_hz), point(middle), point(target.band_high_hz)),
        worst=point(float(band[int(np.argmax(in_band))])),
        best=point(float(frequencies[int(np.argmin(np.abs(s11)))])),
        resonance_hz=_resonance(swept, frequencies, middle, factor),
        frequencies_hz=frequencies,
        s11=s11,
        pattern=pattern,
        gain_dbi=gain,
        solves=swept.solves,
        sweep_error=swept.error,
        unknowns=swept.responses[0].unknowns,
        power_balance=tuple(float(r.power_balance[0]) for r in swept.responses),
        remarks=tuple(r for r in solved.remarks if r.severity == "warning"),
    )


def match_point(frequency_hz: float, impedance_ohm: complex, reference_ohm: float) -> MatchPoint:
    """Return loss and standing-wave ratio of an impedance."""
    reflected = abs((impedance_ohm - reference_ohm) / (impedance_ohm + reference_ohm))
    return MatchPoint(
        frequency_hz=frequency_hz,
        impedance_ohm=impedance_ohm,
        return_loss_db=return_loss_db(reflected),
        standing_wave_ratio=(1.0 + reflected) / (1.0 - reflected) if reflected < 1.0 else float("inf"),
    )


def return_loss_db(reflected: float) -> float:
    """Positive dB of a reflection's magnitude, at most 60."""
    return float(min(-20.0 * np.log10(max(reflected, 1e-30)), _MOST_DB)) + 0.0


def _resonance(swept: Sweep, frequencies: Array, middle: float, factor: float) -> float | None:
    reactance = swept.impedance_ohm(frequencies / factor).imag
    crossings = np.flatnonzero(np.signbit(reactance[:-1]) != np.signbit(reactance[1:]))
    if not crossings.size:
        return None
    x0, x1 = reactance[crossings], reactance[crossings + 1]
    at = frequencies[crossings] + (frequencies[1] - frequencies[0]) * x0 / (x0 - x1)
    return float(at[int(np.argmin(np.abs(at - middle)))])
