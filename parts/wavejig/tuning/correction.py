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
    if not out and not found.changes:
        raise NothingToWriteError(
            "the sweep says nothing new about the model, and the recipe needs no change"
        )
    return out + _sizes(recipe, found, source)


def _sizes(recipe: Recipe, found: Measured, source: str) -> list[Put]:
    """Changed dimensions; and those still auto, as they were on the article: else they would be tuned anew."""
    design = found.explored.article.design
    changed = {c.key: c for c in found.changes}
    values = {name: value.value for name, value in design.values}
    free = [f.name for f in freedoms(recipe, resolve(recipe))]
    over = over_mm(recipe, design.radiator.wire_diameter_mm)
    drawn = f"as drawn when {source} was measured"
    out = []
    for name in dict.fromkeys([*free, *changed]):
        table, key = PLACES[name]
        if key == "base":
            continue
        extra = over if name in ("side", "lobe_diameter") else 0.0
        unit = "deg" if name == "lobe_angle" else "mm"
        size = changed[name].new if name in changed else values[name]
        remark = (
            f"{_size(changed[name].now + extra)} {unit} before; from {source}" if name in changed else drawn
        )
        out.append(Put(table=table, key=key, value=f'"{_size(size + extra)} {unit}"', remark=remark))
    if any(name in free for name in ("base_x", "base_y")):
        pair = ", ".join(f'"{_size(values[n])} mm"' for n in ("base_x", "base_y"))
        out.append(Put(table="reflector", key="base", value=f"[{pair}]", remark=drawn))
    return out


def _size(value: float) -> str:
    return f"{round(value, 3):.8g}"


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
