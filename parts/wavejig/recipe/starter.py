"""The commented recipe that `wavejig new` writes."""

from __future__ import annotations

import re
from importlib.resources import files

from wavejig.recipe.fields import RESERVED


def starter(stem: str) -> str:
    """The starter recipe, named after the file it goes into as far as a name allows."""
    name = re.sub(r"[^A-Za-z0-9_-]+", "-", stem).strip("-._")[:48].strip("-._") or "my-antenna"
    if name.lower() in RESERVED:
        name = f"antenna-{name}"
    return (
        files("wavejig.recipe").joinpath("starter.toml").read_text(encoding="utf-8").replace("@name@", name)
    )
