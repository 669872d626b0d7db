"""JSON Schemas of what programs may read: each command's --json, and design, manifest, field and model of a pack.

Draft 2020-12, one file each beside this one. Where the shape is ours alone no other key is allowed, so that a
document which gains or loses one fails until its schema is changed on purpose.
"""

from __future__ import annotations

import json
from importlib.resources import files
from typing import Any


def schema(name: str) -> dict[str, Any]:
    """The schema of that name, like "check" or "design". Raises FileNotFoundError."""
    text = (files("wavejig.files.schemas") / f"{name}.json").read_text(encoding="utf-8")
    loaded: dict[str, Any] = json.loads(text)
    return loaded


def names() -> tuple[str, ...]:
    """Every schema there is."""
    inside = files("wavejig.files.schemas").iterdir()
    return tuple(sorted(p.name.removesuffix(".json") for p in inside if p.name.endswith(".json")))
