"""A prediction as plain data and as a table: one set of figures for JSON, the pack, paper and terminal.

Printed figures are coarser than the solver's noise: 0.1 ohm, 0.01 dB, 10 kHz below 10 GHz, 0.1 deg.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:  # telling figures loads no solver
    from wavejig.field.pattern import Cut
    from wavejig.field.prediction import MatchPoint, Prediction


def prediction_data(p: Prediction) -> dict[str, Any]:
    """What field.json and `match --json` hold; frequencies in Hz, impedances [real, imaginary] in ohm."""
    pattern = p.pattern
    return {
        "reference_plane": p.reference_plane,
        "reference_ohm": p.reference_ohm,
        "band_hz": [p.low_hz, p.high_hz],
        "wanted_return_loss_db": p.wanted_db,
        "worst_return_loss_db": _places(p.worst.return_loss_db, 2),
        "worst_at_hz": _frequency(p.worst.frequency_hz),
        "meets_target": p.meets_target,
        "match": [_point_data(point) for point in p.points],
        "best": _point_data(p.best),
        "resonance_hz": None if p.resonance_hz is None else _frequency(p.resonance_hz),
        "gain_dbi": _places(p.gain_dbi, 2),
        "directivity_dbi": _places(pattern.axial_dbi, 2),
        "efficiency": _places(pattern.efficiency, 4),
        "front_to_back_db": _places(pattern.front_to_back_db, 1),
        "cross_polarisation_db": _places(max(pattern.cross_db, -99.0), 1),
        "e_plane": _cut_data(pattern.e_plane),
        "h_plane": _cut_data(pattern.h_plane),
        "solver": {
            "unknowns": p.unknowns,
            "solves": p.solves,
            "interpolation_error": float(f"{p.sweep_error:.0e}"),
            "power_balance": [_places(b, 4) for b in p.power_balance],
        },
    }


def _point_data(point: MatchPoint) -> dict[str, Any]:
    return {
        "frequency_hz": _frequency(point.frequency_hz),
        "return_loss_db": _places(point.return_loss_db, 2),
        "standing_wave_ratio": _places(min(point.standing_wave_ratio, 999.0), 2),
        "impedance_ohm": [_places(point.impedance_ohm.real, 1), _places(point.impedance_ohm.imag, 1)],
    }


def _cut_data(cut: Cut) -> dict[str, Any]:
    width, lobe = cut.beamwidth_deg, cut.first_sidelobe_db
    return {
        "peak_dbi": _places(cut.peak_dbi, 2),
        "peak_at_deg": _places(cut.peak_angle_deg, 1),
        "beamwidth_deg": None if width is None else _places(width, 1),
        "first_sidelobe_db": None if lobe is None else _places(lobe, 1),
    }


def prediction_text(p: Prediction) -> str:
    """The prediction as a table for a person."""
    data = prediction_data(p)
    verdict = (
        f"meets {p.wanted_db:g} dB"
        if p.meets_target
        else f"MISSES {p.wanted_db:g} dB by {p.wanted_db - p.worst.return_loss_db:.1f} dB"
    )
    lines = [
        f"{p.design_name}: worst return loss in the band {p.worst.return_loss_db:.1f} dB at "
        f"{megahertz(p.worst.frequency_hz)}; {verdict}",
        "                     frequency   return loss    SWR   impedance",
    ]
    names = ("band's low end", "middle", "band's high end")
    for name, m in zip(names, p.points, strict=True):
        lines.append(f"  {name:<16}{_match_columns(m)}")
    lines.append(f"  {'best match':<16}{_match_columns(p.best)}")
    resonance = "none near the band" if p.resonance_hz is None else megahertz(p.resonance_hz)
    e, h = data["e_plane"], data["h_plane"]
    lines += [
        f"  resonance (reactance zero)  {resonance}",
        f"  gain                        {data['gain_dbi']:.1f} dBi straight ahead, efficiency "
        f"{100 * data['efficiency']:.0f} %",
        f"  beamwidth                   {_degrees(e['beamwidth_deg'])} along the field, "
        f"{_degrees(h['beamwidth_deg'])} across it",
        f"  front to back               {data['front_to_back_db']:.0f} dB",
        f"  first sidelobe              {_decibels(e['first_sidelobe_db'])} along, "
        f"{_decibels(h['first_sidelobe_db'])} across",
        f"  seen                        {p.reference_plane}, in {p.reference_ohm:g} ohm",
        f"  solved                      {p.solves} frequencies, {p.unknowns} unknowns",
    ]
    return "\n".join(lines)


def _match_columns(m: MatchPoint) -> str:
    sign = "+" if m.impedance_ohm.imag >= 0 else "-"
    impedance = f"{m.impedance_ohm.real:.1f} {sign} j{abs(m.impedance_ohm.imag):.1f} ohm"
    ratio = f"{m.standing_wave_ratio:.2f}" if m.standing_wave_ratio < 99.5 else ">99"
    return f"{megahertz(m.frequency_hz):>14}   {m.return_loss_db:8.1f} dB  {ratio:>5}   {impedance}"


def megahertz(frequency_hz: float) -> str:
    """MHz with one digit of 100 kHz, the way bands are spoken of."""
    return f"{frequency_hz / 1e6:.1f} MHz"


def _degrees(value: float | None) -> str:
    return "full circle" if value is None else f"{value:.0f} deg"


def _decibels(value: float | None) -> str:
    return "none" if value is None else f"{value:.0f} dB"


def _places(value: float, digits: int) -> float:
    return round(value, digits) + 0.0 if math.isfinite(value) else value


def _frequency(value_hz: float) -> float:
    return round(value_hz / 1e4) * 1e4
