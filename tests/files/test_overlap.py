"""Doubled lines and arcs are found however they are drawn; neighbours that only meet are not."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from shapely import LineString

from wavejig.files.overlap import overlapping, pieces_of
from wavejig.geometry.plane import Circle, Contour, Stroke

QUARTER = math.tan(math.pi / 8)


def doubled(*entities: Any) -> bool:
    return overlapping(piece for i, e in enumerate(entities) for piece in pieces_of(e, str(i))) is not None


def line(*points: tuple[float, float]) -> Stroke:
    return Stroke(points=points)


def arc(start_deg: float, end_deg: float, radius: float = 10.0) -> Contour:
    """A half-moon: an arc about the origin and its chord; only the arc is of interest."""
    bulge = math.tan(math.radians(end_deg - start_deg) / 4)
    ends = [
        (radius * math.cos(math.radians(a)), radius * math.sin(math.radians(a))) for a in (start_deg, end_deg)
    ]
    return Contour(vertices=((*ends[0], bulge), (*ends[1], 0.0)))


@pytest.mark.parametrize(
    ("a", "b"),
    [
        (line((0, 0), (10, 0)), line((0, 0), (10, 0))),
        (line((0, 0), (10, 0)), line((10, 0), (0, 0))),
        (line((0, 0), (10, 0)), line((9.9, 0), (20, 0))),
        (line((0, 0), (10, 0)), line((4, 0), (5, 0))),
        (line((0, 0), (10, 7)), line((2, 1.4), (30, 21))),
        (Contour.rectangle(0, 0, 10, 10), Contour.rectangle(10, 5, 20, 15)),
        (Circle(x_mm=0, y_mm=0, diameter_mm=20), Circle(x_mm=0, y_mm=0, diameter_mm=20)),
        (Circle(x_mm=0, y_mm=0, diameter_mm=20), arc(10, 50)),
        (arc(10, 50), arc(49, 90)),
        (arc(170, 200), arc(-179, -100)),
        (arc(0.0, 0.002, 1e6), arc(0.0, 0.002, 1e6)),
    ],
)
def test_doubled_ground_is_found(a: Any, b: Any) -> None:
    assert doubled(a, b) and doubled(b, a)


@pytest.mark.parametrize(
    ("a", "b"),
    [
        (line((0, 0), (10, 0)), line((10, 0), (20, 0))),
        (line((0, 0), (10, 0)), line((5, -5), (5, 5))),
        (line((0, 0), (10, 0)), line((0, 0.01), (10, 0.01))),
        (line((0, 0), (10, 0)), line((0, 0), (10, 0.01))),
        (Contour.rectangle(0, 0, 10, 10), Contour.rectangle(10, 10, 20, 20)),
        (Circle(x_mm=0, y_mm=0, diameter_mm=20), Circle(x_mm=0, y_mm=0, diameter_mm=20.01)),
        (Circle(x_mm=0, y_mm=0, diameter_mm=20), Circle(x_mm=20, y_mm=0, diameter_mm=20)),
        (Circle(x_mm=0, y_mm=0, diameter_mm=20), line((10, -50), (10, 50))),
        (arc(10, 50), arc(50, 90)),
        (arc(10, 50), arc(60, 90)),
    ],
)
def test_meeting_and_crossing_are_not_doubling(a: Any, b: Any) -> None:
    assert not doubled(a, b)


def test_a_line_that_turns_back_on_itself_is_found() -> None:
    assert doubled(line((0, 0), (10, 0), (3, 0)))
    assert not doubled(line((0, 0), (10, 0), (3, 1)))
    assert not doubled(Contour(vertices=((0, 0, 1.0), (10, 0, 1.0))))  # a disc of two arcs


coordinate = st.integers(-6, 6).map(float)


@given(points=st.lists(st.tuples(coordinate, coordinate), min_size=4, max_size=4))
def test_straights_agree_with_a_plane_geometry_library(points: list[tuple[float, float]]) -> None:
    p, q, r, s = points
    assume(p != q and r != s)
    shared = LineString([p, q]).intersection(LineString([r, s])).length
    assume(shared == 0 or shared > 0.01)
    assert doubled(line(p, q), line(r, s)) == (shared > 0)


@given(start=st.floats(-180, 180), turn=st.floats(5, 300), other=st.floats(-180, 180), also=st.floats(5, 300))
def test_arcs_agree_with_sampling(start: float, turn: float, other: float, also: float) -> None:
    """Whether two arcs of one circle share ground, by counting directions on both."""
    directions = np.arange(0.0, 360.0, 0.05)
    on_a = (directions - start) % 360 < turn
    on_b = (directions - other) % 360 < also
    shared = np.count_nonzero(on_a & on_b)
    assume(shared == 0 or shared > 4)
    gaps = [(other - start - turn) % 360, (start - other - also) % 360]
    assume(shared > 0 or min(gaps) > 0.1)
    chords_apart = not doubled(line((0, 0), (1, 1)))
    assert chords_apart
    a, b = (
        [piece for piece in pieces_of(arc(s, s + t), "x") if piece.centre]
        for s, t in ((start, turn), (other, also))
    )
    assert (overlapping([*a, *b]) is not None) == (shared > 0)


def test_an_arc_s_middle_lies_on_it() -> None:
    """The quarter from (1, 0) to (0, 1) about the origin passes (0.7071, 0.7071); clockwise it bulges the other way."""
    for bulge, sign in ((QUARTER, 1.0), (-QUARTER, -1.0)):
        piece = next(pieces_of(Contour(vertices=((1, 0, bulge), (0, 1, 0))), "x"))
        assert piece.centre is not None
        assert math.dist(piece.centre, piece.middle) == pytest.approx(1.0)
        expected = (math.sqrt(0.5), math.sqrt(0.5)) if sign > 0 else (1 - math.sqrt(0.5), 1 - math.sqrt(0.5))
        assert piece.middle == pytest.approx(expected)
