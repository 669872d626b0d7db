"""A dish of the user's own in the design: sizes as measured, holes inside its floor, drains at its low end."""

from __future__ import annotations

import math
from typing import Any

import pytest

from tests.designs import design
from tests.dishes import BOX, ROUND, UPRIGHT, dish_design
from wavejig.design.own import floor_outline


def test_the_floor_is_the_base_and_nothing_is_folded() -> None:
    made = dish_design().reflector
    assert (made.kind, made.base_x_mm, made.base_y_mm, made.lips) == ("own", 160.0, 160.0, ())
    assert made.own is not None and made.own.depth_mm == 45.0
    box = dish_design(BOX).reflector
    assert (box.base_x_mm, box.base_y_mm) == (200.0, 150.0)
    assert design().reflector.own is None


@pytest.mark.parametrize(("polarisation", "at"), [("vertical", (0.0, -1.0)), ("horizontal", (-1.0, 0.0))])
def test_a_round_dish_drains_at_its_low_end(polarisation: str, at: tuple[float, float]) -> None:
    made = dish_design(mounting={"polarisation": polarisation}).reflector
    (drain,) = [h for h in made.holes if h.purpose == "drain"]
    assert (math.copysign(1.0, drain.x_mm) if at[0] else drain.x_mm) == at[0]
    assert (math.copysign(1.0, drain.y_mm) if at[1] else drain.y_mm) == at[1]
    # its rim 1 mm from where the radius to the wall begins: 2 mm tan(85/2 deg) inside the sharp edge
    inset = 2.0 * math.tan(math.radians(42.5))
    far = math.hypot(drain.x_mm, drain.y_mm) + drain.diameter_mm / 2.0
    assert far == pytest.approx(80.0 - inset - 1.0)
    assert not [h for h in dish_design(mounting={"drain": "none"}).reflector.holes if h.purpose == "drain"]


def test_a_box_drains_twice() -> None:
    drains = [h for h in dish_design(BOX).reflector.holes if h.purpose == "drain"]
    assert [h.x_mm for h in drains] == [-50.0, 50.0] and drains[0].y_mm == drains[1].y_mm < -60.0


@pytest.mark.parametrize(
    ("dish", "hole", "across"),
    [
        (ROUND, {"x": "60 mm", "y": "60 mm", "diameter": "4 mm"}, True),  # in the square, not in the circle
        (BOX, {"x": "60 mm", "y": "60 mm", "diameter": "4 mm"}, False),
        (ROUND, {"x": "0 mm", "y": "75 mm", "diameter": "4 mm"}, False),
        (ROUND, {"x": "0 mm", "y": "79 mm", "diameter": "4 mm"}, True),
    ],
)
def test_a_hole_across_the_floor_s_edge_is_a_conflict(
    dish: dict[str, Any], hole: dict[str, str], across: bool
) -> None:
    made = dish_design(dish, reflector={"holes": [hole]})
    assert any("lies across the edge" in c.message for c in made.conflicts) is across


def test_outlines() -> None:
    round_one, box = dish_design(UPRIGHT).reflector.own, dish_design(BOX).reflector.own
    assert round_one is not None and box is not None
    assert floor_outline(round_one, (75.0, 75.0), -5.0).area_mm2 == pytest.approx(math.pi * 70.0**2)
    assert floor_outline(box, (100.0, 75.0), 2.0).area_mm2 == pytest.approx(204.0 * 154.0)
