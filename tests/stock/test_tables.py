"""The stock tables are complete, sourced and read-only; broken ones are refused."""

from __future__ import annotations

import dataclasses
import math
import re
from typing import Any, get_args, get_type_hints

import pytest

from wavejig.stock import connectors, hardware, processes, sheet
from wavejig.stock.errors import StockError
from wavejig.stock.tables import UnknownTableError, parse_table, table, table_names

UNITS = {
    "",
    "mm",
    "in",
    "mm2",
    "ohm/km",
    "GPa",
    "MPa",
    "MS/m",
    "g/cm3",
    "V",
    "deg",
    "arcmin",
    "um",
    "C",
    "W/mK",
}

GOOD = """
title = "t"
source = "s"
note = "n"
columns = [{name = "a", unit = "mm", meaning = "m"}, {name = "b", unit = "", meaning = "m"}]
rows = [[1, "x"], [2.5, "y"]]
"""


def test_all_tables_are_listed() -> None:
    assert {"awg", "swg", "mm2", "metals", "tempers", "connectors", "printers"} <= set(table_names())
    assert list(table_names()) == sorted(set(table_names()))


@pytest.mark.parametrize("name", table_names())
def test_table_is_complete(name: str) -> None:
    found = table(name)
    assert found.name == name
    assert min(len(found.title), len(found.source), len(found.note)) > 4
    names = [column.name for column in found.columns]
    assert len(set(names)) == len(names)
    assert len(set(tuple(row.values()) for row in found.rows)) == len(found.rows), "a row is there twice"
    for column in found.columns:
        assert column.unit in UNITS, column
        assert column.meaning.strip()
    for row in found.rows:
        assert list(row) == names
        for cell in row.values():
            assert (cell != "" and cell == cell.strip()) if isinstance(cell, str) else math.isfinite(cell)


@pytest.mark.parametrize("name", table_names())
def test_every_row_has_a_source(name: str) -> None:
    found = table(name)
    by_row = "source" in {column.name for column in found.columns}
    assert by_row or not re.search(r"each row", found.source, re.IGNORECASE)


@pytest.mark.parametrize("name", table_names())
def test_units_in_column_names_agree_with_the_unit_stated(name: str) -> None:
    suffixes = {
        "_mm": "mm",
        "_in": "in",
        "_mm2": "mm2",
        "_gpa": "GPa",
        "_mpa": "MPa",
        "_deg": "deg",
        "_um": "um",
    }
    for column in table(name).columns:
        for suffix, unit in suffixes.items():
            if column.name.endswith(suffix):
                assert column.unit == unit, column


def test_rows_cannot_be_changed() -> None:
    row: Any = table("awg").rows[0]
    with pytest.raises(TypeError):
        row["gauge"] = 1
    with pytest.raises(dataclasses.FrozenInstanceError):
        table("awg").title = "other"  # type: ignore[misc]


def test_a_table_is_read_once() -> None:
    assert table("swg") is table("swg")


def test_unknown_table_names_the_nearest() -> None:
    with pytest.raises(KeyError) as caught:
        table("conectors")
    assert isinstance(caught.value, UnknownTableError)
    assert isinstance(caught.value, ValueError)
    text = str(caught.value)
    assert text.startswith('stock table: got "conectors", need one of ')
    assert text.endswith('Nearest: "connectors".')
    assert all(name in text for name in table_names())


def test_whole_numbers_beside_decimals_become_decimals() -> None:
    rows = parse_table("good", GOOD).rows
    assert [row["a"] for row in rows] == [1.0, 2.5]
    assert {type(row["a"]) for row in rows} == {float}


def test_rows_may_be_written_with_names() -> None:
    by_name = GOOD.replace('rows = [[1, "x"], [2.5, "y"]]', 'rows = [{b = "x", a = 1}, {a = 2.5, b = "y"}]')
    assert parse_table("good", by_name) == parse_table("good", GOOD)


@pytest.mark.parametrize(
    ("old", "new", "says"),
    [
        ('source = "s"', 'source = " "', "source is missing or empty"),
        ('title = "t"', "", "title is missing or empty"),
        ('note = "n"', "note = 3", "note is missing or empty"),
        ('note = "n"', 'note = "n"\nextra = 1', "got keys title, source, note, extra"),
        ('[1, "x"]', "[1]", "row 1: got 1 cells, need a, b"),
        ('[2.5, "y"]', '[2.5, "y", 3]', "row 2: got 3 cells, need a, b"),
        ('[2.5, "y"]', '[2.5, ""]', "row 2, b: got ''"),
        ("2.5", "nan", "row 2, a: got nan"),
        ("2.5", "inf", "row 2, a: got inf"),
        ("2.5", '"wide"', "column a: got int and str, need one kind"),
        ("2.5", "true", "column a: got bool and int, need one kind"),
        (', meaning = "m"}]', "}]", "each column needs name, unit and meaning"),
        ('rows = [[1, "x"], [2.5, "y"]]', "rows = []", "need title, source, note, columns and rows"),
        ('rows = [[1, "x"], [2.5, "y"]]', "rows = [{a = 1}]", "row 1: got a, need a, b"),
    ],
)
def test_broken_tables_are_refused(old: str, new: str, says: str) -> None:
    assert old in GOOD
    with pytest.raises(StockError, match=re.escape(says)):
        parse_table("bad", GOOD.replace(old, new))


@pytest.mark.parametrize(
    "records",
    [
        connectors.connectors,
        connectors.tubes,
        hardware.screws,
        processes.printers,
        processes.cutters,
        processes.foldings,
        processes.plastics,
        sheet.sheet_sizes,
    ],
    ids=lambda function: function.__name__,
)
def test_records_hold_what_their_types_say(records: Any) -> None:
    """The data files are untyped; the value types they fill are not."""
    for record in records():
        for name, kind in get_type_hints(type(record)).items():
            value = getattr(record, name)
            choices = get_args(kind)
            assert value in choices if choices else type(value) is kind, (record, name)
    names = [record.name for record in records()]
    assert len(set(names)) == len(names)
