"""`wavejig yield`: of the quantity ordered, how many will pass, and which dimension decides it."""

from __future__ import annotations

import argparse
import json
import sys
from concurrent.futures import Executor
from pathlib import Path
from typing import Any

from wavejig.commands.telling import (
    CANNOT_BE_MADE,
    MACHINE,
    OK,
    WRONG_INPUT,
    Refused,
    announce,
    failed,
    say,
    stop,
    to_predict,
    unfit_picture,
)


def run(args: argparse.Namespace) -> int:
    """Each recipe in turn on the same workers; the exit code is the worst of theirs."""
    from concurrent.futures import BrokenExecutor

    from wavejig.tuning.solving import ClusterError, workers

    if args.plot is not None and len(args.recipes) > 1:
        return stop(WRONG_INPUT, "yield: --plot takes one recipe at a time")
    unfit = unfit_picture(args.plot)
    if unfit is not None:
        return unfit
    code, results = OK, []
    try:
        with workers(args.cluster) as executor:
            for path in args.recipes:
                one, result = _one(args, path, executor)
                code = max(code, one)
                results.append(result)
    except ClusterError as err:
        return stop(MACHINE, f"yield: {err}")
    except BrokenExecutor:
        return stop(MACHINE, "yield: a worker process died, often for want of memory; try again")
    if args.json:
        say(json.dumps(results, indent=1))
    return code


def _one(args: argparse.Namespace, path: Path, executor: Executor) -> tuple[int, dict[str, Any]]:
    from wavejig.progress import Meter

    meter = Meter(path.name, sys.stderr, quiet=args.json)
    try:
        ready = to_predict(path, meter.step, args.json)
    finally:
        meter.end()
    if isinstance(ready, Refused):
        return ready.code, ready.data
    recipe_file, inspection = ready
    from wavejig.field.errors import ModelError
    from wavejig.tuning.asbuilt import ArticleError
    from wavejig.tuning.asked import yield_of
    from wavejig.tuning.yielddata import yield_data
    from wavejig.tuning.yieldtext import yield_text

    try:
        found = yield_of(recipe_file.recipe, inspection, executor, meter.step)
    except (ArticleError, ModelError) as err:
        return CANNOT_BE_MADE, failed(path, f"its spread cannot be predicted: {err}")
    finally:
        meter.end()
    code = OK if found.nominal_passes else CANNOT_BE_MADE
    if not args.json:
        say(yield_text(found))
    if not inspection.can_be_made:
        code = CANNOT_BE_MADE
        announce(f"{path}: has errors and cannot be made as it stands; see `wavejig check`")
    if args.plot is not None:
        code = max(code, _plot(found, args.plot))
    return code, {"recipe": str(path), **yield_data(found)}


def _plot(found: Any, path: Path) -> int:
    from wavejig.tuning.yieldplot import plot_yield

    try:
        plot_yield(found, path)
    except OSError as err:
        return stop(MACHINE, f"{path}: picture not written: {err.strerror or err}")
    announce(f"{path} written")
    return OK
