"""The impedance locus on the chart of the reflection coefficient (P. H. Smith, Electronics, January 1939)."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from wavejig.field.figures import megahertz
from wavejig.field.prediction import MatchPoint, Prediction
from wavejig.sheets.report.axes import Pt, chain, key, mark, picture, word
from wavejig.sheets.report.markup import Element, el
from wavejig.sheets.report.matchplot import STYLES, SweepShown

_SIZE = 420.0
_RADIUS = 178.0
_SIGNS = {1.0: "+", -1.0: "\u2212"}
_ROUND = (0.2, 0.5, 1.0, 2.0, 5.0)  # resistances and reactances drawn, over the reference


def reflection_chart(p: Prediction, sweeps: Sequence[SweepShown] = ()) -> tuple[Element, Element]:
    """The picture and its key."""
    centre = _SIZE / 2.0

    def at(g: complex) -> Pt:
        return centre + _RADIUS * g.real, centre - _RADIUS * g.imag

    parts: list[Element] = [
        el("circle", cx=centre, cy=centre, r=_RADIUS, class_="frame"),
        el("line", x1=centre - _RADIUS, y1=centre, x2=centre + _RADIUS, y2=centre, class_="grid"),
    ]
    z0 = p.reference_ohm
    for value in _ROUND:
        middle, radius = value / (1.0 + value), 1.0 / (1.0 + value)
        parts.append(el("circle", cx=at(middle)[0], cy=centre, r=_RADIUS * radius, class_="grid"))
        r = np.concatenate([np.linspace(0.0, 4.0, 60), np.geomspace(4.2, 200.0, 30)])
        for sign in (1.0, -1.0):
            z = r + 1j * sign * value
            parts.append(el("path", d=chain(at(complex(g)) for g in (z - 1.0) / (z + 1.0)), class_="grid"))
            edge = (1j * sign * value - 1.0) / (1j * sign * value + 1.0)
            x, y = at(complex(edge) * 1.085)
            text = f"{_SIGNS[sign]}j{value * z0:g}"
            parts.append(word((x, y + 4.0), text, class_="t small", anchor="middle"))
        left = at((value - 1.0) / (value + 1.0))
        parts.append(word((left[0] + 2.0, left[1] - 3.0), f"{value * z0:g}", class_="t small"))
    wanted = 10.0 ** (-p.wanted_db / 20.0)
    parts.append(el("circle", cx=centre, cy=centre, r=_RADIUS * wanted, class_="wanted", fill="none"))
    used = []
    for number, s in enumerate(sweeps):
        part = (s.frequencies_hz >= p.low_hz) & (s.frequencies_hz <= p.high_hz)
        if int(part.sum()) > 1:
            path = chain(at(complex(g)) for g in s.reflection[part])
            parts.append(el("path", d=path, class_=f"curve {STYLES[number % 3]}"))
            used.append((f"curve {STYLES[number % 3]}", f"measured in the band, {s.name}"))
    parts.append(el("path", d=chain(at(complex(g)) for g in p.s11), class_="curve outside"))
    inside = p.s11[(p.frequencies_hz >= p.low_hz) & (p.frequencies_hz <= p.high_hz)]
    ends = [_gamma(point, z0) for point in p.points]
    inside = np.concatenate([[ends[0]], inside, [ends[2]]])
    parts.append(el("path", d=chain(at(complex(g)) for g in inside), class_="curve predicted"))
    parts += [mark(at(g), kind) for g, kind in zip(ends, ("low", "middle", "high"), strict=True)]
    first, centred, last = p.points
    described = (
        f"Impedance on the reflection chart for {z0:g} ohm: {_ohms(first)} at the band's low end, {_ohms(centred)} in "
        f"its middle, {_ohms(last)} at its high end. Inside the dashed circle the return loss is "
        f"{p.wanted_db:g} dB or more."
    )
    rows = [
        ("curve predicted", f"predicted in the band: \u25bc\u00a0{megahertz(first.frequency_hz)}, "
         f"\u25cf\u00a0{megahertz(centred.frequency_hz)}, "
         f"\u25b2\u00a0{megahertz(last.frequency_hz)}"),
        ("curve outside", "predicted outside the band"),
        ("wanted", f"return loss {p.wanted_db:g} dB: stay inside"),
        *used,
    ]  # fmt: skip
    title = f"Impedance from the {z0:g} ohm line, in ohm"
    return picture(_SIZE, _SIZE, "impedance-plot", title, described, parts), key(rows, "impedance")


def _gamma(point: MatchPoint, z0: float) -> complex:
    return (point.impedance_ohm - z0) / (point.impedance_ohm + z0)


def _ohms(point: MatchPoint) -> str:
    z = point.impedance_ohm
    return f"{z.real:.0f} {'+' if z.imag >= 0.0 else '-'} j{abs(z.imag):.0f} ohm"
