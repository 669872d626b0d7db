"""Kept answers: found again, never for another recipe, program or library."""

from __future__ import annotations

import json
import warnings
from pathlib import Path
from typing import Any

import pytest

from tests.recipe.bad_recipes import GOOD
from wavejig.recipe import read_recipe
from wavejig.recipe.models import Recipe
from wavejig.tuning import cache, settle
from wavejig.tuning.vary import with_values

VALUES = {"side": 28.5, "standoff": 16.0}


def recipe_with(tmp_path: Path, *pairs: tuple[str, str]) -> Recipe:
    text = GOOD
    for old, new in pairs:
        assert old in text, old
        text = text.replace(old, new, 1)
    path = tmp_path / "r.toml"
    path.write_text(text)
    return read_recipe(path).recipe


def test_an_answer_is_found_again(tmp_path: Path) -> None:
    recipe = recipe_with(tmp_path)
    assert cache.load(recipe, "match", 0.05) is None
    cache.save(recipe, "match", 0.05, VALUES)
    assert cache.load(recipe, "match", 0.05) == VALUES
    assert cache.load(recipe, "gain", 0.05) is None
    assert cache.load(recipe, "match", 0.1) is None


# Other values of what is left out of the key, as a recipe would have them.
OTHER = {
    "name": "a-name-so-long-that-no-mark-has-room-for-it",
    "quantity": 99,
    "station": {"transmitter_power": "5 W", "cable_loss": "3 dB", "wind_speed": "60 m/s"},
    "sheet": {"paper": "Letter", "projection": "third", "expected_yield": "yes"},
    "prices": {"currency": "EUR", "wire": 3.0, "sheet": 20.0, "blank": 4.0, "plug": 2.0},
    "tolerances": {
        "distribution": "uniform", "feed_gap": "0.1 mm", "wire": "0.1 mm", "bend_radius": "0.9 mm",
        "base": "2 mm", "lip_height": "2 mm", "lip_angle": "3 deg", "leg_spacing": "1 mm", "permittivity": 0.3,
        "model": 0.03,
    },
    "spacer": {"sets": 7},
    "wire_stock": {"cut_loss": "9 mm", "end_waste": "900 mm"},
}  # fmt: skip


def other(recipe: Recipe, table: str) -> Recipe:
    """The recipe with that table's values of OTHER."""
    asked = OTHER[table]
    if isinstance(asked, dict):
        model = getattr(recipe, table)
        read = type(model).model_validate(asked)
        asked = model.model_copy(update={key: getattr(read, key) for key in asked})
    return recipe.model_copy(update={table: asked})


@pytest.mark.parametrize("table", OTHER)
def test_what_is_left_out_of_the_key_refuses_no_design_and_changes_no_model(
    table: str, tmp_path: Path
) -> None:
    from wavejig.design import resolve
    from wavejig.field.from_design import model_from_design
    from wavejig.shop import inspect

    recipe = recipe_with(tmp_path)
    changed = other(recipe, table)
    assert changed != recipe
    assert cache.key(changed, "match", 0.05) == cache.key(recipe, "match", 0.05)
    # wires and sheet as drawn, and one that the shop refuses
    for values in ({}, {"side": 8.0, "standoff": 3.0}):
        before, after = (resolve(with_values(r, values)) for r in (recipe, changed))
        refused = [[f for f in inspect(d).findings if f.severity == "error"] for d in (before, after)]
        assert bool(refused[0]) == bool(values)
        assert refused[0] == refused[1]
        if not values:
            models = [model_from_design(d).to_dict() for d in (before, after)]
            assert models[0] == models[1]


def test_every_key_left_out_has_another_value_here() -> None:
    assert set(OTHER) == cache.NOT_PHYSICS | {"tolerances", "spacer", "wire_stock"}
    assert set(OTHER["tolerances"]) == cache.NOT_TOLERANCES  # type: ignore[arg-type]
    for table in ("station", "sheet"):  # nothing new has been put there unlooked at
        kind: Any = Recipe.model_fields[table].annotation
        assert set(OTHER[table]) == set(kind.model_fields)  # type: ignore[arg-type]


class Unread:
    """Whoever looks at it fails."""

    def __getattribute__(self, name: str) -> object:
        raise AssertionError(f"{name} was read")


def test_neither_findings_nor_models_look_at_mast_paper_or_money(tmp_path: Path) -> None:
    from dataclasses import replace

    from wavejig.design import resolve
    from wavejig.field.from_design import model_from_design
    from wavejig.shop import inspect

    unread: Any = Unread()
    blind = replace(resolve(recipe_with(tmp_path)), station=unread, sheet=unread, prices=unread)
    assert inspect(blind).can_be_made
    model_from_design(blind)


def test_everything_else_matters(tmp_path: Path) -> None:
    recipe = recipe_with(tmp_path)
    key = cache.key(recipe, "match", 0.05)
    wire = recipe.radiator.model_copy(
        update={"wire": recipe.radiator.wire.__class__(standard="diameter", number=1.81)}
    )
    assert cache.key(recipe.model_copy(update={"radiator": wire}), "match", 0.05) != key
    for table in Recipe.model_fields:
        if table in cache.NOT_PHYSICS:
            continue
        model = getattr(recipe, table)
        left_out = OTHER.get(table, {})
        for field in ["frequency"] if table == "measured" else type(model).model_fields:
            if field in left_out:  # type: ignore[operator]
                continue
            changed = model.model_copy(update={field: "something else"})
            with warnings.catch_warnings():
                warnings.simplefilter("ignore")  # pydantic remarks on the odd values put in
                assert cache.key(recipe.model_copy(update={table: changed}), "match", 0.05) != key, field


def test_a_spool_that_may_be_too_short_matters_with_its_waste(tmp_path: Path) -> None:
    def key(**lengths: float) -> str:
        model = recipe.wire_stock.model_copy(update=lengths)
        return cache.key(recipe.model_copy(update={"wire_stock": model}), "match", 0.05)

    recipe = recipe_with(tmp_path)
    assert len({key(), key(length=250.0), key(length=300.0), key(length=250.0, end_waste=10.0)}) == 4


def test_another_program_or_library_does_not_meet_it(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    recipe = recipe_with(tmp_path)
    cache.save(recipe, "match", 0.05, VALUES)
    monkeypatch.setattr(cache, "_program", lambda: "another")
    assert cache.load(recipe, "match", 0.05) is None


@pytest.mark.parametrize("content", ["", "{", "[]", '{"values": {"side": "x"}}', '{"values": {"side": NaN}}'])
def test_a_damaged_file_counts_as_absent(content: str, tmp_path: Path) -> None:
    recipe = recipe_with(tmp_path)
    cache.save(recipe, "match", 0.05, VALUES)
    (file,) = (cache.cache_folder() / "tuned").iterdir()
    file.write_text(content)
    assert cache.load(recipe, "match", 0.05) is None


def test_a_cache_that_cannot_be_written_stops_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    blocked = tmp_path / "file"
    blocked.write_text("not a folder")
    monkeypatch.setenv("WAVEJIG_CACHE", str(blocked))
    cache.save(recipe_with(tmp_path), "match", 0.05, VALUES)
    assert blocked.read_text() == "not a folder"


def test_check_takes_a_kept_answer_and_says_so(tmp_path: Path) -> None:
    recipe = recipe_with(tmp_path)
    assert settle.kept(recipe).how == "start"
    cache.save(recipe, settle.AIM, 0.05, {"side": 28.5})
    found = settle.kept(recipe)
    assert found.how == "kept"
    side = dict(found.design.values)["side"]
    assert (side.value, side.origin) == (28.5, "tuned")
    assert json.loads(
        (cache.cache_folder() / "tuned" / f"{cache.key(recipe, settle.AIM, 0.05)}.json").read_text()
    )
