"""Tuning: what is free, what it may reach, that the answer is deterministic and on its grid."""

from __future__ import annotations

import json
import os
import subprocess
import sys
import warnings
from pathlib import Path

import numpy as np
import pytest

from wavejig.cli import main
from wavejig.design import resolve
from wavejig.field.errors import ModelWarning
from wavejig.field.from_design import model_from_design
from wavejig.field.solver import solve
from wavejig.recipe import read_recipe
from wavejig.shop import inspect
from wavejig.tuning.candidates import CannotStartError, NothingFreeError, worst_return_loss_db
from wavejig.tuning.freedom import freedoms
from wavejig.tuning.tune import Tuned, tune
from wavejig.tuning.tuned import tuned_design

RECIPES = Path(__file__).parents[2] / "recipes"
# The smallest demo model: a tuning of it costs a few seconds.
QUICK = RECIPES / "boatshed-5g8.toml"


@pytest.fixture(scope="module")
def quick() -> Tuned:
    return tune(read_recipe(QUICK).recipe)


def changed(tmp_path: Path, *pairs: tuple[str, str], base: Path = QUICK) -> Path:
    text = base.read_text()
    for old, new in pairs:
        assert old in text, old
        text = text.replace(old, new, 1)
    path = tmp_path / "r.toml"
    path.write_text(text)
    return path


def in_band_worst(design: object, refine: float = 1.0) -> float:
    """By 21 direct solves of the whole band, without the tuning's few frequencies."""
    target = design.target  # type: ignore[attr-defined]
    f = np.linspace(target.band_low_hz, target.band_high_hz, 21)
    model = model_from_design(design, refine)  # type: ignore[arg-type]
    with warnings.catch_warnings():
        if refine > 1.0:  # segments shorter than the wire is thick: what a finer mesh is for
            warnings.simplefilter("ignore", ModelWarning)
        return worst_return_loss_db(solve(model, f).impedance_ohm, target.reference_ohm)


def test_the_answer_is_better_on_its_grid_and_can_be_made(quick: Tuned) -> None:
    assert quick.meets_target and quick.after.worst_db > quick.before.worst_db + 5.0
    assert quick.solves <= 40
    for f in quick.free:
        value = quick.values[f.name]
        assert abs(value / f.grid - round(value / f.grid)) < 1e-6, f.name
        assert f.follows or f.low - 1e-9 <= value <= f.high + 1e-9
    design = tuned_design(read_recipe(QUICK).recipe, quick.values)
    assert inspect(design).can_be_made
    origins = {name: v.origin for name, v in design.values}
    assert {origins[f.name] for f in quick.free} == {"tuned"}
    assert origins["inside_bend_radius"] != "tuned"


def test_what_it_says_is_what_the_whole_band_does(quick: Tuned) -> None:
    """The in-band worst from three frequencies against 21 solved ones, and on a mesh twice as fine."""
    design = tuned_design(read_recipe(QUICK).recipe, quick.values)
    coarse = in_band_worst(design)
    assert coarse == pytest.approx(quick.after.worst_db, abs=0.2)
    assert in_band_worst(design, 2.0) == pytest.approx(coarse, abs=0.5)


def test_a_given_number_is_left_alone(tmp_path: Path) -> None:
    path = changed(tmp_path, ("[feed]", 'standoff = "7.1 mm"\nlobe_angle = "84 deg"\n\n[feed]'))
    recipe = read_recipe(path).recipe
    names = {f.name for f in freedoms(recipe, resolve(recipe))}
    assert "standoff" not in names and "lobe_angle" not in names and "side" in names


def test_nothing_free(tmp_path: Path) -> None:
    keys = 'side = "12.6 mm"\nstandoff = "7.1 mm"\nlobe_angle = "84 deg"\nfeed_gap = "4 mm"\n\n[feed]'
    path = changed(tmp_path, ("[feed]", keys), ("[reflector]", '[reflector]\nbase = ["52 mm", "52 mm"]'))
    with pytest.raises(NothingFreeError):
        tune(read_recipe(path).recipe)


def test_a_start_that_cannot_be_made_is_told(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = changed(tmp_path, ("[feed]", 'inside_bend_radius = "9 mm"\n\n[feed]'))
    with pytest.raises(CannotStartError):
        tune(read_recipe(path).recipe)
    assert main(["tune", str(path)]) == 1
    assert "cannot be made as it starts" in capsys.readouterr().err


def test_two_processes_find_the_same_numbers(quick: Tuned, tmp_path: Path) -> None:
    """Another hash seed and one thread instead of two: the same values, to the last digit printed."""
    env = {**os.environ, "PYTHONHASHSEED": "11", "OPENBLAS_NUM_THREADS": "1", "NUMBA_NUM_THREADS": "1"}
    done = subprocess.run(
        [sys.executable, "-m", "wavejig", "tune", str(QUICK), "--json"],
        capture_output=True,
        text=True,
        env=env,
        check=True,
    )
    told = json.loads(done.stdout)[0]
    assert {k: v["after"] for k, v in told["values"].items()} == dict(quick.values)


def test_write_puts_the_values_in_and_keeps_the_remarks(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = changed(tmp_path)
    assert main(["tune", str(path), "--write"]) == 0
    text = path.read_text()
    for line in QUICK.read_text().splitlines():
        assert line in text
    capsys.readouterr()
    assert main(["tune", str(path)]) == 0
    assert "gives every number itself" not in capsys.readouterr().out
    assert main(["match", str(path), "--as-is", "--json"]) == 0
    assert json.loads(capsys.readouterr().out)[0]["meets_target"]


@pytest.mark.parametrize("grid", ["five", "0.05", "0 mm", "7 mm", "1 kg"])
def test_a_bad_grid_is_refused(grid: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["tune", str(QUICK), "--grid", grid]) == 2
    assert "--grid" in capsys.readouterr().err


def test_a_missed_target_says_by_how_much_and_what_would_help(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = changed(tmp_path, ('"14 dB"', '"39 dB"'))
    assert main(["tune", str(path), "--json"]) == 1
    told = json.loads(capsys.readouterr().out)[0]
    assert not told["meets_target"] and told["alternatives"]


@pytest.mark.slow
@pytest.mark.parametrize("path", sorted(RECIPES.glob("*.toml")), ids=lambda p: p.stem)
def test_every_demo_recipe_meets_its_target_on_a_finer_mesh_too(path: Path) -> None:
    recipe = read_recipe(path).recipe
    try:
        answer = tune(recipe)
    except NothingFreeError:
        design = resolve(recipe)
    else:
        assert answer.solves <= 40
        design = tuned_design(recipe, answer.values)
    coarse = in_band_worst(design)
    assert min(coarse, in_band_worst(design, 2.0)) >= design.target.return_loss_db
    for refine in (1.1, 1.25):  # every node elsewhere
        assert in_band_worst(design, refine) == pytest.approx(coarse, abs=0.5)
