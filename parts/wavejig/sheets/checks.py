"""What is measured: the first article with its limits, the bench with the prediction. Plain text, no layout."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from wavejig.design.model import Design, OwnShape
from wavejig.fixture.nest import LIES
from wavejig.radiator.model import Radiator
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray
from wavejig.sheets.common import general_deg, general_mm
from wavejig.sheets.model import number

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction  # the solver is not needed to set its figures

Rows = tuple[tuple[str, ...], ...]


# A dish may be off by this before the recipe has to follow; common practice, no source.
DISH_OFF_MM = 1.0
# A calliper tells a wire's diameter to about this; common practice, no source.
WIRE_LIMIT_MM = 0.03


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """One line of the first-article table; low and high None: a yes or no."""

    what: str
    how: str
    nominal: str
    low: float | None
    high: float | None
    unit: str = "mm"

    @property
    def limits(self) -> str:
        """ "28.6 to 29.2 mm"."""
        if self.low is None or self.high is None:
            return ""
        return f"{number(self.low)} to {number(self.high)}{_gap(self.unit)}{self.unit}"


def _gap(unit: str) -> str:
    return "" if unit == "\u00b0" else " "


def _around(what: str, how: str, nominal: float, tolerance: float, unit: str = "mm") -> Check:
    return Check(
        what=what,
        how=how,
        nominal=f"{number(nominal)}{_gap(unit)}{unit}",
        low=nominal - tolerance,
        high=nominal + tolerance,
        unit=unit,
    )


def first_article(design: Design, radiator: Radiator, tray: Tray, pattern: FlatPattern) -> tuple[Check, ...]:
    """What to measure on the first one, with nominal and limits, in the order the parts come off."""
    r, tol, feed = design.radiator, design.tolerances, design.feed
    d = r.wire_diameter_mm
    out = [_around("wire, bare", "calliper, three places", d, WIRE_LIMIT_MM)]
    w, h = pattern.size_mm
    if tray.own is not None:
        out += _dish(tray, tray.own)
    else:
        out.append(_around("blank along x", "over all, flat", w, general_mm(design, w)))
        out.append(_around("blank along y", "over all, flat", h, general_mm(design, h)))
    holes = [x for x in tray.holes if x.purpose in ("connector", "tube", "foot")]
    out += [
        _around(
            f"{x.purpose} hole", "calliper or drill shank", x.diameter_mm, general_mm(design, x.diameter_mm)
        )
        for x in holes
    ]
    for axis in "xy":
        if tray.lip(axis + "+") or tray.lip(axis + "-"):
            size = 2.0 * tray.half_mm(axis + "+")
            out.append(
                _around(f"tray base along {axis}", "outside, over the folds", size, general_mm(design, size))
            )
    for height, angle in sorted({(lip.height_mm, lip.angle_deg) for lip in tray.lips}):
        out.append(
            _around(
                "lip height", "along its outside, from the base's outside", height, general_mm(design, height)
            )
        )
        out.append(
            _around(
                "lip angle",
                "protractor; 90 stands up",
                angle,
                max(general_deg(design, height), 1.0),
                "\u00b0",
            )
        )
    out.append(
        Check(
            what="radiator in the check nest",
            how=f"drops in by itself, {LIES[feed.style]}",
            nominal="yes",
            low=None,
            high=None,
        )
    )
    low, high = radiator.main.path.bounds()
    for i, axis in enumerate("xy"):
        size = high[i] - low[i] + d
        out.append(_around(f"radiator along {axis}", "over the outside of the wire", size, tol.side_mm))
    gap = r.feed_gap_mm
    out.append(_around("feed gap", "wire to wire at the terminals, centres", gap, min(tol.side_mm, 0.2)))
    top = r.standoff_mm + d / 2.0
    far = "every far corner" if not r.lobe_diameter_mm else "the far side of each lobe"
    out.append(
        _around("standoff, to the wire's top", f"sheet to top of wire, at {far}", top, tol.standoff_mm)
    )
    if feed.style == "tube":
        out.append(_around("tube's wall above the sheet", "depth gauge", feed.tube_top_mm, tol.standoff_mm))
    out.append(
        Check(
            what="pin or inner conductor",
            how="no metal touches it but its joint",
            nominal="yes",
            low=None,
            high=None,
        )
    )
    out.append(
        Check(what="continuity", how="centre to shell: a short", nominal="< 1 \u03a9", low=None, high=None)
    )
    return tuple(out)


def _dish(tray: Tray, own: OwnShape) -> list[Check]:
    """The user's own dish against the recipe's sizes, by what a calliper and a straightedge reach."""
    reach = own.reach_mm(own.depth_mm)
    out = []
    for axis in "x" if own.shape == "round" else "xy":
        mouth = 2.0 * (tray.half_mm(f"{axis}+") + reach)
        along = "" if own.shape == "round" else f" along {axis}"
        # its size at the mouth is what can be read; the floor follows from depth and lean
        out.append(
            _around(f"mouth of the dish{along}", "inside, at the rim, twice across", mouth, 2.0 * DISH_OFF_MM)
        )
    out.append(
        _around("depth of the dish", "straightedge over the rim, four places", own.depth_mm, DISH_OFF_MM)
    )
    return out


BENCH_HEAD = (
    "frequency",
    "predicted return loss",
    "predicted SWR",
    "predicted impedance",
    "measured return loss",
)


def bench(design: Design, prediction: Prediction | None) -> Rows:
    """Lines of the bench table (see `BENCH_HEAD`): band edges and middle, the worst, the resonance."""
    t = design.target
    if prediction is None:
        middle = (t.band_low_hz + t.band_high_hz) / 2.0
        return tuple((mhz(f), "not predicted", "", "", "") for f in (t.band_low_hz, middle, t.band_high_hz))
    w, best = prediction.worst, prediction.best
    named = [(mhz(p.frequency_hz), p) for p in prediction.points]
    named += [(f"worst in band, {mhz(w.frequency_hz)}", w), (f"best of all, {mhz(best.frequency_hz)}", best)]
    rows = [
        (name, *_match(p.return_loss_db, p.standing_wave_ratio, p.impedance_ohm), "") for name, p in named
    ]
    if prediction.resonance_hz is not None:
        rows.append((f"resonance, {mhz(prediction.resonance_hz, 0)}", "reactance 0", "", "", ""))
    return tuple(rows)


def radiation(prediction: Prediction | None) -> Rows:
    """(figure, predicted) of the pattern at the band's middle; empty when nothing has been predicted."""
    if prediction is None:
        return ()
    p = prediction.pattern

    def wide(value: float | None) -> str:
        return "-" if value is None else f"{value:.0f}\u00b0"

    return (
        ("gain straight ahead", f"{prediction.gain_dbi:.1f} dBi"),
        ("beamwidth, plane of the electric field", wide(p.e_plane.beamwidth_deg)),
        ("beamwidth, plane square to it", wide(p.h_plane.beamwidth_deg)),
        ("front to back", f"{p.front_to_back_db:.0f} dB"),
    )


def peak_gain_dbi(prediction: Prediction | None) -> float | None:
    """The most gain in either plane: what the cautions reckon with."""
    if prediction is None:
        return None
    p = prediction.pattern
    most = max(p.e_plane.peak_dbi, p.h_plane.peak_dbi) - p.axial_dbi
    return float(prediction.gain_dbi + max(most, 0.0))


def _match(loss_db: float, swr: float, z: complex) -> tuple[str, str, str]:
    ratio = f"{swr:.2f}" if np.isfinite(swr) and swr < 100.0 else "> 100"
    sign = "+" if z.imag >= 0.0 else "\u2212"
    return f"{loss_db:.1f} dB", ratio, f"{z.real:.0f} {sign} j{abs(z.imag):.0f} \u03a9"


def mhz(frequency_hz: float, places: int = 1) -> str:
    """ "2441.8 MHz"."""
    return f"{number(frequency_hz / 1e6, places)} MHz"
