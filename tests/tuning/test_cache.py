"""Kept answers: found again, never for another recipe, program or library."""

from __future__ import annotations

import json
import warnings
from pathlib import Path

import pytest

from tests.recipe.bad_recipes import GOOD
from wavejig.recipe import read_recipe
from wavejig.recipe.models import Recipe
from wavejig.tuning import cache, settle

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


def test_name_and_quantity_do_not_matter_but_everything_else_does(tmp_path: Path) -> None:
    recipe = recipe_with(tmp_path)
    key = cache.key(recipe, "match", 0.05)
    assert cache.key(recipe.model_copy(update={"name": "other", "quantity": 99}), "match", 0.05) == key
    wire = recipe.radiator.model_copy(
        update={"wire": recipe.radiator.wire.__class__(standard="diameter", number=1.81)}
    )
    assert cache.key(recipe.model_copy(update={"radiator": wire}), "match", 0.05) != key
    for table in Recipe.model_fields:
        if table in ("name", "quantity", "station", "sheet", "prices", "wire_stock"):
            continue
        model = getattr(recipe, table)
        for field in ["frequency"] if table == "measured" else type(model).model_fields:
            other = model.model_copy(update={field: "something else"})
            with warnings.catch_warnings():
                warnings.simplefilter("ignore")  # pydantic remarks on the odd values put in
                assert cache.key(recipe.model_copy(update={table: other}), "match", 0.05) != key, field


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
