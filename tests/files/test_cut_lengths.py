"""One length to cut, wherever it is told: a tube's holds the inner conductor that is bared of it."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import pytest
from tests.designs import design

from wavejig.files.design_json import check_design_json, design_data, write_design_json
from wavejig.files.errors import FileCheckError
from wavejig.files.making_json import Made
from wavejig.files.tables import check_bend_table, write_bend_table
from wavejig.radiator.stock import bought_length_mm
from wavejig.reflector.flat import flat_pattern
from wavejig.shop import inspect


@pytest.mark.parametrize("feed", ["tube", "legs"])
def test_design_and_bend_table_tell_the_length_to_cut(feed: str, tmp_path: Path) -> None:
    d = design(feed={"style": feed})
    found = inspect(d)
    assert found.radiator and found.tray and found.fixture and found.spacer
    off = {p.name: 1.0 for p in found.spacer.pieces}
    made = Made(lift_outs=(), withdrawals=(), hold_downs_off=off, posts=None, prints=())
    pattern = flat_pattern(found.tray, d.name)
    data = design_data(d, found.radiator, pattern, found.fixture, found.spacer, (), made)
    table = tmp_path / "bends.csv"
    write_bend_table(found.radiator, table)
    check_bend_table(table, found.radiator)
    with table.open(newline="") as stream:
        rows = {row["piece"]: row for row in csv.DictReader(stream)}
    for piece, told in zip(
        found.radiator.pieces, (data["radiator"], *data["radiator"]["pieces"]), strict=True
    ):
        to_cut = bought_length_mm(found.radiator, piece)
        assert told["cut_length"] == pytest.approx(to_cut, abs=1e-6)
        assert float(rows[piece.role]["cut_length_mm"]) == pytest.approx(to_cut, abs=6e-4)
    pieces = {p["role"]: p for p in data["radiator"]["pieces"]}
    if feed == "tube":
        tube, inner = pieces["tube"], pieces["inner"]
        assert tube["bared"] == inner["developed_length"] > 0.0 and inner["part_of"] == "tube"
        assert tube["cut_length"] == pytest.approx(tube["developed_length"] + inner["developed_length"])
        # the wall alone, as a length to cut, is refused by the second reader
        tube["cut_length"] = tube["developed_length"]
        write_design_json(data, tmp_path / "design.json")
        with pytest.raises(FileCheckError, match="cut length"):
            check_design_json(tmp_path / "design.json", json.loads(json.dumps(data)))
    else:
        assert all(p["bared"] == 0.0 and p["part_of"] is None for p in pieces.values())
