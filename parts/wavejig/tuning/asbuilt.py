"""Articles as they come out: a recipe with every number pinned, a few of its dimensions moved.

An article is not a design: its board, tray and connector are there already, so what the recipe leaves
"auto" stays as it was worked out for the nominal design, and only the moved dimensions differ.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

from wavejig.design import Design, resolve
from wavejig.design.model import Corner
from wavejig.recipe.errors import RecipeError
from wavejig.recipe.models import Recipe
from wavejig.tuning.vary import held, with_values

if TYPE_CHECKING:
    from wavejig.field.mesh_plan import MeshPlan
    from wavejig.field.model import Model

_SAME_MM = 1e-3


class ArticleError(ValueError):
    """An article that cannot be drawn: its dimensions do not go together."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Nominal:
    """A design to vary about: the recipe pinned to its numbers, and the mesh its neighbours share."""

    recipe: Recipe  # as read
    design: Design
    values: Mapping[str, float]  # dimensions that can be moved, mm or deg, at their nominal values
    plan: MeshPlan | None = None  # recorded by `meshed`
    leg_follows_wire: bool = True

    def moved(self, values: Mapping[str, float]) -> Design:
        """The design of an article with these dimensions; those not named are nominal.

        Raises ArticleError for dimensions that do not go together, KeyError for unknown names.
        """
        unknown = set(values) - set(self.values)
        if unknown:
            raise KeyError(f"no dimension {sorted(unknown)}; there are {sorted(self.values)}")
        try:
            return _moved(self, values)
        except RecipeError as err:
            raise ArticleError("; ".join(f"{p.key}: {p.allowed}. {p.fix}" for p in err.problems)) from err

    def model(self, values: Mapping[str, float], refine: float = 1.0) -> Model:
        """The field model of such an article, meshed as the nominal design is (if `meshed` was called)."""
        from wavejig.field.from_design import model_from_design
        from wavejig.radiator.feedlegs import PlanError

        try:
            return model_from_design(self.moved(values), refine, self.plan)
        except PlanError as err:
            raise ArticleError(str(err)) from err

    def meshed(self, refine: float = 1.0) -> Nominal:
        """The same with the nominal design's mesh kept for its neighbours."""
        from wavejig.field.from_design import model_from_design
        from wavejig.field.mesh_plan import MeshPlan

        plan = MeshPlan()
        model_from_design(self.design, refine, plan)
        return replace(self, plan=plan)


def nominal(recipe: Recipe, design: Design) -> Nominal:
    """Pin a recipe to the numbers its design was worked out to."""
    rad, feed, ref = design.radiator, design.feed, design.reflector
    values = held(design)
    if rad.family == "path":  # an own path is moved as a whole: its mean straight stands for its size
        values["side"] = mean_side_mm(rad.corners)
    values |= {"wire_diameter": rad.wire_diameter_mm, "bend_radius": rad.inside_radius_mm}
    if ref.lips:
        values |= {"lip_height": ref.lips[0].height_mm, "lip_angle": ref.lips[0].angle_deg}
    if rad.insulation_thickness_mm > 0.0:
        values["insulation_permittivity"] = rad.insulation_permittivity
    if feed.style == "legs" and abs(math.dist(feed.pin_leg, feed.foot) - rad.feed_gap_mm) < _SAME_MM:
        values.pop("leg_spacing", None)  # the legs go straight down from the terminals, whatever the gap
    # the pin stays too: a wire a little thicker would else be bent on the next larger dowel
    rest = {"lap": rad.lap_mm, "inside_bend_radius": rad.inside_radius_mm}
    pinned = recipe.model_copy(update={"radiator": recipe.radiator.model_copy(update=rest)})
    return Nominal(recipe=pinned, design=design, values=values, leg_follows_wire=feed.leg_is_wire)


def mean_side_mm(corners: tuple[Corner, ...]) -> float:
    """Mean distance of successive corners."""
    steps = [math.dist(a.at, b.at) for a, b in itertools.pairwise(corners)]
    return sum(steps) / len(steps)


def _moved(nominal: Nominal, values: Mapping[str, float]) -> Design:
    moved = dict(nominal.values) | dict(values)
    radius = moved.pop("bend_radius")
    permittivity = moved.pop("insulation_permittivity", None)
    scale = 1.0
    if nominal.recipe.radiator.family == "path":
        scale = moved.pop("side") / nominal.values["side"]
    if nominal.recipe.feed.style == "legs" and "leg_spacing" not in moved and "feed_gap" in moved:
        moved["leg_spacing"] = moved["feed_gap"]
    recipe = with_values(nominal.recipe, moved)
    rad: dict[str, Any] = {}
    if scale != 1.0:
        rad["corners"] = _scaled(recipe, scale)
    if permittivity is not None:
        rad["insulation_permittivity"] = permittivity
    feed: dict[str, Any] = {}
    if recipe.feed.leg != "auto" and nominal.leg_follows_wire:
        feed["leg"] = recipe.radiator.wire
    recipe = recipe.model_copy(
        update={
            "radiator": recipe.radiator.model_copy(update=rad),
            "feed": recipe.feed.model_copy(update=feed),
        }
    )
    return _with_bend_radius(resolve(recipe), radius)


def _scaled(recipe: Recipe, factor: float) -> tuple[tuple[float, ...], ...]:
    assert recipe.radiator.corners is not None
    # about the origin, in plan; heights are the standoff's business
    return tuple((c[0] * factor, c[1] * factor, *c[2:]) for c in recipe.radiator.corners)


def _with_bend_radius(design: Design, inside_mm: float) -> Design:
    """Its wire's corners bent to this radius: a design's own would go to the nearest dowel."""
    rad = design.radiator
    if inside_mm == rad.inside_radius_mm:
        return design
    loaded = rad.loaded_inside_radius_mm * inside_mm / rad.inside_radius_mm
    centre = inside_mm + rad.wire_diameter_mm / 2.0
    corners = tuple(
        replace(c, radius_mm=centre) if math.isclose(c.radius_mm, rad.bend_radius_mm, abs_tol=1e-9) else c
        for c in rad.corners
    )
    return replace(
        design,
        radiator=replace(rad, inside_radius_mm=inside_mm, loaded_inside_radius_mm=loaded, corners=corners),
    )
