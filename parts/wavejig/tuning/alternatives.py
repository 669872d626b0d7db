"""What would help where a target cannot be met: other wire, feed, sheet or family, each tried shortly."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from wavejig.design import resolve
from wavejig.field.errors import ModelError
from wavejig.recipe.errors import RecipeError
from wavejig.recipe.models import Recipe
from wavejig.recipe.units import WireSize
from wavejig.tuning.candidates import CannotStartError, NothingFreeError
from wavejig.tuning.tune import tune

SHORT = 16  # solves spent on each: enough to see the way, not the end of it
THICKER = 1.4  # two steps of the R20 series (IEC 60317-0-1), about


@dataclass(frozen=True, slots=True, kw_only=True)
class Alternative:
    """One change of the recipe and the worst return loss that a short tuning reached with it."""

    change: str
    worst_db: float
    gain_dbi: float


def alternatives(recipe: Recipe, told: Callable[[str], None] = lambda _: None) -> tuple[Alternative, ...]:
    """Changes tried, the best first; those that cannot be made are left out."""
    found = []
    for change, other in _changes(recipe):
        told(f"trying {change}")
        try:
            answer = tune(other, most_solves=SHORT)
        except (CannotStartError, NothingFreeError, ModelError, RecipeError):
            continue
        found.append(
            Alternative(change=change, worst_db=answer.after.worst_db, gain_dbi=answer.after.gain_dbi)
        )
    return tuple(sorted(found, key=lambda a: (-round(a.worst_db, 1), a.change)))


def _changes(recipe: Recipe) -> Iterator[tuple[str, Recipe]]:
    if recipe.feed.style == "legs":
        feed = recipe.feed.model_copy(update={"style": "tube", "leg_spacing": "auto"})
        yield 'a tube to the terminals (feed.style = "tube")', recipe.model_copy(update={"feed": feed})
    diameter = resolve(recipe).radiator.wire_diameter_mm
    for word, factor in (("thicker", THICKER), ("thinner", 1.0 / THICKER)):
        wire = round(diameter * factor, 1)
        radiator = recipe.radiator.model_copy(
            update={"wire": WireSize(standard="diameter", number=wire), "inside_bend_radius": "auto"}
        )
        yield f'{word} wire (radiator.wire = "{wire:g} mm")', recipe.model_copy(update={"radiator": radiator})
    cut_sheet = recipe.reflector.kind != "own"
    if cut_sheet and recipe.reflector.lips == "none" and not recipe.reflector.material.startswith("laminate"):
        reflector = recipe.reflector.model_copy(update={"lips": "four"})
        yield (
            'lips round the sheet (reflector.lips = "four")',
            recipe.model_copy(update={"reflector": reflector}),
        )
    if cut_sheet and any(size != "auto" for size in recipe.reflector.base):
        base = tuple(size if size == "auto" else round(1.3 * size) for size in recipe.reflector.base)
        reflector = recipe.reflector.model_copy(update={"base": base})
        yield "a sheet larger by a third (reflector.base)", recipe.model_copy(update={"reflector": reflector})
    if recipe.radiator.family in ("quad", "twin-loop"):
        radiator = recipe.radiator.model_copy(update={"family": "biquad", "lobe_diameter": "auto"})
        yield (
            'two square lobes (radiator.family = "biquad")',
            recipe.model_copy(update={"radiator": radiator}),
        )
