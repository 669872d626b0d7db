"""Return loss over the band, with what is wanted and what was measured."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.figures import megahertz
from wavejig.field.prediction import Prediction
from wavejig.sheets.report.axes import chain, key, line, mark, picture, ticks, word
from wavejig.sheets.report.markup import Element, el, short

# Of the picture, in its own units; near a phone's width, so that letters stay readable there.
_WIDE, _HIGH = 420.0, 310.0
_LEFT, _RIGHT, _TOP, _FOOT = 50.0, 10.0, 10.0, 46.0
_DEEPEST_DB = 40.0  # better than a bench tells; deeper is drawn there
STYLES = ("m1", "m2", "m3")  # dashes of measured sweeps, in turn


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SweepShown:
    """A measured sweep to lay over: what it is called, frequencies (n,), complex reflection (n,)."""

    name: str
    frequencies_hz: NDArray[np.float64]
    reflection: NDArray[np.complex128]


def loss_db(reflection: NDArray[np.complex128]) -> NDArray[np.float64]:
    """(n,) return loss in positive dB, at most what is drawn."""
    out: NDArray[np.float64] = np.minimum(-20.0 * np.log10(np.maximum(np.abs(reflection), 1e-6)), _DEEPEST_DB)
    return out


def match_plot(p: Prediction, sweeps: Sequence[SweepShown] = ()) -> tuple[Element, Element]:
    """The picture and its key."""
    f = p.frequencies_hz
    low, high = float(f[0]), float(f[-1])
    loss = loss_db(p.s11)
    inside = [(s, (s.frequencies_hz >= low) & (s.frequencies_hz <= high)) for s in sweeps]
    inside = [(s, part) for s, part in inside if int(part.sum()) > 1]
    deepest = max([float(loss.max()), *(float(loss_db(s.reflection[part]).max()) for s, part in inside)])
    bottom = min(max(20.0, p.wanted_db + 3.0, 1.1 * deepest), _DEEPEST_DB)

    def x(hz: float) -> float:
        return _LEFT + (_WIDE - _LEFT - _RIGHT) * (hz - low) / (high - low)

    def y(db: float) -> float:
        return _TOP + (_HIGH - _TOP - _FOOT) * db / bottom

    floor = y(bottom)
    parts: list[Element] = [
        el(
            "defs",
            el(
                "pattern",
                line((0.0, 0.0), (0.0, 8.0), "hatch"),
                id="match-band", width=8, height=8, patternUnits="userSpaceOnUse",
                patternTransform="rotate(45)",
            ),
        ),
        el("rect", x=x(p.low_hz), y=_TOP, width=x(p.high_hz) - x(p.low_hz), height=floor - _TOP, class_="band"),
        el(
            "rect", x=x(p.low_hz), y=_TOP, width=x(p.high_hz) - x(p.low_hz), height=floor - _TOP,
            fill="url(#match-band)",
        ),
    ]  # fmt: skip
    for db in ticks(0.0, bottom, 5):
        parts.append(line((_LEFT, y(db)), (_WIDE - _RIGHT, y(db)), "grid"))
        parts.append(word((_LEFT - 8.0, y(db) + 5.0), short(db), anchor="end"))
    for mhz in ticks(low / 1e6, high / 1e6, 5):
        at = x(mhz * 1e6)
        parts.append(line((at, _TOP), (at, floor), "grid"))
        if _LEFT + 12.0 < at < _WIDE - 24.0:
            parts.append(word((at, floor + 19.0), short(mhz, 1), anchor="middle"))
    parts.append(word(((_LEFT + _WIDE - _RIGHT) / 2.0, _HIGH - 8.0), "frequency, MHz", anchor="middle"))
    parts.append(
        word(
            (0.0, 0.0), "return loss, dB", anchor="middle",
            transform=f"translate(13 {short((_TOP + floor) / 2.0)}) rotate(-90)",
        )
    )  # fmt: skip
    parts.append(line((x(p.low_hz), y(p.wanted_db)), (x(p.high_hz), y(p.wanted_db)), "wanted"))
    for number, (s, part) in enumerate(inside):
        points = zip(s.frequencies_hz[part], loss_db(s.reflection[part]), strict=True)
        path = chain((x(float(a)), y(float(b))) for a, b in points)
        parts.append(el("path", d=path, class_=f"curve {STYLES[number % 3]}"))
    curve = chain((x(float(a)), y(float(b))) for a, b in zip(f, loss, strict=True))
    parts.append(el("path", d=curve, class_="curve predicted"))
    w = p.worst
    parts.append(mark((x(w.frequency_hz), y(min(w.return_loss_db, bottom))), "worst"))
    parts.append(
        el("rect", x=_LEFT, y=_TOP, width=_WIDE - _LEFT - _RIGHT, height=floor - _TOP, class_="frame")
    )
    described = (
        f"Predicted return loss from {megahertz(low)} to {megahertz(high)}. In the band, {megahertz(p.low_hz)} to "
        f"{megahertz(p.high_hz)}, the worst is {w.return_loss_db:.1f} dB at {megahertz(w.frequency_hz)}; "
        f"wanted are {p.wanted_db:g} dB. Best match {p.best.return_loss_db:.1f} dB at {megahertz(p.best.frequency_hz)}."
    )
    rows = [
        ("curve predicted", "predicted"),
        ("cross", f"\u00d7 worst in the band: {w.return_loss_db:.1f} dB at {megahertz(w.frequency_hz)}"),
        ("wanted", f"wanted, {p.wanted_db:g} dB or deeper over the band (hatched)"),
        *((f"curve {STYLES[i % 3]}", f"measured, {s.name}") for i, (s, _) in enumerate(inside)),
    ]
    drawn = picture(_WIDE, _HIGH, "match-plot", "Return loss over the band", described, parts)
    return drawn, key(rows, "return loss")
