"""The yield on a pack's page: asked for by the recipe, and the same as the command's."""

from __future__ import annotations

import json
from collections.abc import Iterator
from concurrent.futures import Executor
from contextlib import contextmanager

import pytest

from tests.tuning import resonator
from tests.tuning.articles import near
from wavejig import pack
from wavejig.design import resolve
from wavejig.recipe.models import Recipe, Sheet
from wavejig.shop import inspect
from wavejig.tuning import solving, yields
from wavejig.tuning.asked import yield_of
from wavejig.tuning.yielddata import yield_data


@pytest.fixture(autouse=True)
def quick(monkeypatch: pytest.MonkeyPatch) -> None:
    """The circuit in place of the solver, and fewer virtual articles."""

    @contextmanager
    def workers(cluster: str | None = None) -> Iterator[Executor]:
        del cluster
        yield resonator.Bench()

    monkeypatch.setattr(solving, "workers", workers)
    find = yields.find_yield
    monkeypatch.setattr(yields, "find_yield", lambda *given: find(*given, articles=1000, share_points=256))


def asking(answer: str) -> Recipe:
    recipe = near("boatshed-5g8")[0]
    return recipe.model_copy(update={"sheet": Sheet(expected_yield=answer)})


def test_a_page_tells_the_yield_only_where_its_recipe_asks() -> None:
    said: list[str] = []
    recipe = asking("yes")
    inspection = inspect(resolve(recipe))
    told = pack._yields(recipe, inspection, said.append, said.append)
    assert told is not None
    assert told.quantity == 6
    assert any("solved" in s for s in said)
    with solving.workers() as executor:
        same = yield_of(recipe, inspection, executor)
    assert json.dumps(yield_data(told)) == json.dumps(yield_data(same))
    # the answer is kept by now, and still a recipe that does not ask gets none
    assert pack._yields(asking("no"), inspection, said.append, said.append) is None


def test_a_kept_surface_gives_the_same_yield_without_a_solve() -> None:
    recipe = asking("yes")
    inspection = inspect(resolve(recipe))
    said: list[list[str]] = [[], []]
    one, two = (pack._yields(recipe, inspection, s.append, s.append) for s in said)
    assert any("solved" in s for s in said[0])
    assert not any("solved" in s for s in said[1])
    assert one is not None and two is not None
    assert json.dumps(yield_data(one)) == json.dumps(yield_data(two))
