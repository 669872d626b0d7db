"""The one error of the stock room, with its two ways of being helpful: nearest spelling, nearest number."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import pairwise


class StockError(ValueError):
    """A name or number that no stock table holds; the text lists what is allowed and the nearest."""


def nearest_name(name: str, allowed: Iterable[str]) -> str | None:
    """The allowed name spelt most like `name`, whatever its case; None when nothing is alike."""
    from difflib import get_close_matches  # only a failing look-up pays for loading it

    by_lower = {word.lower(): word for word in allowed}
    found = get_close_matches(name.lower(), by_lower, n=1, cutoff=0.4)
    return by_lower[found[0]] if found else None


def unknown_name(what: str, name: str, allowed: Sequence[str]) -> StockError:
    """Error for a name that is not in a table."""
    return StockError(unknown_name_text(what, name, allowed))


def unknown_name_text(what: str, name: str, allowed: Sequence[str]) -> str:
    """Text of `unknown_name`, for errors that are of another class too."""
    near = nearest_name(name, allowed)
    hint = f' Nearest: "{near}".' if near else ""
    return f'{what}: got "{name}", need one of {", ".join(allowed)}.{hint}'


def unknown_number(what: str, number: float, allowed: Sequence[float], unit: str = "") -> StockError:
    """Error for a number that is not in a table; a gauge number off its scale, for example."""
    ordered = sorted(allowed)
    near = min(ordered, key=lambda value: abs(value - number))
    listed = (
        f"{ordered[0]:g} to {ordered[-1]:g}" if _is_run(ordered) else ", ".join(f"{v:g}" for v in ordered)
    )
    tail = f" {unit}" if unit else ""
    return StockError(f"{what}: got {number:g}{tail}, need one of {listed}{tail}. Nearest: {near:g}{tail}.")


def _is_run(ordered: Sequence[float]) -> bool:
    """Whether the numbers are consecutive integers, which read better as a range."""
    return len(ordered) > 3 and all(b - a == 1 for a, b in pairwise(ordered))
