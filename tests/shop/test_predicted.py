"""Findings on a prediction: each raised by the prediction that should raise it, and by no other."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from wavejig.design import resolve
from wavejig.field.errors import Remark
from wavejig.field.prediction import Prediction, predict
from wavejig.recipe import read_recipe
from wavejig.shop.predicted import prediction_findings

RIDGE = Path(__file__).parents[2] / "recipes" / "ridge-868.toml"


@pytest.fixture(scope="module")
def good() -> Prediction:
    return predict(resolve(read_recipe(RIDGE).recipe))


def codes(p: Prediction) -> list[tuple[str, str]]:
    return [(f.code, f.severity) for f in prediction_findings(p)]


def test_a_good_prediction_has_none(good: Prediction) -> None:
    assert codes(good) == []


def test_a_missed_target_names_both_figures_and_the_frequency(good: Prediction) -> None:
    (finding,) = prediction_findings(replace(good, wanted_db=28.0))
    assert (finding.code, finding.severity) == ("prediction-misses", "warning")
    assert f"{good.worst.return_loss_db:.1f} dB" in finding.message and "28 dB" in finding.message
    assert "863.0 MHz" in finding.message and "tune" in finding.remedy


def test_power_that_does_not_add_up_is_told(good: Prediction) -> None:
    assert codes(replace(good, power_balance=(1.0, 0.985))) == [("prediction-unbalanced", "warning")]
    assert codes(replace(good, power_balance=(1.0, 0.991))) == []


def test_the_solver_s_remarks_are_passed_on(good: Prediction) -> None:
    remark = Remark(code="thick wire", severity="warning", message="a test's own")
    assert codes(replace(good, remarks=(remark,))) == [("prediction-less-sure", "note")]
