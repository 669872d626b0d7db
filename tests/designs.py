"""Designs for tests: from a few keys, without a file."""

from __future__ import annotations

from typing import Any

from wavejig.design import Design, resolve
from wavejig.recipe import Recipe

WIFI_BAND = ["2.400 GHz", "2.4835 GHz"]


def design(
    family: str = "biquad", *, wire: str = "1.8 mm", band: list[str] | None = None, **tables: Any
) -> Design:
    """A resolved design; keyword tables (radiator=..., feed=...) are recipe tables."""
    return resolve(recipe(family, wire=wire, band=band, **tables))


def recipe(
    family: str = "biquad", *, wire: str = "1.8 mm", band: list[str] | None = None, **tables: Any
) -> Recipe:
    """A validated recipe from a few keys."""
    data: dict[str, Any] = {
        "name": "spare",
        "target": {"band": band or WIFI_BAND},
        "radiator": {"family": family, "wire": wire, **tables.pop("radiator", {})},
        **tables,
    }
    return Recipe.model_validate(data)
