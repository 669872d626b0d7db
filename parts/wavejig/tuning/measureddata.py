"""Measured articles as data for programs."""

from __future__ import annotations

from typing import Any

from wavejig.tuning.found import Deviation, Fit
from wavejig.tuning.measured import Article, Measured
from wavejig.tuning.measuredtext import bench
from wavejig.tuning.yielddata import yield_data


def measured_data(m: Measured) -> dict[str, Any]:
    """For programs."""
    predicted = None if m.predicted is None else yield_data(m.predicted)
    return {
        "name": m.explored.article.design.name,
        "return_loss_db": m.wanted_db,
        "passing": m.passing,
        "articles": [_article_data(a) for a in m.articles],
        "recipe_changes": [{"key": c.key, "now_mm": c.now, "new_mm": c.new} for c in m.changes],
        "after_worst_return_loss_db": round(m.after_db, 2),
        "frequency": round(m.frequency, 6),
        "frequency_error": round(m.frequency_error, 6),
        "solves": m.explored.solves + 2,
        "surface_error_db": round(m.check_db, 4),
        "predicted_yield": predicted,
    }


def _article_data(a: Article) -> dict[str, Any]:
    return {
        "serial": a.sweep.serial,
        "sweep": a.sweep.path.name,
        "passes": a.passes,
        "worst_return_loss_db": round(a.worst_db, 2),
        "worst_at_hz": a.worst_hz,
        "predicted_db": round(a.predicted_db, 2),
        "as_found_db": round(a.as_found_db, 2),
        "explained": not a.strange,
        "misfit": round(a.findings.right.misfit, 2),
        **_explained(a.findings.right),
        "deviations": [_deviation_data(d) for d in a.findings.right.deviations],
        "deviations_allowing_for_the_models_error": [_deviation_data(d) for d in a.findings.open.deviations],
        "cannot_tell_apart": [[one, other, round(r, 3)] for one, other, r in a.findings.right.vague],
        "cannot_tell_apart_allowing_for_the_models_error": [
            [one, other, round(r, 3)] for one, other, r in a.findings.open.vague
        ],
        "on_this_article": [
            {"key": lever.key, "move": lever.move, "unit": lever.unit, "how": bench(lever.key, lever.move)}
            for lever in a.bench.levers
        ],
    }


def _explained(fit: Fit) -> dict[str, Any]:
    return {
        "slipped": list(fit.slipped),
        "explanation_probability": round(fit.chance, 3),
        "or_else": [
            {"slipped": {key: round(value, 3) for key, value in o.slipped}, "probability": round(o.chance, 3)}
            for o in fit.or_else
        ],
    }


def _deviation_data(d: Deviation) -> dict[str, Any]:
    low, high = d.interval
    return {
        "key": d.key,
        "unit": d.unit,
        "value": round(d.value, 4) + 0.0,
        "low": round(low, 4) + 0.0,
        "high": round(high, 4) + 0.0,
        "plus_minus_beforehand": round(d.before, 4),
        "cannot_tell": not d.told,
    }
