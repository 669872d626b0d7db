"""The sheet's triangles: one sheet without cracks, as large as the tray, with a corner wherever a wire lands."""

from __future__ import annotations

import itertools
import math
from collections import Counter
from functools import cache

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tests.designs import design
from wavejig.field.mesh_sheet import sheet_triangles
from wavejig.reflector.model import Tray
from wavejig.reflector.tray import corner_practice
from wavejig.reflector.tray import plan as plan_tray

Node = tuple[float, float, float]
FEET = [(0.0, 5.0), (6.5, -3.0)]

TRAYS = {
    "flat": {"lips": "none"},
    "two lips": {"lips": "two"},
    "four lips": {"lips": "four"},
    "four lips, mitred": {"lips": "four", "corners": "mitre"},
    "two lips, low": {"lips": "two", "lip_angle": "30 deg"},
    "four lips, leaning": {"lips": "four", "lip_angle": "60 deg", "corners": "mitre"},
}


@cache
def tray(name: str) -> Tray:
    made = design("biquad", reflector=TRAYS[name])
    return plan_tray(made.reflector, corner_practice(made.cutter))


def nodes_of(triangles: np.ndarray) -> list[tuple[Node, Node, Node]]:
    """Triangles by their corners, to a nanometre."""
    return [tuple(tuple(p) for p in t) for t in (np.round(triangles, 6) + 0.0).tolist()]  # type: ignore[misc]


def sides(triangles: np.ndarray) -> Counter[frozenset[Node]]:
    return Counter(frozenset(pair) for t in nodes_of(triangles) for pair in itertools.combinations(t, 2))


def rims(triangles: np.ndarray) -> int:
    """Closed lines that bound the triangles: 1 for a sheet without holes or cracks."""
    at: dict[Node, list[Node]] = {}
    for side, count in sides(triangles).items():
        if count == 1:
            a, b = side
            at.setdefault(a, []).append(b)
            at.setdefault(b, []).append(a)
    assert all(len(v) == 2 for v in at.values())
    found, left = 0, set(at)
    while left:
        found += 1
        stack = [left.pop()]
        while stack:
            for n in at[stack.pop()]:
                if n in left:
                    left.remove(n)
                    stack.append(n)
    return found


def check_one_sheet(triangles: np.ndarray) -> None:
    count = sides(triangles)
    assert max(count.values()) == 2
    corners = {p for t in nodes_of(triangles) for p in t}
    # corners - sides + triangles = 1: one piece, no hole, no crack, no corner in the middle of a side
    assert len(corners) - len(count) + len(triangles) == 1
    assert rims(triangles) == 1


def areas(triangles: np.ndarray) -> np.ndarray:
    u, v = triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0]
    return np.asarray(np.linalg.norm(np.cross(u, v), axis=1) / 2.0)


@pytest.mark.parametrize("name", TRAYS)
@pytest.mark.parametrize("feet", [[], FEET[:1], FEET], ids=["no foot", "one foot", "two feet"])
def test_one_sheet(name: str, feet: list[tuple[float, float]]) -> None:
    """Every inner side belongs to two triangles; lips hang on the base by their corners."""
    check_one_sheet(sheet_triangles(tray(name), feet, 14.0, 2.0))


@pytest.mark.parametrize("name", TRAYS)
def test_as_large_as_the_tray(name: str) -> None:
    """Base exactly; lips within 1 % (their ends lean from the base's nodes to where the lip ends)."""
    planned = tray(name)
    triangles = sheet_triangles(planned, FEET, 10.0, 2.0)
    reach = {
        e: planned.half_mm(e)
        - (
            planned.thickness_mm * math.tan(math.radians(lip.angle_deg) / 2.0)
            if (lip := planned.lip(e))
            else 0.0
        )
        for e in ("x+", "y+")
    }
    on_base = np.all(np.abs(triangles[:, :, 2]) < 1e-9, axis=1)
    assert areas(triangles[on_base]).sum() == pytest.approx(4.0 * reach["x+"] * reach["y+"], rel=1e-9)
    for lip in planned.lips:
        inner = lip.height_mm - planned.thickness_mm * math.tan(math.radians(lip.angle_deg) / 2.0)
        steps = np.linspace(0.0, inner, 401)
        setback = lip.setback_mm - planned.thickness_mm * math.tan(math.radians(lip.angle_deg) / 2.0)
        width = [lip.left.reach_mm(w - setback) + lip.right.reach_mm(w - setback) for w in steps]
        wanted = float(np.trapezoid(width, steps))
        axis = 0 if lip.edge[0] == "x" else 1
        sign = 1.0 if lip.edge[1] == "+" else -1.0
        mine = ~on_base & (sign * triangles.mean(axis=1)[:, axis] > 0.0)
        normal = np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0])
        normal /= np.linalg.norm(normal, axis=1)[:, None]
        square = np.array([0.0, 0.0, math.cos(math.radians(lip.angle_deg))])
        square[axis] = -sign * math.sin(math.radians(lip.angle_deg))
        mine &= np.abs(normal @ square - 1.0) < 1e-6
        # for trapezoids of straight sides one percent is the lean; a mitre's ear is more of it
        assert areas(triangles[mine]).sum() == pytest.approx(
            wanted, rel=0.01 if lip.left.ear_mm is None else 0.03
        )
        top = triangles[mine][:, :, 2].max()
        assert top == pytest.approx(inner * math.sin(math.radians(lip.angle_deg)), rel=1e-9)


@pytest.mark.parametrize("name", TRAYS)
def test_every_triangle_faces_the_radiator(name: str) -> None:
    triangles = sheet_triangles(tray(name), FEET, 14.0, 2.0)
    normal = np.cross(triangles[:, 1] - triangles[:, 0], triangles[:, 2] - triangles[:, 0])
    base = np.all(np.abs(triangles[:, :, 2]) < 1e-9, axis=1)
    assert np.all(normal[base, 2] > 0.0)
    centre = triangles.mean(axis=1)
    # a lip's inner face looks back over the base and up, never out and down
    assert np.all(np.sum(normal[~base] * (np.array([0.0, 0.0, 200.0]) - centre[~base]), axis=1) > 0.0)


@pytest.mark.parametrize("name", ["flat", "four lips"])
def test_lips_hang_on_the_base(name: str) -> None:
    planned = tray(name)
    triangles = sheet_triangles(planned, FEET, 14.0, 2.0)
    flat = np.all(np.abs(triangles[:, :, 2]) < 1e-9, axis=1)
    base, up = sides(triangles[flat]), sides(triangles[~flat])
    assert len([s for s in up if s in base]) >= 4 * len(planned.lips)


place = st.tuples(st.floats(-45.0, 45.0), st.floats(-45.0, 45.0))


@settings(max_examples=40)
@given(st.lists(place, max_size=3), st.floats(8.0, 30.0), st.floats(1.0, 6.0), st.sampled_from(sorted(TRAYS)))
def test_feet_anywhere(feet: list[tuple[float, float]], largest: float, smallest: float, name: str) -> None:
    """A corner exactly where each wire lands, whatever the cells; still one sheet, no slivers."""
    for i, (x, y) in enumerate(feet):
        if any(math.dist((x, y), other) < 3.0 * smallest for other in feet[:i]):
            return
    triangles = sheet_triangles(tray(name), feet, largest, smallest)
    check_one_sheet(triangles)
    corners = triangles.reshape(-1, 3)
    for x, y in feet:
        assert np.abs(corners - (x, y, 0.0)).max(axis=1).min() == 0.0
    longest = np.linalg.norm(np.roll(triangles, -1, axis=1) - triangles, axis=2).max(axis=1)
    assert (areas(triangles) / longest**2).min() > 0.02
    assert longest.max() < 2.0 * largest


def test_cells_shrink_towards_a_foot() -> None:
    triangles = sheet_triangles(tray("flat"), FEET[:1], 14.0, 1.0)
    touching = np.any(np.all(np.abs(triangles - (*FEET[0], 0.0)) < 1e-9, axis=2), axis=1)
    assert areas(triangles[touching]).max() < 2.0
    assert areas(triangles).max() > 30.0


def test_a_foot_off_the_sheet_is_refused() -> None:
    with pytest.raises(ValueError, match="off the sheet"):
        sheet_triangles(tray("flat"), [(500.0, 0.0)], 14.0, 2.0)


def test_mirror_symmetric_where_the_tray_and_feet_are() -> None:
    triangles = sheet_triangles(tray("four lips"), [(0.0, 6.0), (0.0, -6.0)], 14.0, 2.0)
    for axis in (0, 1):
        mirror = triangles.copy()
        mirror[..., axis] *= -1.0
        assert {frozenset(t) for t in nodes_of(mirror)} == {frozenset(t) for t in nodes_of(triangles)}
