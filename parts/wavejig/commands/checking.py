"""`wavejig check`: can it be made, and what to watch; no solve, no kernel."""

from __future__ import annotations

import argparse
import json

from wavejig.commands.inspecting import inspection_data, inspection_text
from wavejig.commands.telling import CANNOT_BE_MADE, OK, WRONG_INPUT, input_error, say, unreadable


def run(args: argparse.Namespace) -> int:
    """Judge each recipe; the exit code is the worst of theirs."""
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
        results.append({"recipe": str(path), **inspection_data(inspection)})
        if not args.json:
            say(inspection_text(path, inspection))
    if args.json:
        say(json.dumps(results, indent=1))
    return code
