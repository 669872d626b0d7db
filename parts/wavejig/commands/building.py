"""`wavejig build`: the pack of each recipe, side by side where there are several."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Iterable
from pathlib import Path

from wavejig.commands.buildone import Options, Outcome, build_one, unchanged
from wavejig.commands.stopping import stoppable
from wavejig.commands.telling import OK, WRONG_INPUT, announce, shown, stop


def run(args: argparse.Namespace) -> int:
    """Build each pack; the exit code is the worst of theirs."""
    if args.verify:
        if args.recipes:
            return stop(WRONG_INPUT, "build --verify takes packs and no recipes; allowed: one or the other")
        from wavejig.commands.verifying import run as verify

        with stoppable():
            return verify(args)
    if not args.recipes:
        return stop(WRONG_INPUT, "build: which recipe? Allowed: RECIPE..., or --verify DIR...")
    if args.jobs is not None and args.jobs < 1:
        return stop(WRONG_INPUT, f"build: --jobs: read {args.jobs}; allowed: 1 or more")
    clash = _same_pack(args.recipes)
    if clash:
        return stop(WRONG_INPUT, f"build: {clash}")
    options = Options(
        out=args.out, field=not args.skip_field, from_scratch=args.from_scratch, wait=not args.no_wait
    )
    with stoppable():
        return _tell(_all(args, options), args.json)


def _all(args: argparse.Namespace, options: Options) -> Iterable[Outcome]:
    """Outcomes in the order of the recipes, each as soon as it and those before it are known."""
    known = {path: unchanged(path, options) for path in args.recipes}
    todo = [path for path, outcome in known.items() if outcome is None]
    if len(todo) > 1:
        from wavejig.commands.buildmany import build_many

        yield from build_many(args.recipes, known, options, args.jobs, quiet=args.json)
        return
    for path, outcome in known.items():
        if outcome is not None:
            yield outcome
            continue
        from wavejig.progress import Meter

        meter = Meter(path.name, sys.stderr, quiet=args.json)
        try:
            outcome = build_one(path, options, meter.step, announce)
        finally:
            meter.end()
        yield outcome


def _tell(outcomes: Iterable[Outcome], as_json: bool) -> int:
    code, data = OK, []
    for outcome in outcomes:
        code = max(code, outcome.code)
        data.append(outcome.data)
        if not as_json:
            sys.stdout.write(shown(outcome.out))
            sys.stdout.flush()
            sys.stderr.write(shown(outcome.err))
    if as_json:
        sys.stdout.write(json.dumps(data, indent=1) + "\n")
    return code


def _same_pack(recipes: list[Path]) -> str | None:
    """Why two of these recipes cannot be built in one call; None where each has a pack of its own."""
    from wavejig.files.origin import seeming_name, text_of

    seen: dict[str, Path] = {}
    for path in recipes:
        text = text_of(path)
        name = None if text is None else seeming_name(text)
        if name is None:
            continue
        other = seen.setdefault(name.casefold(), path)  # one folder on a disk that ignores case
        if other is path:
            continue
        if other.resolve() == path.resolve():
            return f"{path} is given twice"
        return (
            f'{other} and {path} are both named "{name}" and would write the same pack; allowed: one recipe '
            "a name. Give one of them another `name`, or build them one by one into different --out folders"
        )
    return None
