"""`wavejig stock`: the stock tables."""

from __future__ import annotations

import argparse
import json
from typing import Any

from wavejig.commands.telling import OK, WRONG_INPUT, say, stop


def run(args: argparse.Namespace) -> int:
    """Print one table, or the list of them."""
    from wavejig.stock.show import list_tables, table_data, table_text
    from wavejig.stock.tables import UnknownTableError

    if args.table is None:
        say(json.dumps(list_tables(), indent=1) if args.json else _table_list(list_tables()))
        return OK
    try:
        say(json.dumps(table_data(args.table), indent=1) if args.json else table_text(args.table))
    except UnknownTableError as err:
        return stop(WRONG_INPUT, str(err))
    return OK


def _table_list(tables: list[dict[str, Any]]) -> str:
    width = max(len(t["name"]) for t in tables)
    return "\n".join(f"{t['name']:<{width}}  {t['title']} ({t['rows']} rows)" for t in tables)
