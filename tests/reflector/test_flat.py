"""The blank: contours, bend lines, marks clear of everything, kerf against closed form and shapely."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from shapely import hausdorff_distance
from shapely.geometry import LineString, Point, Polygon, box

from wavejig.design.model import Hole, ReflectorDesign
from wavejig.geometry.plane import Contour
from wavejig.reflector.flat import FlatPattern, flat_pattern, with_kerf
from wavejig.reflector.outline import OutlineError, crosses_itself, grown, rounded
from wavejig.reflector.tray import TrayError, plan

Sheet = Callable[..., ReflectorDesign]

HOLES = tuple(
    Hole(x_mm=x, y_mm=y, diameter_mm=d, purpose=p)
    for x, y, d, p in [
        (0.0, 3.0, 16.0, "connector"),
        (9.13, 12.13, 3.3, "flange"),
        (-9.13, 12.13, 3.3, "flange"),
        (9.13, -6.13, 3.3, "flange"),
        (-9.13, -6.13, 3.3, "flange"),
        (0.0, 30.0, 5.5, "mounting"),
        (0.0, -30.0, 5.5, "mounting"),
        (0.0, -47.0, 4.0, "drain"),
    ]
)
CASES = [
    ("x-x+y-y+", "relief", 90.0, "y+"),
    ("x-x+y-y+", "mitre", 90.0, "x+"),
    ("x-x+y-y+", "mitre", 45.0, "y+"),
    ("x-x+y-y+", "mitre", 5.0, "y+"),
    ("y-y+", "relief", 90.0, "y+"),
    ("x-x+", "relief", 30.0, "x+"),
    ("", "relief", 90.0, "x+"),
]


@pytest.fixture(params=CASES, ids=lambda c: "-".join(map(str, c)))
def pattern(request: pytest.FixtureRequest, sheet: Sheet) -> FlatPattern:
    lips, style, angle, up = request.param
    design = sheet(lips, angle_deg=angle, corner_style=style, up=up, holes=HOLES, height_mm=18.0)
    return flat_pattern(plan(design), "saltmarsh-2g4")


def test_cut_contours_are_simple_and_measured(pattern: FlatPattern) -> None:
    outline = Polygon(pattern.outline.points(0.0002))
    assert outline.is_valid
    assert outline.exterior.is_ccw
    whole = outline
    for hole in pattern.holes:
        disc = Point(hole.x_mm, hole.y_mm).buffer(hole.diameter_mm / 2.0, quad_segs=500)
        assert whole.contains(disc)
        whole = whole.difference(disc)
    assert pattern.area_mm2 == pytest.approx(whole.area, rel=1e-5)
    x0, y0, x1, y1 = outline.bounds
    assert pattern.size_mm == pytest.approx((x1 - x0, y1 - y0), abs=2e-3)


def test_bend_lines_run_from_edge_to_edge_in_the_middle_of_the_bend(pattern: FlatPattern) -> None:
    outline = Polygon(pattern.outline.points(0.0002))
    for bend in pattern.bends:
        line = LineString(bend.line)
        assert outline.buffer(1e-6).contains(line)
        assert max(outline.exterior.distance(Point(p)) for p in bend.line) < 1e-6
        axis = "xy".index(bend.edge[0])
        sign = 1.0 if bend.edge[1] == "+" else -1.0
        for p in bend.line:
            assert sign * p[axis] == pytest.approx(sum(bend.zone_mm) / 2.0, abs=1e-12)
        assert bend.direction == "up"
    assert len({bend.edge for bend in pattern.bends}) == len(pattern.bends)


def test_marks_are_all_there_and_clear(pattern: FlatPattern) -> None:
    assert pattern.unplaced == ()
    outline = Polygon(pattern.outline.points(0.001))
    zones = []
    for bend in pattern.bends:
        (x0, y0), (x1, y1) = bend.line
        half = (bend.zone_mm[1] - bend.zone_mm[0]) / 2.0
        zones.append(LineString([(x0, y0), (x1, y1)]).buffer(half, cap_style="flat"))
    assert len(pattern.marks) > 40
    for mark in pattern.marks:
        line = LineString(mark.points)
        assert outline.contains(line)
        assert line.distance(outline.exterior) > 1.49
        assert all(line.distance(zone) > 1.49 for zone in zones)
        for hole in pattern.holes:
            assert line.distance(Point(hole.x_mm, hole.y_mm)) > hole.diameter_mm / 2.0 + 1.49


def test_marks_turn_with_the_upper_edge(sheet: Sheet) -> None:
    """A square sheet hung by x+ carries the marks of one hung by y+, a quarter turn clockwise."""
    by_y, by_x = (
        flat_pattern(plan(sheet("", base_x_mm=100.0, base_y_mm=100.0, up=up)), "ridge") for up in ("y+", "x+")
    )
    assert len(by_y.marks) == len(by_x.marks)
    for a, b in zip(by_y.marks, by_x.marks, strict=True):
        turned = np.array([(y, -x) for x, y in a.points])
        np.testing.assert_allclose(np.array(b.points), turned, atol=1e-9)
    # the arrow's last stroke is its head: barb, tip, barb; the tip is nearest to the upper edge
    tops = [max(m.points, key=lambda p: p[0])[0] for m in by_x.marks]
    assert max(tops) == pytest.approx(50.0 - 1.5, abs=1e-9)


def test_marks_without_room_are_reported_not_squeezed_in(sheet: Sheet) -> None:
    pattern = flat_pattern(plan(sheet("", base_x_mm=27.0, base_y_mm=27.0)), "a name much too long for it")
    assert pattern.unplaced == ("THIS FACE TO RADIATOR", "a name much too long for it")
    assert all(
        box(-12.0, -12.0, 12.0, 12.0).buffer(1e-9).contains(LineString(m.points)) for m in pattern.marks
    )
    assert pattern.marks


def test_marks_do_not_overlap(sheet: Sheet) -> None:
    """On 47 x 9 mm the upper mark stands 3 high (36 wide); 3 mm remain below it, a line of 2 needs 3.5."""
    pattern = flat_pattern(plan(sheet("", base_x_mm=47.0, base_y_mm=9.0)))
    assert pattern.unplaced == ("THIS FACE TO RADIATOR",)
    taller = flat_pattern(plan(sheet("", base_x_mm=47.0, base_y_mm=9.6)))
    assert taller.unplaced == ()


def test_marks_on_a_lip_wider_at_its_tip_stay_inside_it(sheet: Sheet) -> None:
    pattern = flat_pattern(
        plan(sheet(corner_style="mitre", angle_deg=20.0, base_x_mm=32.0, base_y_mm=32.0, height_mm=40.0))
    )
    outline = Polygon(pattern.outline.points(0.001))
    lettered = {max("xy", key=lambda a: abs(m.points[0]["xy".index(a)])) for m in pattern.marks}
    assert lettered == {"x", "y"}
    for mark in pattern.marks:
        assert outline.contains(LineString(mark.points))
        assert LineString(mark.points).distance(outline.exterior) > 1.49


@pytest.mark.parametrize("kerf", [0.1, 0.2, 0.38])
def test_kerf_moves_every_cut_by_half_of_it(pattern: FlatPattern, kerf: float) -> None:
    """Steiner's formula for a loop of tangent pieces, A + L d + pi d^2; and shapely's own buffer."""
    cut = with_kerf(pattern, kerf)
    d = kerf / 2.0
    want = pattern.outline.area_mm2 + pattern.outline.length_mm * d + math.pi * d * d
    assert cut.outline.area_mm2 == pytest.approx(want, abs=1e-6)
    grown_by_other = Polygon(pattern.outline.points(0.0005)).buffer(d, quad_segs=64)
    assert hausdorff_distance(Polygon(cut.outline.points(0.0005)), grown_by_other) < 0.01
    assert [h.diameter_mm for h in cut.holes] == pytest.approx([h.diameter_mm - kerf for h in pattern.holes])
    assert [(h.x_mm, h.y_mm) for h in cut.holes] == [(h.x_mm, h.y_mm) for h in pattern.holes]
    holes = sum(math.pi * (h.diameter_mm - kerf) ** 2 / 4.0 for h in pattern.holes)
    assert cut.area_mm2 == pytest.approx(want - holes, abs=1e-6)
    assert cut.size_mm == pytest.approx([s + kerf for s in pattern.size_mm], abs=2e-3)
    assert (cut.bends, cut.marks) == (pattern.bends, pattern.marks)


def test_no_kerf_changes_nothing(pattern: FlatPattern) -> None:
    assert with_kerf(pattern, 0.0) == pattern


def test_kerf_that_cannot_be_cut_is_refused(sheet: Sheet) -> None:
    hole = Hole(x_mm=1.0, y_mm=2.0, diameter_mm=0.9, purpose="other")
    with pytest.raises(TrayError, match=r"kerf of 0.9 mm: cannot cut the hole of 0.9 mm at 1, 2 mm"):
        with_kerf(flat_pattern(plan(sheet(holes=(hole,)))), 0.9)
    with pytest.raises(TrayError, match=r"kerf of 1.2 mm: .* arc of radius 0.500 mm .* would vanish"):
        with_kerf(flat_pattern(plan(sheet())), 1.2)
    with pytest.raises(TrayError, match=r"kerf of 0.95 mm: .* edges of the outline would overlap"):
        with_kerf(flat_pattern(plan(sheet(corner_style="mitre", angle_deg=5.0))), 0.95)
    with pytest.raises(TrayError, match=r"kerf: got -0.1 mm"):
        with_kerf(flat_pattern(plan(sheet())), -0.1)
    with pytest.raises(TrayError, match=r"kerf: got nan mm"):
        with_kerf(flat_pattern(plan(sheet())), math.nan)


def test_sharp_corners_grow_to_where_their_edges_meet() -> None:
    """An L of 3 x 3 less 1 x 1: outside corners move out by d both ways, the inner one too."""
    ell = Contour.polygon([(0, 0), (3, 0), (3, 2), (2, 2), (2, 3), (0, 3)])
    d = 0.25
    want = [(-d, -d), (3 + d, -d), (3 + d, 2 + d), (2 + d, 2 + d), (2 + d, 3 + d), (-d, 3 + d)]
    np.testing.assert_allclose(np.array(grown(ell, d).vertices)[:, :2], want, atol=1e-12)
    with pytest.raises(OutlineError, match=r"edge from 3\.000, 2\.000 mm would vanish"):
        grown(Contour.polygon([(0, 0), (3, 0), (3, 2), (2.9, 2), (2.8, 1), (0, 1)]), -0.6)


def test_an_arc_met_at_an_angle_is_refused() -> None:
    with pytest.raises(OutlineError, match=r"corner at 2.000, 0.000 mm: an arc meets its neighbour"):
        grown(Contour(vertices=((0.0, 0.0, 0.0), (2.0, 0.0, 0.3), (2.0, 2.0, 0.0), (0.0, 2.0, 0.0))), 0.1)


def test_rounding_by_hand() -> None:
    """A square's corner of radius 1 starts 1 before it; a radius too large takes half of each edge."""
    square = rounded([(0, 0, 1.0), (4, 0, 0.0), (4, 4, 9.0), (0, 4, 0.0), (0, 2, 5.0)])
    quarter = math.tan(math.pi / 8)
    want = [(0, 1, quarter), (1, 0, 0), (4, 0, 0), (4, 2, quarter), (2, 4, 0), (0, 4, 0)]
    np.testing.assert_allclose(np.array(square.vertices), want, atol=1e-12)


def test_crossing_loops_are_seen() -> None:
    assert crosses_itself(Contour.polygon([(0, 0), (2, 2), (2, 0), (0, 2)]))
    assert not crosses_itself(Contour.polygon([(0, 0), (2, 0), (2, 2), (1, 0.5), (0, 2)]))
