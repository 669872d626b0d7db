"""How a recipe's faults are told: every one at once, each with file, line, key and the way out."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

_LONGEST_SHOWN = 60


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One fault: where it stands, what was read, what is allowed, what to do."""

    key: str
    read: str
    allowed: str
    fix: str
    line: int = 0

    def text(self, path: Path | str) -> str:
        """The fault as one message, `file:line: key: read ...; allowed ...; fix`."""
        where = f"{path}:{self.line}" if self.line else f"{path}"
        read = f" read {self.read};" if self.read else ""
        return f"{where}: {self.key}:{read} allowed: {self.allowed}. {self.fix}"


class RecipeError(ValueError):
    """A recipe that cannot be used; `problems` holds every fault found in one reading."""

    def __init__(self, path: Path | str, problems: Iterable[Problem]) -> None:
        self.path = path
        self.problems = tuple(sorted(problems, key=lambda p: (p.line, p.key)))
        super().__init__("\n".join(p.text(path) for p in self.problems))


def show(value: object) -> str:
    """A value as read, on one line, cut short, with control characters made visible."""
    text = f'"{value}"' if isinstance(value, str) else repr(value)
    text = "".join(c if c.isprintable() else f"\\x{ord(c):02x}" for c in text)
    return text if len(text) <= _LONGEST_SHOWN else text[: _LONGEST_SHOWN - 1] + "…"


def nearest(word: str, choices: Iterable[str]) -> str | None:
    """The choice spelt most like `word`, whatever its capitals, or None when none comes near."""
    options = {c.lower(): c for c in choices}
    found = difflib.get_close_matches(word.lower()[:80], list(options), n=1, cutoff=0.6)
    return options[found[0]] if found else None


def spelling_fix(word: str, choices: Iterable[str], otherwise: str) -> str:
    """`Did you mean "x"?` when a choice is near, else the given advice."""
    near = nearest(word, choices)
    return f'Did you mean "{near}"?' if near else otherwise
