"""Antennas for the spacer's tests, each a recipe resolved and its radiator planned."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from typing import Any

import pytest

from wavejig.design import Design, resolve
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.recipe.models import Recipe

Antenna = tuple[Design, Radiator]

BAND = {"band": ["2.400 GHz", "2.4835 GHz"]}
NAMED: dict[str, dict[str, Any]] = {
    # four 25 mm lips, connector with four flange screws
    "biquad": {
        "radiator": {"family": "biquad", "wire": "1.8 mm"},
        "reflector": {"lips": "four", "lip_height": "25 mm", "base": ["123 mm", "123 mm"]},
    },
    "four lobes": {
        "radiator": {"family": "double-biquad", "wire": "1.8 mm"},
        "reflector": {"lips": "two"},
    },
    "quad": {"radiator": {"family": "quad", "wire": "1.8 mm"}},
    # lobes of about 100 mm
    "round": {
        "target": {"band": ["902 MHz", "928 MHz"]},
        "radiator": {"family": "twin-loop", "wire": "2.5 mm"},
    },
    # solder everywhere near the feed: comes out along x
    "small": {
        "target": {"band": ["5.725 GHz", "5.875 GHz"]},
        "radiator": {"family": "biquad", "wire": "1 mm", "side": "12 mm", "standoff": "6.4 mm"},
        "feed": {"style": "tube", "tube": "tube-2.2"},
    },
    "insulated": {"radiator": {"family": "biquad", "wire": "1.5 mm2", "insulation": "plastic"}},
    "posts": {"radiator": {"family": "biquad", "wire": "1.8 mm"}, "spacer": {"style": "posts"}},
    "round posts": {
        "target": {"band": ["902 MHz", "928 MHz"]},
        "radiator": {"family": "twin-loop", "wire": "2.5 mm"},
        "spacer": {"style": "posts"},
    },
}


def antenna(tables: dict[str, Any]) -> Antenna:
    """A recipe's design and radiator; the 2.4 GHz band unless another is given."""
    design = resolve(Recipe.model_validate({"name": "test", "target": BAND} | tables))
    return design, plan_radiator(design)


@cache
def _named(name: str) -> Antenna:
    return antenna(NAMED[name])


@pytest.fixture(scope="session")
def named() -> Callable[[str], Antenna]:
    """One of the antennas above by name, made once."""
    return _named


@pytest.fixture(scope="session")
def make() -> Callable[[dict[str, Any]], Antenna]:
    """An antenna from recipe tables."""
    return antenna
