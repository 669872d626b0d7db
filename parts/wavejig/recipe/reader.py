"""Reads a recipe file: bytes to text, text to TOML, TOML to the frozen models, faults to Problems."""

from __future__ import annotations

import functools
import re
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from pydantic import BaseModel, ValidationError

from wavejig.recipe.errors import Problem, RecipeError, show, spelling_fix, visible
from wavejig.recipe.lines import Key, key_lines
from wavejig.recipe.models import Recipe
from wavejig.recipe.plainfile import read_plain

# A recipe with 120 corners and 200 holes, all commented, is under 40 kB; more is not a recipe.
MOST_BYTES = 256 * 1024
# Told at once; more of them come from a file that is no recipe at all, and nobody would read them.
_MOST_PROBLEMS = 40
_MOST_COMMAS = 20_000  # of a recipe's longest lists, 200 holes and 120 corners, there are under 2,000
# Our keys have three parts at most (`feed.calliper.nut`). The standard reader's time grows with the square of
# their number, so that a key of a hundred thousand parts would keep it busy for hours.
_MARKS = (
    (b"\xff\xfe\0\0", "UTF-32"),
    (b"\0\0\xfe\xff", "UTF-32"),
    (b"\xff\xfe", "UTF-16"),
    (b"\xfe\xff", "UTF-16"),
)
_PART = r"""(?:[A-Za-z0-9_-]+|"[^"\n]*"|'[^'\n]*')"""
_BARE = re.compile(r"[A-Za-z0-9_-]+")
_ENDLESS_KEY = re.compile(rf"(?:^|[\[{{,])[ \t]*{_PART}(?:[ \t]*\.[ \t]*{_PART}){{20}}", re.MULTILINE)


@dataclass(frozen=True, slots=True, kw_only=True)
class RecipeFile:
    """A recipe as read, with the line of each key so that later faults can point at it."""

    path: Path
    recipe: Recipe
    lines: Mapping[Key, int]

    def line_of(self, key: str) -> int:
        """Line of the dotted `key`, or of the nearest table above it; 0 when neither is written."""
        parts: Key = tuple(int(p) if p.isdigit() else p for p in re.findall(r"[^.\[\]]+", key))
        while parts:
            if parts in self.lines:
                return self.lines[parts]
            parts = parts[:-1]
        return 0

    def error(self, problems: Iterable[Problem]) -> RecipeError:
        """The given problems as one error, each with its line."""
        return RecipeError(
            self.path,
            [
                Problem(
                    key=p.key,
                    read=p.read,
                    allowed=p.allowed,
                    fix=p.fix,
                    line=p.line or self.line_of(p.key) or 1,
                )
                for p in problems
            ],
        )


def read_recipe(path: Path) -> RecipeFile:
    """The recipe in `path`.

    Raises RecipeError with every fault of the text at once; OSError when the file cannot be read.
    """
    text = _text(path)
    if text.count(",") > _MOST_COMMAS:
        raise RecipeError(
            path, [_whole("lists of very many values", "lists as a recipe has them", "Shorten them.")]
        )
    endless = _ENDLESS_KEY.search(text)
    if endless:
        line = text.count("\n", 0, endless.end()) + 1
        raise RecipeError(
            path, [_whole("a key of very many parts", "keys of up to three parts", "Shorten it.", line)]
        )
    try:
        data = tomllib.loads(text)
    except tomllib.TOMLDecodeError as err:
        raise RecipeError(path, [_syntax_problem(err, text)]) from err
    except RecursionError as err:
        raise RecipeError(
            path, [_whole("values nested too deeply", "at most a few levels", "Flatten it.")]
        ) from err
    except ValueError as err:  # integers of thousands of digits
        raise RecipeError(
            path, [_whole("a number too long to read", "ordinary numbers", "Shorten it.")]
        ) from err
    lines = key_lines(text)
    try:
        recipe = Recipe.model_validate(data)
    except ValidationError as err:
        raise RecipeError(path, _problems(err, lines)) from err
    return RecipeFile(path=path, recipe=recipe, lines=lines)


def _text(path: Path) -> str:
    raw = read_plain(path, MOST_BYTES)
    if len(raw) > MOST_BYTES:
        raise RecipeError(
            path,
            [
                _whole(
                    "a file of more than 256 KiB", "a text file of up to 256 KiB", "Is this the recipe file?"
                )
            ],
        )
    for mark, name in _MARKS:
        if raw.startswith(mark):
            raise RecipeError(path, [_whole(f"{name} text", "UTF-8 text", "Save the file as UTF-8.")])
    raw = raw.removeprefix(b"\xef\xbb\xbf")  # some editors begin UTF-8 files with this mark
    if not raw.strip():
        raise RecipeError(
            path, [_whole("an empty file", "a recipe", "`wavejig new FILE` writes one to start from.")]
        )
    try:
        text = raw.decode("utf-8")
    except UnicodeDecodeError as err:
        line = raw.count(b"\n", 0, err.start) + 1
        raise RecipeError(
            path,
            [
                Problem(
                    key="(file)",
                    read=f"byte 0x{raw[err.start]:02x}",
                    allowed="UTF-8 text",
                    fix="Save the file as UTF-8.",
                    line=line,
                )
            ],
        ) from err
    return text.replace("\r\n", "\n")


def _whole(read: str, allowed: str, fix: str, line: int = 1) -> Problem:
    return Problem(key="(file)", read=read, allowed=allowed, fix=fix, line=line)


def _syntax_problem(err: tomllib.TOMLDecodeError, text: str) -> Problem:
    message = str(err)
    match = re.search(r"\(at line (\d+), column (\d+)\)", message)
    line = int(match[1]) if match else max(1, text.count("\n"))
    rows = text.split("\n")
    row = rows[line - 1].strip() if line <= len(rows) else ""
    reason = re.sub(r"\s*\(at .*\)$", "", message)
    bare = re.fullmatch(r"([A-Za-z_]\w*)\s*=\s*([^#]*?)\s*(#.*)?", row[:400])
    if "Illegal character '\\n'" in reason:
        fix = "A quote is left open on this line."
    elif "Cannot overwrite" in reason or "Cannot declare" in reason:
        fix = "It stands here a second time; keep one of the two."
    elif bare and bare[2][:1] not in ("", '"', "'", "[", "{"):
        fix = f'Quantities and words stand in quotes: {bare[1]} = "{bare[2][:40]}".'
    else:
        fix = f"The TOML reader says: {reason[:120]}."
    return Problem(
        key=bare[1] if bare else "(syntax)", read=show(row), allowed='TOML: key = "value"', fix=fix, line=line
    )


def _problems(err: ValidationError, lines: Mapping[Key, int]) -> list[Problem]:
    """The first of them, in the file's order; the last one says how many more there are."""
    errors = err.errors(include_url=False)
    if len(errors) > _MOST_PROBLEMS:
        errors.sort(key=lambda e: _line(tuple(e["loc"]), lines))
    first = [_problem(e, lines) for e in errors[:_MOST_PROBLEMS]]
    left = len(errors) - len(first)
    if left > 0:
        line = _line(tuple(errors[_MOST_PROBLEMS]["loc"]), lines)
        first.append(
            _whole(
                f"{left} more faults from here on",
                "a recipe",
                "Mend those above first; is this a recipe?",
                line,
            )
        )
    return _unique(first)


def _problem(error: Any, lines: Mapping[Key, int]) -> Problem:
    loc: Key = tuple(error["loc"])
    key = _dotted(loc)
    line = _line(loc, lines)
    kind = error["type"]
    if kind == "recipe":
        ctx = error["ctx"]
        return Problem(key=key, read=ctx["read"], allowed=ctx["allowed"], fix=ctx["fix"], line=line)
    if kind == "extra_forbidden":
        known = _known_keys(loc[:-1])
        word = str(loc[-1])
        fix = spelling_fix(word, known, "Remove it, or see `wavejig new` for every key.")
        elsewhere = [t for t, names in _all_keys().items() if word in names and t]
        if "Did you mean" not in fix and elsewhere:
            fix = f"It belongs in the table [{elsewhere[0]}]."
        return Problem(key=key, read="an unknown key", allowed=", ".join(known), fix=fix, line=line)
    if kind == "missing":
        example = {"name": 'name = "saltmarsh-2g4"', "band": 'band = ["2.400 GHz", "2.4835 GHz"]'}
        example |= {"family": 'family = "biquad"', "wire": 'wire = "1.8 mm"'}
        last = str(loc[-1])
        table = last in ("target", "radiator")
        fix = f"Add the table [{last}]." if table else f"Add {example.get(last, last + ' = ...')}."
        return Problem(key=key, read="nothing", allowed="this key must be given", fix=fix, line=line)
    if kind in ("model_type", "model_attributes_type", "dict_type"):
        return Problem(
            key=key,
            read=show(error["input"]),
            allowed=f"a table [{key}]",
            fix="Give its keys below it.",
            line=line,
        )
    return Problem(
        key=key, read=show(error["input"]), allowed=str(error["msg"]), fix="See `wavejig new`.", line=line
    )


def _known_keys(table: Key) -> list[str]:
    return _all_keys().get(_dotted(tuple(p for p in table if isinstance(p, str))), list(Recipe.model_fields))


@functools.cache
def _all_keys() -> dict[str, list[str]]:
    out: dict[str, list[str]] = {}

    def add(name: str, model: type[BaseModel]) -> None:
        out[name] = list(model.model_fields)
        for key, field in model.model_fields.items():
            for candidate in (field.annotation, *getattr(field.annotation, "__args__", ())):
                if isinstance(candidate, type) and issubclass(candidate, BaseModel):
                    add(f"{name}.{key}".strip("."), candidate)

    add("", Recipe)
    return out


def _line(loc: Key, lines: Mapping[Key, int]) -> int:
    while loc:
        if loc in lines:
            return lines[loc]
        loc = loc[:-1]
    return 1


def _dotted(loc: Key) -> str:
    out = ""
    for part in loc:
        out += (
            f"[{part}]" if isinstance(part, int) else f".{part if _BARE.fullmatch(part) else _quoted(part)}"
        )
    clean = visible(out.lstrip("."))
    return clean if len(clean) <= 80 else clean[:79] + "…"


def _quoted(part: str) -> str:
    """As TOML writes a key that is no plain word."""
    return f'"{part}"'


def _unique(problems: list[Problem]) -> list[Problem]:
    """One problem a place: a union of two readings would tell the same fault twice."""
    seen: dict[tuple[int, str], Problem] = {}
    for p in problems:
        seen.setdefault((p.line, p.key), p)
    return list(seen.values())
