"""Reader of the stock tables: TOML files in data/, each with its title, source, columns and rows.

A file holds `title`, `source`, `note`, `columns` (name, unit, meaning) and `rows`. A row is written
either as an array in the order of the columns or, where rows are long, as a table with the columns' names.
A table whose rows come from different places has a column called `source` besides.
"""

from __future__ import annotations

import math
import tomllib
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Any, TypeVar

from wavejig.stock.errors import StockError, unknown_name_text

Cell = str | int | float | bool
Row = Mapping[str, Cell]
Record = TypeVar("Record")


class UnknownTableError(StockError, KeyError):
    """No stock table of that name."""

    def __str__(self) -> str:
        # KeyError would show the text in quotes
        return str(self.args[0])


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """One column: its key in each row, its unit ("" = none) and what the figure means."""

    name: str
    unit: str
    meaning: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """One stock table; `rows` are read-only mappings from column name to cell."""

    name: str
    title: str
    source: str
    note: str
    columns: tuple[Column, ...]
    rows: tuple[Row, ...]


@cache
def table_names() -> tuple[str, ...]:
    """Names of all stock tables, in alphabetical order. Reads no table."""
    return tuple(
        sorted(
            entry.name.removesuffix(".toml") for entry in _data().iterdir() if entry.name.endswith(".toml")
        )
    )


@cache
def table(name: str) -> Table:
    """The stock table `name`, read once.

    Raises UnknownTableError (a KeyError and a ValueError) for another name; StockError when the file
    itself is incomplete: a cell missing or of another kind than the rest of its column, no source.
    """
    if name not in table_names():
        raise UnknownTableError(unknown_name_text("stock table", name, table_names()))
    return parse_table(name, (_data() / f"{name}.toml").read_text(encoding="utf-8"))


def parse_table(name: str, text: str) -> Table:
    """A table from the text of its file; see the module docstring. Raises StockError as `table`."""
    raw = tomllib.loads(text)
    for key in ("title", "source", "note"):
        if not isinstance(raw.get(key), str) or not raw[key].strip():
            raise StockError(f"stock table {name}: {key} is missing or empty; write it as text.")
    unused = sorted(set(raw) - {"title", "source", "note", "columns", "rows"})
    if unused or not raw.get("columns") or not raw.get("rows"):
        raise StockError(
            f"stock table {name}: got keys {', '.join(raw)}, need title, source, note, columns and rows."
        )
    try:
        columns = tuple(Column(**column) for column in raw["columns"])
    except TypeError as err:
        raise StockError(f"stock table {name}: each column needs name, unit and meaning ({err}).") from err
    names = [column.name for column in columns]
    rows = [_row(name, number, names, row) for number, row in enumerate(raw["rows"], start=1)]
    for column in names:
        _settle_kind(name, column, rows)
    return Table(
        name=name,
        title=raw["title"],
        source=raw["source"],
        note=raw["note"],
        columns=columns,
        rows=tuple(MappingProxyType(row) for row in rows),
    )


def records(name: str, make: Callable[..., Record]) -> tuple[Record, ...]:
    """Every row of a table as a value made by `make`, whose keywords are the columns' names."""
    return tuple(make(**row) for row in table(name).rows)


def column(name: str, key: str) -> tuple[Any, ...]:
    """One column of a table, top to bottom."""
    return tuple(row[key] for row in table(name).rows)


def _data() -> Any:
    return files("wavejig.stock") / "data"


def _row(name: str, number: int, names: list[str], row: Any) -> dict[str, Cell]:
    """One row as a dictionary in the order of the columns, or an error that names it."""
    if isinstance(row, list) and len(row) == len(names):
        cells = dict(zip(names, row, strict=True))
    elif isinstance(row, dict) and set(row) == set(names):
        cells = {key: row[key] for key in names}
    else:
        got = f"{len(row)} cells" if isinstance(row, list) else ", ".join(row)
        raise StockError(f"stock table {name}, row {number}: got {got}, need {', '.join(names)}.")
    for key, cell in cells.items():
        sound = bool(cell) if isinstance(cell, str) else isinstance(cell, int | float) and math.isfinite(cell)
        if not sound:
            raise StockError(f"stock table {name}, row {number}, {key}: got {cell!r}, need text or a number.")
    return cells


def _settle_kind(name: str, key: str, rows: list[dict[str, Cell]]) -> None:
    """Make a column's cells one kind: whole numbers become decimals beside decimals; else an error."""
    kinds = {type(row[key]) for row in rows}
    if kinds == {int, float}:
        for row in rows:
            row[key] = float(row[key])
    elif len(kinds) > 1:
        found = " and ".join(sorted(kind.__name__ for kind in kinds))
        raise StockError(f"stock table {name}, column {key}: got {found}, need one kind in all rows.")
