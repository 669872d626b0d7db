"""Completion in the shell: commands, options, stock tables, recipe and sweep files.

The shell asks by running wavejig with _ARGCOMPLETE set; in any other run nothing of this is loaded.
"""

from __future__ import annotations

import argparse
import os

from wavejig.commands.arguments import actions

ASKED = "_ARGCOMPLETE"
_ENDINGS = {"recipes": ("toml",), "recipe": ("toml",), "sweeps": ("s1p", "s2p")}  # of files, by argument


def complete(parser: argparse.ArgumentParser) -> None:
    """Answer the shell and end, if it is the shell that asks; else nothing. Needs the extra `completion`."""
    if ASKED not in os.environ:
        return
    try:
        from argcomplete import autocomplete
        from argcomplete.completers import FilesCompleter
    except ImportError:
        return  # a shell in the middle of a line has no place for a message
    for action in actions(parser):
        if action.dest in _ENDINGS:
            action.completer = FilesCompleter(allowednames=_ENDINGS[action.dest])  # type: ignore[attr-defined]
        elif action.dest == "table":
            action.completer = _tables  # type: ignore[attr-defined]
    autocomplete(parser)


def _tables(**_: object) -> tuple[str, ...]:
    from wavejig.stock.tables import table_names

    return table_names()
