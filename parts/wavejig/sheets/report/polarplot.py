"""Gain round the compass and up and down, as the antenna hangs for the stated polarisation."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.pattern import Cut
from wavejig.field.prediction import Prediction
from wavejig.sheets.report.axes import Pt, chain, key, line, picture, word
from wavejig.sheets.report.markup import Element, el, short

_WIDE, _HIGH, _RADIUS = 420.0, 364.0, 150.0
_DEPTH_DB = 30.0  # drawn below the outer ring
# In the antenna's own axes: the electric field lies along y, the main beam along z. The cuts' positive
# angles lean towards these (see `read_pattern`: the field's direction, and z cross it).
_E_TOWARDS, _H_TOWARDS = np.array([0.0, 1.0, 0.0]), np.array([-1.0, 0.0, 0.0])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class HungCut:
    """A cut as seen once the antenna hangs. angles_deg (n,): from straight ahead, to the right or upwards.

    gain_dbi, cross_dbi (n,): losses included; along the stated polarisation and square to it.
    """

    angles_deg: NDArray[np.float64]
    gain_dbi: NDArray[np.float64]
    cross_dbi: NDArray[np.float64]
    source: Cut


def hung(p: Prediction, up: str) -> tuple[HungCut, HungCut]:
    """(round the compass, up and down) with that edge uppermost ("y+", "x+"): which cut is which, and its sense.

    Right is as seen by somebody behind the antenna who looks along the beam.
    """
    axis = {"x": 0, "y": 1}[up[0]]
    upwards = np.zeros(3)
    upwards[axis] = 1.0 if up[1] == "+" else -1.0
    right = np.cross([0.0, 0.0, 1.0], upwards)
    lost = p.gain_dbi - p.pattern.axial_dbi

    def seen(towards: NDArray[np.float64]) -> HungCut:
        cut, own = (
            (p.pattern.e_plane, _E_TOWARDS)
            if abs(float(towards @ _E_TOWARDS)) > 0.5
            else (p.pattern.h_plane, _H_TOWARDS)
        )
        sense = float(np.sign(towards @ own))
        order = slice(None) if sense > 0.0 else slice(None, None, -1)
        return HungCut(
            angles_deg=sense * cut.angles_deg[order],
            gain_dbi=cut.co_dbi[order] + lost,
            cross_dbi=cut.cross_dbi[order] + lost,
            source=cut,
        )

    return seen(right), seen(upwards)


def polar_plots(
    p: Prediction, up: str, polarisation: str
) -> tuple[tuple[Element, Element], tuple[Element, Element]]:
    """Pictures and keys: round the compass, up and down."""
    compass, height = hung(p, up)
    top = max(float(c.gain_dbi.max()) for c in (compass, height))
    outer = 5.0 * math.ceil(top / 5.0)
    return (
        _plot(compass, "compass-plot", "Gain round the compass", outer, polarisation, compass_words=True),
        _plot(height, "height-plot", "Gain up and down", outer, polarisation, compass_words=False),
    )


def _plot(
    cut: HungCut, name: str, title: str, outer: float, polarisation: str, *, compass_words: bool
) -> tuple[Element, Element]:
    cx, cy = _WIDE / 2.0, _HIGH / 2.0

    def at(angle_deg: float, dbi: float) -> Pt:
        """Compass: straight ahead is up the page, right is right. Height: ahead is to the right, up is up."""
        r = _RADIUS * min(max((dbi - outer + _DEPTH_DB) / _DEPTH_DB, 0.0), 1.0)
        t = math.radians(angle_deg if compass_words else 90.0 - angle_deg)
        return cx + r * math.sin(t), cy - r * math.cos(t)

    parts: list[Element] = []
    for angle in range(0, 360, 30):
        parts.append(line(at(angle, outer - _DEPTH_DB), at(angle, outer), "grid"))
    for below in (0.0, 10.0, 20.0):
        r = _RADIUS * (1.0 - below / _DEPTH_DB)
        parts.append(el("circle", cx=cx, cy=cy, r=r, class_="frame" if below == 0.0 else "grid"))
    named = (
        ((0, "ahead", "middle"), (90, "right", "start"), (180, "behind", "middle"), (-90, "left", "end"))
        if compass_words
        else ((0, "ahead", "start"), (90, "up", "middle"), (180, "behind", "end"), (-90, "down", "middle"))
    )  # fmt: skip
    for angle, text, anchor in named:
        x, y = at(angle, outer)
        dx, dy = (x - cx) / _RADIUS, (y - cy) / _RADIUS
        parts.append(word((x + 7.0 * dx, y + 5.0 + 13.0 * dy), text, anchor=anchor))
    for angle in (30, 60, 120, 150):
        for sign in (1, -1):
            x, y = at(sign * angle, outer)
            dx, dy = (x - cx) / _RADIUS, (y - cy) / _RADIUS
            parts.append(
                word(
                    (x + 15.0 * dx, y + 4.0 + 12.0 * dy), f"{angle}\u00b0", class_="t small", anchor="middle"
                )
            )
    rows = [("curve predicted", f"gain, {polarisation} polarisation")]
    if float(cut.cross_dbi.max()) > outer - _DEPTH_DB:
        rows.append(("curve m1", "gain, the other polarisation"))
        cross = chain(at(float(a), float(g)) for a, g in zip(cut.angles_deg, cut.cross_dbi, strict=True))
        parts.append(el("path", d=cross, class_="curve m1"))
    gain = chain(at(float(a), float(g)) for a, g in zip(cut.angles_deg, cut.gain_dbi, strict=True))
    parts.append(el("path", d=gain, class_="curve predicted"))
    for below in (0.0, 10.0, 20.0):
        x, y = at(135.0, outer - below)  # behind, where little goes
        parts.append(
            word(
                (x + 3.0, y + 4.0),
                f"{short(outer - below)} dBi".replace("-", "\u2212"),
                class_="t small halo",
            )
        )
    peak = int(np.argmax(cut.gain_dbi))
    width = cut.source.beamwidth_deg
    half = "" if width is None else f" Half power over {width:.0f} degrees."
    where = _way(float(cut.angles_deg[peak]), compass_words)
    ahead = float(np.interp(0.0, cut.angles_deg, cut.gain_dbi))
    described = (
        f"{title}, {polarisation} polarisation: {ahead:.1f} dBi straight ahead, most {cut.gain_dbi[peak]:.1f} dBi "
        f"{where}.{half} Outer ring {short(outer)} dBi, 10 dB from ring to ring, centre "
        f"{short(outer - _DEPTH_DB)} dBi or less."
    )
    return picture(_WIDE, _HIGH, name, title, described, parts), key(rows, title.lower())


def _way(angle: float, compass: bool) -> str:
    if abs(angle) < 0.5:
        return "straight ahead"
    words = ("to the right", "to the left") if compass else ("upwards", "downwards")
    return f"{abs(angle):.0f} degrees {words[0] if angle > 0 else words[1]}"
