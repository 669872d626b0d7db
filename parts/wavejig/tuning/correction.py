"""What a measurement puts into the recipe: the model's correction, and changed dimensions."""

from __future__ import annotations

import tomllib
from pathlib import Path

from pydantic import ValidationError

from wavejig.design import resolve
from wavejig.recipe.edit import Put, edited
from wavejig.recipe.errors import RecipeError
from wavejig.recipe.models import Recipe
from wavejig.shop import inspect
from wavejig.tuning.freedom import freedoms
from wavejig.tuning.measured import Measured
from wavejig.tuning.vary import PLACES, over_mm


class NothingToWriteError(Exception):
    """The measurement does not justify any change; the message says why."""


def puts(recipe: Recipe, found: Measured) -> list[Put]:
    """Keys to set, each with the measurement it comes from. Raises NothingToWriteError."""
    if any(a.strange for a in found.articles):
        raise NothingToWriteError(
            "a sweep that its dimensions do not explain is no ground to change a recipe on"
        )
    names = [a.sweep.path.name for a in found.articles]
    source = names[0] if len(names) == 1 else f"{len(names)} sweeps, {names[0]} to {names[-1]}"
    out = []
    if found.frequency_error > 0.0:
        out += [
            Put(
                table="measured",
                key="frequency",
                value=f"{found.frequency:.5f}",
                remark=f"true over predicted, from {source}",
            ),
            Put(
                table="measured",
                key="frequency_error",
                value=f"{found.frequency_error:.5f}",
                remark=f"standard error of it, from {source}",
            ),
            Put(table="measured", key="sweep", value=_text(names[0]), remark=f"from {source}"),
        ]
    over = over_mm(recipe, found.explored.article.design.radiator.wire_diameter_mm)
    for change in found.changes:
        extra = over if change.key in ("side", "lobe_diameter") else 0.0
        out.append(
            Put(
                table="radiator",
                key=change.key,
                value=f'"{round(change.new + extra, 3):g} mm"',
                remark=f"{round(change.now + extra, 3):g} mm before; from {source}",
            )
        )
    if not out:
        raise NothingToWriteError(
            "the sweep says nothing new about the model, and the recipe needs no change"
        )
    return out


def written_problems(path: Path, wanted: list[Put]) -> str:
    """Why the changed recipe could not be made, or nothing. Raises EditError, OSError."""
    raw = path.read_bytes().removeprefix(b"\xef\xbb\xbf").decode("utf-8").replace("\r\n", "\n")
    data = tomllib.loads(edited(raw, wanted))
    try:
        inspection = inspect(resolve(Recipe.model_validate(data)))
    except ValidationError as err:
        return "; ".join(str(e["msg"]) for e in err.errors(include_url=False))
    except RecipeError as err:
        return "; ".join(f"{p.key}: {p.fix}" for p in err.problems)
    errors = [f for f in inspection.findings if f.severity == "error"]
    return "; ".join(f"{f.code} {f.message}" for f in errors)


def _text(name: str) -> str:
    clean = "".join(c if c.isprintable() and c not in '"\\' else "_" for c in name)[:200]
    return f'"{clean}"'
