"""The dish's mesh: one surface, as large as the dish, with vertices where wires land; and what is solved on it."""

from __future__ import annotations

import math
from collections import Counter
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.designs import design
from tests.dishes import BOX, DISHES, ROUND, UPRIGHT, dish_design
from tests.field.test_mesh_sheet import check_one_sheet, rims
from wavejig.field import Model, solve
from wavejig.field.from_design import model_from_design
from wavejig.field.mesh_own import own_triangles, to_disc, to_square
from wavejig.field.mesh_plan import MeshPlan
from wavejig.reflector.model import Tray
from wavejig.reflector.own import surface_mm2
from wavejig.reflector.tray import plan

Point = tuple[float, float, float]
FEET = [(0.0, 5.0), (6.5, -3.0)]
MIDDLE_HZ = 2.44e9


def tray(dish: dict[str, Any]) -> Tray:
    return plan(dish_design(dish).reflector)


def area(triangles: np.ndarray) -> float:
    sides = np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0])
    return float(np.linalg.norm(sides, axis=1).sum()) / 2.0


@pytest.mark.parametrize("name", DISHES)
def test_it_is_one_surface_with_one_edge(name: str) -> None:
    triangles = own_triangles(tray(DISHES[name]), FEET, 13.6, 2.0)
    check_one_sheet(triangles)
    assert rims(triangles) == 1  # at the rim, nowhere else: floor and wall are joined all round
    top = float(triangles[..., 2].max())
    made = tray(DISHES[name]).own
    assert made is not None and top == pytest.approx(made.depth_mm)


@pytest.mark.parametrize("name", DISHES)
@pytest.mark.parametrize("step", [13.6, 7.0])
def test_its_area_is_the_dish_s(name: str, step: float) -> None:
    """Exact for a box; for a circle the floor is of equal area, and the wall's foot a little longer than it."""
    made = tray(DISHES[name])
    got = area(own_triangles(made, FEET, step, 2.0))
    assert got == pytest.approx(surface_mm2(made), rel=1e-9 if name == "box" else 1e-3 * (step / 13.6) ** 2)


@pytest.mark.parametrize("name", DISHES)
def test_every_triangle_looks_inwards(name: str) -> None:
    triangles = own_triangles(tray(DISHES[name]), FEET, 13.6, 2.0)
    normal = np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0])
    middle = triangles.mean(axis=1)
    inwards = (
        np.array([0.0, 0.0, 200.0]) - middle
    )  # a point above the dish sees every face of it, but the rim's back
    assert np.all(np.einsum("ij,ij->i", normal, inwards) > 0.0)


@pytest.mark.parametrize("name", DISHES)
def test_no_triangle_is_a_sliver(name: str) -> None:
    triangles = own_triangles(tray(DISHES[name]), FEET, 13.6, 2.0)
    sides = np.linalg.norm(triangles - np.roll(triangles, 1, axis=1), axis=2)
    double = np.linalg.norm(
        np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0]), axis=1
    )
    # height over the longest side, against that side: 0.87 for equal sides
    assert float((double / sides.max(axis=1) ** 2).min()) > 0.12


@given(st.floats(-0.65, 0.65), st.floats(-0.65, 0.65), st.floats(0.8, 6.0), st.sampled_from(sorted(DISHES)))
def test_wires_land_on_vertices_anywhere(u: float, v: float, fine: float, name: str) -> None:
    made = tray(DISHES[name])
    landing = (u * made.half_x_mm, v * made.half_y_mm)
    triangles = own_triangles(made, [landing], 13.6, fine)
    corners = triangles.reshape(-1, 3)
    hit = np.linalg.norm(corners - np.array([*landing, 0.0]), axis=1) < 1e-9
    assert hit.sum() >= 3
    check_one_sheet(triangles)
    assert rims(triangles) == 1


def test_a_landing_off_the_floor_is_refused() -> None:
    with pytest.raises(ValueError, match="off the dish's floor"):
        own_triangles(tray(ROUND), [(60.0, 60.0)], 13.6, 2.0)
    own_triangles(tray(BOX), [(60.0, 60.0)], 13.6, 2.0)


@given(st.floats(-1.0, 1.0), st.floats(-1.0, 1.0))
def test_the_disc_s_mapping_and_back(u: float, v: float) -> None:
    at = to_disc((50.0 * u, 50.0 * v), 50.0)
    assert math.hypot(*at) <= 50.0 + 1e-9
    # the map is flat in the square's corners, where the way back loses half the digits
    assert to_square(at, 50.0) == pytest.approx((50.0 * u, 50.0 * v), abs=2e-5)


def test_neighbours_are_meshed_alike() -> None:
    kept = MeshPlan()
    first = own_triangles(tray(ROUND), FEET, 13.6, 2.0, kept)
    kept.close()
    moved = [(x + 0.1, y) for x, y in FEET]
    second = own_triangles(tray({**ROUND, "depth": "46 mm"}), moved, 13.6, 2.0, kept)
    assert first.shape == second.shape and np.abs(first - second).max() < 1.2


def mirrored(triangles: np.ndarray, axis: int) -> Counter[Any]:
    flipped = triangles.copy()
    flipped[..., axis] *= -1.0
    return Counter(frozenset(map(tuple, np.round(t, 6) + 0.0)) for t in flipped)


@pytest.mark.parametrize("name", DISHES)
def test_it_is_as_symmetrical_as_its_landings(name: str) -> None:
    triangles = own_triangles(tray(DISHES[name]), [(0.0, 4.0), (0.0, -4.0)], 13.6, 2.0)
    plain = Counter(frozenset(map(tuple, np.round(t, 6) + 0.0)) for t in triangles)
    assert mirrored(triangles, 0) == plain == mirrored(triangles, 1)


# -- solved ---------------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", DISHES)
def test_power_in_is_power_out(name: str) -> None:
    response = solve(Model.from_design(dish_design(DISHES[name])), [MIDDLE_HZ])
    assert response.remarks == ()
    assert response.power_balance[0] == pytest.approx(1.0, abs=1e-3)
    assert 0.9 < response.efficiency[0] < 1.0
    assert response.directivity_dbi([(0.0, 0.0, 1.0)])[0, 0] > 7.0


def test_halving_every_edge_changes_little() -> None:
    made = dish_design(ROUND)
    coarse = solve(model_from_design(made), [MIDDLE_HZ]).impedance_ohm[0]
    fine = solve(model_from_design(made, refine=2.0), [MIDDLE_HZ]).impedance_ohm[0]
    assert abs(reflection(coarse) - reflection(fine)) < 0.03


def test_a_round_dish_does_not_care_which_way_the_radiator_lies() -> None:
    """Turned by 30 and 45 degrees about the axis the wires meet quite another mesh, and the same dish."""
    made = dish_design(UPRIGHT)
    straight = model_from_design(made)
    reference = solve(straight, [MIDDLE_HZ]).impedance_ohm[0]
    feet = sorted(
        {w.start for w in straight.wires if w.start[2] == 0.0}
        | {w.end for w in straight.wires if w.end[2] == 0.0}
    )
    step = made.target.wavelength_mm / 9.0
    radius = 2.2 * made.feed.leg_diameter_mm / 2.0
    for degrees in (30.0, 45.0):
        c, s = math.cos(math.radians(degrees)), math.sin(math.radians(degrees))

        def turned(p: Point, c: float = c, s: float = s) -> Point:
            return (c * p[0] - s * p[1], s * p[0] + c * p[1], p[2])

        landings = [(1e3 * x, 1e3 * y) for x, y, _ in map(turned, feet)]
        model = replace(
            straight,
            wires=tuple(replace(w, start=turned(w.start), end=turned(w.end)) for w in straight.wires),
            triangles=1e-3 * own_triangles(plan(made.reflector), landings, step, radius),
        )
        other = solve(model, [MIDDLE_HZ]).impedance_ohm[0]
        assert abs(reflection(other) - reflection(reference)) < 0.02


def test_an_upright_box_with_slit_corners_is_the_mitred_tray() -> None:
    """Against the tray's own mesh, whose lips leave 0.5 mm between them; closed corners carry current and differ."""
    mitred = {"base": ["140 mm", "140 mm"], "lips": "four", "lip_height": "30 mm", "corners": "mitre"}
    tray_one = design(reflector={**mitred, "thickness": "0.5 mm", "material": "tinplate"})
    box = dish_design(
        {"shape": "rectangular", "size": ["139 mm", "139 mm"], "depth": "29.5 mm", "radius": "0 mm"}
    )
    closed = model_from_design(box)
    half = 69.5e-3
    corners = closed.triangles.copy()
    wall = np.all(np.isclose(np.abs(corners[..., 0]), half), axis=1)
    raised = wall[:, None] & (corners[..., 2] > 1e-6)
    corners[..., 1] = np.where(raised, corners[..., 1] * (1.0 - 0.5e-3 / half), corners[..., 1])
    folded = solve(model_from_design(tray_one), [MIDDLE_HZ])
    slit = solve(replace(closed, triangles=corners), [MIDDLE_HZ])
    joined = solve(closed, [MIDDLE_HZ])
    up = [(0.0, 0.0, 1.0)]
    wanted = reflection(folded.impedance_ohm[0])
    assert abs(reflection(slit.impedance_ohm[0]) - wanted) < 0.003
    assert slit.directivity_dbi(up)[0, 0] == pytest.approx(folded.directivity_dbi(up)[0, 0], abs=0.05)
    assert joined.directivity_dbi(up)[0, 0] > folded.directivity_dbi(up)[0, 0] + 0.3


def reflection(z: complex) -> complex:
    return (z - 50.0) / (z + 50.0)
