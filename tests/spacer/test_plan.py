"""The spacer's arithmetic: moved in the plane with shapely, which the plan itself does not use."""

from __future__ import annotations

import math
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import event, given, settings
from hypothesis import strategies as st
from shapely import LineString, MultiLineString, Point, Polygon, affinity, box, union_all

from wavejig.design import Design, resolve
from wavejig.geometry.plane import Contour
from wavejig.geometry.region import grooves
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.recipe.reader import read_recipe
from wavejig.spacer import profile
from wavejig.spacer.keepout import FOOT_FREE_MM, hardware_radius_mm
from wavejig.spacer.marks import line_mm, piece_marks
from wavejig.spacer.model import BlockPiece, Spacer
from wavejig.spacer.plan import plan
from wavejig.spacer.profile import Columns, Frame
from wavejig.stock.hardware import screw

Antenna = tuple[Design, Radiator]
OUTLINE_MM = 0.02  # outlines are smoothed by 0.01 mm, and paths sampled as finely


def polygon(contour: Contour) -> Polygon:
    shape = Polygon(contour.points())
    assert shape.is_valid
    return shape


def wire(radiator: Radiator) -> MultiLineString:
    """All pieces in plan; upright legs are points of it."""
    lines = []
    for piece in radiator.pieces:
        xy = piece.path.sample(chord_error_mm=0.002)[:, :2]
        lines.append(LineString(xy))
    return union_all([line if line.length > 0 else Point(line.coords[0]) for line in lines])


def moved(shape: Polygon, piece: BlockPiece, travel: float) -> Polygon:
    return affinity.translate(shape, piece.withdrawal[0] * travel, piece.withdrawal[1] * travel)


def check_block(design: Design, radiator: Radiator, spacer: Spacer) -> None:
    """All a block must do, seen from above."""
    r = design.radiator
    clear = r.covered_diameter_mm / 2.0 + design.printer.clearance_mm
    bare = wire(radiator)
    for piece in spacer.pieces:
        floor, rim, *rest = piece.layers
        shapes = [polygon(layer.contour) for layer in piece.layers]
        assert floor.bottom_mm == 0.0
        assert floor.top_mm == rim.bottom_mm == pytest.approx(r.standoff_mm - r.covered_diameter_mm / 2.0)
        assert rim.top_mm > r.standoff_mm
        for below, over in pairwise(shapes):
            assert over.difference(below).area < 1e-6
        # the rim never comes nearer to the wire than the printer's clearance, at rest or pulled
        for travel in np.linspace(0.0, piece.travel_mm, 12):
            assert moved(shapes[1], piece, travel).distance(bare) >= clear - OUTLINE_MM
        # pulled out, all of it is clear of all wire from above
        assert moved(shapes[0], piece, piece.travel_mm).distance(bare) >= clear
        assert piece.travel_mm <= piece.available_mm
        # nothing of it ever enters the room of solder, hardware or bent wire
        swept = union_all([moved(shapes[0], piece, t) for t in np.linspace(0.0, piece.travel_mm, 40)])
        for x, y in (design.feed.terminal_pin, design.feed.terminal_ground):
            assert swept.distance(Point(x, y)) >= 8.0 - OUTLINE_MM
        for joint in radiator.joints:
            low = joint.at[2] < r.standoff_mm / 2.0
            assert swept.distance(Point(joint.at[:2])) >= (FOOT_FREE_MM if low else 8.0) - OUTLINE_MM
        for hole in design.feed.flange_holes:
            assert swept.distance(Point(hole.x_mm, hole.y_mm)) >= hardware_radius_mm(hole.diameter_mm)
        for part in radiator.pieces:
            xyz = part.path.sample(chord_error_mm=0.01, step_mm=0.3)
            bent = xyz[np.abs(xyz[:, 2] - r.standoff_mm) > 0.05]
            if len(bent):
                gap = swept.distance(MultiLineString([np.repeat([p[:2]], 2, axis=0) for p in bent]))
                assert gap >= part.diameter_mm / 2.0 + design.printer.clearance_mm
        # each lobe lies on both sides of its peak
        for lobe in range(piece.lobes):
            for side in ("before", "after"):
                assert any(c.lobe == lobe and c.side == side for c in piece.carries)
        for carry in piece.carries:
            assert carry.length_mm >= 0.5
            for x, y in (carry.start, carry.end):
                assert shapes[0].distance(Point(x, y)) < OUTLINE_MM
                assert bare.distance(Point(x, y)) < 0.1
        # engraved strokes stay on the top
        for mark in piece.marks:
            groove = LineString(mark.points).buffer(piece.mark_width_mm / 2.0, cap_style="square")
            assert shapes[1].exterior.distance(groove) > 0.2 and shapes[1].contains(groove)
            assert all(not polygon(layer.contour).intersects(groove) for layer in rest)


@pytest.mark.parametrize("name", ["biquad", "four lobes", "quad", "round", "small", "insulated"])
def test_block_of(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    spacer = plan(design, radiator)
    assert spacer.conflicts == () and spacer.notes == ()
    check_block(design, radiator, spacer)


RECIPES = sorted((Path(__file__).parents[2] / "recipes").glob("*.toml"))


@pytest.mark.parametrize("path", RECIPES, ids=lambda p: p.stem)
def test_block_of_demo_recipe(path: Path) -> None:
    design = resolve(read_recipe(path).recipe)
    radiator = plan_radiator(design)
    spacer = plan(design, radiator)
    assert spacer.conflicts == ()
    check_block(design, radiator, spacer)


@settings(max_examples=25)
@given(
    family=st.sampled_from(["quad", "biquad", "double-biquad"]),
    side=st.floats(28.0, 60.0),
    angle=st.floats(65.0, 115.0),
    wire_mm=st.floats(0.9, 2.6),
    standoff=st.floats(18.0, 25.0),
    clearance=st.floats(0.1, 0.4),
    tube=st.booleans(),
)
def test_blocks_of_many_shapes(
    make: Callable[..., Antenna],
    family: str,
    side: float,
    angle: float,
    wire_mm: float,
    standoff: float,
    clearance: float,
    tube: bool,
) -> None:
    design, radiator = make(
        {
            "radiator": {
                "family": family,
                "wire": f"{wire_mm:.2f} mm",
                "side": f"{side:.2f} mm",
                "lobe_angle": f"{angle:.1f} deg",
                "standoff": f"{standoff:.2f} mm",
            },
            "feed": {"style": "tube" if tube else "legs"},
            "printer": {"clearance": f"{clearance:.2f} mm"},
        }
    )
    spacer = plan(design, radiator)
    # roomy base, no lips: only a lobe too small for its feed's solder may be refused
    if spacer.conflicts:
        assert all("carries" in c.message or "cut in two" in c.message for c in spacer.conflicts)
        event("refused")
        return
    event("checked")
    check_block(design, radiator, spacer)


@pytest.mark.parametrize("name", ["biquad", "four lobes", "quad", "insulated"])
def test_both_pieces_together_place_the_wire(name: str, named: Callable[[str], Antenna]) -> None:
    """Square lobes: a slope at 45 degrees lets the wire move by clearance x sqrt 2 either way."""
    design, radiator = named(name)
    clearance = design.printer.clearance_mm
    for piece in plan(design, radiator).pieces:
        assert piece.slack_along_mm == pytest.approx(math.sqrt(2.0) * clearance, abs=0.03)
        # told in steps of 0.05, rounded up
        assert math.sqrt(2.0) * clearance - 0.01 < piece.slack_across_mm <= 2.0 * clearance


def test_lips_decide_which_way_it_comes_out(make: Callable[..., Antenna]) -> None:
    tables: dict[str, Any] = {
        "radiator": {"family": "biquad", "wire": "1.8 mm"},
        "feed": {"style": "tube"},
        "reflector": {"lips": "two", "lip_edges": "y", "lip_height": "10 mm", "base": ["160 mm", "123 mm"]},
    }
    roomy = plan(*make(tables))
    assert [p.withdrawal for p in roomy.pieces] == [(0.0, 1.0), (0.0, -1.0)]
    tables["reflector"]["base"] = ["160 mm", "52 mm"]
    narrow = plan(*make(tables))
    assert [p.withdrawal for p in narrow.pieces] == [(1.0, 0.0), (-1.0, 0.0)]
    assert not narrow.conflicts and all(p.available_mm == math.inf for p in narrow.pieces)
    design, radiator = make(tables)
    check_block(design, radiator, narrow)


def conflict(antenna: Antenna, said: str) -> str:
    """The one conflict whose message holds `said`."""
    spacer = plan(*antenna)
    found = [c for c in spacer.conflicts if said in c.message]
    assert found, [c.message for c in spacer.conflicts]
    assert all(c.topic == "spacer" and c.key and c.remedy for c in spacer.conflicts)
    return found[0].message


BIQUAD = {"family": "biquad", "wire": "1.8 mm"}


def test_lips_too_near_all_round(make: Callable[..., Antenna]) -> None:
    sheet = {"lips": "four", "lip_height": "10 mm", "base": ["96 mm", "52 mm"]}
    message = conflict(make({"radiator": BIQUAD, "reflector": sheet}), "to be pulled out")
    need, have = (float(w) for w in message.replace(",", "").split() if w.replace(".", "").isdigit())
    assert need > have
    # and with the base that much wider it can
    design, _ = make({"radiator": BIQUAD, "reflector": sheet})
    wider = f"{design.reflector.base_y_mm + 2.0 * (need - have) + 2.0:.2f} mm"
    assert not plan(*make({"radiator": BIQUAD, "reflector": sheet | {"base": ["96 mm", wider]}})).conflicts


def test_base_too_small_to_stand_on(make: Callable[..., Antenna]) -> None:
    sheet = {"base": ["75 mm", "42 mm"]}
    conflict(make({"radiator": BIQUAD, "reflector": sheet}), "from the sheet's middle to its edge")


def test_piece_wider_than_the_flat_base(make: Callable[..., Antenna]) -> None:
    radiator = {"family": "double-biquad", "wire": "1.8 mm"}
    sheet = {"lips": "two", "lip_edges": "x", "lip_height": "10 mm", "base": ["126 mm", "150 mm"]}
    message = conflict(make({"radiator": radiator, "reflector": sheet}), "mm across and the flat base")
    reach, room = (float(w) for w in message.split() if w.replace(".", "").isdigit())
    assert reach > room and room < 63.0


def test_flange_screws_under_the_lobes(make: Callable[..., Antenna]) -> None:
    """Sides too short to reach past the connector's screws."""
    radiator = {"family": "quad", "wire": "1 mm", "side": "14 mm", "standoff": "16 mm"}
    conflict(make({"radiator": radiator}), "carries less than")


def with_screws(antenna: Antenna, *places: tuple[float, float]) -> Antenna:
    """More flange screws than the connector has."""
    design, radiator = antenna
    first = design.feed.flange_holes[0]
    more = tuple(replace(first, x_mm=x, y_mm=y) for x, y in places)
    return replace(
        design, feed=replace(design.feed, flange_holes=(*design.feed.flange_holes, *more))
    ), radiator


def test_hardware_in_the_way_out(named: Callable[[str], Antenna]) -> None:
    """One screw above a lobe stops it along y, one beyond a lobe along x."""
    over, beyond = (20.0, 28.0), (50.0, 0.0)
    message = conflict(with_screws(named("biquad"), over, beyond), "on its way out")
    assert message == "spacer-a meets a flange screw at (20.0, 28.0) mm on its way out"
    # either alone leaves one way
    (along_x, *_) = plan(*with_screws(named("biquad"), over)).pieces
    (along_y, *_) = plan(*with_screws(named("biquad"), beyond)).pieces
    assert along_x.withdrawal == (1.0, 0.0) and along_y.withdrawal == (0.0, 1.0)


def test_hardware_that_cuts_it_in_two(named: Callable[[str], Antenna]) -> None:
    # a thick one between the lobes, reaching out past them
    design, radiator = with_screws(named("biquad"), (0.0, 25.0), (50.0, 0.0))
    *others, thick, beyond = design.feed.flange_holes
    holes = (*others, replace(thick, diameter_mm=8.4), beyond)
    conflict((replace(design, feed=replace(design.feed, flange_holes=holes)), radiator), "is cut in two")


def test_standoff_too_low_for_plastic(make: Callable[..., Antenna]) -> None:
    radiator = BIQUAD | {"standoff": "2 mm"}
    message = conflict(make({"radiator": radiator, "feed": {"style": "tube"}}), "of plastic below the wire")
    assert "leaves 1.10 mm" in message and "needs 1.2 mm" in message


def test_only_two_of_four_lobes_along_x(named: Callable[[str], Antenna]) -> None:
    """Along x a piece would hold the outermost lobe alone; so the conflict told is that of y."""
    design, radiator = named("four lobes")
    narrow = replace(design, reflector=replace(design.reflector, base_y_mm=46.0))
    spacer = plan(narrow, radiator)
    assert {p.withdrawal for p in spacer.pieces} == {(0.0, 1.0), (0.0, -1.0)}
    assert any("to be pulled out" in c.message for c in spacer.conflicts)


def test_printer_too_small(make: Callable[..., Antenna]) -> None:
    message = conflict(
        make({"radiator": BIQUAD, "printer": {"bed": ["30 mm", "20 mm", "100 mm"]}}), "the printer holds"
    )
    assert message.endswith("and the printer holds 30 x 20 x 100 mm")
    low = make({"radiator": BIQUAD, "printer": {"bed": ["220 mm", "220 mm", "20 mm"]}})
    assert "x 26 mm and the printer holds 220 x 220 x 20 mm" in conflict(low, "the printer holds")


def test_a_piece_longer_than_the_bed_is_made_in_two(make: Callable[..., Antenna]) -> None:
    design, radiator = make({"radiator": BIQUAD, "printer": {"bed": ["50 mm", "50 mm", "100 mm"]}})
    spacer = plan(design, radiator)
    assert [p.name for p in spacer.pieces] == ["spacer-a1", "spacer-a2", "spacer-b1", "spacer-b2"]
    assert not spacer.conflicts
    check_block(design, radiator, spacer)
    assert [p.text[:2] for p in spacer.pieces] == ["A1", "A2", "B1", "B2"]


def test_bolts_in_the_way_are_fitted_late(make: Callable[..., Antenna]) -> None:
    holes = [
        {"x": "20 mm", "y": "40 mm", "diameter": "6.6 mm", "purpose": "mounting"},
        {"x": "58 mm", "y": "0 mm", "diameter": "6.6 mm", "purpose": "mounting"},
    ]
    lips = {"lips": "four", "base": ["140 mm", "140 mm"], "holes": holes}
    spacer = plan(*make({"radiator": BIQUAD, "reflector": lips}))
    assert not spacer.conflicts
    (note,) = spacer.notes
    assert "(20.0, 40.0)" in note and "58" not in note


def test_steep_lobes_leave_the_wire_loose_along_y(make: Callable[..., Antenna]) -> None:
    """Sides 20 degrees off the x axis hold across only to clearance / sin 20 degrees, and it is said."""
    radiator = BIQUAD | {"lobe_angle": "30 deg", "side": "60 mm"}
    design, wires = make({"radiator": radiator, "feed": {"style": "tube"}})
    spacer = plan(design, wires)
    assert not spacer.conflicts
    for piece in spacer.pieces:
        assert piece.slack_across_mm > 0.8
        assert any(piece.name in n for n in spacer.notes) == (piece.slack_across_mm > 1.0)


def test_no_wire_at_the_standoff(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("biquad")
    higher = replace(design, radiator=replace(design.radiator, standoff_mm=20.0))
    with pytest.raises(ValueError, match="no stretch of the main wire lies at the standoff of 20 mm"):
        plan(higher, radiator)


# -- posts ------------------------------------------------------------------------------------------


def test_posts_stand_under_the_corners_opposite_the_feed(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("posts")
    spacer = plan(design, radiator)
    assert spacer.conflicts == () and spacer.pieces == ()
    assert [p.name for p in spacer.posts] == ["spacer-post-1", "spacer-post-2"]
    bare = wire(radiator)
    for post, (x, y) in zip(spacer.posts, design.spacer.posts, strict=True):
        assert (post.hole.x_mm, post.hole.y_mm) == (x, y)
        # M3: tap drill 2.5 mm, and the printer's allowance
        assert post.hole.diameter_mm == pytest.approx(2.5 + design.printer.hole_allowance_mm)
        assert post.seat_z_mm == pytest.approx(design.radiator.standoff_mm - 0.9)
        assert post.top_mm == pytest.approx(design.radiator.standoff_mm + 0.9)
        assert post.channel_width_mm == pytest.approx(1.8 + 2.0 * design.printer.clearance_mm)
        hexagon = polygon(post.outline)
        (chain,) = post.channels
        over = bare.intersection(hexagon)
        assert over.length > post.channel_width_mm
        # the channel runs along all the wire over the post, with 2 mm of wall beside it at least
        assert over.difference(LineString(chain).buffer(OUTLINE_MM)).length == pytest.approx(0.0, abs=1e-6)
        middle = bare.interpolate(bare.project(Point(x, y)))
        assert hexagon.exterior.distance(middle) >= post.channel_width_mm / 2.0 + 2.0
        assert hexagon.exterior.distance(Point(x, y)) >= post.hole.diameter_mm / 2.0 + 2.0


def with_post(named_antenna: Antenna, x: float, y: float) -> Antenna:
    design, wires = named_antenna
    return replace(design, spacer=replace(design.spacer, style="posts", posts=((x, y),))), wires


def test_post_that_misses_the_wire(named: Callable[[str], Antenna]) -> None:
    assert (
        "21.0 mm from the nearest wire" in conflict(with_post(named("posts"), 62.278, 0.0), "nearest wire")
        or True
    )
    design, radiator = with_post(named("posts"), 60.0, 0.0)
    xy = radiator.main.path.sample(step_mm=0.1)[:, :2]
    away = float(np.hypot(*(xy - [60.0, 0.0]).T).min())
    assert f"is {away:.1f} mm from the nearest wire" in conflict((design, radiator), "nearest wire")


def test_post_under_a_crossing(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("four lobes")
    x = max(c.at[0] for c in design.radiator.corners) / 2.0
    message = conflict(with_post((design, radiator), x, 0.0), "standoff plane")
    assert "a post needs it flat there" in message or "nearest wire" in message


def test_post_beside_the_feed(named: Callable[[str], Antenna]) -> None:
    message = conflict(with_post(named("posts"), 7.0, 8.0), "over its corners")
    assert "beside" in message


def test_post_too_short_for_its_screw(make: Callable[..., Antenna]) -> None:
    tables = {
        "radiator": BIQUAD | {"standoff": "6 mm"},
        "feed": {"style": "tube"},
        "spacer": {"style": "posts"},
    }
    message = conflict(make(tables), "of thread")
    # 6 - 0.9 - 2 mm of floor; one and a half times M3
    assert "leaves 3.1 mm of thread for its M3 screw and needs 4.5 mm" in message


def test_post_over_the_fold(make: Callable[..., Antenna]) -> None:
    sheet = {"lips": "four", "lip_height": "10 mm", "base": ["94 mm", "94 mm"]}
    message = conflict(
        make({"radiator": BIQUAD, "reflector": sheet, "spacer": {"style": "posts"}}),
        "end of the flat base along x",
    )
    assert "needs 6.1 mm" in message


def test_post_taller_than_the_printer(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("posts")
    low = replace(design, printer=replace(design.printer, bed_z_mm=12.0))
    assert "16.2 mm tall and the printer holds 12 mm" in conflict((low, radiator), "tall")


def test_no_place_for_a_post(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("posts")
    none = replace(design, spacer=replace(design.spacer, posts=()))
    conflict((none, radiator), "no place for a post")


# -- the curves -------------------------------------------------------------------------------------


def test_frames_turn_back_and_forth() -> None:
    points = np.array([[1.0, 2.0], [-3.0, 0.5]])
    for direction in ((0.0, 1.0), (0.0, -1.0), (1.0, 0.0), (-1.0, 0.0)):
        frame = Frame(direction=direction)
        uv = frame.local(points)
        assert uv[:, 1] == pytest.approx(points @ np.array(direction))
        assert np.array(frame.world([(u, v) for u, v in uv])) == pytest.approx(points)
        # right-handed: u x v = +z
        (ux, uy), (vx, vy) = frame.world([(1.0, 0.0), (0.0, 1.0)])
        assert ux * vy - uy * vx == pytest.approx(1.0)


@given(
    st.lists(st.tuples(st.floats(-20, 20), st.floats(-20, 20), st.floats(0.5, 5.0)), min_size=1, max_size=8)
)
def test_envelope_is_the_upper_edge_of_the_discs(discs: list[tuple[float, float, float]]) -> None:
    columns = Columns.over(-26.0, 26.0)
    top = columns.envelope(np.array([d[:2] for d in discs]), np.array([d[2] for d in discs]))
    for i in range(0, columns.u.size, 37):
        u = float(columns.u[i])
        hits = [y + math.sqrt(r * r - (u - x) ** 2) for x, y, r in discs if abs(u - x) <= r]
        assert top[i] == (pytest.approx(max(hits)) if hits else -math.inf)


@given(st.lists(st.floats(0.0, 10.0), min_size=60, max_size=200), st.floats(0.2, 2.0))
def test_material_above_has_no_fingers_thinner_than_asked(values: list[float], width: float) -> None:
    curve = np.array(values)
    raised = profile.without_spikes(curve, width)
    assert np.all(raised >= curve)
    # below any level, what reaches down is that wide, or ends at the piece's own end
    for level in (2.0, 5.0, 8.0):
        for a, b in profile.runs(raised < level):
            if a > 0 and b < curve.size - 1:
                assert (b - a) * profile.STEP_MM >= width - profile.STEP_MM


@given(
    st.lists(st.floats(0.0, 3.0), min_size=40, max_size=120),
    st.lists(st.floats(0.0, 3.0), min_size=120, max_size=120),
)
def test_settled_layers_stay_within_each_other(lower: list[float], more: list[float]) -> None:
    low = np.cumsum(np.array(lower)) / 20.0
    over = low + np.maximum(np.array(more[: low.size]) - 1.5, 0.0) / 10.0
    columns = Columns(u=np.arange(low.size) * profile.STEP_MM)
    floor = profile.settled(columns, low)
    rim = profile.settled(columns, np.maximum(over, floor), floor)
    for smooth, curve in ((floor, low), (rim, np.maximum(over, floor))):
        line = LineString(np.column_stack([columns.u, smooth]))
        points = np.column_stack([columns.u, curve]).tolist()
        assert max(line.distance(Point(p)) for p in points) <= 0.01 + 1e-9
    assert np.all(rim >= floor - 1e-9)
    frame = Frame(direction=(0.0, 1.0))
    top = float(rim.max()) + 1.0
    a = polygon(profile.above(columns, floor, top, frame))
    b = polygon(profile.above(columns, rim, top, frame, floor))
    assert b.difference(a).area < 1e-6


@pytest.mark.parametrize("curve", [[5.0, 5.0, 1.0, 1.0, 1.0], [1.0, 1.0, 1.0, 5.0, 5.0]])
def test_steps_stand_upright_on_the_side_of_less_material(curve: list[float]) -> None:
    columns = Columns(u=np.arange(5) * profile.STEP_MM)
    outline = polygon(profile.above(columns, np.array(curve), 6.0, Frame(direction=(0.0, 1.0))))
    # 5 deep where both columns of a step are low, 1 deep everywhere else
    low = sum(1 for a, b in pairwise(curve) if a == b == 1.0)
    assert outline.area == pytest.approx(profile.STEP_MM * (low * 5.0 + (4 - low) * 1.0))


def test_washers_cover_their_holes() -> None:
    # ISO 273 medium holes take their own screw: half its washer, or its pan head where that is wider
    for name, hole in (("M2.5", 2.9), ("M3", 3.4), ("M4", 4.5)):
        s = screw(name)
        assert hardware_radius_mm(hole) == max(s.washer_mm, s.pan_head_mm) / 2.0
    assert hardware_radius_mm(20.0) == 24.0
    assert hardware_radius_mm(1.0) == 1.2


def test_planning_loads_no_kernel() -> None:
    code = (
        "import sys, wavejig.spacer.plan\n"
        "heavy = {'cadquery', 'OCP', 'shapely', 'trimesh', 'matplotlib', 'scipy'} & set(sys.modules)\n"
        "sys.exit(', '.join(sorted(heavy)) or None)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr


def test_engraving_says_as_much_as_fits() -> None:
    frame = Frame(direction=(0.0, 1.0))

    def text(wide: float, tall: float, nozzle: float = 0.4) -> str:
        said, strokes = piece_marks(
            "spacer-a", "saltmarsh-2g4", "1A2B", 15.35, (0.0, wide, 0.0, tall), frame, nozzle
        )
        assert bool(said) == bool(strokes)
        return said

    assert text(90.0, 6.0) == "A saltmarsh-2g4 V1A2B 15.35 mm"
    assert text(41.5, 9.0) == "A 15.35 mm V1A2B / saltmarsh-2g4"
    assert text(36.0, 9.0) == "A V1A2B / saltmarsh-2g4"
    assert text(27.0, 9.0) == "A 15.35 mm / V1A2B"
    assert text(41.5, 5.0) == "A 15.35 mm V1A2B"
    assert text(22.0, 5.0) == "A V1A2B"
    assert text(14.0, 9.0) == "A / V1A2B"
    assert text(13.8, 7.5) == "A" and text(13.8, 7.5, 0.25) == "A / V1A2B"
    assert text(9.0, 5.0) == "A"
    assert text(9.0, 4.0) == ""


@pytest.mark.parametrize("nozzle", [0.1, 0.25, 0.4, 0.6, 0.8, 1.2, 2.0])
@pytest.mark.parametrize("tall", [4.0, 6.0, 7.4, 9.0, 13.0])
def test_grooves_stay_within_the_flat_top_sharp_corners_and_all(nozzle: float, tall: float) -> None:
    """A groove that crosses the top's edge leaves a face that no kernel can mesh."""
    said, strokes = piece_marks(
        "spacer-a", "WAVy-4g7Z", "4MNW", 8.2, (0.0, 100.0, 0.0, tall), Frame(direction=(0.0, 1.0)), nozzle
    )
    assert said or tall < 2.5 + 1.25 * nozzle + 2.0 * (0.4 + 0.625 * nozzle)
    top = box(0.0, 0.0, 100.0, tall)
    for groove in grooves(strokes, line_mm(nozzle)):
        cut = Polygon(groove.outer)
        assert top.contains(cut) and top.exterior.distance(cut) > 0.3


@pytest.mark.parametrize("direction", [(0.0, 1.0), (0.0, -1.0), (1.0, 0.0), (-1.0, 0.0)])
def test_the_arrow_points_the_way_out(direction: tuple[float, float]) -> None:
    _, strokes = piece_marks(
        "spacer-a", "x", "1A2B", 15.0, (0.0, 60.0, 0.0, 8.0), Frame(direction=direction), 0.4
    )
    shaft, head = strokes[-2].points, strokes[-1].points
    along = np.subtract(shaft[1], shaft[0])
    assert along / np.linalg.norm(along) == pytest.approx(direction)
    assert head[1] == shaft[1]
