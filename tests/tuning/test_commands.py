"""`wavejig yield` and `wavejig measured` from the command line: refusals, and the whole way (long)."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from jsonschema import Draft202012Validator

from tests.tuning.articles import near, plants
from wavejig.cli import main
from wavejig.files.schemas import schema
from wavejig.tuning.solving import workers

GIVEN = """\
name = "spare-5g8"
quantity = 6

[target]
band = ["5.725 GHz", "5.875 GHz"]
return_loss = "14 dB"

[radiator]
family = "biquad"
wire = "1.0 mm"
measured_over = "centreline"
side = "11.4 mm"          # tried
standoff = "6.45 mm"
feed_gap = "3.6 mm"
lobe_angle = "90 deg"

[feed]
style = "tube"
tube = "tube-2.2"

[reflector]
material = "laminate"
thickness = "1.6 mm"
base = ["52 mm", "52 mm"]

[cutter]
process = "waterjet"

[printer]
nozzle = "0.25 mm"
clearance = "0.15 mm"
"""


@pytest.fixture
def recipe(tmp_path: Path) -> Path:
    path = tmp_path / "spare.toml"
    path.write_text(GIVEN, encoding="utf-8")
    return path


def write_sweep(path: Path, f: np.ndarray, s: np.ndarray) -> Path:
    rows = "".join(f"{a / 1e6:.6f} {b.real:.7f} {b.imag:.7f}\n" for a, b in zip(f, s, strict=True))
    path.write_text("! spare\n# MHz S RI R 50\n" + rows, encoding="utf-8")
    return path


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["yield", "gone.toml"], "cannot be read"),
        (["yield", "RECIPE", "--plot", "y.gif"], ".png"),
        (["yield", "RECIPE", "RECIPE", "--plot", "y.png"], "one recipe at a time"),
        (["measured", "gone.toml", "a.s1p"], "cannot be read"),
        (["measured", "RECIPE", "gone.s1p"], "cannot be read"),
        (["measured", "RECIPE", "a.s1p", "--reading", "side=30.7"], "mm"),
        (
            ["measured", "RECIPE", "a.s1p", "--reading", "height=3mm"],
            "side, lobe_diameter, standoff, feed_gap",
        ),
        (["measured", "RECIPE", "a.s1p", "b.s1p", "--reading", "side=11.4mm"], "one article"),
        (["measured", "RECIPE", "a.s1p", "--record", "r.pdf"], ".csv or .txt"),
        (["measured", "RECIPE", "a.s1p", "--plot", "m.bmp"], ".png"),
        (["measured", "RECIPE", "a.s1p", "--report", "m.pdf"], ".html"),
    ],
    ids=lambda a: " ".join(a) if isinstance(a, list) else "",
)
def test_refusals_before_anything_is_solved(
    arguments: list[str], words: str, recipe: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert main([str(recipe) if a == "RECIPE" else a for a in arguments]) == 2
    assert words in capsys.readouterr().err


def test_a_short_is_met_with_a_message_and_no_fit(
    recipe: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    f = np.linspace(5.4e9, 6.2e9, 101)
    sweep = write_sweep(tmp_path / "x-1.s1p", f, -0.99 * np.exp(-1j * f / 1e9))
    assert main(["measured", str(recipe), str(sweep), "--json"]) == 2
    out = capsys.readouterr()
    assert "a short, an open" in out.err
    assert "a short, an open" in json.loads(out.out)["refused"][0]["error"]
    assert "deviations" not in out.out


def test_a_reading_of_something_else_is_refused(
    recipe: Path, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    f = np.linspace(5.4e9, 6.2e9, 101)
    sweep = write_sweep(tmp_path / "x-1.s1p", f, 0.3 * np.exp(-1j * f / 1e9))
    assert main(["measured", str(recipe), str(sweep), "--reading", "side=114mm"]) == 2
    assert "far from the 11.40 mm drawn" in capsys.readouterr().err


def run(*arguments: str, cache: Path | None = None) -> subprocess.CompletedProcess[str]:
    """A fresh process; cache: with kept answers of its own."""
    kept = {} if cache is None else {"WAVEJIG_CACHE": str(cache)}
    return subprocess.run(
        [sys.executable, "-m", "wavejig", *arguments], capture_output=True, text=True, check=False,
        env=os.environ | kept,
    )  # fmt: skip


@pytest.mark.slow
def test_yield_says_the_same_in_two_processes_and_from_what_is_kept(recipe: Path, tmp_path: Path) -> None:
    one = run("yield", str(recipe), "--json")
    two = run("yield", str(recipe), "--json", cache=tmp_path / "another")
    kept = run("yield", str(recipe), "--json")
    assert one.returncode == 0, one.stderr
    assert one.stdout == two.stdout == kept.stdout
    assert list(Draft202012Validator(schema("yield")).iter_errors(json.loads(one.stdout))) == []
    data = json.loads(one.stdout)[0]
    assert data["surface"]["solves"] <= 80
    assert data["articles"] == 20_000
    assert 0.0 < data["pass_fraction"]["value"] < data["pass_fraction_if_the_model_is_right"]["value"] < 1.0


@pytest.mark.slow
def test_measured_writes_what_mends_the_next(recipe: Path, tmp_path: Path) -> None:
    drawn, article = near("boatshed-5g8")
    with workers() as executor:
        planted = plants(drawn, article, executor, [("side",)] * 8)
    worst = int(np.argmax(np.abs(planted.deviations[:, planted.names.index("side")])))
    sweep = planted.sweep(worst, np.random.default_rng(3), noise_db=0.2)
    path = write_sweep(tmp_path / "first-1.s1p", sweep.frequencies_hz, sweep.reflection)
    picture, record = tmp_path / "m.png", tmp_path / "r.csv"
    page = tmp_path / "p.html"
    done = run(
        "measured", str(recipe), str(path), "--json", "--write", "--plot", str(picture), "--record", str(record),
        "--report", str(page),
    )  # fmt: skip
    assert done.returncode == 1, done.stderr  # it fails, and says so
    data = json.loads(done.stdout)
    assert list(Draft202012Validator(schema("measured")).iter_errors(data)) == []
    found = {d["key"]: d for d in data["articles"][0]["deviations"]}
    true = planted.deviations[worst, planted.names.index("side")]
    assert abs(found["side"]["value"] - true) < 0.1
    assert data["after_worst_return_loss_db"] >= 14.0
    after = recipe.read_text(encoding="utf-8")
    assert "first-1.s1p" in after and "# tried" in after
    change = next(c for c in data["recipe_changes"] if c["key"] == "side")
    assert f'side = "{change["new_mm"]:g} mm"' in after
    assert picture.stat().st_size > 10_000
    assert "serial 1, worst" in page.read_text(encoding="utf-8")
    assert record.read_text(encoding="utf-8").splitlines()[1].startswith("1,first-1.s1p,fails,")
    assert main(["check", str(recipe)]) == 0
