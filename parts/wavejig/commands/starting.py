"""`wavejig new`: a commented recipe to start from, or the schema of recipes."""

from __future__ import annotations

import argparse
import json

from wavejig.commands.telling import MACHINE, OK, WRONG_INPUT, say, stop


def run(args: argparse.Namespace) -> int:
    """Write the file named, never over another."""
    if args.schema:
        return _print_schema(args.schema)
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


def _print_schema(name: str) -> int:
    if name == "recipe":
        from wavejig.recipe.models import Recipe

        schema = {"$schema": "https://json-schema.org/draft/2020-12/schema", **Recipe.model_json_schema()}
    else:
        from wavejig.files import schemas
        from wavejig.recipe.errors import show, spelling_fix

        known = ("recipe", *schemas.names())
        if name not in known:
            fix = spelling_fix(name, known, "Choose one from the list.")
            return stop(WRONG_INPUT, f"new: no schema {show(name)}; allowed: {', '.join(known)}. {fix}")
        schema = schemas.schema(name)
    say(json.dumps(schema, indent=1))
    return OK
