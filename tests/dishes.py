"""Dishes of the user's own, for tests: the recipe's tables and the designs they make."""

from __future__ import annotations

from typing import Any

from tests.designs import design
from wavejig.design import Design

ROUND: dict[str, Any] = {"shape": "round", "diameter": "160 mm", "depth": "45 mm", "slope": "5 deg"}
BOX: dict[str, Any] = {
    "shape": "rectangular",
    "size": ["200 mm", "150 mm"],
    "depth": "40 mm",
    "slope": "8 deg",
    "radius": "4 mm",
    "rim": "10 mm",
}
UPRIGHT: dict[str, Any] = {"shape": "round", "diameter": "150 mm", "depth": "30 mm", "radius": "0 mm"}
DISHES = {"round": ROUND, "box": BOX, "upright, sharp": UPRIGHT}


def own(dish: dict[str, Any] | None = None, **more: Any) -> dict[str, Any]:
    """A [reflector] table of kind own; more: other keys of it."""
    return {
        "kind": "own",
        "material": "tinplate",
        "thickness": "0.5 mm",
        "own": ROUND if dish is None else dish,
        **more,
    }


def dish_design(dish: dict[str, Any] | None = None, **tables: Any) -> Design:
    """A biquad in a dish; tables: other recipe tables, reflector's own extra keys included."""
    return design(reflector=own(dish, **tables.pop("reflector", {})), **tables)
