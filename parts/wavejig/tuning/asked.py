"""A yield or a verdict on sweeps, from a settled recipe: what the commands and the pack's page both ask for."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from concurrent.futures import Executor
from typing import TYPE_CHECKING

from wavejig.recipe.models import Recipe
from wavejig.shop import Inspection
from wavejig.tuning.asbuilt import nominal
from wavejig.tuning.spread import spread

if TYPE_CHECKING:
    from wavejig.tuning.measured import Measured
    from wavejig.tuning.sweepfile import MeasuredSweep
    from wavejig.tuning.yields import Yield

Progress = Callable[[str], None]


def yield_of(
    recipe: Recipe, inspection: Inspection, executor: Executor, told: Progress = lambda what: None
) -> Yield:
    """How many of the ordered articles will pass; without a solve where the surface is kept.

    Raises ArticleError or ModelError where the articles about the design cannot be drawn or solved.
    """
    from wavejig.tuning.keptsurface import explored
    from wavejig.tuning.yields import find_yield

    design = inspection.design
    article = nominal(recipe, design)
    told("meshing")
    found = explored(
        article,
        spread(recipe, article, post_share(inspection)),
        executor,
        told=lambda done, of: told(f"solved {done} of {of}"),
    )
    told("making virtual articles")
    return find_yield(found, design.quantity, design.target.return_loss_db)


def measured_of(
    recipe: Recipe,
    inspection: Inspection,
    sweeps: Sequence[MeasuredSweep],
    readings: Mapping[str, float],
    executor: Executor,
    told: Progress = lambda what: None,
) -> Measured:
    """Sweeps judged and explained; readings: of the one article that was swept, over the centreline, mm.

    Raises as yield_of.
    """
    from wavejig.tuning.measured import measure

    told("meshing")
    article = nominal(recipe, inspection.design)
    return measure(recipe, article, sweeps, readings, executor, posts=post_share(inspection), told=told)


def post_share(inspection: Inspection) -> float:
    """Share by which plastic posts that stay may lower the frequency; 0 without any."""
    from wavejig.spacer.effect import post_effect

    if inspection.spacer is None or inspection.radiator is None:
        return 0.0
    effect = post_effect(inspection.design, inspection.radiator, inspection.spacer.posts)
    return 0.0 if effect is None else effect.shift
