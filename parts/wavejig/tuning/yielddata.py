"""A yield as data for programs."""

from __future__ import annotations

from typing import Any

from wavejig.tuning.yields import Fraction, Remedy, Yield


def yield_data(found: Yield) -> dict[str, Any]:
    """For programs."""

    def fraction(f: Fraction) -> dict[str, float]:
        return {"value": _r(f.value), "low": _r(f.low), "high": _r(f.high)}

    def remedy(rows: tuple[Remedy, ...]) -> list[dict[str, Any]]:
        return [
            {"dimension": r.key, "now": _r(r.now), "needed": None if r.needed is None else _r(r.needed)}
            for r in rows
        ]

    explored, spread = found.explored, found.explored.spread
    return {
        "name": explored.article.design.name,
        "quantity": found.quantity,
        "return_loss_db": found.wanted_db,
        "band_hz": [float(explored.band_hz[0]), float(explored.band_hz[-1])],
        "nominal_worst_return_loss_db": _r(found.nominal_db, 2),
        "pass_fraction": fraction(found.passing),
        "pass_fraction_if_the_model_is_right": fraction(found.shop),
        "expected_passing": _r(found.expected, 2),
        "passing_5_to_95_percent": [found.batch_low, found.batch_high],
        "articles": len(found.worst_db),
        "worst_return_loss_db_5_50_95_percent": [_r(v, 2) for v in found.percentiles_db],
        "histogram": {"edges_db": [_r(v, 2) for v in found.edges], "counts": [int(c) for c in found.counts]},
        "spreads": [
            {
                "dimension": d.key,
                "nominal": _r(d.nominal, 3),
                "plus_minus": _r(d.plus_minus, 4),
                "unit": d.unit,
                "distribution": d.distribution,
                "source": d.source,
            }
            for d in spread.dimensions
        ],
        "model_frequency": {
            "factor": spread.frequency,
            "standard_error": spread.frequency_sigma,
            "source": spread.frequency_source,
        },
        "shares": {k: {"first": _r(s.first, 3), "total": _r(s.total, 3)} for k, s in found.shares.items()},
        "shares_if_the_model_is_right": {
            k: {"first": _r(s.first, 3), "total": _r(s.total, 3)} for k, s in found.shop_shares.items()
        },
        "tolerance_for_95_percent": remedy(found.remedies),
        "tolerance_for_95_percent_if_the_model_is_right": remedy(found.shop_remedies),
        "surface": {
            "solves": explored.solves,
            "rms_error_db": _r(explored.error_db, 4),
            "mean_error_db": _r(explored.bias_db, 4),
            "rms_error_reflection": _r(explored.error_reflection, 6),
        },
    }


def _r(value: float, digits: int = 4) -> float:
    """Rounded well above the last bits, so that the text is the same on every run; no minus zero."""
    return round(float(value), digits) + 0.0
