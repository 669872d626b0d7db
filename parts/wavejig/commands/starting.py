"""`wavejig new`: a commented recipe to start from, or the schema of recipes."""

from __future__ import annotations

import argparse
import json

from wavejig.commands.telling import MACHINE, OK, WRONG_INPUT, say, stop


def run(args: argparse.Namespace) -> int:
    """Write the file named, never over another."""
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
