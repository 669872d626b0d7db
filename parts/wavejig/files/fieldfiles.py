"""The pack's field/ folder: the electromagnetic model, predicted match, pattern and figures. Kernel-free."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import numpy as np

from wavejig.field.figures import prediction_data
from wavejig.field.model import Model
from wavejig.field.prediction import Prediction
from wavejig.files.errors import FileCheckError
from wavejig.files.touchstone import check_s1p, write_s1p

PATTERN_COLUMNS = ("plane", "angle_deg", "gain_dbi", "co_dbi", "cross_dbi")
_SHOWN_FLOOR_DBI = -60.0  # an exact null has no logarithm


def write_field(folder: Path, model: Model, prediction: Prediction) -> tuple[tuple[str, str, str], ...]:
    """Write model.json, match.s1p, pattern.csv and field.json into `folder`, reading each back.

    Returns (name, kind, units) of each. Raises FileCheckError.
    """
    folder.mkdir(exist_ok=True)
    model.save(folder / "model.json")
    _check_model(folder / "model.json", model)
    p = prediction
    frequencies = np.round(p.frequencies_hz)
    remarks = (
        f"{p.design_name}: predicted, not measured",
        f"seen {p.reference_plane}",
    )
    write_s1p(folder / "match.s1p", frequencies, p.s11, p.reference_ohm, remarks)
    check_s1p(folder / "match.s1p", frequencies, p.s11, p.reference_ohm)
    rows = pattern_rows(p)
    _write_pattern(folder / "pattern.csv", rows)
    _check_pattern(folder / "pattern.csv", rows)
    data = prediction_data(p)
    text = json.dumps(data, indent=1) + "\n"
    (folder / "field.json").write_text(text, encoding="utf-8", newline="\n")
    if json.loads((folder / "field.json").read_text(encoding="utf-8")) != data:
        raise FileCheckError(folder / "field.json", "other figures", "the ones written")
    return (
        ("model.json", "json", "m"),
        ("match.s1p", "touchstone", "Hz"),
        ("pattern.csv", "csv", "deg"),
        ("field.json", "json", "Hz"),
    )


def pattern_rows(p: Prediction) -> list[tuple[str, str, str, str, str]]:
    """Both principal cuts at the band's middle, gain with losses, a row a degree."""
    lost = p.gain_dbi - p.pattern.axial_dbi
    rows = []
    for name, cut in (("along-field", p.pattern.e_plane), ("across-field", p.pattern.h_plane)):
        for angle, *levels in zip(cut.angles_deg, cut.total_dbi, cut.co_dbi, cut.cross_dbi, strict=True):
            shown = (f"{max(level + lost, _SHOWN_FLOOR_DBI) + 0.0:.2f}" for level in levels)
            rows.append((name, f"{angle:g}", *shown))
    return rows  # type: ignore[return-value]


def _write_pattern(path: Path, rows: list[tuple[str, str, str, str, str]]) -> None:
    with path.open("w", newline="", encoding="utf-8") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow(PATTERN_COLUMNS)
        writer.writerows(rows)


def _check_pattern(path: Path, rows: list[tuple[str, str, str, str, str]]) -> None:
    with path.open(newline="", encoding="utf-8") as stream:
        read = list(csv.reader(stream))
    if read[0] != list(PATTERN_COLUMNS) or read[1:] != [list(r) for r in rows]:
        raise FileCheckError(path, "other rows", "the ones written")


def _check_model(path: Path, model: Model) -> None:
    read = Model.load(path)
    same = (
        len(read.wires) == len(model.wires)
        and read.ports == model.ports
        and read.triangles.shape == model.triangles.shape
        and (not len(model.triangles) or float(np.abs(read.triangles - model.triangles).max()) < 1e-9)
    )
    if not same:
        raise FileCheckError(path, "another model", "the wires, triangles and ports written")
