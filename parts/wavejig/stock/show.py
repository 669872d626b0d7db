"""Stock tables as text to read and as plain data for programs."""

from __future__ import annotations

from typing import Any

from wavejig.stock.tables import Table, table, table_names

_WIDEST = 44
_PAGE = 118  # characters across; a usual terminal, a landscape sheet


def list_tables() -> list[dict[str, Any]]:
    """Name, title and number of rows of every table."""
    return [{"name": t.name, "title": t.title, "rows": len(t.rows)} for t in map(table, table_names())]


def table_data(name: str) -> dict[str, Any]:
    """One table as plain data. Raises UnknownTableError with the nearest spelling."""
    t = table(name)
    return {
        "name": t.name,
        "title": t.title,
        "source": t.source,
        "note": t.note,
        "columns": [{"name": c.name, "unit": c.unit, "meaning": c.meaning} for c in t.columns],
        "rows": [dict(row) for row in t.rows],
    }


def table_text(name: str) -> str:
    """One table to read: numbers to the right, long texts below the table. Raises UnknownTableError."""
    t = table(name)
    columns = [c for c in t.columns if c.name != "source"]
    heads = [c.name.removesuffix(f"_{c.unit}") if c.unit else c.name for c in columns]
    body = [[_cell(row[c.name]) for c in columns] for row in t.rows]
    units = [c.unit for c in columns]
    widths = [
        min(max(len(heads[i]), len(units[i]), *(len(row[i]) for row in body)), _WIDEST)
        for i in range(len(columns))
    ]
    numeric = [all(isinstance(row[c.name], int | float) for row in t.rows) for c in columns]

    def line(cells: list[str]) -> str:
        return "  ".join(
            c[:w].rjust(w) if n else c[:w].ljust(w) for c, w, n in zip(cells, widths, numeric, strict=True)
        ).rstrip()

    if sum(widths) + 2 * len(widths) > _PAGE:
        body_lines = _upright(heads, units, body)
    else:
        body_lines = [line(heads), line(units), *(line(row) for row in body)]
    out = [t.title, *body_lines, f"source: {t.source}"]
    if t.note:
        out.append(f"note: {t.note}")
    out += _row_sources(t)
    return "\n".join(out)


def _upright(heads: list[str], units: list[str], body: list[list[str]]) -> list[str]:
    """A wide table on its side: a line a column, rows side by side, as many as the page takes."""
    label = max(len(h) + len(u) + 3 for h, u in zip(heads, units, strict=True))
    out: list[str] = []
    at = 0
    while at < len(body):
        widths: list[int] = []
        end = at
        while end < len(body):
            width = max(len(c) for c in body[end])
            if widths and label + sum(widths) + width + 2 * (len(widths) + 1) > _PAGE:
                break
            widths.append(width)
            end += 1
        for i, (head, unit) in enumerate(zip(heads, units, strict=True)):
            name = f"{head} ({unit})" if unit else head
            cells = (row[i].rjust(w) for row, w in zip(body[at:end], widths, strict=True))
            out.append(f"{name:<{label}}  {'  '.join(cells)}")
        out.append("")
        at = end
    return out


def _row_sources(t: Table) -> list[str]:
    if "source" not in {c.name for c in t.columns}:
        return []
    first = t.columns[0].name
    return [f"  {row[first]}: {row['source']}" for row in t.rows if row["source"]]


def _cell(value: Any) -> str:
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float):
        return f"{value:.6g}"
    return str(value)
