"""Lobes: equal sides, the angle opposite the feed, the gap, and the four-lobe's crossings."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.design import lobes
from wavejig.design.lobes import LobeError
from wavejig.geometry.path import closest_approach_mm, round_corners

sides = st.floats(15.0, 400.0)
angles = st.floats(60.0, 120.0)
gaps = st.floats(1.0, 8.0)


def angle_at(a, b, c) -> float:  # type: ignore[no-untyped-def]
    u, v = np.subtract(a, b), np.subtract(c, b)
    return math.degrees(math.acos(float(u @ v) / float(np.linalg.norm(u) * np.linalg.norm(v))))


@given(side=sides, angle=angles, gap=gaps)
def test_biquad_has_eight_equal_sides_its_angle_and_its_gap(side: float, angle: float, gap: float) -> None:
    shape = lobes.biquad(side, angle, gap, 2.0)
    p = [c.at for c in shape.corners]
    for a, b in itertools.pairwise(p):
        assert math.dist(a, b) == pytest.approx(side, abs=1e-9)
    for far in (2, 6):
        assert angle_at(p[far - 1], p[far], p[far + 1]) == pytest.approx(angle, abs=1e-6)
    assert shape.ground == 4
    assert math.dist(p[0], p[4]) == pytest.approx(gap)
    assert p[0][1] > 0 > p[4][1]  # the gap lies along y, the pin terminal at y > 0
    assert p[0] == p[8]
    # mirror images about the y axis, lobes along x
    assert {(round(-x, 9), round(y, 9)) for x, y, _ in p} == {(round(x, 9), round(y, 9)) for x, y, _ in p}


@given(side=sides, angle=angles, gap=gaps)
def test_quad_is_one_lobe_over_the_middle(side: float, angle: float, gap: float) -> None:
    shape = lobes.quad(side, angle, gap, 2.0)
    p = [c.at for c in shape.corners]
    assert shape.ground is None and len(p) == 5
    for a, b in itertools.pairwise(p):
        assert math.dist(a, b) == pytest.approx(side, abs=1e-9)
    assert math.dist(p[0], p[4]) == pytest.approx(gap)
    assert p[0][0] == pytest.approx(-p[2][0])


@given(
    d=st.floats(0.8, 4.0),
    ratio=st.floats(14.0, 60.0),
    angle=st.floats(70.0, 110.0),
    radius=st.floats(1.5, 3.0),
)
def test_four_lobe_crossings_run_straight_and_keep_two_diameters(
    d: float, ratio: float, angle: float, radius: float
) -> None:
    side, bend = d * ratio, d * radius
    shape = lobes.double_biquad(side, angle, 2.5 * d, bend, d)
    path = round_corners([c.at for c in shape.corners], [c.radius_mm for c in shape.corners[1:-1]])
    half = shape.ground
    assert half is not None
    # outside the jogs both passes of a crossing lie on one straight in plan each
    for start, turn in ((1, 5), (7, 11)):
        run = np.array([c.at[:2] for c in shape.corners[start : turn + 1]])
        along = (run[-1] - run[0]) / np.linalg.norm(run[-1] - run[0])
        off = (run - run[0]) @ np.array([-along[1], along[0]])
        assert np.abs(off).max() < 1e-9
        assert float(np.linalg.norm(run[-1] - run[0])) == pytest.approx(2 * side)
    # cut the walk in half at the ground terminal; the right half crosses itself once
    points = path.sample(chord_error_mm=0.005, step_mm=d)
    right = points[points[:, 0] > 0.3 * side]
    height = np.abs(right[:, 2]).max()
    assert height >= d  # each wire takes half of the offset
    over = right[right[:, 2] > 0.01]
    under = right[right[:, 2] < -0.01]
    near, _, _ = closest_approach_mm(over, under)
    assert near >= 2.0 * d
    assert near <= 2.0 * d + 2.5 * lobes.JOG_MARGIN_MM + 0.5 * d


def test_a_gap_wider_than_the_lobe_is_refused() -> None:
    with pytest.raises(LobeError, match="too wide"):
        lobes.biquad(20.0, 90.0, 60.0, 2.0)


@given(diameter=st.floats(50.0, 300.0), angle=st.floats(60.0, 120.0), gap=gaps)
def test_round_lobe_is_a_tangent_circle(diameter: float, angle: float, gap: float) -> None:
    shape = lobes.twin_loop(diameter, angle, gap, 2.0)
    path = round_corners([c.at for c in shape.corners], [c.radius_mm for c in shape.corners[1:-1]])
    big = [a for a in path.arcs if a.radius_mm > 3.0]
    assert len(big) == 2
    for arc, sign in zip(big, (1, -1), strict=True):
        assert arc.angle_deg == pytest.approx(180.0 + angle)
        assert arc.centre[0] * sign > 0 and arc.centre[1] == pytest.approx(0.0, abs=1e-9)
    # leaves the terminal at half the angle
    u = path.start_direction()
    assert math.degrees(math.atan2(u[1], u[0])) == pytest.approx(angle / 2.0)
    far = big[0].centre[0] + big[0].radius_mm
    assert shape.far[0][0] == pytest.approx(far)


@given(side=sides, gap=gaps, factor=st.floats(0.2, 5.0))
def test_scaling_scales_everything(side: float, gap: float, factor: float) -> None:
    one = lobes.biquad(side, 90.0, gap, 2.0)
    other = lobes.biquad(side * factor, 90.0, gap * factor, 2.0 * factor)
    a = np.array([c.at for c in one.corners]) * factor
    np.testing.assert_allclose(np.array([c.at for c in other.corners]), a, rtol=1e-9, atol=1e-9)
