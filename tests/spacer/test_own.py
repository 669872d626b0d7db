"""The spacer fits inside a dish, also while it is pulled out from under the wire."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from tests.dishes import BOX, ROUND, UPRIGHT, dish_design

from wavejig.radiator.plan import plan as plan_radiator
from wavejig.spacer.plan import plan


@pytest.mark.parametrize("dish", [ROUND, BOX, UPRIGHT])
def test_pieces_stay_on_the_flat_floor_from_rest_to_lift(dish: dict[str, Any]) -> None:
    design = dish_design(dish)
    spacer = plan(design, plan_radiator(design))
    own = design.reflector.own
    assert own is not None and spacer.conflicts == () and len(spacer.pieces) == 2
    for piece in spacer.pieces:
        foot = piece.layers[0].contour.points(0.01)
        assert piece.travel_mm <= piece.available_mm + 1e-9
        for pull in np.linspace(0.0, piece.travel_mm, 5):
            moved = foot + pull * np.array(piece.withdrawal)
            if own.shape == "round":
                assert np.hypot(*moved.T).max() < design.reflector.base_x_mm / 2.0 - own.inset_mm
            else:
                assert np.abs(moved[:, 0]).max() < design.reflector.base_x_mm / 2.0 - own.inset_mm
                assert np.abs(moved[:, 1]).max() < design.reflector.base_y_mm / 2.0 - own.inset_mm


def test_a_dish_too_small_for_it_is_a_conflict_that_names_the_wall() -> None:
    design = dish_design({**ROUND, "diameter": "80 mm"})
    told = plan(design, plan_radiator(design)).conflicts
    assert {c.key for c in told} == {"reflector.own"} and "base" not in told[0].remedy
    assert any("the wall, to be pulled out" in c.message for c in told)


def test_posts_stand_on_the_flat_floor_too() -> None:
    roomy = dish_design(spacer={"style": "posts"})
    spacer = plan(roomy, plan_radiator(roomy))
    assert spacer.conflicts == () and len(spacer.posts) == 2
    flat = 80.0 - roomy.reflector.own.inset_mm  # type: ignore[union-attr]
    for post in spacer.posts:
        assert max(math.hypot(x, y) for x, y, _ in post.outline.vertices) < flat
    tight = dish_design({**ROUND, "diameter": "92 mm"}, spacer={"style": "posts"})
    assert any(
        c.key in ("reflector.base", "reflector.own") for c in plan(tight, plan_radiator(tight)).conflicts
    )
