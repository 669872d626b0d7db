"""One recipe, other numbers: the neighbours of a design that tuning, yield and measurements look at.

A dimension is named as in the design's values (design.json, `wavejig check`): side, standoff, feed_gap ...
Sides and lobe diameters are over the centreline here, as there.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from wavejig.design import resolve
from wavejig.design.model import Design
from wavejig.recipe.models import Recipe
from wavejig.recipe.units import WireSize

# Dimension -> the recipe's table and key; base_x and base_y share one key.
PLACES: dict[str, tuple[str, str]] = {
    "side": ("radiator", "side"),
    "lobe_diameter": ("radiator", "lobe_diameter"),
    "standoff": ("radiator", "standoff"),
    "feed_gap": ("radiator", "feed_gap"),
    "lobe_angle": ("radiator", "lobe_angle"),
    "wire_diameter": ("radiator", "wire"),
    "leg_spacing": ("feed", "leg_spacing"),
    "base_x": ("reflector", "base"),
    "base_y": ("reflector", "base"),
    "lip_height": ("reflector", "lip_height"),
    "lip_angle": ("reflector", "lip_angle"),
}


def over_mm(recipe: Recipe, wire_diameter_mm: float) -> float:
    """What a side as the recipe measures it is more than the side over the centreline."""
    over = {"outside": wire_diameter_mm, "centreline": 0.0, "inside": -wire_diameter_mm}
    return over[recipe.radiator.measured_over]


def with_values(recipe: Recipe, values: Mapping[str, float]) -> Recipe:
    """The recipe with some numbers replaced (mm and deg). Raises KeyError for a dimension it has not."""
    changes: dict[str, dict[str, Any]] = {}
    base = list(recipe.reflector.base)
    for name, value in values.items():
        table, key = PLACES[name]
        put: Any = float(value)
        if name == "wire_diameter":
            put = WireSize(standard="diameter", number=float(value))
        elif name in ("base_x", "base_y"):
            base[0 if name == "base_x" else 1] = float(value)
            put = tuple(base)
        changes.setdefault(table, {})[key] = put
    radiator = changes.get("radiator", {})
    if "side" in radiator or "lobe_diameter" in radiator:
        radiator["measured_over"] = "centreline"
    tables = {name: getattr(recipe, name).model_copy(update=update) for name, update in changes.items()}
    return recipe.model_copy(update=tables)


def held(design: Design) -> dict[str, float]:
    """Every dimension of a design as a number, so that none of its `auto`s follows when one is varied."""
    names = [name for name, _ in design.values if name in PLACES]
    out = {name: value.value for name, value in design.values if name in names}
    if design.radiator.family == "path":
        out.pop("feed_gap", None)  # a path's gap is the distance of its own corners
    return out


def vary(recipe: Recipe, nominal: Mapping[str, float], changes: Mapping[str, float]) -> Design:
    """The design with `nominal` values and `changes` added to them (mm and deg).

    Raises KeyError for a dimension that is not in nominal and RecipeError when the sides cannot meet.
    """
    moved = dict(nominal)
    for name, change in changes.items():
        moved[name] = moved[name] + float(change)
    return resolve(with_values(recipe, moved))
