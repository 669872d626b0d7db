"""Tuning over families and bands: from VHF to the top of what recipes allow, legs and tube."""

from __future__ import annotations

from pathlib import Path

import pytest

from wavejig.recipe import read_recipe
from wavejig.tuning.tune import tune

RECIPE = """
name = "x"
[target]
band = ["{low}", "{high}"]
[radiator]
family = "{family}"
wire = "{wire}"
[feed]
style = "{style}"
tube = "{tube}"
[reflector]
material = "copper"
thickness = "1 mm"
[cutter]
stock_sheet = ["3000 mm", "3000 mm"]
[printer]
bed = ["300 mm", "300 mm", "300 mm"]
[spacer]
style = "{spacer}"
"""
CASES = [
    pytest.param("quad", "2.4 GHz", "2.5 GHz", "1.5 mm", "legs", "tube-3.6", "block", id="quad-legs"),
    pytest.param(
        "biquad", "144 MHz", "146 MHz", "4 mm", "tube", "tube-6.4", "posts", id="144MHz", marks=pytest.mark.slow
    ),
    pytest.param(
        "biquad", "3.3 GHz", "3.8 GHz", "1.5 mm", "tube", "tube-2.2", "block", id="wide", marks=pytest.mark.slow
    ),
    pytest.param(
        "twin-loop", "1.24 GHz", "1.3 GHz", "2 mm", "tube", "tube-3.6", "block", id="round",
        marks=pytest.mark.slow,
    ),
    pytest.param(
        "double-biquad", "868 MHz", "870 MHz", "2.5 mm", "tube", "tube-3.6", "block", id="four",
        marks=pytest.mark.slow,
    ),
]  # fmt: skip


@pytest.mark.parametrize(("family", "low", "high", "wire", "style", "tube", "spacer"), CASES)
def test_every_family_and_band_gets_better(
    family: str, low: str, high: str, wire: str, style: str, tube: str, spacer: str, tmp_path: Path
) -> None:
    path = tmp_path / "r.toml"
    text = RECIPE.format(family=family, low=low, high=high, wire=wire, style=style, tube=tube, spacer=spacer)
    path.write_text(text)
    answer = tune(read_recipe(path).recipe)
    assert answer.after.worst_db > answer.before.worst_db + 3.0
    assert answer.solves <= 40
    assert answer.after.gain_dbi > answer.before.gain_dbi - 0.5
