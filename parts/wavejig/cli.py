"""The command line: arguments, progress, exit codes. Everything heavy is imported inside its command.

Exit codes: 0 fine; 1 a design that cannot be made or misses a figure its recipe states; 2 wrong input;
3 the machine let us down.
"""

from __future__ import annotations

import argparse
import json
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

import wavejig
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

if TYPE_CHECKING:
    from wavejig.shop import Finding, Inspection

COMMANDS = ("new", "check", "match", "tune", "build", "yield", "measured", "stock")
_OPTIONS = (
    "--help", "--version", "--json", "--out", "--schema", "--plot", "--skip-field", "--as-is", "--aim", "--grid",
    "--cluster", "--write", "--reading", "--record",
)  # fmt: skip

_ABOUT = """\
From one recipe to the files, tables and figures for making equal loop antennas."""

_EXAMPLES = """\
examples:
  wavejig new my-antenna.toml           write a commented recipe to start from
  wavejig check my-antenna.toml         can it be made? (answers in a blink)
  wavejig match my-antenna.toml         how will it match and radiate?
  wavejig tune my-antenna.toml          work out what it leaves auto
  wavejig build my-antenna.toml         write the pack into out/<name>/
  wavejig build recipes/*.toml --out packs
  wavejig yield my-antenna.toml         how many of the batch will pass?
  wavejig measured my-antenna.toml first.s1p   what came out differently, and what to do
  wavejig stock                         list the stock tables
  wavejig stock connectors              print one

exit codes: 0 fine; 1 the design cannot be made (no pack), or misses a figure its recipe states;
2 wrong input; 3 the machine let us down
"""


def main(argv: list[str] | None = None) -> int:
    """Run the command line; returns the exit code."""
    try:
        args = _parser().parse_args(argv)
        return int(args.run(args))
    except KeyboardInterrupt:
        print("interrupted; packs already on disk are as they were", file=sys.stderr)  # noqa: T201
        return MACHINE
    except BrokenPipeError:  # the reader of our output went away, as `| head` does
        sys.stderr.close()
        return OK


class _Parser(argparse.ArgumentParser):
    """Names the nearest command or option when one is misspelt."""

    def error(self, message: str) -> Any:
        from wavejig.recipe.errors import nearest

        words = message.split("'")
        if "invalid choice" in message and len(words) > 1:
            near = nearest(words[1], COMMANDS)
            message = f'no command "{words[1]}"' + (f', did you mean "{near}"?' if near else "")
        elif message.startswith("unrecognized arguments"):
            word = message.split(": ", 1)[1].split()[0]
            near = nearest(word, _OPTIONS)
            message += f', did you mean "{near}"?' if near else ""
        sys.stderr.write(f"wavejig: {message}\nTry: wavejig --help\n")
        raise SystemExit(WRONG_INPUT)


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(
        prog="wavejig",
        description=_ABOUT,
        epilog=_EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=f"wavejig {wavejig.__version__}")
    commands = parser.add_subparsers(title="commands", metavar="COMMAND", required=True)

    def command(name: str, text: str, examples: str) -> argparse.ArgumentParser:
        return commands.add_parser(
            name,
            help=text,
            description=text[0].upper() + text[1:] + ".",
            epilog=f"examples:\n{examples}",
            formatter_class=argparse.RawDescriptionHelpFormatter,
        )

    new = command(
        "new",
        "write a commented recipe to start from",
        "  wavejig new my-antenna.toml\n  wavejig new --schema > recipe.schema.json   (for your editor)\n",
    )
    new.add_argument("file", nargs="?", type=Path, metavar="FILE", help="the recipe to write")
    new.add_argument("--schema", action="store_true", help="print the JSON Schema of recipes instead")
    new.set_defaults(run=_new)

    check = command(
        "check",
        "say whether recipes can be made, and what to watch",
        "  wavejig check saltmarsh-2g4.toml\n  wavejig check recipes/*.toml --json\n",
    )
    _recipes(check)
    check.set_defaults(run=_check)

    match = command(
        "match",
        "predict how the antennas as made will match and radiate",
        "  wavejig match saltmarsh-2g4.toml\n  wavejig match saltmarsh-2g4.toml --plot match.png\n"
        "  wavejig match recipes/*.toml --json\n",
    )
    _recipes(match)
    match.add_argument("--plot", type=Path, metavar="FILE", help="draw the match and both cuts (png, svg, pdf)")
    match.add_argument(
        "--as-is", action="store_true", help="do not tune: kept or starting values for what is auto"
    )
    match.set_defaults(run=_match)

    tune = command(
        "tune",
        "work out what a recipe leaves auto: best match over the band, or most gain",
        "  wavejig tune saltmarsh-2g4.toml\n  wavejig tune saltmarsh-2g4.toml --aim gain\n"
        "  wavejig tune saltmarsh-2g4.toml --write      put the values into the recipe\n",
    )
    _recipes(tune)
    tune.add_argument(
        "--aim", choices=("match", "gain"), default="match",
        help="match: greatest return loss over the band; gain: most gain that keeps the recipe's return loss",
    )  # fmt: skip
    tune.add_argument("--grid", default="0.05 mm", metavar="SIZE", help="what the shop can hold (0.05 mm)")
    tune.add_argument("--write", action="store_true", help="put the values into the recipe, comments kept")
    tune.set_defaults(run=_tune)

    build = command(
        "build",
        "write the pack of each recipe: everything the machines and the bench need",
        "  wavejig build saltmarsh-2g4.toml\n  wavejig build recipes/*.toml --out packs --json\n",
    )
    _recipes(build)
    build.add_argument("--out", type=Path, default=Path("out"), metavar="DIR", help="where packs go (out)")
    build.add_argument(
        "--skip-field", action="store_true", help="leave out field/: no prediction, a quicker build"
    )
    build.set_defaults(run=_build)

    yields = command(
        "yield",
        "say how many of the ordered antennas will pass, and which dimension decides it",
        "  wavejig yield saltmarsh-2g4.toml\n  wavejig yield saltmarsh-2g4.toml --plot yield.png\n"
        "  wavejig yield recipes/*.toml --json\n  wavejig yield recipes/*.toml --cluster tcp://HOST:8786\n",
    )
    _recipes(yields)
    yields.add_argument("--plot", type=Path, metavar="FILE", help="draw it (png, svg, pdf)")
    yields.add_argument("--cluster", metavar="ADDRESS", help="solve on a Dask cluster (extra wavejig[cluster])")
    yields.set_defaults(run=_yield)

    measured = command(
        "measured",
        "lay measured sweeps over the prediction, find what came out differently, and say what to do",
        "  wavejig measured saltmarsh-2g4.toml first.s1p\n"
        "  wavejig measured saltmarsh-2g4.toml first.s1p --reading side=30.7mm --write\n"
        "  wavejig measured saltmarsh-2g4.toml batch/*.s1p --record record.csv\n",
    )
    measured.add_argument("recipe", type=Path, metavar="RECIPE", help="the recipe (TOML)")
    measured.add_argument("sweeps", nargs="+", type=Path, metavar="SWEEP", help="Touchstone files (.s1p, .s2p)")
    measured.add_argument(
        "--reading",
        action="append",
        default=[],
        metavar="NAME=SIZE",
        help="a calliper reading of this article, as side=30.7mm; may be repeated",
    )
    measured.add_argument("--write", action="store_true", help="put what follows into the recipe")
    measured.add_argument("--record", type=Path, metavar="FILE", help="write a test record (.csv or .txt)")
    measured.add_argument("--plot", type=Path, metavar="FILE", help="draw it (png, svg, pdf)")
    measured.add_argument("--cluster", metavar="ADDRESS", help="solve on a Dask cluster (extra wavejig[cluster])")
    measured.add_argument("--json", action="store_true", help="results as JSON on stdout")
    measured.set_defaults(run=_measured)

    stock = command(
        "stock",
        "print the tables of wire, metals, sheet, connectors, hardware and machines",
        "  wavejig stock\n  wavejig stock connectors\n  wavejig stock metals --json\n",
    )
    stock.add_argument("table", nargs="?", metavar="TABLE", help="a table's name; without one, the list")
    stock.add_argument("--json", action="store_true", help="for programs")
    stock.set_defaults(run=_stock)
    return parser


def _recipes(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("recipes", nargs="+", type=Path, metavar="RECIPE", help="recipe files (TOML)")
    parser.add_argument("--json", action="store_true", help="results as JSON on stdout")


# -- commands -----------------------------------------------------------------------------------------


def _new(args: argparse.Namespace) -> int:
    if args.schema:
        from wavejig.recipe.models import Recipe

        schema = {"$schema": "https://json-schema.org/draft/2020-12/schema", **Recipe.model_json_schema()}
        say(json.dumps(schema, indent=1))
        return OK
    if args.file is None:
        return stop(WRONG_INPUT, "new: which file? Try: wavejig new my-antenna.toml")
    from wavejig.recipe.starter import starter

    try:
        with args.file.open("x", encoding="utf-8", newline="\n") as stream:
            stream.write(starter(args.file.stem))
    except FileExistsError:
        return stop(WRONG_INPUT, f"{args.file}: exists already, and is left as it is; choose another name")
    except OSError as err:
        return stop(MACHINE, f"{args.file}: cannot be written: {err.strerror}")
    say(f"{args.file} written. Next: wavejig check {args.file}")
    return OK


def _check(args: argparse.Namespace) -> int:
    from wavejig.pack import inspect_recipe
    from wavejig.recipe import RecipeError

    code, results = OK, []
    for path in args.recipes:
        try:
            _, inspection = inspect_recipe(path)
        except RecipeError as err:
            code = max(code, WRONG_INPUT)
            results.append(input_error(path, err, args.json))
            continue
        except OSError as err:
            code = max(code, WRONG_INPUT)
            results.append(unreadable(path, err, args.json))
            continue
        if not inspection.can_be_made:
            code = max(code, CANNOT_BE_MADE)
        results.append({"recipe": str(path), **_inspection_data(inspection)})
        if not args.json:
            say(_inspection_text(path, inspection))
    if args.json:
        say(json.dumps(results, indent=1))
    return code


def _yield(args: argparse.Namespace) -> int:
    from wavejig.commands.yielding import run

    return run(args)


def _measured(args: argparse.Namespace) -> int:
    from wavejig.commands.measuring import run

    return run(args)


def _match(args: argparse.Namespace) -> int:
    from wavejig.commands.matching import run

    return run(args)


def _tune(args: argparse.Namespace) -> int:
    from wavejig.commands.tuning import run

    return run(args)


def _build(args: argparse.Namespace) -> int:
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
            results.append({"recipe": str(path), "pack": None, **_inspection_data(err.inspection)})
            if not args.json:
                sys.stderr.write(_inspection_text(path, err.inspection) + "\nNo pack was written.\n")
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
                    **_inspection_data(built.inspection),
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


def _stock(args: argparse.Namespace) -> int:
    from wavejig.stock.show import list_tables, table_data, table_text
    from wavejig.stock.tables import UnknownTableError

    if args.table is None:
        say(json.dumps(list_tables(), indent=1) if args.json else _table_list(list_tables()))
        return OK
    try:
        say(json.dumps(table_data(args.table), indent=1) if args.json else table_text(args.table))
    except UnknownTableError as err:
        return stop(WRONG_INPUT, str(err))
    return OK


# -- telling ------------------------------------------------------------------------------------------


def _inspection_data(inspection: Inspection) -> dict[str, Any]:
    return {
        "name": inspection.design.name,
        "can_be_made": inspection.can_be_made,
        "values": {
            k: {"value": v.value, "from": v.origin, "unit": v.unit} for k, v in inspection.design.values
        },
        "findings": [
            {
                "code": f.code,
                "severity": f.severity,
                "message": f.message,
                "where": f.where,
                "remedy": f.remedy,
                "source": f.source,
            }
            for f in inspection.findings
        ],
    }


def _inspection_text(path: Path, inspection: Inspection) -> str:
    counts = {s: sum(f.severity == s for f in inspection.findings) for s in ("error", "warning", "note")}
    verdict = "can be made" if inspection.can_be_made else "cannot be made"
    head = f"{path}: {inspection.design.name} {verdict}: " + ", ".join(
        f"{n} {word}{'' if n == 1 else 's'}" for word, n in counts.items()
    )
    lines = [head, *(_finding_text(f) for f in inspection.findings)]
    width = max((len(k) for k, _ in inspection.design.values), default=0)
    lines.append("  values:")
    lines += [
        f"    {key.replace('_', ' '):<{width}}  {value.value:9.3f} {value.unit:<3}  {value.origin}"
        + (f": {value.source}" if value.source else "")
        for key, value in inspection.design.values
    ]
    return "\n".join(lines)


def _finding_text(f: Finding) -> str:
    return f"  {f.severity:<7} {f.code} ({f.where}): {f.message}\n          {f.remedy}"


def _built_text(built: Any) -> str:
    counts = [f"{sum(f.severity == s for f in built.inspection.findings)} {s}s" for s in ("warning", "note")]
    warnings = [_finding_text(f) for f in built.inspection.findings if f.severity == "warning"]
    head = (
        f"{built.folder}: {built.files} files, {built.bytes / 1e6:.1f} MB, each read back and found right; "
        f"{' and '.join(counts)}"
    )
    return "\n".join([head, *warnings])


def _missed(built: Any) -> str:
    return next(f.message for f in built.inspection.findings if f.code == "prediction-misses")


def _table_list(tables: list[dict[str, Any]]) -> str:
    width = max(len(t["name"]) for t in tables)
    return "\n".join(f"{t['name']:<{width}}  {t['title']} ({t['rows']} rows)" for t in tables)


if __name__ == "__main__":
    sys.exit(main())
