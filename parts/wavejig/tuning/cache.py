"""Tuned answers kept on disk, so that a second build of the same recipe pays nothing.

The key is a hash of everything the answer depends on: the recipe but for what is listed below, the aim and
the grid, this package's own sources and tables, and the versions of the libraries that compute. A changed
wire, table or solver therefore never meets an old answer. A file that cannot be read, or was cut short,
counts as absent.

What is left out reaches neither a model nor a shop finding that can refuse a design; the tests look
at each. Whatever may refuse one (a printer's bed, a spool that is too short) counts.
"""

from __future__ import annotations

import contextlib
import hashlib
import json
import math
import os
import sys
from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Any

from wavejig.recipe.models import Recipe

LIBRARIES = ("numpy", "scipy", "numba")
# Tables that a tuned answer does not follow from: lettering, paper, mast and money.
NOT_PHYSICS = {"name", "quantity", "station", "sheet", "prices"}
# Tolerances that only yield and measurements look at.
NOT_TOLERANCES = {
    "distribution", "feed_gap", "wire", "bend_radius", "base", "lip_height", "lip_angle", "leg_spacing",
    "permittivity", "model",
}  # fmt: skip


def cache_folder() -> Path:
    """Where answers are kept: WAVEJIG_CACHE, else the user's cache folder as the system has it."""
    asked = os.environ.get("WAVEJIG_CACHE")
    if asked:
        return Path(asked)
    if sys.platform == "win32":
        base = os.environ.get("LOCALAPPDATA")
        return Path(base) / "wavejig" / "cache" if base else Path.home() / "AppData/Local/wavejig/cache"
    if sys.platform == "darwin":
        return Path.home() / "Library/Caches/wavejig"
    base = os.environ.get("XDG_CACHE_HOME")
    return (Path(base) if base else Path.home() / ".cache") / "wavejig"


def key(recipe: Recipe, aim: str, grid_mm: float) -> str:
    """Hash of all that a tuned answer depends on."""
    asked = recipe.model_dump(mode="json", exclude=NOT_PHYSICS | {"measured"})
    for name in NOT_TOLERANCES:
        del asked["tolerances"][name]
    del asked["spacer"]["sets"]
    asked["measured.frequency"] = recipe.measured.frequency
    if all(value == "auto" for name, value in asked["wire_stock"].items() if name.endswith("length")):
        del asked["wire_stock"]  # lengths that are long enough for everything refuse nothing
    return hashed([asked, aim, grid_mm])


def load(recipe: Recipe, aim: str, grid_mm: float) -> dict[str, float] | None:
    """The kept values (mm, deg) of this recipe, None when there are none."""
    try:
        values = {str(n): float(v) for n, v in read("tuned", key(recipe, aim, grid_mm))["values"].items()}
    except (ValueError, KeyError, TypeError, AttributeError):
        return None
    return values if all(math.isfinite(v) for v in values.values()) else None


def save(recipe: Recipe, aim: str, grid_mm: float, values: Mapping[str, float]) -> None:
    """Keep an answer."""
    write("tuned", key(recipe, aim, grid_mm), {"recipe": recipe.name, "values": dict(values)})


def hashed(told: Any) -> str:
    """Hash of something that is JSON, and of the program."""
    return hashlib.sha256(json.dumps([told, _program()], sort_keys=True).encode()).hexdigest()[:32]


def read(kind: str, name: str) -> Any:
    """What is kept under that name; None when nothing is, or it cannot be read."""
    try:
        return json.loads((cache_folder() / kind / f"{name}.json").read_text(encoding="utf-8"))
    except (OSError, ValueError):
        return None


def write(kind: str, name: str, data: Any) -> None:
    """Keep it. A cache that cannot be written is no reason to stop: the next run solves again."""
    path = cache_folder() / kind / f"{name}.json"
    beside = path.with_name(f".{path.name}.{os.getpid()}")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        beside.write_text(json.dumps(data) + "\n", encoding="utf-8")
        beside.replace(path)
    except OSError:
        with contextlib.suppress(OSError):
            beside.unlink()


@cache
def _program() -> str:
    """Hash of our own sources and tables, and the versions of what computes."""
    from importlib.metadata import PackageNotFoundError, version

    import wavejig

    digest = hashlib.sha256()
    root = Path(wavejig.__file__).parent
    for path in sorted(root.rglob("*")):
        if path.suffix in (".py", ".toml") and path.is_file():
            digest.update(str(path.relative_to(root)).encode())
            digest.update(path.read_bytes())
    for name in LIBRARIES:
        try:
            digest.update(f"{name} {version(name)}".encode())
        except PackageNotFoundError:
            digest.update(f"{name} absent".encode())
    return digest.hexdigest()
