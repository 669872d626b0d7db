"""The radiator as laid out: pieces, bend tables, joints, and wires that keep clear of each other."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.designs import design
from wavejig.design.model import Design
from wavejig.geometry.path import Line, PathBend, path_from_bends
from wavejig.radiator.clearance import clearances
from wavejig.radiator.feedlegs import PlanError, leg_points
from wavejig.radiator.model import Piece, Radiator
from wavejig.radiator.plan import plan

PATH = {
    "corners": [
        ["0 mm", "2 mm"],
        ["18 mm", "19 mm"],
        ["42 mm", "0 mm"],
        ["18 mm", "-19 mm"],
        ["0 mm", "-2 mm"],
    ]
}
CASES = [
    ("quad", {}, {}),
    ("quad", {"style": "tube"}, {}),
    ("quad", {"leg": "0.9 mm", "connector": "sma-4hole-cup"}, {}),
    ("biquad", {}, {}),
    ("biquad", {"style": "tube"}, {}),
    ("biquad", {"leg": "1.2 mm"}, {}),
    ("biquad", {"connector": "sma-4hole-cup", "mounting": "in-front", "leg": "0.9 mm"}, {}),
    ("double-biquad", {}, {}),
    ("double-biquad", {"style": "tube"}, {}),
    ("twin-loop", {}, {}),
    ("twin-loop", {"style": "tube"}, {}),
    ("path", {}, PATH),
    (
        "path",
        {"style": "tube"},
        {**PATH, "corners": [["0 mm", "4 mm"], *PATH["corners"][1:4], ["0 mm", "-4 mm"]]},
    ),
]
IDS = [f"{f}-{'-'.join(map(str, feed.values())) or 'legs'}" for f, feed, _ in CASES]


@pytest.fixture(params=CASES, ids=IDS)
def made(request: pytest.FixtureRequest) -> tuple[Design, Radiator]:
    family, feed, radiator = request.param
    d = design(family, feed=feed, radiator=radiator)
    assert not d.conflicts
    return d, plan(d)


def rebuilt(piece: Piece, neutral: float) -> np.ndarray:
    """The centreline from nothing but the bend table's printed columns."""
    rows = [
        PathBend(
            feed_mm=b.feed_mm,
            rotation_deg=b.rotation_deg,
            angle_deg=b.angle_deg,
            radius_mm=b.inside_radius_mm + piece.diameter_mm / 2.0,
        )
        for b in piece.bends
    ]
    spent = sum(b.feed_mm for b in piece.bends) + sum(
        math.radians(b.angle_deg) * (b.inside_radius_mm + neutral * piece.diameter_mm) for b in piece.bends
    )
    tail = piece.developed_length_mm - spent
    path = path_from_bends(
        rows,
        tail,
        start=piece.path.start,
        direction=piece.path.start_direction(),
        normal=piece.path.arcs[0].normal,
    )
    return path.sample(chord_error_mm=0.01)


def test_bend_tables_give_the_centreline_back(made: tuple[Design, Radiator]) -> None:
    d, radiator = made
    for piece in radiator.pieces:
        if piece.bends:
            got = rebuilt(piece, d.radiator.neutral_axis_factor)
            np.testing.assert_allclose(got, piece.path.sample(chord_error_mm=0.01), atol=1e-3)


def test_distance_from_the_cut_end_adds_up(made: tuple[Design, Radiator]) -> None:
    d, radiator = made
    n = d.radiator.neutral_axis_factor
    for piece in radiator.pieces:
        travelled = 0.0
        for b in piece.bends:
            travelled += b.feed_mm
            assert b.from_start_mm == pytest.approx(travelled, abs=1e-9)
            travelled += math.radians(b.angle_deg) * (b.inside_radius_mm + n * piece.diameter_mm)
        assert piece.cut_length_mm == pytest.approx(piece.developed_length_mm + piece.trim_mm)
        assert piece.trim_mm == (d.radiator.trim_mm if piece.role == "main" else 0.0)


def test_every_bend_is_overbent_and_keeps_its_arc_length(made: tuple[Design, Radiator]) -> None:
    _, radiator = made
    for piece in radiator.pieces:
        for b in piece.bends:
            half = piece.diameter_mm / 2.0
            finished = b.angle_deg * (b.inside_radius_mm + half)
            loaded = b.loaded_angle_deg * (b.loaded_inside_radius_mm + half)
            assert loaded == pytest.approx(finished, rel=1e-9)
            if piece.role != "inner":
                assert b.loaded_angle_deg > b.angle_deg
                assert b.loaded_inside_radius_mm < b.inside_radius_mm


def test_no_wires_touch_away_from_their_joints(made: tuple[Design, Radiator]) -> None:
    d, radiator = made
    for c in clearances(radiator, d.radiator.bend_radius_mm):
        assert c.air_mm > 0.25, c


def test_every_piece_is_soldered_to_something_it_reaches(made: tuple[Design, Radiator]) -> None:
    d, radiator = made
    roles = {p.role for p in radiator.pieces}
    for piece in radiator.pieces:
        assert any(piece.role in j.between for j in radiator.joints), piece.role
    points = {p.role: p.path.sample(step_mm=0.2) for p in radiator.pieces}
    for joint in radiator.joints:
        for role in set(joint.between) & roles:
            near = np.linalg.norm(points[role] - np.array(joint.at), axis=1).min()
            assert near < 2.5 * d.radiator.wire_diameter_mm + d.radiator.bend_radius_mm, (joint, role)


def test_laps_lie_side_by_side(made: tuple[Design, Radiator]) -> None:
    """At a lap the surfaces of both wires are a solder gap of 0.1 mm apart, over its stated length."""
    _, radiator = made
    pieces = {p.role: p for p in radiator.pieces}
    for joint in radiator.joints:
        a, b = joint.between
        if joint.kind != "lap" or a == b or b not in pieces or a not in pieces:
            continue
        pa = pieces[a].path.sample(step_mm=0.05)
        pb = pieces[b].path.sample(step_mm=0.05)
        distance = np.linalg.norm(pa[:, None] - pb[None], axis=2).min(axis=1)
        beside = (pieces[a].diameter_mm + pieces[b].diameter_mm) / 2.0 + 0.1
        length = 0.05 * int((distance < beside + 0.02).sum())
        ends = 2 if "either side" in joint.note else 1
        assert distance.min() == pytest.approx(beside, abs=0.02)
        assert length >= ends * joint.length_mm - 0.3


def test_sides_are_equal_between_the_intersections_of_the_centrelines() -> None:
    d = design()
    lines = [s for s in plan(d).main.path.segments if isinstance(s, Line)]
    flat = [s for s in lines if abs(s.start[2] - s.end[2]) < 1e-9]
    crossings = [intersection(a, b) for a, b in itertools.pairwise(flat)]
    lengths = [math.dist(a, b) for a, b in itertools.pairwise(crossings)]
    assert lengths == pytest.approx([d.radiator.side_mm] * 6, abs=1e-9)


def intersection(a: Line, b: Line) -> tuple[float, float]:
    (x1, y1, _), (x2, y2, _) = a.start, a.end
    (x3, y3, _), (x4, y4, _) = b.start, b.end
    det = (x1 - x2) * (y3 - y4) - (y1 - y2) * (x3 - x4)
    p, q = x1 * y2 - y1 * x2, x3 * y4 - y3 * x4
    return ((p * (x3 - x4) - (x1 - x2) * q) / det, (p * (y3 - y4) - (y1 - y2) * q) / det)


def test_the_wire_lies_at_the_standoff() -> None:
    d = design()
    heights = {round(a.centre[2], 9) for a in plan(d).main.path.arcs if abs(a.normal[2]) > 0.999}
    assert heights == {d.radiator.standoff_mm}


@given(
    side=st.floats(14.0, 300.0),
    wire=st.sampled_from(["1 mm", "1.8 mm", "2 mm", "14 AWG"]),
    angle=st.floats(80.0, 100.0),
)
def test_scaling_the_sides_keeps_the_bends(side: float, wire: str, angle: float) -> None:
    d = design(
        wire=wire,
        radiator={"side": f"{side:.6f} mm", "lobe_angle": f"{angle:.6f} deg"},
        feed={"style": "tube"},
    )
    if 2.2 * d.radiator.bend_radius_mm > side:
        return
    main = plan(d).main
    turned = sum(b.angle_deg for b in main.bends)
    assert len(main.bends) == 7
    # walking out and back round both lobes: six right turns and one left one, closing on the start
    signed = sum(
        b.angle_deg * (1 if a.normal[2] > 0 else -1) for a, b in zip(main.path.arcs, main.bends, strict=True)
    )
    assert turned > 360.0
    assert abs(signed) < 720.0
    assert math.dist(main.path.start, main.path.end) < 2.5 * d.radiator.wire_diameter_mm


@given(
    aside=st.floats(0.0, 30.0),
    top=st.floats(5.0, 60.0),
    bottom=st.floats(-3.0, 2.0),
    radius=st.floats(0.8, 8.0),
)
def test_a_jogged_leg_lands_where_it_should_or_says_why_not(
    aside: float, top: float, bottom: float, radius: float
) -> None:
    try:
        points = leg_points((0.0, 0.0), (0.0, -aside), top, bottom, radius)
    except PlanError as err:
        assert "step aside" in str(err)
        return
    assert points[-1] == pytest.approx((0.0, -aside, bottom))
    if len(points) == 3:
        (_, y0, z0), (_, y1, z1), _ = points
        lean = math.atan2(y0 - y1, z0 - z1)
        setback = radius * math.tan(lean / 2.0)
        assert z0 + setback <= top + 1e-3
        assert z1 - setback >= max(bottom, 0.0) + 1.0 - 1e-9
        assert math.hypot(y0 - y1, z0 - z1) >= 2.0 * setback - 1e-5


def test_a_step_aside_nobody_can_see_is_no_jog() -> None:
    """Below 0.1 mm the leg leans; from there on it is two bends, as far apart in height as they need."""
    assert leg_points((0.0, -9.675), (0.0, -9.72), 50.0, -1.0, 4.0) == [(0.0, -9.72, -1.0)]
    assert leg_points((0.0, -9.6), (0.0, -9.72), 50.0, -1.0, 4.0)[-1] == (0.0, -9.72, -1.0)
    assert len(leg_points((0.0, -9.6), (0.0, -9.72), 50.0, -1.0, 4.0)) == 3
    made = plan(
        design(
            "twin-loop",
            band=["902 MHz", "928 MHz"],
            wire="10 AWG",
            radiator={"lobe_diameter": "76.1 mm", "feed_gap": "19.35 mm", "standoff": "58.1 mm"},
            feed={"style": "legs", "leg": "1.8 mm", "leg_spacing": "19.4 mm"},
        )
    )
    (leg,) = [p for p in made.pieces if p.role == "ground-leg"]
    assert len(leg.bends) == 1
