"""The arguments of every command, with the help that teaches them by example."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import Any

import wavejig
from wavejig.commands.telling import WRONG_INPUT

COMMANDS = ("new", "check", "match", "tune", "build", "yield", "measured", "watch", "stock")
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
  wavejig watch my-antenna.toml         rebuild at every save, look at it in a browser
  wavejig stock                         list the stock tables
  wavejig stock connectors              print one

exit codes: 0 fine; 1 the design cannot be made (no pack), or misses a figure its recipe states;
2 wrong input; 3 the machine let us down
"""


class _Parser(argparse.ArgumentParser):
    """Names the nearest command or option when one is misspelt."""

    def error(self, message: str) -> Any:
        from wavejig.recipe.errors import nearest, visible

        words = message.split("'")
        if "invalid choice" in message and len(words) > 1:
            near = nearest(words[1], COMMANDS)
            message = f'no command "{words[1]}"' + (f', did you mean "{near}"?' if near else "")
        elif message.startswith("unrecognized arguments"):
            word = message.split(": ", 1)[1].split()[0]
            near = nearest(word, [text for a in actions(self) for text in a.option_strings])
            message += f', did you mean "{near}"?' if near else ""
        sys.stderr.write(f"wavejig: {visible(message)}\nTry: wavejig --help\n")
        raise SystemExit(WRONG_INPUT)


def actions(whole: argparse.ArgumentParser) -> list[argparse.Action]:
    """Every argument of a parser and of its commands."""
    found = list(whole._actions)
    for action in whole._actions:
        if isinstance(action, argparse._SubParsersAction):
            for command in action.choices.values():
                found += actions(command)
    return found


def parser() -> argparse.ArgumentParser:
    """The whole command line."""
    whole = _Parser(
        prog="wavejig",
        description=_ABOUT,
        epilog=_EXAMPLES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    whole.add_argument("--version", action="version", version=f"wavejig {wavejig.__version__}")
    commands = whole.add_subparsers(title="commands", metavar="COMMAND", required=True)

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
    new.add_argument(
        "--schema", nargs="?", const="recipe", metavar="NAME",
        help="print the JSON Schema of recipes instead, or that of what --json prints or a pack holds: NAME is a "
        "command's, or verify, design, manifest, field, model",
    )  # fmt: skip
    new.set_defaults(module="starting")

    check = command(
        "check",
        "say whether recipes can be made, and what to watch",
        "  wavejig check saltmarsh-2g4.toml\n  wavejig check recipes/*.toml --json\n",
    )
    _recipes(check)
    check.set_defaults(module="checking")

    match = command(
        "match",
        "predict how the antennas as made will match and radiate",
        "  wavejig match saltmarsh-2g4.toml\n  wavejig match saltmarsh-2g4.toml --plot match.png\n"
        "  wavejig match recipes/*.toml --json\n",
    )
    _recipes(match)
    match.add_argument(
        "--plot", type=Path, metavar="FILE", help="draw the match and both cuts (png, svg, pdf)"
    )
    match.add_argument(
        "--as-is", action="store_true", help="do not tune: kept or starting values for what is auto"
    )
    match.set_defaults(module="matching")

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
    tune.set_defaults(module="tuning")

    build = command(
        "build",
        "write the pack of each recipe: everything the machines and the bench need",
        "  wavejig build saltmarsh-2g4.toml\n  wavejig build recipes/*.toml --out packs --json\n"
        "  wavejig build --verify out/saltmarsh-2g4     is this pack what its recipe gives?\n",
    )
    build.add_argument("recipes", nargs="*", type=Path, metavar="RECIPE", help="recipe files (TOML)")
    _json(build)
    build.add_argument("--out", type=Path, default=Path("out"), metavar="DIR", help="where packs go (out)")
    build.add_argument(
        "--skip-field", action="store_true", help="leave out field/: no prediction, a quicker build"
    )
    build.add_argument(
        "--from-scratch", action="store_true", help="take nothing over from earlier builds or tunings"
    )
    build.add_argument(
        "-j",
        "--jobs",
        type=int,
        metavar="N",
        help="recipes built side by side (as many as cores and memory allow)",
    )
    build.add_argument(
        "--no-wait", action="store_true", help="refuse where another process is building the same pack"
    )
    build.add_argument(
        "--verify", nargs="+", type=Path, default=[], metavar="DIR",
        help="build nothing: say whether these packs are what their recipes give",
    )  # fmt: skip
    build.set_defaults(module="building")

    yields = command(
        "yield",
        "say how many of the ordered antennas will pass, and which dimension decides it",
        "  wavejig yield saltmarsh-2g4.toml\n  wavejig yield saltmarsh-2g4.toml --plot yield.png\n"
        "  wavejig yield recipes/*.toml --json\n  wavejig yield recipes/*.toml --cluster tcp://HOST:8786\n",
    )
    _recipes(yields)
    yields.add_argument("--plot", type=Path, metavar="FILE", help="draw it (png, svg, pdf)")
    yields.add_argument(
        "--cluster", metavar="ADDRESS", help="solve on a Dask cluster (extra wavejig[cluster])"
    )
    yields.set_defaults(module="yielding")

    measured = command(
        "measured",
        "lay measured sweeps over the prediction, find what came out differently, and say what to do",
        "  wavejig measured saltmarsh-2g4.toml first.s1p\n"
        "  wavejig measured saltmarsh-2g4.toml first.s1p --reading side=30.7mm --write\n"
        "  wavejig measured saltmarsh-2g4.toml batch/*.s1p --record record.csv\n",
    )
    measured.add_argument("recipe", type=Path, metavar="RECIPE", help="the recipe (TOML)")
    measured.add_argument(
        "sweeps", nargs="+", type=Path, metavar="SWEEP", help="Touchstone files (.s1p, .s2p)"
    )
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
    measured.add_argument(
        "--report",
        type=Path,
        metavar="FILE",
        help="write a page: sweeps over the prediction, what to do (.html)",
    )
    measured.add_argument(
        "--cluster", metavar="ADDRESS", help="solve on a Dask cluster (extra wavejig[cluster])"
    )
    _json(measured)
    measured.set_defaults(module="measuring")

    watch = command(
        "watch",
        "rebuild the pack whenever the recipe is saved, and show its report in a browser on this machine",
        "  wavejig watch saltmarsh-2g4.toml\n  wavejig watch saltmarsh-2g4.toml --out packs --port 9000\n"
        "  (ctrl-C ends it)\n",
    )
    watch.add_argument("recipe", type=Path, metavar="RECIPE", help="the recipe (TOML)")
    watch.add_argument("--out", type=Path, default=Path("out"), metavar="DIR", help="where packs go (out)")
    watch.add_argument(
        "--port", type=int, metavar="N", help="port on 127.0.0.1 (8710, or a free one; 0: any free one)"
    )
    watch.set_defaults(module="watching")

    stock = command(
        "stock",
        "print the tables of wire, metals, sheet, connectors, hardware and machines",
        "  wavejig stock\n  wavejig stock connectors\n  wavejig stock metals --json\n",
    )
    stock.add_argument("table", nargs="?", metavar="TABLE", help="a table's name; without one, the list")
    stock.add_argument("--json", action="store_true", help="for programs")
    stock.set_defaults(module="stocking")
    return whole


def _recipes(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("recipes", nargs="+", type=Path, metavar="RECIPE", help="recipe files (TOML)")
    _json(parser)


def _json(parser: argparse.ArgumentParser) -> None:
    parser.add_argument(
        "--json",
        action="store_true",
        help="results as JSON on stdout (its schema: wavejig new --schema NAME)",
    )
