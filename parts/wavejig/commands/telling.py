"""What all commands share: exit codes, and how results and faults are told."""

from __future__ import annotations

import sys
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from wavejig.recipe import RecipeFile
    from wavejig.shop import Inspection

_LAYOUT = (
    "\n\t"  # of control characters, the only ones of ours: those of a file's name or a recipe are written out
)
OK, CANNOT_BE_MADE, WRONG_INPUT, MACHINE = 0, 1, 2, 3


def input_error(path: Path, err: Any, as_json: bool) -> dict[str, Any]:
    """A RecipeError, told on stderr or as data."""
    if not as_json:
        announce(str(err))
    return {
        "recipe": str(path),
        "problems": [
            {"line": p.line, "key": p.key, "read": p.read, "allowed": p.allowed, "fix": p.fix}
            for p in err.problems
        ],
    }


def unreadable(path: Path, err: OSError, as_json: bool) -> dict[str, Any]:
    """A recipe that could not be read."""
    message = f"{path}: cannot be read: {err.strerror or err}. Allowed: a recipe file; `wavejig new FILE` writes one."
    if not as_json:
        announce(message)
    return {"recipe": str(path), "error": message}


@dataclass(frozen=True, slots=True, kw_only=True)
class Refused:
    """Why nothing is predicted of a recipe, told already: exit code, and the same as data."""

    code: int
    data: dict[str, Any]


def to_predict(
    path: Path, step: Callable[[str], None], as_json: bool, *, as_is: bool = False
) -> tuple[RecipeFile, Inspection] | Refused:
    """A recipe worked out and judged, ready for the field solver; or why not.

    as_is: without a solve, what is auto as kept from before or as it starts.
    """
    from wavejig.pack import inspect_recipe, settle_recipe
    from wavejig.recipe import RecipeError

    try:
        if as_is:
            recipe_file, inspection = inspect_recipe(path)
        else:
            recipe_file, inspection, _ = settle_recipe(path, step, announce)
    except RecipeError as err:
        return Refused(code=WRONG_INPUT, data=input_error(path, err, as_json))
    except OSError as err:
        return Refused(code=WRONG_INPUT, data=unreadable(path, err, as_json))
    if inspection.radiator is None or inspection.tray is None:
        told = failed(path, "cannot be made, so nothing is predicted; see `wavejig check`")
        return Refused(code=CANNOT_BE_MADE, data=told)
    return recipe_file, inspection


def failed(path: Path, message: str) -> dict[str, Any]:
    """What a recipe gave no answer for, on stderr and as data."""
    announce(f"{path}: {message}")
    return {"recipe": str(path), "error": message}


def unfit_picture(path: Path | None) -> int | None:
    """Exit code for a picture that could not be drawn, told before anything is solved."""
    if path is None:
        return None
    from wavejig.field.plot import PlotError, check_path

    try:
        check_path(path)
    except PlotError as err:
        return stop(WRONG_INPUT, str(err))
    return None


def stop(code: int, message: str) -> int:
    """Say why on stderr; returns the code."""
    announce(f"wavejig: {message}")
    return code


def shown(text: str) -> str:
    """The text as a terminal may have it: what it would obey is written out."""
    from wavejig.recipe.errors import visible  # its room loads more than --help may

    return visible(text, keep=_LAYOUT)


def say(text: str) -> None:
    """A result, on stdout, at once."""
    sys.stdout.write(f"{shown(text)}\n")
    sys.stdout.flush()


def announce(message: str) -> None:
    """Something that takes its time and is no result, on stderr."""
    sys.stderr.write(f"{shown(message)}\n")
    sys.stderr.flush()
