"""A change that only the shop's limits can see is tuned again without a solve, to what a tuning from nothing gives."""

from __future__ import annotations

from pathlib import Path
from types import SimpleNamespace
from typing import Any

import numpy as np
import pytest

from tests.yard import YARD
from wavejig.design.model import Design
from wavejig.recipe import read_recipe
from wavejig.recipe.models import Recipe
from wavejig.tuning import cache
from wavejig.tuning.keptsolves import kept_solve, solving_anew
from wavejig.tuning.settle import settle

FREE = YARD.replace('side = "12.85 mm"\n', "").replace('standoff = "9.7 mm"\n', "")


@pytest.fixture
def solves(monkeypatch: pytest.MonkeyPatch) -> list[str]:
    """The solver replaced by a resonant circuit of the wire's sizes; gives what it was asked, in order."""
    asked: list[str] = []

    def model_from_design(design: Design) -> Any:
        sizes = {name: value.value for name, value in design.values if name in ("side", "standoff")}
        return SimpleNamespace(to_dict=lambda: sizes, design=design, **sizes)

    def solve(model: Any, frequencies_hz: np.ndarray, announce: Any = None) -> Any:
        asked.append(f"{model.side} {model.standoff}")
        off = frequencies_hz / 5.8e9 * model.side / 12.7 - 1.0
        z = 50.0 * (model.standoff / 9.4) ** 1.5 + 900j * off
        return SimpleNamespace(
            impedance_ohm=z, gain_dbi=lambda _: np.full((len(z), 1), 9.0 - abs(model.standoff - 9.0) / 9.0)
        )

    monkeypatch.setattr("wavejig.field.from_design.model_from_design", model_from_design)
    monkeypatch.setattr("wavejig.field.solver.solve", solve)
    return asked


def recipe(folder: Path, text: str) -> Recipe:
    path = folder / "r.toml"
    path.write_text(text)
    return read_recipe(path).recipe


def test_another_spacer_asks_for_no_solve(solves: list[str], tmp_path: Path) -> None:
    first = settle(recipe(tmp_path, FREE))
    assert first.how == "tuned" and len(solves) > 5
    solves.clear()
    other = recipe(tmp_path, FREE + '[spacer]\nmaterial = "ASA"\n')
    second = settle(other)
    assert second.how == "tuned" and solves == []  # looked for anew, and nothing solved for it
    again = settle(other, anew=True)
    assert again.how == "tuned" and len(solves) > 5
    assert first.tuned and second.tuned and again.tuned
    assert second.tuned.values == again.tuned.values == first.tuned.values
    assert second.tuned.after.worst_db == again.tuned.after.worst_db


def test_a_solve_comes_back_to_the_last_bit() -> None:
    f = np.array([5.7e9, 5.8e9])
    answer = np.array([1.0 / 3.0 - 1e-17j, complex(np.nextafter(50.0, 51.0), -0.0)]), 0.1 + 0.2
    model: Any = SimpleNamespace(to_dict=lambda: {"wires": [0.1 + 0.2]})
    other: Any = SimpleNamespace(to_dict=lambda: {"wires": [0.3]})

    def never() -> Any:
        raise AssertionError

    kept_solve(model, f, lambda: answer)
    z, gain = kept_solve(model, f, never)
    assert z.tobytes() == answer[0].tobytes() and gain == answer[1]
    for asked, at in ((other, f), (model, f + 1e-6), (model, f[:1])):
        with pytest.raises(AssertionError):
            kept_solve(asked, at, never)
    with solving_anew(True), pytest.raises(AssertionError):
        kept_solve(model, f, never)
    kept_solve(model, f, never)


@pytest.mark.parametrize("text", ["", "[]", "{}", '{"impedance_ohm": [[1, 2]], "gain_dbi": 3}',
                                  '{"impedance_ohm": [[1, 2], [NaN, 0]], "gain_dbi": 3}'])  # fmt: skip
def test_what_is_no_solve_is_solved_again(text: str) -> None:
    f = np.array([5.7e9, 5.8e9])
    model: Any = SimpleNamespace(to_dict=lambda: {})
    kept_solve(model, f, lambda: (np.array([1j, 2j]), 1.0))
    (file,) = (cache.cache_folder() / "points").iterdir()
    file.write_text(text)
    assert kept_solve(model, f, lambda: (np.array([3j, 4j]), 2.0))[1] == 2.0
