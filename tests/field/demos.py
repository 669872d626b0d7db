"""The demo recipes as designs and models, each made once."""

from __future__ import annotations

from functools import cache
from pathlib import Path

from wavejig.design import Design
from wavejig.field import Model
from wavejig.field.from_design import model_from_design
from wavejig.pack import inspect_recipe

RECIPES = Path(__file__).parents[2] / "recipes"
NAMES = tuple(sorted(p.stem for p in RECIPES.glob("*.toml")))


@cache
def demo_design(name: str) -> Design:
    return inspect_recipe(RECIPES / f"{name}.toml")[1].design


@cache
def demo_model(name: str) -> Model:
    return model_from_design(demo_design(name))


def band(name: str) -> tuple[float, float]:
    target = demo_design(name).target
    return target.band_low_hz, target.band_high_hz
