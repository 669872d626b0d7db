"""Kept response surfaces: the same answer without a solve, and never for another article."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from tests.tuning import resonator
from tests.tuning.articles import near
from wavejig.recipe.models import Recipe, Tolerances
from wavejig.tuning import cache
from wavejig.tuning.asbuilt import Nominal
from wavejig.tuning.explore import Explored
from wavejig.tuning.keptsurface import explored
from wavejig.tuning.spread import spread
from wavejig.tuning.yielddata import yield_data
from wavejig.tuning.yields import find_yield


def ask(recipe: Recipe, article: Nominal, **more: Any) -> tuple[Explored, int]:
    """The surface and how many solves it took just now."""
    bench = resonator.Bench()
    found = explored(replace(article, recipe=recipe), spread(recipe, article), bench, **more)
    return found, bench.solves


def kept_file() -> Path:
    (file,) = (cache.cache_folder() / "surfaces").iterdir()
    return file


def test_the_second_answer_is_the_first_to_the_last_bit_and_costs_no_solve() -> None:
    recipe, article = near("boatshed-5g8")
    first, solves = ask(recipe, article)
    again, none = ask(recipe, replace(article, plan=None))
    assert solves == first.solves > 0
    assert none == 0
    assert np.array_equal(again.surface.coefficients, first.surface.coefficients)
    values = first.surface.axes.centre + first.surface.axes.half * 0.7
    one, two = (e.surface.admittance_s(values[None, :], e.band_hz) for e in (first, again))
    assert np.array_equal(one, two)
    said = [json.dumps(yield_data(find_yield(e, 6, 10.0, 1000, 256))) for e in (first, again)]
    assert said[0] == said[1]


def test_name_quantity_and_wanted_figure_need_no_new_surface() -> None:
    recipe, article = near("boatshed-5g8")
    ask(recipe, article)
    target = recipe.target.model_copy(update={"return_loss": 9.0})
    other = recipe.model_copy(update={"name": "other", "quantity": 40, "target": target})
    assert ask(other, article)[1] == 0


def test_another_article_spread_or_program_is_solved_anew(monkeypatch: pytest.MonkeyPatch) -> None:
    recipe, article = near("boatshed-5g8")
    ask(recipe, article)
    tight = recipe.model_copy(update={"tolerances": Tolerances.model_validate({"standoff": "0.1 mm"})})
    assert ask(tight, article)[1] > 0
    shifted = replace(article, values={**article.values, "side": article.values["side"] + 0.05})
    assert ask(recipe, shifted)[1] > 0
    wire = recipe.radiator.model_copy(
        update={"wire": recipe.radiator.wire.__class__(standard="diameter", number=1.1)}
    )
    assert ask(recipe.model_copy(update={"radiator": wire}), article)[1] > 0
    assert ask(recipe, article, wide=True)[1] > 0
    assert ask(recipe, article)[1] == 0
    monkeypatch.setattr(cache, "_program", lambda: "another")
    assert ask(recipe, article)[1] > 0


def spoil(data: dict[str, Any], how: str) -> str:
    if how == "cut":
        return json.dumps(data)[:-40]
    if how == "no number":
        data["coefficients"][0][0] = [float("nan"), 0.0]
    elif how == "a row less":
        data["coefficients"].pop()
    elif how == "another form":
        data["curve"]["form"] = "slope"
    elif how == "no such dimension":
        data["axes"]["size"] = 99
    return json.dumps(data)


@pytest.mark.parametrize("how", ["cut", "no number", "a row less", "another form", "no such dimension"])
def test_a_damaged_surface_counts_as_absent(how: str) -> None:
    recipe, article = near("boatshed-5g8")
    ask(recipe, article)
    file = kept_file()
    file.write_text(spoil(json.loads(file.read_text()), how))
    assert ask(recipe, article)[1] > 0
