"""bill-of-materials.csv: what a batch takes, for a spreadsheet; and its reading back.

A spreadsheet runs a cell that begins like a formula, and texts here come from recipes: none is left like that.
"""

from __future__ import annotations

import csv
from pathlib import Path

from wavejig.batch.model import Bill, BillLine
from wavejig.files.errors import FileCheckError
from wavejig.recipe.cells import FORMULA
from wavejig.recipe.cells import safe_cell as safe_cell

COLUMNS = (
    "line",
    "key",
    "item",
    "material",
    "size",
    "each",
    "count",
    "unit",
    "price",
    "cost",
    "currency",
    "remark",
)
TOTAL = "total"


def write_bill(bill: Bill, path: Path) -> None:
    """One row a line, then the total of the lines that have a price. Raises OSError."""
    with path.open("w", newline="", encoding="utf-8") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow(COLUMNS)
        for number, line in enumerate(bill.lines, start=1):
            writer.writerow(_row(str(number), line, bill.currency))
        if bill.total is not None:
            note = f"{bill.unpriced} lines have no price" if bill.unpriced else ""
            blank = [""] * 7
            writer.writerow((TOTAL, *blank, "", f"{bill.total:.2f}", safe_cell(bill.currency), note))


def check_bill(path: Path, bill: Bill) -> None:
    """Raise FileCheckError unless the file reads back line by line, holds no formula, and its costs add up."""
    with path.open(newline="", encoding="utf-8") as stream:
        rows = list(csv.DictReader(stream))
    total = next((row for row in rows if row["line"] == TOTAL), None)
    lines = [row for row in rows if row["line"] != TOTAL]
    if len(lines) != len(bill.lines):
        raise FileCheckError(path, f"{len(lines)} lines", f"{len(bill.lines)}")
    for row, line in zip(lines, bill.lines, strict=True):
        if (row["item"], float(row["count"])) != (safe_cell(line.item), line.count):
            raise FileCheckError(path, f"{row['item']}, {row['count']}", f"{line.item}, {line.count:g}")
        for cell in row.values():
            if cell.startswith(FORMULA):
                raise FileCheckError(path, f"a cell {cell!r}", "none that a spreadsheet runs")
    costs = [float(row["cost"]) for row in lines if row["cost"]]
    if (total is None) != (not costs) or (total and abs(float(total["cost"]) - sum(costs)) > 0.005):
        raise FileCheckError(path, f"a total of {total and total['cost']}", f"{sum(costs):.2f}")


def _row(number: str, line: BillLine, currency: str) -> tuple[str, ...]:
    price, cost = line.price, line.cost
    texts = (line.key, line.item, line.material, line.size)
    return (
        number,
        *(safe_cell(text) for text in texts),
        "" if line.each is None else f"{line.each:g}",
        repr(line.count) if isinstance(line.count, int) else f"{line.count:.3f}",
        line.unit,
        "" if price is None else f"{price:g}",
        "" if cost is None else f"{cost:.2f}",
        "" if cost is None else safe_cell(currency),
        safe_cell(line.remark),
    )
