"""Measured articles judged, explained and answered; on the circuit, so without a solve."""

from __future__ import annotations

import csv
import io
import json
import tomllib
from pathlib import Path

import numpy as np
import pytest

from tests.tuning import resonator
from tests.tuning.articles import near
from tests.tuning.test_found import swept
from wavejig.recipe.models import Recipe
from wavejig.tuning.advice import BENCH_LEVERS, RECIPE_LEVERS, propose
from wavejig.tuning.correction import NothingToWriteError, puts
from wavejig.tuning.measured import Measured, measure
from wavejig.tuning.measureddata import measured_data
from wavejig.tuning.measuredtext import measured_text
from wavejig.tuning.record import record_csv, record_text
from wavejig.tuning.sweepfile import MeasuredSweep

LONG = {"side": 0.42, "standoff": 0.1}


@pytest.fixture(scope="module")
def circuit() -> resonator.Explored:
    return resonator.explored(wide=True)[0]


def named(sweep: MeasuredSweep, serial: str) -> MeasuredSweep:
    return MeasuredSweep(
        path=Path(f"spare-{serial}.s1p"),
        serial=serial,
        frequencies_hz=sweep.frequencies_hz,
        reflection=sweep.reflection,
        reference_ohm=sweep.reference_ohm,
    )


def measured(
    sweeps: list[MeasuredSweep], readings: dict[str, float] | None = None
) -> tuple[Recipe, Measured]:
    recipe, article = near("boatshed-5g8")
    return recipe, measure(recipe, article, sweeps, readings or {}, resonator.Bench())


def test_a_long_article_is_explained_and_the_recipe_made_shorter(circuit: resonator.Explored) -> None:
    recipe, m = measured([swept(circuit, LONG)])
    article = m.articles[0]
    assert not article.passes
    assert article.as_found_db == pytest.approx(article.worst_db, abs=0.4)
    change = next(c for c in m.changes if c.key == "side")
    assert change.new < change.now
    assert round(change.new / 0.05, 6) == round(change.new / 0.05)  # on the grid a shop can hold
    assert m.after_db >= m.wanted_db
    assert abs(m.check_db) < 0.2
    text = measured_text(m)
    assert "fails by" in text and "recipe: side" in text
    assert recipe.radiator.measured_over == "centreline"
    written = {p.key: p for p in puts(recipe, m)}
    assert written["side"].value == f'"{change.new:g} mm"'
    assert "planted-5.s1p" in written["side"].remark
    assert 0.97 < float(written["frequency"].value) < 1.0
    assert json.loads(json.dumps(measured_data(m)))["articles"][0]["serial"] == "5"


def test_what_is_written_holds_what_was_measured(circuit: resonator.Explored) -> None:
    """Sizes left auto are pinned as they were: they would else be worked out anew, for another antenna."""
    recipe, m = measured([swept(circuit, LONG)])
    free = recipe.model_copy(update={"radiator": recipe.radiator.model_copy(update={"standoff": "auto"})})
    written = {p.key: p for p in puts(free, m)}
    changed = {c.key for c in m.changes}
    assert "standoff" in written
    if "standoff" not in changed:
        assert tomllib.loads(f"x = {written['standoff'].value}")["x"] == "6.45 mm"
        assert "as drawn" in written["standoff"].remark


def test_a_good_article_changes_no_size(circuit: resonator.Explored) -> None:
    recipe, m = measured([swept(circuit, {"side": 0.02})])
    assert m.articles[0].passes
    assert not m.changes
    assert {p.table for p in puts(recipe, m)} == {"measured"} | {
        p.table for p in puts(recipe, m) if "as drawn" in p.remark
    }


def test_a_strange_sweep_is_no_ground_for_a_change(circuit: resonator.Explored) -> None:
    sweep = swept(circuit, {})
    f = sweep.frequencies_hz
    odd = MeasuredSweep(
        path=sweep.path,
        serial="5",
        frequencies_hz=f,
        reflection=sweep.reflection + 0.25 * np.exp(-1j * f / 4e7),
        reference_ohm=50.0,
    )
    recipe, m = measured([odd])
    assert m.articles[0].strange
    assert "not explained" in measured_text(m)
    with pytest.raises(NothingToWriteError, match="no ground"):
        puts(recipe, m)


def test_readings_are_used_for_the_prediction(circuit: resonator.Explored) -> None:
    side = near("boatshed-5g8")[1].values["side"] + 0.3
    _, m = measured([swept(circuit, LONG)], {"side": side})
    article = m.articles[0]
    assert article.as_read_db is not None
    assert article.as_read_db < article.predicted_db  # a longer side misses the band
    assert "calliper readings" in measured_text(m)


def test_a_batch_is_listed_by_serial_and_its_worst_explained(circuit: resonator.Explored) -> None:
    sides = [0.0, 0.35, -0.05, 0.1, -0.4, 0.05]
    sweeps = [named(swept(circuit, {"side": s}, seed=i), str(12 - i)) for i, s in enumerate(sides)]
    _, m = measured(sweeps)
    text = measured_text(m)
    assert [a.passes for a in m.articles] == [a.worst_db >= m.wanted_db for a in m.articles]
    assert 0 < m.passing < 6
    listed = [line.split()[0] for line in text.splitlines() if ".s1p" in line and line.startswith("  ")][:6]
    assert listed == ["7", "8", "9", "10", "11", "12"]
    worst = min(m.articles, key=lambda a: a.worst_db)
    assert text.index(f"serial {worst.sweep.serial} ") < text.index("recipe:")
    assert "predicted:" in text
    rows = list(csv.DictReader(io.StringIO(record_csv(m))))
    assert [r["serial"] for r in rows] == [a.sweep.serial for a in m.articles]
    assert [r["verdict"] == "passes" for r in rows] == [a.passes for a in m.articles]
    record = record_text(m)
    assert f"{m.passing} of 6 pass" in record
    assert all(a.sweep.path.name in record for a in m.articles)


def test_a_model_off_in_frequency_shows_in_a_batch(circuit: resonator.Explored) -> None:
    """Six sweeps of articles about right in size, all 1 % low: the model's error, known far better than before."""
    rng = np.random.default_rng(6)
    sweeps = [
        named(swept(circuit, {"side": 0.1 * rng.standard_normal()}, share=-0.01, seed=i), str(i))
        for i in range(6)
    ]
    _, m = measured(sweeps)
    assert m.frequency == pytest.approx(0.99, abs=2.0 * m.frequency_error + 0.001)
    assert m.frequency_error < 0.006


def test_moves_are_no_larger_than_they_need_to_be(circuit: resonator.Explored) -> None:
    none = propose(circuit, {}, 0.0, RECIPE_LEVERS, 6.0)
    assert none.levers == ()
    assert none.after_db == none.before_db
    some = propose(circuit, {"side": 0.4}, 0.0, RECIPE_LEVERS, 14.0)
    assert [lever.key for lever in some.levers] == ["side"]
    assert -0.3 <= some.levers[0].move < 0.0  # 0.3 mm shorter is the best there is
    assert some.after_db >= 14.0 > some.before_db


def test_a_lever_that_would_short_the_feed_is_not_pulled(circuit: resonator.Explored) -> None:
    for keys in (RECIPE_LEVERS, BENCH_LEVERS):
        found = propose(circuit, {"side": -0.4, "standoff": 0.5}, 0.0, keys, 30.0)
        moved = {lever.key: circuit.article.values[lever.key] + lever.move for lever in found.levers}
        assert not circuit.article.moved(moved).conflicts
