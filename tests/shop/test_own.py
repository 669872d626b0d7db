"""Findings about a dish of the user's own: each has one that raises it and one that does not."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from tests.dishes import BOX, ROUND, UPRIGHT, dish_design
from wavejig.shop import Inspection, inspect
from wavejig.shop.own import wall_clearance_mm

BEHIND = {"mounting": "behind"}


def looked(dish: dict[str, Any] | None = None, **tables: Any) -> Inspection:
    return inspect(dish_design(dish, **tables))


def sized(diameter: float, depth: float = 45.0, slope: float = 5.0) -> dict[str, Any]:
    return {**ROUND, "diameter": f"{diameter} mm", "depth": f"{depth} mm", "slope": f"{slope} deg"}


# code, severity, (dish, tables) that raise it, (dish, tables) that do not
CASES: list[tuple[str, str, tuple[dict[str, Any], dict[str, Any]], tuple[dict[str, Any], dict[str, Any]]]] = [
    ("own-wall-touched", "error", (sized(80.0), {}), (ROUND, {})),
    ("own-wall-touched", "error", ({**BOX, "size": ["80 mm", "150 mm"]}, {}), (BOX, {})),
    ("own-wall-near", "warning", (sized(94.0), {}), (ROUND, {})),
    ("own-rim-below-wire", "note", (sized(160.0, 12.0), {}), (ROUND, {})),
    ("own-hole-near-wall", "warning",
     (ROUND, {"reflector": {"holes": [{"x": "0 mm", "y": "76 mm", "diameter": "4 mm"}]}}),
     (ROUND, {"reflector": {"holes": [{"x": "0 mm", "y": "74 mm", "diameter": "4 mm"}]}})),
    ("own-connector-near-wall", "error", (sized(38.0), {}), (ROUND, {})),
    ("own-not-solderable", "note", (ROUND, {"reflector": {"material": "aluminium"}}), (ROUND, {})),
    ("own-coating", "note", (ROUND, {}), (ROUND, {})),
    ("own-measure", "note", (ROUND, {}), (ROUND, {})),
    ("own-thin-drilling", "note", (ROUND, {}), (ROUND, {"reflector": {"thickness": "1.2 mm"}})),
    ("no-drain", "warning", (ROUND, {"mounting": {"drain": "none"}}), (ROUND, {})),
    ("sheet-not-solderable", "error",
     (ROUND, {"feed": {"style": "tube"}, "reflector": {"material": "aluminium"}}), (ROUND, {})),
]  # fmt: skip
ALWAYS = {"own-coating", "own-measure"}  # of every dish, and of nothing else


@pytest.mark.parametrize(("code", "severity", "bad", "good"), CASES, ids=[c[0] for c in CASES])
def test_it_is_raised_where_it_should_be_and_only_there(
    code: str,
    severity: str,
    bad: tuple[dict[str, Any], dict[str, Any]],
    good: tuple[dict[str, Any], dict[str, Any]],
) -> None:
    found = [f for f in looked(bad[0], **bad[1]).findings if f.code == code]
    assert found and {f.severity for f in found} == {severity}
    assert all(f.remedy and f.source and f.where for f in found)
    if code in ALWAYS:
        from tests.designs import design

        assert code not in {f.code for f in inspect(design()).findings}
    else:
        assert code not in {f.code for f in looked(good[0], **good[1]).findings}


@pytest.mark.parametrize("dish", [ROUND, BOX, UPRIGHT])
def test_nothing_is_said_of_blanks_and_folds(dish: dict[str, Any]) -> None:
    """A sheet too small to cut it from, a laser that does not like the metal: it is not cut."""
    found = looked(
        dish,
        cutter={"process": "co2-laser", "stock_sheet": ["60 mm", "60 mm"]},
        reflector={"material": "copper"},
    )
    assert found.tray is not None
    about_sheet = (
        "blank-",
        "fold-",
        "lip-",
        "bend-",
        "box-",
        "metal-",
        "laminate-",
        "base-",
        "hole-",
        "marks-",
    )
    assert not [f.code for f in found.findings if f.code.startswith(about_sheet)]


@pytest.mark.parametrize("dish", [ROUND, BOX, UPRIGHT])
def test_the_demo_like_ones_can_be_made(dish: dict[str, Any]) -> None:
    assert looked(dish).can_be_made


def test_the_clearance_is_what_a_ruler_says() -> None:
    """An upright wall: the dish's radius less the wire's farthest point, its outside."""
    found = looked(UPRIGHT)
    assert found.tray is not None and found.radiator is not None
    clear, at = wall_clearance_mm(found.tray, found.radiator)
    points = np.concatenate([p.path.sample(chord_error_mm=0.001, step_mm=0.2) for p in found.radiator.pieces])
    far = np.hypot(points[:, 0], points[:, 1]).max() + 0.9
    assert clear == pytest.approx(75.0 - far, abs=0.05)
    assert at[2] == pytest.approx(found.design.radiator.standoff_mm)


def test_wire_above_the_rim_meets_no_wall() -> None:
    shallow = {**BOX, "size": ["80 mm", "150 mm"], "depth": "10 mm"}
    assert "own-wall-touched" not in {f.code for f in looked(shallow).findings}
