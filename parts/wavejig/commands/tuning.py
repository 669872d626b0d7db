"""`wavejig tune`: what a recipe leaves auto, worked out with the field solver."""

from __future__ import annotations

import argparse
import json
import sys
from pathlib import Path
from typing import Any

from wavejig.commands.telling import (
    CANNOT_BE_MADE,
    MACHINE,
    OK,
    WRONG_INPUT,
    announce,
    input_error,
    say,
    stop,
    unreadable,
)


def run(args: argparse.Namespace) -> int:
    """Tune each recipe; the exit code is the worst of theirs."""
    from wavejig.progress import Meter
    from wavejig.recipe.units import LENGTH, UnitError, parse

    try:
        args.grid_mm = parse(args.grid, LENGTH)
    except UnitError as err:
        return stop(WRONG_INPUT, f'tune: --grid "{args.grid}": {err}')
    if not 0.001 <= args.grid_mm <= 5.0:
        return stop(WRONG_INPUT, f"tune: --grid {args.grid}: allowed: 0.001 mm to 5 mm")
    code, results = OK, []
    for path in args.recipes:
        meter = Meter(path.name, sys.stderr, quiet=args.json)
        one, result = _one(args, path, meter)
        code = max(code, one)
        results.append(result)
    if args.json:
        say(json.dumps(results, indent=1))
    return code


def _one(args: argparse.Namespace, path: Path, meter: Any) -> tuple[int, dict[str, Any]]:
    from wavejig.field.errors import ModelError
    from wavejig.recipe import RecipeError, read_recipe
    from wavejig.tuning.alternatives import alternatives
    from wavejig.tuning.candidates import CannotStartError, NothingFreeError
    from wavejig.tuning.tune import tune
    from wavejig.tuning.tunetext import tuned_data, tuned_text

    try:
        file = read_recipe(path)
    except RecipeError as err:
        return WRONG_INPUT, input_error(path, err, args.json)
    except OSError as err:
        return WRONG_INPUT, unreadable(path, err, args.json)
    try:
        answer = tune(file.recipe, aim=args.aim, grid_mm=args.grid_mm, told=meter.step, announce=announce)
        others = () if answer.meets_target else alternatives(file.recipe, meter.step)
    except RecipeError as err:
        return WRONG_INPUT, input_error(path, file.error(err.problems), args.json)
    except NothingFreeError:
        return OK, _told(path, 'gives every number itself; write "auto" for what is to be worked out', args)
    except CannotStartError as err:
        errors = [f for f in err.inspection.findings if f.severity == "error"]
        return CANNOT_BE_MADE, _told(
            path,
            "cannot be made as it starts, so nothing is tuned: "
            + "; ".join(f"{f.code}: {f.message} ({f.remedy})" for f in errors),
            args,
        )
    except ModelError as err:
        return CANNOT_BE_MADE, _told(path, f"cannot be predicted: {err}", args)
    finally:
        meter.end()
    if not args.json:
        say(tuned_text(file.recipe.name, answer, others))
    code = OK if answer.meets_target else CANNOT_BE_MADE
    _keep(file.recipe, answer, args)
    if args.write:
        code = max(code, _write(path, file.recipe, answer))
    return code, {"recipe": str(path), "name": file.recipe.name, **tuned_data(answer, others)}


def _keep(recipe: Any, answer: Any, args: argparse.Namespace) -> None:
    """A build that follows need not work it out again."""
    from wavejig.tuning import cache

    cache.save(recipe, args.aim, args.grid_mm, answer.values)


def _write(path: Path, recipe: Any, answer: Any) -> int:
    from wavejig.design import resolve
    from wavejig.recipe.edit import EditError, edit_file
    from wavejig.tuning.tunetext import puts

    try:
        edit_file(path, puts(recipe, answer, resolve(recipe).radiator.wire_diameter_mm))
    except EditError as err:
        return stop(WRONG_INPUT, f"{path}: left as it is: {err}")
    except OSError as err:
        return stop(MACHINE, f"{path}: cannot be written: {err.strerror or err}; left as it is")
    announce(f"{path}: tuned values written")
    return OK


def _told(path: Path, message: str, args: argparse.Namespace) -> dict[str, Any]:
    if not args.json:
        announce(f"{path}: {message}")
    return {"recipe": str(path), "error": message}
