"""The user's trial bends and trial length: they replace the stock table's flow stress and the usual factor."""

from __future__ import annotations

from dataclasses import replace

from wavejig.design.ledger import Ledger
from wavejig.forming.trial import Reading, fit_flow_stress, neutral_axis_factor
from wavejig.forming.wire import relaxed_radius_mm
from wavejig.recipe.models import Recipe
from wavejig.stock.metals import Metal

ORIGIN = "measured trial"
# A factor outside this is a measuring fault, not a wire: the unstretched line would leave the middle third.
# Our own limits, those of the recipe's key.
LEAST_FACTOR, MOST_FACTOR = 0.3, 0.7


def metal_from_trials(
    recipe: Recipe, metal: Metal, diameter_mm: float, insulation_mm: float, ledger: Ledger
) -> Metal:
    """The wire's metal with the flow stress its trial bends show; as it is in the table without any."""
    trials = recipe.radiator.trial
    if not trials:
        return metal
    readings = [
        Reading(
            loaded_radius_mm=(t.former + diameter_mm) / 2.0 + insulation_mm,
            bent_deg=t.bent_to,
            relaxed_deg=t.relaxed_to,
        )
        for t in trials
    ]
    try:
        fitted = fit_flow_stress(readings, diameter_mm, metal.youngs_modulus_gpa, metal.hardening_exponent)
    except ValueError as err:
        ledger.conflict(
            "radiator",
            "radiator.trial",
            f"trial bends: {err}",
            "Bend once more, let it go fully, and read the angle again.",
        )
        return metal
    how = f"{len(readings)} trial bend{'s' if len(readings) > 1 else ''}"
    how += ", n from two radii" if fitted.exponent_fitted else ", n of the stock table"
    ledger.value("strength_coefficient", fitted.strength_coefficient_mpa, ORIGIN, how, "MPa")
    ledger.value("hardening_exponent", fitted.hardening_exponent, ORIGIN, how, "")
    return replace(
        metal,
        strength_coefficient_mpa=fitted.strength_coefficient_mpa,
        hardening_exponent=fitted.hardening_exponent,
        source=f"{metal.source}; flow stress: {ORIGIN}",
    )


def factor_from_trial(
    recipe: Recipe, metal: Metal, diameter_mm: float, insulation_mm: float, ledger: Ledger
) -> float:
    """The neutral-axis factor: of the trial length, or the recipe's."""
    r = recipe.radiator
    trial = r.trial_length
    if trial is None:
        return r.neutral_axis_factor
    loaded = (trial.former + diameter_mm) / 2.0 + insulation_mm
    inside = (
        relaxed_radius_mm(
            loaded,
            diameter_mm,
            metal.youngs_modulus_gpa,
            metal.strength_coefficient_mpa,
            metal.hardening_exponent,
        )
        - diameter_mm / 2.0
    )
    factor = neutral_axis_factor(trial.cut, trial.outside, trial.bends, trial.angle, inside, diameter_mm)
    if not LEAST_FACTOR <= factor <= MOST_FACTOR:
        ledger.conflict(
            "radiator",
            "radiator.trial_length",
            f"the trial length makes the unstretched line lie at {factor:.2f} wire diameters from the bend's "
            f"inside; between {LEAST_FACTOR:g} and {MOST_FACTOR:g} is possible",
            "Measure cut length and outside lengths again, over the bare metal; use more bends.",
        )
        return r.neutral_axis_factor
    ledger.value(
        "neutral_axis_factor", factor, ORIGIN, f"{trial.bends} bends in a wire of {trial.cut:g} mm", ""
    )
    return factor
