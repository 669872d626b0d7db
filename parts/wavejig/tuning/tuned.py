"""A tuned answer put into its design. No solver here."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from wavejig.design import resolve
from wavejig.design.model import Design
from wavejig.recipe.models import Recipe
from wavejig.tuning.vary import with_values


def tuned_design(recipe: Recipe, values: Mapping[str, float]) -> Design:
    """The design of a recipe with its free numbers (mm, deg) replaced by tuned ones, which say so."""
    design = resolve(with_values(recipe, values))
    marked = tuple(
        (name, replace(v, origin="tuned", source="worked out with the field solver") if name in values else v)
        for name, v in design.values
    )
    return replace(design, values=marked)
