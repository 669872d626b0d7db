"""How the loops are compiled: kept on disk, free of the interpreter, no checks of division."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from numba import njit

# Contractions and reciprocals change the last bits only, and the same way on every run.
CAREFUL = frozenset({"contract", "nsz", "arcp"})
REORDERED = CAREFUL | {"reassoc"}  # sums over long rows may be added in vector order

Loop = Callable[..., Any]


def compiled(fastmath: frozenset[str] = CAREFUL) -> Callable[[Loop], Loop]:
    """A decorator: compile at the first call; a later process reads the result from disk."""

    def decorate(function: Loop) -> Loop:
        options = {"nogil": True, "error_model": "numpy", "fastmath": set(fastmath)}
        try:
            made: Loop = njit(cache=True, **options)(function)
        except RuntimeError:  # no folder that could keep the compiled code: compile in each process
            made = njit(**options)(function)
        return made

    return decorate
