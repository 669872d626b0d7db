"""A measured sweep from a Touchstone file, or why it cannot be used.

The file is looked over by `sweeptext`, then read by scikit-rf, then judged against the recipe's band.
"""

from __future__ import annotations

import io
import re
import warnings
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from wavejig.recipe.errors import cut, visible
from wavejig.tuning.sweeptext import LEAST_POINTS, Looked, look_over, sweep_text
from wavejig.tuning.sweeptext import SweepError as SweepError

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

LEAST_IN_BAND = 5
BESIDE = 0.07  # of the frequency: how far beside the band the fit looks
TOTAL = 0.97  # reflection at and above which nothing but a short, an open or a broken joint is seen
NOTHING = 0.02  # reflection below which, over the whole sweep, a matched load is seen
GAIN = 1.05  # reflection above which the calibration is wrong
_LONGEST_SERIAL = 40


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeasuredSweep:
    """Reflection of one article: frequencies ascending, reflection in reference_ohm.

    serial: from the file's header or name.
    """

    path: Path
    serial: str
    frequencies_hz: Array
    reflection: Complex
    reference_ohm: float

    def near(self, low_hz: float, high_hz: float) -> tuple[Array, Complex]:
        """The points from low to high."""
        inside = (self.frequencies_hz >= low_hz) & (self.frequencies_hz <= high_hz)
        return self.frequencies_hz[inside], self.reflection[inside]

    def worst_return_loss_db(self, low_hz: float, high_hz: float) -> tuple[float, float]:
        """Least return loss over low to high, edges included, and the frequency it is at.

        Between points the reflection is interpolated, real and imaginary part apart.
        """
        f = np.unique(np.concatenate([[low_hz, high_hz], self.near(low_hz, high_hz)[0]]))
        real, imaginary = (np.interp(f, self.frequencies_hz, part) for part in _parts(self.reflection))
        size = np.hypot(real, imaginary)
        worst = int(np.argmax(size))
        return float(-20.0 * np.log10(max(size[worst], 1e-6))), float(f[worst])


def read_sweep(path: Path, low_hz: float, high_hz: float, reference_ohm: float) -> MeasuredSweep:
    """The sweep in `path`, fit to be laid over a prediction from low_hz to high_hz.

    Raises SweepError with what is wrong and what to do; OSError when the file cannot be read.
    """
    looked = look_over(path, sweep_text(path))
    f, s, resistance = _parse(path, looked)
    if not np.isfinite(f).all() or not (np.isfinite(s.real).all() and np.isfinite(s.imag).all()):
        raise SweepError(path, "holds values that are not numbers; export the sweep again")
    if abs(resistance - reference_ohm) > 1e-3 * reference_ohm:
        raise SweepError(
            path,
            f"is in {resistance:.6g} ohm, the recipe's reference impedance is {reference_ohm:.6g} ohm; export it "
            "in that, or set reference_impedance in [target]",
        )
    _judge_frequencies(path, f, low_hz, high_hz)
    _judge_reflection(path, s)
    return MeasuredSweep(
        path=path,
        serial=serial_number(path, "\n".join(looked.remarks)),
        frequencies_hz=f,
        reflection=s,
        reference_ohm=reference_ohm,
    )


def serial_number(path: Path, comments: str) -> str:
    """From a header line like "! serial: 7" or "! S/N 7"; else the last number in the name; else the name."""
    # every repeat is bounded, so that no remark can keep the search busy
    told = re.search(
        r"(?im)\b(?:serial(?:\s{0,9}(?:no|number))?|s/n|sn)\b\.?\s{0,9}[:=#]?\s{0,9}"
        rf"([\w-]{{0,{_LONGEST_SERIAL}}}\d[\w-]{{0,{_LONGEST_SERIAL}}})",
        comments,
    )
    if told:
        return cut(visible(told[1]), _LONGEST_SERIAL)
    numbers = re.findall(r"\d+", path.stem)
    return cut(numbers[-1] if numbers else visible(path.stem), _LONGEST_SERIAL)


def _parse(path: Path, looked: Looked) -> tuple[Array, Complex, float]:
    from skrf.io.touchstone import Touchstone

    stream = io.StringIO("\n".join(looked.lines) + "\n")
    stream.name = path.name.lower()
    with warnings.catch_warnings(), np.errstate(all="ignore"):
        warnings.simplefilter("ignore")  # what it would warn of has been judged, or is judged below
        try:
            read = Touchstone(stream)
            f, s = read.get_sparameter_arrays()
            resistance = complex(np.asarray(read.resistance).ravel()[0]).real
            parameters = np.asarray(f, dtype=np.float64), np.asarray(s[:, 0, 0])
        except Exception as err:  # its parser raises whatever it stumbles over
            raise SweepError(path, f"cannot be read as Touchstone: {err}; export it again") from err
    return *parameters, resistance if looked.reference_ohm is None else looked.reference_ohm


def _judge_frequencies(path: Path, f: Array, low: float, high: float) -> None:
    def mhz(value: float) -> str:
        return f"{value / 1e6:.6g} MHz"

    span = f"it runs from {mhz(f[0])} to {mhz(f[-1])}, the recipe's band from {mhz(low)} to {mhz(high)}"
    if f[-1] < low or f[0] > high:
        raise SweepError(
            path, f"lies wholly outside the band: {span}. Is it the right antenna, the right unit?"
        )
    if f[0] > low * (1 + 1e-6) or f[-1] < high * (1 - 1e-6):
        raise SweepError(path, f"does not cover the band: {span}; sweep the whole band and some beside it")
    inside = int(np.count_nonzero((f >= low) & (f <= high)))
    near = int(np.count_nonzero((f >= low * (1 - BESIDE)) & (f <= high * (1 + BESIDE))))
    if inside < LEAST_IN_BAND or near < LEAST_POINTS:
        raise SweepError(
            path,
            f"has too few points: {inside} in the band and {near} in and beside it, at least {LEAST_IN_BAND} and "
            f"{LEAST_POINTS} are needed; narrow the sweep or take more points",
        )


def _judge_reflection(path: Path, s: Complex) -> None:
    size = np.abs(s)
    if size.max() > GAIN:
        raise SweepError(
            path,
            f"reflects up to {20 * np.log10(size.max()):.1f} dB more than is sent; calibrate the analyser "
            "and measure again",
        )
    if size.min() > TOTAL:
        raise SweepError(
            path,
            f"reflects everything at every frequency (return loss at most {-20 * np.log10(size.min()):.2f} dB): a "
            "short, an open, or nothing connected. Look for a solder bridge or an open joint at the feed",
        )
    if size.max() < NOTHING:
        raise SweepError(
            path,
            "reflects nothing at any frequency: this is a matched load, not an antenna. Connect the antenna",
        )


def _parts(values: Complex) -> tuple[Array, Array]:
    return values.real, values.imag
