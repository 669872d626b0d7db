"""One recipe's build, and what there is to tell of it: in this process or in a worker of many."""

from __future__ import annotations

import traceback
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from wavejig.commands.inspecting import inspection_data, inspection_text
from wavejig.commands.telling import CANNOT_BE_MADE, MACHINE, OK, WRONG_INPUT, input_error, unreadable

if TYPE_CHECKING:
    from wavejig.files.origin import Found

Told = Callable[[str], None]


@dataclass(frozen=True, slots=True, kw_only=True)
class Options:
    """What a build was asked for beside its recipe."""

    out: Path
    field: bool
    from_scratch: bool
    wait: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """What came of one recipe: exit code, data for programs, words for stdout and stderr."""

    code: int
    data: dict[str, Any]
    out: str = ""
    err: str = ""


def unchanged(path: Path, options: Options) -> Outcome | None:
    """Told of a pack that is there already just as a build would write it; None where there is work to do."""
    from wavejig.files.origin import look

    if options.from_scratch:
        return None
    found = look(path, options.out, field=options.field)
    return _there(path, found, "unchanged") if found is not None and found.same_text else None


def build_one(path: Path, options: Options, step: Told, announce: Told) -> Outcome:
    """Build, take over or leave a recipe's pack. Faults come back as outcomes; only being stopped is raised."""
    from wavejig.pack import CannotBeMadeError
    from wavejig.recipe import RecipeError

    try:
        return _build(path, options, step, announce)
    except RecipeError as err:
        return Outcome(code=WRONG_INPUT, data=input_error(path, err, True), err=f"{err}\n")
    except CannotBeMadeError as err:
        return Outcome(
            code=CANNOT_BE_MADE,
            data={"recipe": str(path), "pack": None, **inspection_data(err.inspection)},
            err=inspection_text(path, err.inspection) + "\nNo pack was written.\n",
        )
    except OSError as err:
        if err.filename is not None and Path(str(err.filename)) == path:
            told = unreadable(path, err, True)
            return Outcome(code=WRONG_INPUT, data=told, err=f"{told['error']}\n")
        message = f"{path}: pack not written: {err.strerror or err}"
        message += f" ({err.filename})" if err.filename else ""
        return failed(path, f"{message}; an earlier pack is as it was")
    except Exception as err:  # a fault of ours; the other recipes are built all the same
        message = f"{path}: pack not written, by a fault of wavejig: {type(err).__name__}: {err}"
        return failed(path, f"{message}; an earlier pack is as it was", traceback.format_exc())


def failed(path: Path, message: str, more: str = "") -> Outcome:
    """No pack, by no fault of the recipe."""
    return Outcome(
        code=MACHINE,
        data={"recipe": str(path), "pack": None, "error": message},
        err=f"{more}{message}\n",
    )


def _build(path: Path, options: Options, step: Told, announce: Told) -> Outcome:
    from wavejig.files.origin import RECIPE, look
    from wavejig.files.record import keep, recall
    from wavejig.pack import BuiltMeanwhileError, build, retell
    from wavejig.recipe import read_recipe

    if not options.from_scratch:
        found = look(path, options.out, field=options.field)
        if found is not None and found.same_text:
            return _there(path, found, "unchanged")
        if found is not None:
            retell(path, found, wait=options.wait, announce=announce)
            found = look(path, options.out, field=options.field)
            if found is not None:
                return _there(path, found, "text")
    name = read_recipe(path).recipe.name
    memory = None if options.from_scratch else recall(options.out / name)
    try:
        build(
            path, options.out, step, predict=options.field, announce=announce, memory=memory, wait=options.wait,
            anew=options.from_scratch, done=lambda: unchanged(path, options) is not None,
        )  # fmt: skip
    except BuiltMeanwhileError:
        state = "unchanged"
    else:
        state = "built"
        if memory is not None:
            keep(memory)
    # by the recipe it was built from: an editor may have saved another since
    found = look(options.out / name / RECIPE, options.out, field=options.field)
    if found is None:
        return failed(path, f"{path}: its pack was changed by somebody else as soon as it was built")
    return _there(path, found, state, () if memory is None else tuple(memory.reused))


def _there(path: Path, found: Found, state: str, reused: tuple[str, ...] = ()) -> Outcome:
    """Told from the pack itself, so that a build and finding it unchanged tell the same."""
    design = found.design
    findings = design["findings"]
    missed = [f["message"] for f in findings if f["code"] == "prediction-misses"]
    counts = [
        f"{n} {word}{'' if n == 1 else 's'}"
        for word in ("warning", "note")
        for n in [sum(f["severity"] == word for f in findings)]
    ]
    words = {
        "built": "each read back and found right",
        "text": "only the recipe's text is new",
        "unchanged": "nothing to do: unchanged, every checksum right",
    }[state]
    lines = [
        f"{found.folder}: {found.files} files, {found.bytes / 1e6:.1f} MB, {words}; {' and '.join(counts)}",
        *(
            f"  {f['severity']:<7} {f['code']} ({f['where']}): {f['message']}\n          {f['remedy']}"
            for f in findings
            if f["severity"] == "warning"
        ),
    ]
    return Outcome(
        code=CANNOT_BE_MADE if missed else OK,
        data={
            "recipe": str(path),
            "pack": str(found.folder),
            "state": state,
            "taken_over": list(reused),
            "files": found.files,
            "bytes": found.bytes,
            "name": design["name"],
            "can_be_made": True,
            "values": {
                key: {"value": v["value"], "from": v["from"], "unit": v["unit"]}
                for key, v in design["values"].items()
            },
            "findings": findings,
        },
        out="\n".join(lines) + "\n",
        err=f"{path}: the pack is written, but {missed[0]}\n" if missed else "",
    )
