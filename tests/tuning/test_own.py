"""Tuning leaves a dish of the user's own as it is."""

from __future__ import annotations

from tests.designs import recipe
from tests.dishes import BOX, ROUND, own
from wavejig.design import resolve
from wavejig.tuning.alternatives import _changes
from wavejig.tuning.asbuilt import nominal
from wavejig.tuning.freedom import freedoms
from wavejig.tuning.vary import held, with_values

SHEET = {"base_x", "base_y", "lip_height", "lip_angle"}


def test_nothing_of_the_dish_is_free() -> None:
    for dish in (ROUND, BOX):
        asked = recipe(reflector=own(dish))
        names = {f.name for f in freedoms(asked, resolve(asked))}
        assert names and not names & SHEET
    sheet = recipe(reflector={"lips": "four"})
    assert {"base_x", "base_y", "lip_height"} <= {f.name for f in freedoms(sheet, resolve(sheet))}


def test_no_other_sheet_is_proposed() -> None:
    asked = recipe(reflector=own())
    changes = [(said, other) for said, other in _changes(asked)]
    assert changes and all(other.reflector == asked.reflector for _, other in changes)
    assert not [said for said, _ in changes if "reflector." in said]


def test_neighbours_keep_the_dish() -> None:
    """What tuning and yield vary leaves no key behind that a dish has not."""
    asked = recipe(reflector=own())
    design = resolve(asked)
    values = held(design)
    assert not set(values) & SHEET
    moved = resolve(with_values(asked, {**values, "standoff": values["standoff"] + 1.0}))
    assert moved.reflector.own == design.reflector.own and moved.reflector.base_x_mm == 160.0
    assert not set(nominal(asked, design).values) & SHEET
