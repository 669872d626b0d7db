"""Names of pieces as files can carry them. Pure text."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable


def clean_name(name: str) -> str:
    """The name with every character that has no picture replaced by "_".

    Control and format characters, line breaks, lone surrogates and code points without a character are
    illegal in XML 1.0 or upset readers; all else stays. An empty name becomes "_".
    """
    out = "".join("_" if unicodedata.category(c) in ("Cc", "Cf", "Cn", "Cs", "Zl", "Zp") else c for c in name)
    return out.strip() or "_"


def ascii_name(name: str) -> str:
    """`clean_name` in printable ASCII: accents dropped, anything else foreign becomes "_"."""
    plain = unicodedata.normalize("NFKD", clean_name(name))
    plain = "".join(c for c in plain if not unicodedata.combining(c))
    return "".join(c if " " <= c <= "~" else "_" for c in plain)


def clean_unique_names(names: Iterable[str], what: str) -> tuple[str, ...]:
    """All names cleaned. Raises ValueError when there is none, or two come out alike: a reader needs both."""
    cleaned = tuple(clean_name(name) for name in names)
    twice = sorted({name for name in cleaned if cleaned.count(name) > 1})
    if not cleaned or twice:
        got = f"{twice[0]!r} twice" if twice else "no piece at all"
        raise ValueError(f"{what}: got {got}, need at least one piece and a name of its own for each.")
    return cleaned
