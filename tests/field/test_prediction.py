"""Predictions: the figures against direct solves, the table, the picture, the pack's files."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from wavejig.design import resolve
from wavejig.design.model import Design
from wavejig.field.figures import prediction_data, prediction_text
from wavejig.field.from_design import model_from_design
from wavejig.field.model import Model
from wavejig.field.plot import PlotError, check_path, plot_prediction
from wavejig.field.prediction import Prediction, match_point, predict
from wavejig.field.solver import solve
from wavejig.files.errors import FileCheckError
from wavejig.files.fieldfiles import write_field
from wavejig.recipe import read_recipe
from wavejig.shop.predicted import prediction_findings

QUICK = Path(__file__).parents[2] / "recipes" / "boatshed-5g8.toml"


@pytest.fixture(scope="module")
def design() -> Design:
    return resolve(read_recipe(QUICK).recipe)


@pytest.fixture(scope="module")
def prediction(design: Design) -> Prediction:
    return predict(design)


def test_few_solves_say_what_many_would(design: Design, prediction: Prediction) -> None:
    """Against 21 frequencies solved one by one: the worst in the band, its ends and middle, the resonance."""
    assert prediction.solves <= 7
    f = np.linspace(design.target.band_low_hz, design.target.band_high_hz, 21)
    response = solve(model_from_design(design), f)
    loss = -20.0 * np.log10(np.abs(response.s11))
    assert prediction.worst.return_loss_db == pytest.approx(loss.min(), abs=0.02)
    for point, i in zip(prediction.points, (0, 10, 20), strict=True):
        assert abs(point.impedance_ohm - response.impedance_ohm[i]) < 0.05
        assert point.return_loss_db == pytest.approx(loss[i], abs=0.02)
    assert prediction.resonance_hz is not None
    at = solve(model_from_design(design), [prediction.resonance_hz])
    assert abs(at.impedance_ohm[0].imag) < 0.2
    assert prediction.gain_dbi == pytest.approx(response.gain_dbi([[0, 0, 1.0]])[10, 0], abs=0.01)


def test_a_measured_frequency_moves_the_prediction(design: Design, prediction: Prediction) -> None:
    """True frequencies 2 % above the solver's: the same curve, 2 % further up."""
    target = replace(design.target, frequency_factor=1.02)
    moved = predict(replace(design, target=target))
    assert moved.resonance_hz is not None and prediction.resonance_hz is not None
    assert moved.resonance_hz / prediction.resonance_hz == pytest.approx(1.02, abs=1e-4)
    assert moved.low_hz == prediction.low_hz
    assert moved.points[1].frequency_hz == prediction.points[1].frequency_hz
    direct = solve(model_from_design(design), [moved.low_hz / 1.02]).impedance_ohm[0]
    assert abs(moved.points[0].impedance_ohm - direct) < 0.05


def test_match_figures_by_hand() -> None:
    """100 or 25 ohm in 50 ohm: 9.5424 dB and a standing-wave ratio of 2 (closed form)."""
    for z in (100.0, 25.0):
        point = match_point(1e9, complex(z), 50.0)
        assert point.return_loss_db == pytest.approx(9.5424, abs=1e-4)
        assert point.standing_wave_ratio == pytest.approx(2.0, abs=1e-9)
    assert match_point(1e9, 50.0 + 0j, 50.0).return_loss_db == 60.0
    assert match_point(1e9, 0j, 50.0).standing_wave_ratio == np.inf


def test_a_missed_target_is_said_loudly(prediction: Prediction) -> None:
    assert not prediction.meets_target  # starting values do not reach 14 dB
    assert "MISSES 14 dB" in prediction_text(prediction)
    codes = [f.code for f in prediction_findings(prediction)]
    assert codes == ["prediction-misses"]
    assert prediction_data(prediction)["meets_target"] is False


def test_the_reference_plane_is_named(prediction: Prediction) -> None:
    assert "terminals" in prediction_data(prediction)["reference_plane"]
    assert prediction.reference_plane in prediction_text(prediction)


def test_field_files_read_back_and_alone_give_the_match(
    design: Design, prediction: Prediction, tmp_path: Path
) -> None:
    """From model.json alone, loaded and solved afresh, the match of match.s1p comes out again."""
    model = model_from_design(design)
    names = [name for name, _, _ in write_field(tmp_path / "field", model, prediction)]
    assert names == ["model.json", "match.s1p", "pattern.csv", "field.json"]
    rows = [
        [float(w) for w in line.split()]
        for line in (tmp_path / "field/match.s1p").read_text().splitlines()
        if line[0] not in "!#"
    ]
    f, real, imaginary = np.array(rows)[::80].T
    loaded = Model.load(tmp_path / "field/model.json")
    assert np.abs(solve(loaded, f).s11 - (real + 1j * imaginary)).max() < 2e-4
    data = json.loads((tmp_path / "field/field.json").read_text())
    assert data["solver"]["unknowns"] == prediction.unknowns
    pattern = (tmp_path / "field/pattern.csv").read_text().splitlines()
    assert len(pattern) == 1 + 2 * 361
    ahead = next(row for row in pattern if row.startswith("along-field,0,"))
    assert float(ahead.split(",")[2]) == pytest.approx(prediction.gain_dbi, abs=0.006)


def test_a_model_that_reads_back_otherwise_is_refused(
    design: Design, prediction: Prediction, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    model = model_from_design(design)
    save = Model.save

    def short(self: Model, path: Path) -> None:
        save(Model(wires=self.wires[:-1], triangles=self.triangles, ports=self.ports), path)

    monkeypatch.setattr(Model, "save", short)
    with pytest.raises(FileCheckError, match="another model"):
        write_field(tmp_path / "field", model, prediction)


@pytest.mark.parametrize("ending", [".png", ".svg", ".pdf"])
def test_the_picture_is_drawn_and_the_same_each_time(
    ending: str, prediction: Prediction, tmp_path: Path
) -> None:
    for name in ("a", "b"):
        plot_prediction(prediction, tmp_path / f"{name}{ending}")
    first, second = ((tmp_path / f"{n}{ending}").read_bytes() for n in "ab")
    assert first == second and len(first) > 10_000


def test_a_picture_of_no_known_kind_is_refused(tmp_path: Path) -> None:
    with pytest.raises(PlotError, match=r"\.png"):
        check_path(tmp_path / "match.doc")


def test_without_the_plotting_library_the_install_is_told(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    import sys

    monkeypatch.setitem(sys.modules, "matplotlib.figure", None)
    with pytest.raises(PlotError, match=r"pip install 'wavejig\[plot\]'"):
        check_path(tmp_path / "match.png")
