"""The demo designs, inspected once, and one folder of written sheets for each."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache
from pathlib import Path

import pytest

from wavejig.pack import inspect_recipe
from wavejig.reflector.flat import FlatPattern, flat_pattern
from wavejig.sheets.sheetfiles import write_sheets
from wavejig.shop import Inspection

RECIPES = Path(__file__).parents[2] / "recipes"
DEMOS = tuple(sorted(p.stem for p in RECIPES.glob("*.toml")))
# Those with a blank: a dish that is there already is only drilled.
CUT = tuple(n for n in DEMOS if 'kind = "own"' not in (RECIPES / f"{n}.toml").read_text(encoding="utf-8"))
# A tray with open corners, a mitred one, a flat sheet that takes tiles: the default run's sample.
_SAMPLE = ("saltmarsh-2g4", "causeway-2g4-double", "creek-915-round")
SAMPLED = tuple(
    pytest.param(name, marks=() if name in _SAMPLE else pytest.mark.slow, id=name) for name in DEMOS
)


@cache
def inspected(name: str) -> Inspection:
    """A demo recipe, resolved and planned."""
    return inspect_recipe(RECIPES / f"{name}.toml")[1]


def pattern_of(inspection: Inspection) -> FlatPattern:
    """The blank of an inspected design."""
    assert inspection.tray is not None
    return flat_pattern(inspection.tray, inspection.design.name)


@pytest.fixture(scope="session")
def written(tmp_path_factory: pytest.TempPathFactory) -> Callable[[str], Path]:
    """The folder of a demo's sheets, written at the first call."""

    @cache
    def write(name: str) -> Path:
        folder = tmp_path_factory.mktemp(name)
        write_sheets(inspected(name), pattern_of(inspected(name)), folder)
        return folder

    return write
