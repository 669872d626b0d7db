"""A recipe's `auto` settled by tuning, through the cache: what `build` makes and `check` looks at."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from wavejig.design import resolve
from wavejig.design.model import Design
from wavejig.recipe.models import Recipe
from wavejig.tuning import cache
from wavejig.tuning.freedom import GRID_MM, freedoms
from wavejig.tuning.tuned import tuned_design

if TYPE_CHECKING:
    from wavejig.tuning.tune import Tuned

Told = Callable[[str], None]
AIM = "match"  # what `auto` means unless the user tunes for gain and writes that down


@dataclass(frozen=True, slots=True, kw_only=True)
class Settled:
    """A design and how its free numbers came about: "given" (none free), "start", "kept" or "tuned"."""

    design: Design
    how: str
    tuned: Tuned | None = None


def kept(recipe: Recipe) -> Settled:
    """Without a solve: the cached answer where there is one, else the starting values.

    Raises RecipeError.
    """
    start = resolve(recipe)
    if not freedoms(recipe, start):
        return Settled(design=start, how="given")
    values = cache.load(recipe, AIM, GRID_MM)
    if values is None:
        return Settled(design=start, how="start")
    return Settled(design=tuned_design(recipe, values), how="kept")


def settle(
    recipe: Recipe, told: Told = lambda _: None, announce: Told = lambda _: None, *, anew: bool = False
) -> Settled:
    """The tuned design, from the cache (anew: not from there) or worked out now and kept.

    told: after each solve. Where the start cannot be made, or cannot be solved, the start comes back as it
    is: its findings, or the prediction, say why. Raises RecipeError.
    """
    found = kept(recipe)
    if found.how == "given" or (found.how == "kept" and not anew):
        return found
    start = Settled(design=resolve(recipe), how="start")
    from wavejig.field.errors import ModelError
    from wavejig.tuning.candidates import CannotStartError
    from wavejig.tuning.keptsolves import solving_anew
    from wavejig.tuning.tune import tune

    try:
        with solving_anew(anew):
            answer = tune(recipe, aim=AIM, grid_mm=GRID_MM, told=told, announce=announce)
    except (CannotStartError, ModelError):
        return start
    cache.save(recipe, AIM, GRID_MM, answer.values)
    return Settled(design=tuned_design(recipe, answer.values), how="tuned", tuned=answer)
