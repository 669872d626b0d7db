"""A measured sweep from a Touchstone file, or why it cannot be used.

The file is read by scikit-rf; what is looked at beforehand is only what a reader would mend or pass over in
silence: a cut-off last line, frequencies out of order, a missing option line.
"""

from __future__ import annotations

import re
import warnings
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

MOST_BYTES = 20_000_000  # a hundred thousand points of a two-port are less
LEAST_IN_BAND = 5
LEAST_POINTS = 15  # in the band and just beside it, where the fit looks
BESIDE = 0.07  # of the frequency: how far beside the band the fit looks
TOTAL = 0.97  # reflection at and above which nothing but a short, an open or a broken joint is seen
NOTHING = 0.02  # reflection below which, over the whole sweep, a matched load is seen
GAIN = 1.05  # reflection above which the calibration is wrong
# How many numbers a point has: frequency and two for each parameter.
_NUMBERS = {".s1p": 3, ".s2p": 9}
_FEWEST = LEAST_POINTS


class SweepError(ValueError):
    """A sweep that cannot be used: the file, what is wrong, what to do."""

    def __init__(self, path: Path, message: str) -> None:
        self.path = path
        self.message = message
        super().__init__(f"{path}: {message}")


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
    text = _text(path)
    _look_over(path, text)
    f, s, resistance, comments = _parse(path)
    _judge_frequencies(path, f, low_hz, high_hz)
    if not (np.isfinite(s.real).all() and np.isfinite(s.imag).all()):
        raise SweepError(path, "holds values that are not numbers; export the sweep again")
    if abs(resistance - reference_ohm) > 1e-3 * reference_ohm:
        raise SweepError(
            path,
            f"is in {resistance:.6g} ohm, the recipe's reference impedance is {reference_ohm:.6g} ohm; export it "
            "in that, or set reference_impedance in [target]",
        )
    _judge_reflection(path, s)
    return MeasuredSweep(
        path=path,
        serial=serial_number(path, comments),
        frequencies_hz=f,
        reflection=s,
        reference_ohm=reference_ohm,
    )


def serial_number(path: Path, comments: str) -> str:
    """From a header line like "! serial: 7" or "! S/N 7"; else the last number in the name; else the name."""
    told = re.search(
        r"(?im)\b(?:serial(?:\s*(?:no|number))?|s/n|sn)\b\.?\s*[:=#]?\s*([\w-]*\d[\w-]*)", comments
    )
    if told:
        return told[1]
    numbers = re.findall(r"\d+", path.stem)
    return numbers[-1] if numbers else path.stem


def _text(path: Path) -> str:
    with path.open("rb") as stream:
        raw = stream.read(MOST_BYTES + 1)
    if len(raw) > MOST_BYTES:
        raise SweepError(path, f"is larger than {MOST_BYTES // 1_000_000} MB; is this the sweep?")
    if path.suffix.lower() not in _NUMBERS:
        raise SweepError(path, "is not named .s1p or .s2p; export a one-port (or two-port) Touchstone file")
    if not raw.strip():
        raise SweepError(path, "is empty; export the sweep again")
    if b"\0" in raw:
        raise SweepError(path, "is no text; export a Touchstone file, not the instrument's own format")
    return raw.decode("utf-8", errors="replace")


def _look_over(path: Path, text: str) -> None:
    wanted = _NUMBERS[path.suffix.lower()]
    options, points, before = "", 0, -np.inf
    for number, line in enumerate(text.splitlines(), start=1):
        content = line.split("!")[0].strip()
        if not content or content.startswith("["):
            continue
        if content.startswith("#"):
            options = options or content[1:]
            continue
        words = content.split()
        try:
            values = [float(w) for w in words]
        except ValueError as err:
            raise SweepError(
                path,
                f"line {number}: reads {content[:40]!r}, where numbers should stand; export the sweep again",
            ) from err
        if not options:
            raise SweepError(
                path,
                "has no option line (# MHz S MA R 50) before its numbers, so their unit is unknown; add it",
            )
        if len(values) == 5 and wanted == 9 and points and values[0] <= before:
            break  # a two-port's noise data, after its sweep
        if len(values) != wanted:
            raise SweepError(
                path,
                f"line {number} holds {len(values)} number{'' if len(values) == 1 else 's'}, a point of this "
                f"file has {wanted}: it is cut short or damaged; export it again",
            )
        if values[0] <= before:
            raise SweepError(
                path,
                f"line {number}: frequency {words[0]} does not follow {before:.10g}; the points must rise. "
                "Sort them, or export again",
            )
        before, points = values[0], points + 1
    if not options and not points:
        raise SweepError(path, "holds no Touchstone data; export the sweep again")
    kinds = [w.upper() for w in options.split() if w.upper() in ("S", "Y", "Z", "G", "H")]
    if kinds and kinds[0] != "S":
        raise SweepError(path, f"holds {kinds[0]} parameters; export S parameters")
    if points < _FEWEST:
        raise SweepError(
            path, f"has {points} points, at least {_FEWEST} are needed; sweep with more (201, say)"
        )


def _parse(path: Path) -> tuple[Array, Complex, float, str]:
    from skrf.io.touchstone import Touchstone

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # what it would warn of has been judged, or is judged below
        try:
            read = Touchstone(str(path))
            f, s = read.get_sparameter_arrays()
            resistance = complex(np.asarray(read.resistance).ravel()[0]).real
        except Exception as err:  # its parser raises whatever it stumbles over
            raise SweepError(path, f"cannot be read as Touchstone: {err}; export it again") from err
    comments = read.get_comments() or ""
    return np.asarray(f, dtype=np.float64), np.asarray(s[:, 0, 0]), resistance, comments


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
