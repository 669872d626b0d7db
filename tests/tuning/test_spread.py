"""Where each dimension's spread comes from, and how articles are drawn from it."""

from __future__ import annotations

import numpy as np
import pytest

from tests.tuning.articles import near
from wavejig.recipe.models import Measured, Recipe, Tolerances
from wavejig.tuning.points import random_articles
from wavejig.tuning.spread import CUT_SIGMAS, Dimension, Spread, readings_of, spread


def with_tolerances(recipe: Recipe, **changes: object) -> Recipe:
    return recipe.model_copy(update={"tolerances": Tolerances.model_validate(changes)})


def spread_of(name: str, **changes: object) -> tuple[Spread, dict[str, Dimension]]:
    recipe, article = near(name)
    found = spread(with_tolerances(recipe, **changes) if changes else recipe, article)
    return found, {d.key: d for d in found.dimensions}


def test_defaults_of_a_folded_tray_on_legs() -> None:
    found, by = spread_of("saltmarsh-2g4")
    assert by["side"].plus_minus == 0.3
    assert by["lobe_angle"].plus_minus == 1.0
    assert (by["base_x"].plus_minus, by["base_x"].source) == (0.5, "ISO 2768-1 m")  # 120 to 400 mm, table 1
    assert (by["lip_height"].plus_minus, by["leg_spacing"].plus_minus) == (0.2, 0.2)  # 6 to 30 mm
    assert by["wire_diameter"].plus_minus == pytest.approx(0.018)
    assert by["lip_angle"].limit == 90.0
    assert all(d.source for d in found.dimensions)
    assert (found.frequency, found.frequency_sigma) == (1.0, 0.01)


def test_every_default_can_be_overridden() -> None:
    asked = {
        "side": "0.11 mm", "standoff": "0.12 mm", "feed_gap": "0.13 mm", "bend_angle": "0.4 deg",
        "leg_spacing": "0.15 mm", "wire": "0.016 mm", "bend_radius": "0.17 mm", "base": "0.18 mm",
        "lip_height": "0.19 mm", "lip_angle": "0.6 deg", "model": 0.003,
    }  # fmt: skip
    found, by = spread_of("saltmarsh-2g4", **asked)
    assert [by[k].plus_minus for k in ("side", "standoff", "feed_gap", "lobe_angle", "leg_spacing")] == [
        0.11, 0.12, 0.13, 0.4, 0.15,
    ]  # fmt: skip
    assert [by[k].plus_minus for k in ("wire_diameter", "bend_radius", "base_x", "base_y")] == [
        0.016, 0.17, 0.18, 0.18,
    ]  # fmt: skip
    assert [by[k].plus_minus for k in ("lip_height", "lip_angle")] == [0.19, 0.6]
    assert all(d.source.startswith("recipe [tolerances]") for d in found.dimensions)
    assert found.frequency_sigma == 0.003


def test_a_coarser_grade_widens_the_sheet_only() -> None:
    _, medium = spread_of("saltmarsh-2g4")
    _, coarse = spread_of("saltmarsh-2g4", grade="c")
    assert coarse["base_x"].plus_minus == 1.2
    assert coarse["side"].plus_minus == medium["side"].plus_minus


def test_a_measured_correction_replaces_the_models_error() -> None:
    recipe, article = near("boatshed-5g8")
    told = Measured.model_validate({"frequency": 0.99, "frequency_error": 0.001, "sweep": "first.s1p"})
    found = spread(recipe.model_copy(update={"measured": told}), article)
    assert (found.frequency, found.frequency_sigma) == (0.99, 0.001)
    assert "first.s1p" in found.frequency_source


def test_sides_are_read_over_what_the_recipe_measures_over() -> None:
    recipe, _ = near("boatshed-5g8")
    told = Measured.model_validate({"side": "12.5 mm", "standoff": "6.5 mm"})
    outside = recipe.model_copy(
        update={"measured": told, "radiator": recipe.radiator.model_copy(update={"measured_over": "outside"})}
    )
    assert readings_of(outside, 1.0) == {"side": 11.5, "standoff": 6.5}


@pytest.mark.parametrize("kind", ["normal", "uniform"])
def test_articles_follow_their_distribution(kind: str) -> None:
    d = Dimension(
        key="side", title="side", unit="mm", nominal=30.0, plus_minus=0.3, distribution=kind, source="test"
    )
    values = random_articles((d,), (np.arange(20_000)[:, None] + 0.5) / 20_000)[:, 0]
    assert np.abs(values - 30.0).max() <= d.reach + 1e-9
    within = float(np.mean(np.abs(values - 30.0) <= 0.3))
    if kind == "normal":
        # cut off at 2.5 sigma: 0.95 of the whole becomes 0.95 / 0.98758
        assert within == pytest.approx(0.95 / 0.98758, abs=1e-3)
        assert d.reach == pytest.approx(CUT_SIGMAS * 0.3 / 1.96)
    else:
        assert within == 1.0
        assert values.std() == pytest.approx(0.3 / np.sqrt(3.0), rel=1e-3)


def test_lips_never_lean_inwards() -> None:
    _, by = spread_of("saltmarsh-2g4")
    values = random_articles((by["lip_angle"],), np.linspace(0.001, 0.999, 500)[:, None])[:, 0]
    assert values.max() <= 90.0
    assert values.min() < 89.0


def test_posts_that_stay_lower_the_frequency_and_widen_it() -> None:
    recipe, article = near("boatshed-5g8")
    found = spread(recipe, article, posts=0.01)
    assert found.frequency == pytest.approx(0.995)
    assert found.frequency_sigma == pytest.approx(np.hypot(0.01, 0.01 / np.sqrt(12.0)))
    assert "posts" in found.frequency_source
