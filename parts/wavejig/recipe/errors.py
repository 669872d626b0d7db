"""How a recipe's faults are told: every one at once, each with file, line, key and the way out."""

from __future__ import annotations

import difflib
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

_LONGEST_SHOWN = 60
_LONGEST_PART = 600  # of a message; what a recipe holds may be longer


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One fault: where it stands, what was read, what is allowed, what to do."""

    key: str
    read: str
    allowed: str
    fix: str
    line: int = 0

    def __post_init__(self) -> None:
        """Whatever of the file's text came along, a message is one line of letters a terminal only shows."""
        for name in ("key", "read", "allowed", "fix"):
            object.__setattr__(self, name, cut(visible(getattr(self, name)), _LONGEST_PART))

    def text(self, path: Path | str) -> str:
        """The fault as one message, `file:line: key: read ...; allowed ...; fix`."""
        name = visible(str(path))
        where = f"{name}:{self.line}" if self.line else name
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
    if isinstance(value, str):
        text = f'"{value}"'
    else:
        try:
            text = repr(value)
        except (RecursionError, ValueError):  # nested very deeply; an integer of thousands of digits
            text = f"a very long {type(value).__name__}"
    return cut(visible(text), _LONGEST_SHOWN)


def visible(text: str, keep: str = "") -> str:
    """The text with every character written out that a terminal would obey and not show.

    Those are control characters (colours, cursor moves), marks that turn the direction of writing, line
    separators, and halves of characters. keep: some of them that may stand, as a line feed.
    """
    if text.isprintable():
        return text
    return "".join(c if c.isprintable() or c in keep else _spelt(c) for c in text)


def _spelt(c: str) -> str:
    code = ord(c)
    return f"\\x{code:02x}" if code < 0x100 else f"\\u{code:04x}" if code < 0x10000 else f"\\U{code:08x}"


def cut(text: str, most: int) -> str:
    """The text, its end replaced by an ellipsis where it is longer than `most` characters."""
    return text if len(text) <= most else text[: most - 1] + "…"


def nearest(word: str, choices: Iterable[str]) -> str | None:
    """The choice spelt most like `word`, whatever its capitals, or None when none comes near."""
    options = {c.lower(): c for c in choices}
    found = difflib.get_close_matches(word.lower()[:80], list(options), n=1, cutoff=0.6)
    return options[found[0]] if found else None


def spelling_fix(word: str, choices: Iterable[str], otherwise: str) -> str:
    """`Did you mean "x"?` when a choice is near, else the given advice."""
    near = nearest(word, choices)
    return f'Did you mean "{near}"?' if near else otherwise
