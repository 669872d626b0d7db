"""Folding and unfolding points: lengths, round trips, and the plane faces for the field model."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from shapely import contains_xy
from shapely.geometry import Polygon

from wavejig.design.model import Hole, Lip, ReflectorDesign
from wavejig.reflector.mapping import fold, panels, unfold
from wavejig.reflector.model import Tray, TrayError, along, outward
from wavejig.reflector.tray import plan

Sheet = Callable[..., ReflectorDesign]

trays = {
    "lips": st.sampled_from(["x+", "x-x+", "y-y+", "x+y+", "x-x+y-y+"]),
    "style": st.sampled_from(["relief", "mitre"]),
    "angle": st.floats(5.0, 90.0),
    "height": st.floats(4.0, 60.0),
    "thickness": st.floats(0.3, 3.0),
    "radius": st.floats(0.1, 6.0),
    "k": st.floats(0.2, 0.6),
    "seed": st.integers(0, 2**32 - 1),
}


def _tray(
    sheet: Sheet,
    lips: str,
    style: str,
    angle: float,
    height: float,
    thickness: float,
    radius: float,
    k: float,
) -> Tray:
    assume(height > (radius + thickness) * math.tan(math.radians(angle) / 2.0) + 0.1)
    hole = Hole(x_mm=4.0, y_mm=-7.0, diameter_mm=12.0, purpose="connector")
    return plan(
        sheet(
            lips,
            height,
            angle,
            corner_style=style,
            thickness_mm=thickness,
            inside_radius_mm=radius,
            k_factor=k,
            holes=(hole,),
        )
    )


def _on_blank(tray: Tray, seed: int, n: int = 400) -> np.ndarray:
    """Random points of the blank, by another judge of what is inside."""
    x0, y0, x1, y1 = tray.outline.bounds()
    p = np.random.default_rng(seed).uniform((x0, y0), (x1, y1), (n, 2))
    return p[contains_xy(Polygon(tray.outline.points(0.001)), p[:, 0], p[:, 1])]


@given(**trays)
def test_fold_then_unfold_gives_the_blank_back(sheet: Sheet, seed: int, **numbers: float) -> None:
    tray = _tray(sheet, **numbers)
    p = _on_blank(tray, seed)
    depth = np.random.default_rng(seed + 1).uniform(0.0, 1.0, len(p))
    np.testing.assert_allclose(unfold(tray, fold(tray, p, depth)), p, atol=1e-8)


@given(**trays)
def test_area_and_lengths_are_true_on_the_neutral_surface(
    sheet: Sheet, seed: int, k: float, **numbers: float
) -> None:
    """A micrometre along x and y from each point: unit lengths and square, so area is kept too."""
    tray = _tray(sheet, k=k, **numbers)
    p = _on_blank(tray, seed)
    step = 1e-3
    # a pair astride a bend's start or end would measure a chord across two panels
    for lip in tray.lips:
        d = p @ outward(lip.edge)
        p = p[(np.abs(d - lip.tangent_mm) > step) & (np.abs(d - lip.bend_end_mm) > step)]
    inner = Polygon(tray.outline.points(0.001)).buffer(-2.0 * step)
    p = p[contains_xy(inner, p[:, 0], p[:, 1])]
    assert len(p) > 100
    origin = fold(tray, p, k)
    dx = (fold(tray, p + np.array([step, 0.0]), k) - origin) / step
    dy = (fold(tray, p + np.array([0.0, step]), k) - origin) / step
    np.testing.assert_allclose(np.linalg.norm(dx, axis=1), 1.0, atol=1e-5)
    np.testing.assert_allclose(np.linalg.norm(dy, axis=1), 1.0, atol=1e-5)
    np.testing.assert_allclose(np.linalg.norm(np.cross(dx, dy), axis=1), 1.0, atol=2e-5)


@given(**trays)
def test_the_cut_edge_keeps_its_length(sheet: Sheet, seed: int, k: float, **numbers: float) -> None:
    tray = _tray(sheet, k=k, **numbers)
    corners = tray.outline.points(0.0005)
    closed = np.vstack([corners, corners[:1]])
    walk = np.concatenate(
        [
            np.linspace(a, b, math.ceil(math.dist(a, b) / 0.02), endpoint=False)
            for a, b in itertools.pairwise(closed)
        ]
    )
    folded = fold(tray, np.vstack([walk, walk[:1]]), k)
    length = np.linalg.norm(np.diff(folded, axis=0), axis=1).sum()
    assert length == pytest.approx(tray.outline.length_mm, rel=1e-4)


@given(**trays)
def test_lips_measure_their_height_and_angle_from_the_mould_line(
    sheet: Sheet, seed: int, angle: float, height: float, thickness: float, **numbers: float
) -> None:
    """From the mould line (base/2 out, T down) the tip's outer edge is `height` away, at `angle`."""
    tray = _tray(sheet, angle=angle, height=height, thickness=thickness, **numbers)
    for lip in tray.lips:
        tip = fold(tray, (outward(lip.edge) * lip.tip_mm)[None], 1.0)[0]
        rise = math.radians(angle)
        mould = np.array([*outward(lip.edge) * tray.half_mm(lip.edge), -thickness])
        direction = np.array([*outward(lip.edge) * math.cos(rise), math.sin(rise)])
        np.testing.assert_allclose(tip, mould + height * direction, atol=1e-9)


def test_a_standing_lips_outer_face_is_the_base_size(sheet: Sheet) -> None:
    tray = plan(sheet())
    p = fold(tray, np.array([[75.0, 3.0], [-75.0, 3.0], [0.0, 65.0], [0.0, -65.0]]), 1.0)
    np.testing.assert_allclose([p[0, 0], p[1, 0], p[2, 1], p[3, 1]], [65.0, -65.0, 55.0, -55.0], atol=1e-12)


def test_holes_stay_where_they_are(sheet: Sheet) -> None:
    hole = Hole(x_mm=40.0, y_mm=-20.0, diameter_mm=12.0, purpose="mounting")
    tray = plan(sheet(holes=(hole,)))
    rim = tray.circles[0].points()
    np.testing.assert_array_equal(fold(tray, rim, 0.0), np.column_stack([rim, np.zeros(len(rim))]))


def test_a_point_between_two_lips_is_refused(sheet: Sheet) -> None:
    with pytest.raises(TrayError, match=r"point 70.000, 60.000 mm is off the blank"):
        fold(plan(sheet()), np.array([[0.0, 0.0], [70.0, 60.0]]), 0.0)
    with pytest.raises(TrayError, match=r"depth: got 1.5"):
        fold(plan(sheet()), np.array([[0.0, 0.0]]), 1.5)


@pytest.mark.parametrize(
    "point", [(0.0, 0.0, 1.0), (0.0, 0.0, -0.9), (63.0, 0.0, 8.0), (66.0, 0.0, 8.0), (64.5, 54.5, 8.0)]
)
def test_a_point_off_the_folded_sheet_is_refused(sheet: Sheet, point: tuple[float, float, float]) -> None:
    with pytest.raises(TrayError, match="off the folded sheet"):
        unfold(plan(sheet()), np.array([point]))


@pytest.mark.parametrize("style", ["relief", "mitre"])
@pytest.mark.parametrize("angle", [20.0, 90.0])
@pytest.mark.parametrize("lips", ["x-x+y-y+", "y-y+", ""])
def test_panels_are_plane_and_joined(sheet: Sheet, style: str, angle: float, lips: str) -> None:
    strips = 3
    tray = plan(sheet(lips, angle_deg=angle, corner_style=style))
    faces = panels(tray, strips)
    assert len(faces) == 1 + len(tray.lips) * (strips + 1)
    edges: dict[tuple[tuple[float, ...], ...], int] = {}
    for face in faces:
        area_vector = (
            sum(np.cross(face[i] - face[0], face[i + 1] - face[0]) for i in range(1, len(face) - 1)) / 2.0
        )
        normal = area_vector / np.linalg.norm(area_vector)
        assert np.abs((face - face[0]) @ normal).max() < 1e-9
        # seen from the radiator: the normal points up, or inward where a lip stands
        assert normal[2] > 1e-9 or normal @ face.mean(axis=0) < 0.0
        for a, b in zip(face, np.roll(face, -1, axis=0), strict=True):
            key = tuple(sorted((tuple(np.round(a, 9) + 0.0), tuple(np.round(b, 9) + 0.0))))
            edges[key] = edges.get(key, 0) + 1
    # each bend joins the base, its strips and the flange along strips + 1 common edges
    assert sorted(edges.values(), reverse=True)[: len(tray.lips) * (strips + 1)] == [2] * (
        len(tray.lips) * (strips + 1)
    )
    assert sum(v == 2 for v in edges.values()) == len(tray.lips) * (strips + 1)
    assert max(edges.values()) <= 2


def test_panel_areas_by_hand(sheet: Sheet) -> None:
    """Channel, 90 deg, R 1, T 0.8: base 130 x 106.4; strips are chords of 22.5 deg; flanges 13.2 high."""
    areas = []
    for face in panels(plan(sheet("y-y+", k_factor=0.45)), 4):
        v = sum(np.cross(face[i] - face[0], face[i + 1] - face[0]) for i in range(1, len(face) - 1)) / 2.0
        areas.append(float(np.linalg.norm(v)))
    chord = 2.0 * math.sin(math.radians(22.5) / 2.0)
    assert areas == pytest.approx([130.0 * 106.4, *(2 * ([130.0 * chord] * 4 + [130.0 * 13.2]))], rel=1e-9)


def test_a_sharp_bend_has_no_strips_and_shares_its_edge(sheet: Sheet) -> None:
    tray = plan(sheet("y-y+", inside_radius_mm=0.0))
    base, *flanges = panels(tray, 4)
    assert len(flanges) == 2
    for flange, lip in zip(flanges, tray.lips, strict=True):
        foot = {tuple(np.round(p, 9) + 0.0) for p in flange[[0, -1]]}
        assert foot <= {tuple(np.round(p, 9) + 0.0) for p in base}
        assert abs(foot.pop()[1]) == pytest.approx(lip.tangent_mm)


def test_lips_of_different_angles_fold_each_its_own_way(sheet: Sheet) -> None:
    lips = (Lip(edge="x+", height_mm=20.0, angle_deg=90.0), Lip(edge="y+", height_mm=12.0, angle_deg=30.0))
    tray = plan(replace(sheet(), lips=lips))
    for lip in tray.lips:
        ends = fold(tray, np.array([outward(lip.edge) * d for d in (lip.bend_end_mm, lip.tip_mm)]), 0.0)
        run = (ends[1] - ends[0]) / lip.flange_mm
        assert math.degrees(math.atan2(run[2], run[:2] @ outward(lip.edge))) == pytest.approx(lip.angle_deg)
        assert run[:2] @ along(lip.edge) == 0.0
