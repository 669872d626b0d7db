"""Paths of straights and arcs, and their bend tables."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.geometry.path import (
    Arc,
    Line,
    PathBend,
    PathError,
    closest_approach_mm,
    path_from_bends,
    round_corners,
)

bend_rows = st.lists(
    st.builds(
        PathBend,
        feed_mm=st.floats(0.5, 80.0),
        rotation_deg=st.floats(-179.0, 180.0),
        angle_deg=st.floats(2.0, 300.0),
        radius_mm=st.floats(0.8, 40.0),
    ),
    min_size=1,
    max_size=14,
)


@given(rows=bend_rows, tail=st.floats(0.5, 60.0))
def test_bend_table_to_centreline_and_back(rows: list[PathBend], tail: float) -> None:
    path = path_from_bends(
        rows, tail, start=(1.0, -2.0, 3.0), direction=(0.0, 1.0, 0.0), normal=(0.0, 0.0, 1.0)
    )
    back = path.bends()
    assert len(back) == len(rows)
    for i, (want, got) in enumerate(zip(rows, back, strict=True)):
        assert got.feed_mm == pytest.approx(want.feed_mm, abs=1e-6)
        assert got.angle_deg == pytest.approx(want.angle_deg, abs=1e-6)
        assert got.radius_mm == pytest.approx(want.radius_mm, abs=1e-6)
        if i:  # the first rotation has no earlier plane to turn from
            turn = (got.rotation_deg - want.rotation_deg + 180.0) % 360.0 - 180.0
            assert turn == pytest.approx(0.0, abs=1e-6)
    again = path_from_bends(
        back, path.tail_mm(), start=path.start, direction=path.start_direction(), normal=path.arcs[0].normal
    )
    np.testing.assert_allclose(again.sample(), path.sample(), atol=1e-3)


@given(rows=bend_rows, tail=st.floats(0.5, 60.0))
def test_every_arc_meets_its_neighbours_and_its_own_middle(rows: list[PathBend], tail: float) -> None:
    path = path_from_bends(
        rows, tail, start=(0.0, 0.0, 0.0), direction=(1.0, 0.0, 0.0), normal=(0.0, 0.0, 1.0)
    )
    for a, b in zip(path.segments[:-1], path.segments[1:], strict=True):
        assert a.end == pytest.approx(b.start, abs=1e-9)
    for arc in path.arcs:
        for p in (arc.start, arc.middle, arc.end):
            assert math.dist(p, arc.centre) == pytest.approx(arc.radius_mm, rel=1e-9)
        # start -> middle -> end turns by half the angle each, right-handed about the normal
        u = np.subtract(arc.start, arc.centre)
        m = np.subtract(arc.middle, arc.centre)
        half = math.atan2(float(np.cross(u, m) @ np.array(arc.normal)), float(u @ m))
        assert half == pytest.approx(math.radians(arc.angle_deg) / 2.0, abs=1e-7)


def test_square_corner_by_hand() -> None:
    path = round_corners([(0, 0, 0), (10, 0, 0), (10, 8, 0)], [2.0])
    assert path.lines[0].end == pytest.approx((8, 0, 0))
    assert path.lines[1].start == pytest.approx((10, 2, 0))
    assert path.arcs[0].centre == pytest.approx((8, 2, 0))
    assert path.length_mm == pytest.approx(8 + math.pi + 6)
    (bend,) = path.bends()
    assert (bend.feed_mm, bend.rotation_deg, bend.angle_deg) == pytest.approx((8.0, 0.0, 90.0))


def test_opposite_bend_in_the_same_plane_has_rotation_180() -> None:
    path = round_corners([(0, 0, 0), (10, 0, 0), (10, 10, 0), (20, 10, 0)], [2.0, 2.0])
    assert [b.rotation_deg for b in path.bends()] == pytest.approx([0.0, 180.0])


def test_rotation_is_right_handed_about_travel() -> None:
    # first bend turns +x into +y about +z; travelling +y, a bend towards +z turns about +x: from +z
    # to +x about +y is +90
    path = round_corners([(0, 0, 0), (10, 0, 0), (10, 10, 0), (10, 10, 10)], [1.0, 1.0])
    assert [b.rotation_deg for b in path.bends()] == pytest.approx([0.0, 90.0])


def test_arcs_about_one_centre_become_one() -> None:
    # a square rounded by its own incircle is one arc of 270 degrees between two half sides
    corners = [(0, 0, 0), (10, 0, 0), (10, 10, 0), (0, 10, 0), (0, 0, 0)]
    path = round_corners(corners, [5.0, 5.0, 5.0])
    assert [type(s) for s in path.segments] == [Line, Arc, Line]
    assert path.arcs[0].angle_deg == pytest.approx(270.0)
    assert path.length_mm == pytest.approx(10.0 + 1.5 * math.pi * 5.0)


def test_corner_without_room_is_named() -> None:
    with pytest.raises(PathError, match=r"corner 2 to 3 is 5\.000 mm long but its bends take 6\.000"):
        round_corners([(0, 0, 0), (10, 0, 0), (10, 5, 0), (0, 5, 0)], [3.0, 3.0])


@given(
    st.lists(st.tuples(*[st.floats(-50, 50)] * 3), min_size=2, max_size=5, unique=True),
    st.lists(st.tuples(*[st.floats(-50, 50)] * 3), min_size=2, max_size=5, unique=True),
)
def test_closest_approach_is_never_above_a_dense_sampling(a: list, b: list) -> None:
    pa, pb = np.array(a), np.array(b)
    got, qa, qb = closest_approach_mm(pa, pb)
    t = np.linspace(0, 1, 60)[:, None]
    da = np.concatenate([p * (1 - t) + q * t for p, q in itertools.pairwise(pa)])
    db = np.concatenate([p * (1 - t) + q * t for p, q in itertools.pairwise(pb)])
    sampled = np.linalg.norm(da[:, None] - db[None], axis=2).min()
    assert got <= sampled + 1e-9
    assert math.dist(qa, qb) == pytest.approx(got, abs=1e-9)
    assert got >= sampled - 200 / 59.0
