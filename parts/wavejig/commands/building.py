"""`wavejig build`: the pack of each recipe."""

from __future__ import annotations

import argparse
import json
import sys
from pathlib import Path
from typing import Any

from wavejig.commands.inspecting import count_of, finding_text, inspection_data, inspection_text
from wavejig.commands.telling import (
    CANNOT_BE_MADE,
    MACHINE,
    OK,
    WRONG_INPUT,
    announce,
    input_error,
    say,
    unreadable,
)


def run(args: argparse.Namespace) -> int:
    """Build each pack; the exit code is the worst of theirs."""
    from wavejig.pack import CannotBeMadeError, build
    from wavejig.progress import Meter
    from wavejig.recipe import RecipeError

    code, results = OK, []
    for path in args.recipes:
        meter = Meter(path.name, sys.stderr, quiet=args.json)
        try:
            built = build(path, args.out, meter.step, predict=not args.skip_field, announce=announce)
        except RecipeError as err:
            meter.end()
            code = max(code, WRONG_INPUT)
            results.append(input_error(path, err, args.json))
        except CannotBeMadeError as err:
            meter.end()
            code = max(code, CANNOT_BE_MADE)
            results.append({"recipe": str(path), "pack": None, **inspection_data(err.inspection)})
            if not args.json:
                sys.stderr.write(inspection_text(path, err.inspection) + "\nNo pack was written.\n")
        except OSError as err:
            meter.end()
            if err.filename is not None and Path(str(err.filename)) == path:
                code = max(code, WRONG_INPUT)
                results.append(unreadable(path, err, args.json))
                continue
            code = MACHINE
            message = f"{path}: pack not written: {err.strerror or err}"
            message += f" ({err.filename})" if err.filename else ""
            results.append({"recipe": str(path), "pack": None, "error": message})
            sys.stderr.write(f"{message}; an earlier pack is as it was\n")
        else:
            meter.end()
            results.append(
                {
                    "recipe": str(path),
                    "pack": str(built.folder),
                    "files": built.files,
                    "bytes": built.bytes,
                    **inspection_data(built.inspection),
                }
            )
            if not args.json:
                say(_built_text(built))
            if not built.keeps_its_promise:
                code = max(code, CANNOT_BE_MADE)
                sys.stderr.write(f"{path}: the pack is written, but {_missed(built)}\n")
    if args.json:
        say(json.dumps(results, indent=1))
    return code


def _built_text(built: Any) -> str:
    counts = [count_of(built.inspection, severity) for severity in ("warning", "note")]
    warnings = [finding_text(f) for f in built.inspection.findings if f.severity == "warning"]
    head = (
        f"{built.folder}: {built.files} files, {built.bytes / 1e6:.1f} MB, each read back and found right; "
        f"{' and '.join(counts)}"
    )
    return "\n".join([head, *warnings])


def _missed(built: Any) -> str:
    return str(next(f.message for f in built.inspection.findings if f.code == "prediction-misses"))
