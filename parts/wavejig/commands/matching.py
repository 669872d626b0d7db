"""`wavejig match`: the predicted match and pattern of each recipe."""

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
    Refused,
    announce,
    failed,
    say,
    stop,
    to_predict,
    unfit_picture,
)


def run(args: argparse.Namespace) -> int:
    """Predict each recipe; the exit code is the worst of theirs."""
    from wavejig.progress import Meter

    if args.plot is not None and len(args.recipes) > 1:
        return stop(WRONG_INPUT, "match: --plot takes one recipe at a time")
    unfit = unfit_picture(args.plot)
    if unfit is not None:
        return unfit
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
    ready = to_predict(path, meter.step, args.json, as_is=args.as_is)
    if isinstance(ready, Refused):
        return ready.code, ready.data
    _, inspection = ready
    from wavejig.field.errors import ModelError
    from wavejig.field.figures import prediction_data, prediction_text
    from wavejig.field.prediction import predict

    meter.step("solving the band")
    try:
        prediction = predict(inspection.design, announce=announce)
    except ModelError as err:
        meter.end()
        return CANNOT_BE_MADE, failed(path, f"cannot be predicted: {err}")
    meter.end()
    code = OK if prediction.meets_target else CANNOT_BE_MADE
    result = {"recipe": str(path), "name": inspection.design.name, **prediction_data(prediction)}
    if not args.json:
        say(prediction_text(prediction))
    if not inspection.can_be_made:
        code = CANNOT_BE_MADE
        announce(f"{path}: has errors and cannot be made as it stands; see `wavejig check`")
    if args.plot is not None:
        code = max(code, _plot(prediction, args.plot))
    return code, result


def _plot(prediction: Any, path: Path) -> int:
    from wavejig.field.plot import plot_prediction

    try:
        plot_prediction(prediction, path)
    except OSError as err:
        return stop(MACHINE, f"{path}: picture not written: {err.strerror or err}")
    announce(f"{path} written")
    return OK
