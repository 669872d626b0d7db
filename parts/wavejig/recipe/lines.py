"""Which line of a TOML text each key stands on (the standard reader gives values without places).

Assumes a text that `tomllib` has accepted, so it need not judge syntax, only walk it.
"""

from __future__ import annotations

import re

Key = tuple[str | int, ...]

_BARE = re.compile(r"[^ \t=.\]\n\r,}#]*")
_SPACE = re.compile(r"(?:[ \t]+|#[^\n]*)*")
_BLANK = re.compile(r"(?:[ \t\r\n]+|#[^\n]*)*")
_SCALAR = re.compile(r"[^,\]}#\n]*")
_QUOTED = {'"': re.compile(r'"(?:[^"\\]|\\.)*', re.DOTALL), "'": re.compile(r"'[^']*")}


def key_lines(text: str) -> dict[Key, int]:
    """Line (from 1) of every key and array element, by its path, as in ("radiator", "corners", 2)."""
    return _Walker(text).walk()


class _Walker:
    def __init__(self, text: str) -> None:
        self.text = text
        self.at = 0
        self.line = 1
        self.lines: dict[Key, int] = {}
        self.counts: dict[Key, int] = {}
        self.implied: dict[Key, int] = {}  # tables that only stand in the headers of tables below them

    def walk(self) -> dict[Key, int]:
        table: Key = ()
        while self._skip_blank(newlines=True):
            if self._peek() == "[":
                is_array = self.text.startswith("[[", self.at)
                self._advance(2 if is_array else 1)
                name = self._resolve(self._key("]"))
                if is_array:
                    index = self.counts.get(name, 0)
                    self.counts[name] = index + 1
                    self.lines.setdefault(name, self.line)
                    name = (*name, index)
                self.lines.setdefault(name, self.line)
                for n in range(1, len(name)):
                    self.implied.setdefault(name[:n], self.line)
                table = name
                self._advance(2 if is_array else 1)
            else:
                self._pair(table)
        return self.implied | self.lines

    def _resolve(self, name: Key) -> Key:
        """Point a header below an array of tables at the array's newest element."""
        out: Key = ()
        for i, part in enumerate(name):
            out = (*out, part)
            if i < len(name) - 1 and out in self.counts:
                out = (*out, self.counts[out] - 1)
        return out

    def _pair(self, table: Key) -> None:
        line = self.line
        key = (*table, *self._key("="))
        for n in range(len(table) + 1, len(key) + 1):
            self.lines.setdefault(key[:n], line)
        self._advance(1)  # the equals sign
        self._skip_blank(newlines=False)
        self._value(key)

    def _key(self, end: str) -> Key:
        parts: list[str] = []
        while True:
            self._skip_blank(newlines=False)
            c = self._peek()
            if c in "\"'":
                parts.append(self._string())
            elif c == end or not c:
                return tuple(parts)
            elif c == ".":
                self._advance(1)
            else:
                part = self._match(_BARE)
                if part:
                    parts.append(part)
                else:  # cannot happen in valid TOML; never loop for ever
                    self._advance(1)

    def _value(self, key: Key) -> None:
        c = self._peek()
        if c in ('"', "'"):
            self._string()
        elif c == "[":
            self._advance(1)
            index = 0
            while self._skip_blank(newlines=True) and self._peek() != "]":
                if self._peek() == ",":
                    self._advance(1)
                    continue
                self.lines[(*key, index)] = self.line
                self._value((*key, index))
                index += 1
            self._advance(1)
        elif c == "{":
            self._advance(1)
            while self._skip_blank(newlines=True) and self._peek() != "}":
                if self._peek() == ",":
                    self._advance(1)
                    continue
                self._pair(key)
            self._advance(1)
        elif not self._match(_SCALAR):
            self._advance(1)

    def _string(self) -> str:
        quote = self._peek()
        if self.text.startswith(quote * 3, self.at):
            start = self.at + 3
            end = start
            while True:
                end = self.text.find(quote * 3, end)
                if end < 0:
                    end = len(self.text)
                    break
                if quote == '"' and _escaped(self.text, end):
                    end += 1
                    continue
                break
            while self.text.startswith(quote, end + 3):  # a quote may stand right before the closing three
                end += 1
            self._advance(end + 3 - self.at)
            return self.text[start:end]
        return self._match(_QUOTED[quote], closing=1)[1:]

    def _skip_blank(self, *, newlines: bool) -> bool:
        """Pass over spaces and comments; False at the text's end."""
        self._match(_BLANK if newlines else _SPACE)
        return self.at < len(self.text)

    def _match(self, pattern: re.Pattern[str], closing: int = 0) -> str:
        """Pass over what matches here (and as many characters that close it), which may be nothing."""
        found = pattern.match(self.text, self.at)
        text = found[0] if found else ""
        self._advance(len(text) + closing)
        return text

    def _peek(self) -> str:
        return self.text[self.at : self.at + 1]

    def _advance(self, n: int) -> None:
        self.line += self.text.count("\n", self.at, self.at + n)
        self.at += n


def _escaped(text: str, at: int) -> bool:
    """Whether the character at `at` stands behind an odd run of backslashes."""
    n = 0
    while at - n - 1 >= 0 and text[at - n - 1] == "\\":
        n += 1
    return n % 2 == 1
