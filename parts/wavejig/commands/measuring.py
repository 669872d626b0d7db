"""`wavejig measured`: sweeps of articles laid over the prediction, causes, changes, test record."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

from wavejig.commands.telling import (
    CANNOT_BE_MADE,
    MACHINE,
    OK,
    WRONG_INPUT,
    Refused,
    announce,
    say,
    stop,
    to_predict,
    unfit_picture,
)

if TYPE_CHECKING:
    from wavejig.recipe import RecipeFile
    from wavejig.shop import Inspection
    from wavejig.tuning.measured import Measured
    from wavejig.tuning.sweepfile import MeasuredSweep

PAGES = (".html", ".htm")
FAR_READING = 0.2  # of the drawn size: then something else was measured, or over something else


def run(args: argparse.Namespace) -> int:
    """Exit code: 0 all pass; 1 an article fails; 2 a recipe, sweep or reading that cannot be used."""
    from wavejig.progress import Meter

    refused = _refuse_names(args)
    if refused is not None:
        return refused
    path: Path = args.recipe
    try:
        given = _given(args)
    except ValueError as err:
        return stop(WRONG_INPUT, f"measured: {err}")
    ready = to_predict(path, lambda step: None, args.json, as_is=True)
    if isinstance(ready, Refused):
        return _end(args, ready.code, ready.data)
    sweeps, bad = _sweeps(args.sweeps, ready[1])
    if not sweeps:
        return _end(args, WRONG_INPUT, {"recipe": str(path), "refused": bad})
    meter = Meter(path.name, sys.stderr, quiet=args.json)
    try:  # what is left free was worked out when the article was built: the same again, from the cache
        ready = to_predict(path, meter.step, args.json)
    finally:
        meter.end()
    if isinstance(ready, Refused):
        return _end(args, ready.code, ready.data)
    recipe_file, inspection = ready
    try:
        readings = _readings(given, len(args.sweeps) == 1, recipe_file, inspection)
    except ValueError as err:
        return stop(WRONG_INPUT, f"measured: {err}")
    return _measure(args, recipe_file, inspection, sweeps, readings, bad)


def _measure(
    args: argparse.Namespace,
    recipe_file: RecipeFile,
    inspection: Inspection,
    sweeps: list[MeasuredSweep],
    readings: Mapping[str, float],
    bad: list[dict[str, str]],
) -> int:
    from concurrent.futures import BrokenExecutor

    from wavejig.field.errors import ModelError
    from wavejig.progress import Meter
    from wavejig.tuning.asbuilt import ArticleError
    from wavejig.tuning.asked import measured_of
    from wavejig.tuning.measureddata import measured_data
    from wavejig.tuning.measuredtext import measured_text
    from wavejig.tuning.solving import ClusterError, workers

    meter = Meter(args.recipe.name, sys.stderr, quiet=args.json)
    try:
        with workers(args.cluster) as executor:
            found = measured_of(recipe_file.recipe, inspection, sweeps, readings, executor, meter.step)
    except (ArticleError, ModelError) as err:
        return stop(CANNOT_BE_MADE, f"{args.recipe}: its neighbours cannot be predicted: {err}")
    except ClusterError as err:
        return stop(MACHINE, f"measured: {err}")
    except BrokenExecutor:
        return stop(MACHINE, "measured: a worker process died, often for want of memory; try again")
    finally:
        meter.end()
    code = OK if found.passing == len(found.articles) else CANNOT_BE_MADE
    if bad:
        code = WRONG_INPUT
    if not args.json:
        say(measured_text(found))
    code = max(code, _keep(args, recipe_file, inspection, found))
    return _end(args, code, {"recipe": str(args.recipe), **measured_data(found), "refused": bad})


def _keep(args: argparse.Namespace, recipe_file: RecipeFile, inspection: Inspection, found: Measured) -> int:
    """Record, picture, page, recipe: what was asked to be written."""
    code = OK
    if args.record is not None:
        from wavejig.tuning.record import write_record

        try:
            write_record(found, args.record)
            announce(f"{args.record} written")
        except OSError as err:
            code = stop(MACHINE, f"{args.record}: record not written: {err.strerror or err}")
    if args.plot is not None:
        from wavejig.tuning.measuredplot import plot_measured

        try:
            plot_measured(found, args.plot)
            announce(f"{args.plot} written")
        except OSError as err:
            code = stop(MACHINE, f"{args.plot}: picture not written: {err.strerror or err}")
    if args.report is not None:
        code = max(code, _report(args.report, inspection, found))
    if args.write:
        code = max(code, _write(args, recipe_file, found))
    return code


def _report(path: Path, inspection: Inspection, found: Measured) -> int:
    from wavejig.field.errors import ModelError
    from wavejig.field.prediction import predict
    from wavejig.sheets.report.frompack import write_sweeps_report

    try:
        write_sweeps_report(inspection, path, predict(inspection.design, announce=announce), found)
    except ModelError as err:
        return stop(CANNOT_BE_MADE, f"{path}: page not written, the match cannot be predicted: {err}")
    except OSError as err:
        return stop(MACHINE, f"{path}: page not written: {err.strerror or err}")
    announce(f"{path} written")
    return OK


def _write(args: argparse.Namespace, recipe_file: RecipeFile, found: Measured) -> int:
    from wavejig.recipe.edit import EditError, edit_file
    from wavejig.tuning.correction import NothingToWriteError, puts, written_problems

    try:
        wanted = puts(recipe_file.recipe, found)
        problems = written_problems(args.recipe, wanted)
        if problems:
            return stop(
                CANNOT_BE_MADE,
                f"{args.recipe}: left as it is, the changed recipe could not be made: {problems}",
            )
        edit_file(args.recipe, wanted)
    except NothingToWriteError as err:
        announce(f"{args.recipe}: left as it is: {err}")
        return OK
    except EditError as err:
        return stop(WRONG_INPUT, f"{args.recipe}: {err}")
    except OSError as err:
        return stop(MACHINE, f"{args.recipe}: not written: {err.strerror or err}; it is as it was")
    announce(f"{args.recipe} written: {', '.join(f'{p.table}.{p.key} = {p.value}' for p in wanted)}")
    return OK


def _refuse_names(args: argparse.Namespace) -> int | None:
    """Outputs that could not be written are refused before anything is solved."""
    from wavejig.tuning.record import KINDS

    if args.record is not None and args.record.suffix.lower() not in KINDS:
        return stop(WRONG_INPUT, f"{args.record}: a record's name must end in {' or '.join(KINDS)}")
    if args.report is not None and args.report.suffix.lower() not in PAGES:
        return stop(WRONG_INPUT, f"{args.report}: a report's name must end in {' or '.join(PAGES)}")
    return unfit_picture(args.plot)


def _given(args: argparse.Namespace) -> dict[str, float]:
    """The command line's readings, as taken. Raises ValueError that says what to write."""
    from wavejig.recipe.units import LENGTH, UnitError, parse
    from wavejig.tuning.spread import MEASURED_KEYS

    if args.reading and len(args.sweeps) > 1:
        raise ValueError("--reading belongs to one article; give its sweep alone")
    given: dict[str, float] = {}
    for text in args.reading:
        name, _, size = text.partition("=")
        name = name.strip().replace("-", "_")
        if name not in MEASURED_KEYS or not size:
            raise ValueError(f"--reading {text}: write NAME=SIZE with NAME one of {', '.join(MEASURED_KEYS)}")
        try:
            given[name] = parse(size.strip(), LENGTH)
        except UnitError as err:
            raise ValueError(f"--reading {text}: {err.allowed}. {err.fix}") from err
    return given


def _readings(
    given: Mapping[str, float], one: bool, recipe_file: RecipeFile, inspection: Inspection
) -> dict[str, float]:
    """Readings over the centreline: the recipe's, and those given above them. Raises ValueError.

    one: whether a single article was swept; the recipe's readings are of no batch.
    """
    from wavejig.tuning.spread import centreline_readings, readings_of

    if not one:
        return {}
    recipe, wire = recipe_file.recipe, inspection.design.radiator.wire_diameter_mm
    found = {**readings_of(recipe, wire), **centreline_readings(recipe, wire, dict(given))}
    known = {name: value.value for name, value in inspection.design.values}
    for name, value in found.items():
        if name not in known:
            raise ValueError(f"reading {name}: this radiator has no such dimension")
        if abs(value / known[name] - 1.0) > FAR_READING:
            raise ValueError(
                f"reading {name}: {value:.2f} mm over the centreline is far from the {known[name]:.2f} mm drawn; "
                "is it read over what measured_over says?"
            )
    return found


def _sweeps(
    paths: Sequence[Path], inspection: Inspection
) -> tuple[list[MeasuredSweep], list[dict[str, str]]]:
    """The sweeps that can be used, and why the others cannot, which is told on stderr too."""
    from wavejig.tuning.sweepfile import SweepError, read_sweep

    target = inspection.design.target
    good: list[MeasuredSweep] = []
    bad: list[dict[str, str]] = []
    for path in paths:
        try:
            good.append(read_sweep(path, target.band_low_hz, target.band_high_hz, target.reference_ohm))
        except SweepError as err:
            bad.append({"sweep": str(path), "error": err.message})
            announce(f"{err}")
        except OSError as err:
            message = f"cannot be read: {err.strerror or err}"
            bad.append({"sweep": str(path), "error": message})
            announce(f"{path}: {message}")
    return good, bad


def _end(args: argparse.Namespace, code: int, result: dict[str, Any]) -> int:
    if args.json:
        say(json.dumps(result, indent=1))
    return code
