"""Puts numbers into a recipe's text, its remarks and layout kept.

Works on lines, then reads the result back: whatever else than the asked keys would have changed is refused.
"""

from __future__ import annotations

import contextlib
import os
import re
import tempfile
import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

# a table's header; a row of a list over several lines holds quotes or commas
_HEADER = re.compile(r"""\s*\[(?P<array>\[)?\s*(?P<name>[^\[\]"',]+?)\s*\]\]?\s*(#.*)?$""")


class EditError(ValueError):
    """A recipe whose text is laid out so that a key cannot be put in safely; the message says what to write."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Put:
    """One key to set. value: as TOML text, like '"31.2 mm"'; remark: one line, put above it."""

    table: str
    key: str
    value: str
    remark: str


def edited(text: str, puts: list[Put]) -> str:
    """The text with each key set. Raises EditError, and changes nothing else."""
    before = tomllib.loads(text)
    for put in puts:
        text = _put(text, put)
    try:
        after = tomllib.loads(text)
    except tomllib.TOMLDecodeError as err:
        raise _by_hand(puts) from err
    if after != _expected(before, puts):
        raise _by_hand(puts)
    return text


def edit_file(path: Path, puts: list[Put]) -> None:
    """As edited, on a file, whole or not at all; line ends and a leading mark stay as they are.

    Raises EditError, OSError.
    """
    raw = path.read_bytes()
    mark = b"\xef\xbb\xbf" if raw.startswith(b"\xef\xbb\xbf") else b""
    text = raw[len(mark) :].decode("utf-8")
    windows = "\r\n" in text
    text = edited(text.replace("\r\n", "\n"), puts)
    out = mark + (text.replace("\n", "\r\n") if windows else text).encode("utf-8")
    with _beside(path) as new:
        new.write_bytes(out)
        new.chmod(path.stat().st_mode & 0o777)
        new.replace(path)


@contextlib.contextmanager
def _beside(path: Path) -> Iterator[Path]:
    handle, name = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.resolve().parent)
    os.close(handle)
    new = Path(name)
    try:
        yield new
    finally:
        new.unlink(missing_ok=True)


def _put(text: str, put: Put) -> str:
    ending = text.endswith("\n") or not text
    lines = text.split("\n")
    if ending and lines and not lines[-1]:
        lines.pop()
    span = _table(lines, put.table)
    row = f"{put.key} = {put.value}"
    remark = f"# {put.key}: {put.remark}"
    if span is None:
        lines += ["", f"[{put.table}]", remark, row]
        return "\n".join(lines) + "\n"
    start, end = span
    at = _key_line(lines, start, end, put.key)
    if at is not None:
        lines[at] = _replaced(lines[at], put)
        if lines[at - 1].strip().startswith(f"# {put.key}: "):
            lines[at - 1] = remark  # the remark of an earlier measurement
        else:
            lines.insert(at, remark)
    else:
        place = _place(lines, start, end, put.key)
        lines[place:place] = [remark, row]
    return "\n".join(lines) + ("\n" if ending else "")


def _table(lines: list[str], name: str) -> tuple[int, int] | None:
    """Line numbers (from 0) of a table's header and of the first line after it; None without a header."""
    start = None
    for i, line in enumerate(lines):
        found = _HEADER.match(line)
        if not found:
            continue
        if start is not None:
            return start, i
        if not found["array"] and re.sub(r"\s", "", found["name"]) == name:
            start = i
    return None if start is None else (start, len(lines))


def _key_line(lines: list[str], start: int, end: int, key: str) -> int | None:
    wanted = re.compile(rf"""\s*["']?{re.escape(key)}["']?\s*=""")
    return next((i for i in range(start + 1, end) if wanted.match(lines[i])), None)


def _replaced(line: str, put: Put) -> str:
    """The line with a new value, its indent, its remark and the remark's column kept."""
    head, rest = line.split("=", 1)
    value, remark = _split_remark(rest)
    try:
        tomllib.loads(f"x = {value}")
    except tomllib.TOMLDecodeError as err:  # the value runs over several lines
        raise _by_hand([put]) from err
    space = rest[: len(rest) - len(rest.lstrip())] or " "
    new = f"{head}={space}{put.value}"
    if not remark:
        return new
    column = len(line) - len(remark)
    return new.ljust(column) + remark if len(new) < column else f"{new}  {remark}"


def _split_remark(rest: str) -> tuple[str, str]:
    quote = ""
    i = 0
    while i < len(rest):
        c = rest[i]
        if quote:
            if c == "\\" and quote == '"':
                i += 1
            elif c == quote:
                quote = ""
        elif c in "\"'":
            quote = c
        elif c == "#":
            return rest[:i].strip(), rest[i:]
        i += 1
    return rest.strip(), ""


def _place(lines: list[str], start: int, end: int, key: str) -> int:
    """Where a new key goes: below its line that is commented out, else below the table's last key."""
    hint = re.compile(rf"\s*#\s*{re.escape(key)}\s*=")
    for i in range(start + 1, end):
        if hint.match(lines[i]):
            return i + 1
    last = start
    depth = 0
    for i in range(start + 1, end):
        content = _split_remark(lines[i])[0]
        if content:
            depth += content.count("[") - content.count("]")
            last = i
    if depth != 0:
        raise EditError("the table's lists are laid out so that a key cannot be put in safely")
    return last + 1


def _expected(before: Mapping[str, Any], puts: list[Put]) -> dict[str, Any]:
    out: dict[str, Any] = {k: dict(v) if isinstance(v, dict) else v for k, v in before.items()}
    for put in puts:
        table = out.setdefault(put.table, {})
        if not isinstance(table, dict):
            raise _by_hand(puts)
        table[put.key] = tomllib.loads(f"x = {put.value}")["x"]
    return out


def _by_hand(puts: list[Put]) -> EditError:
    rows = "; ".join(f"[{p.table}] {p.key} = {p.value}" for p in puts)
    return EditError(f"the recipe is laid out so that it cannot be changed safely; write by hand: {rows}")
