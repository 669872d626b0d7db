"""The sheets read as by whoever must act on them: one number for one thing, words that can be done, nothing across
the lettering. Each test stands for a mistake once found by reading."""

from __future__ import annotations

import math
import re
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
import shapely

from tests.designs import design
from tests.sheets.conftest import CUT, DEMOS, inspected, pattern_of
from wavejig.batch.plan import plan as plan_batch
from wavejig.fixture.bending.model import BARE, BendOrder
from wavejig.fixture.bending.order import plan_order
from wavejig.fixture.solid import printables
from wavejig.sheets import bending, checks, lists
from wavejig.sheets.buildmodel import BuildSheet
from wavejig.sheets.fixture import fixture_drawing
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.laid import laid
from wavejig.sheets.layout import lay_out
from wavejig.sheets.marks import DimGroup, Stroke, Word
from wavejig.sheets.model import Ring, Shape, Sheet, View, number
from wavejig.sheets.process import assembly_steps
from wavejig.sheets.proving import proving_story
from wavejig.sheets.radiator import radiator_drawing
from wavejig.sheets.report.fitsection import fit_section
from wavejig.sheets.report.markup import write
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.proofsection import change_section
from wavejig.sheets.sheetfiles import drawings
from wavejig.sheets.template import templates
from wavejig.shop import Inspection, inspect


@cache
def order_of(name: str) -> BendOrder:
    made = inspected(name)
    assert made.radiator and made.fixture
    return plan_order(made.design, made.radiator, made.fixture)


def steps_of(name: str) -> tuple[str, ...]:
    made = inspected(name)
    assert made.radiator and made.spacer and made.fixture
    return assembly_steps(made.design, made.radiator, made.spacer, made.fixture, order_of(name))


def paper_of(made: Inspection) -> dict[str, Sheet]:
    return {sheet.name: sheet for _, sheet in drawings(made, pattern_of(made))}


# -- bending ------------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", DEMOS)
def test_a_step_speaks_only_of_bends_that_are_there(name: str) -> None:
    """Where a bend's plane is told by another bend, that one has been made before."""
    made = inspected(name)
    assert made.radiator and made.fixture
    shown = bending.frames(made.design, made.radiator, made.fixture, order_of(name))
    done: dict[str, set[str]] = {}
    for frame in shown:
        piece, bend = re.match(r"(.*), step .* bend (\d+)", frame.title).groups()  # type: ignore[union-attr]
        told = set(re.findall(r"bend (\d+)", frame.text))
        assert told <= done.setdefault(piece, set()), (frame.title, frame.text)
        done[piece].add(bend)
        assert "deg" not in frame.text


@pytest.mark.parametrize("name", ["saltmarsh-2g4", "ridge-868"])
def test_marks_are_drawn_before_they_are_used(name: str) -> None:
    made = inspected(name)
    assert made.radiator and made.fixture
    told = " ".join(bending.marks_to_draw(order_of(name)))
    assert "START" in told
    for frame in bending.frames(made.design, made.radiator, made.fixture, order_of(name)):
        for mark in re.findall(r"mark at ([\d.]+) mm", frame.text):
            assert number(float(mark), 1) in told


@pytest.mark.parametrize("from_end", [False, True])
def test_the_arrow_goes_where_the_free_side_goes(from_end: bool) -> None:
    """From the side still straight to the side bent, whichever is held: measured on the drawn wire near the pin."""
    made = inspected("ridge-868")
    assert made.radiator and made.fixture
    piece = made.radiator.main
    every = {b.number for b in piece.bends}
    turned = np.array([-1.0, 1.0]) if made.fixture.face_down else np.array([1.0, 1.0])
    seen = set()
    for station in made.fixture.stations:
        others = {n for n in every if (n > station.number) == from_end and n != station.number}
        pin = np.array(station.at)

        def side(done: set[int], n: int = station.number, pin: np.ndarray = pin) -> float:
            wire = laid(piece, done, n, from_end=from_end) * turned
            away = np.linalg.norm(wire - pin, axis=1)
            ring = np.flatnonzero((away > 20.0) & (away < 45.0))
            free = wire[ring[0] if from_end else ring[-1]] - pin
            return math.atan2(free[1], free[0])

        before, after = side(others), side(others | {station.number})
        first, last = bending.swing_rad(station, from_end=from_end)
        moved = math.remainder(after - before, 2.0 * math.pi)
        assert math.copysign(1.0, last - first) == math.copysign(1.0, moved)
        assert abs(math.remainder(first - before, 2.0 * math.pi)) < math.radians(25.0)
        seen.add(station.turn)
    assert seen == {"left", "right"}


@cache
def on_stop_block() -> tuple[Inspection, BendOrder]:
    made = inspect(design(fixture={"style": "stop-block"}))
    assert made.radiator and made.fixture
    return made, plan_order(made.design, made.radiator, made.fixture)


def test_a_stop_block_s_bends_are_drawn_on_it_with_their_three_pins() -> None:
    made, order = on_stop_block()
    assert made.radiator and made.fixture and made.fixture.stop_block
    block = made.fixture.stop_block
    places = {p.bend: p for p in block.places}
    shown = [f for f in bending.frames(made.design, made.radiator, made.fixture, order) if "stop" in f.seen]
    assert len(shown) == len(places)
    for frame in shown:
        place = places[int(frame.title.split()[-1])]
        black = {r.circle for r in frame.items if isinstance(r, Ring) and r.pen == "outline"}
        assert {(c.x_mm, c.y_mm) for c in black} == {place.mandrel_at, place.fence_at, place.stop_at}
        x0, y0, x1, y1 = frame.box
        for ring in (r.circle for r in frame.items if isinstance(r, Ring)):
            half = ring.diameter_mm / 2.0
            assert x0 <= ring.x_mm - half and ring.x_mm + half <= x1
            assert y0 <= ring.y_mm - half and ring.y_mm + half <= y1
        # the wire touches each pin and runs into none
        wire = [
            s for s in frame.items if isinstance(s, Shape) and s.pen == "wire"
        ]  # cut where it leaves the box
        body = shapely.union_all(
            [shapely.Polygon(s.contour.points(), [h.points() for h in s.holes]) for s in wire]
        )
        for c in black:
            gap = body.distance(shapely.Point(c.x_mm, c.y_mm)) - c.diameter_mm / 2.0
            stands = made.design.radiator.covered_diameter_mm / 2.0 if place.side == "leg" else 0.0
            # drawn with chords up to 0.05 mm off; half a millimetre: it has sprung back
            assert -0.06 <= gap <= stands + 0.5, (frame.title, gap)


def test_a_stop_block_is_not_taken_for_a_board() -> None:
    """Its drawing shows what is printed, and no clamp is asked for that has no place on it."""
    made, order = on_stop_block()
    assert made.radiator and made.fixture and made.spacer and made.fixture.stop_block
    frames = bending.frames(made.design, made.radiator, made.fixture, order)
    assert not any("the board" in f.seen for f in frames)
    sheet = paper_of(made)["fixture"]
    (first, _), outline = sheet.views, made.fixture.stop_block.plate.outline
    assert any(isinstance(i, Shape) and i.contour == outline for i in first.items)
    told = " ".join([*(v.title for v in sheet.views), *sheet.notes, sheet.block.part])
    assert "STOP BLOCK" in told and "board" not in told.lower()
    named = {row[-1].split(",")[0] for row in sheet.tables[0].rows if row[-1].startswith("stop")}
    assert named == {f"stop {p.lane}S{p.stop}" for p in made.fixture.stop_block.places}
    listed = {row[0].split(",")[0] for row in lists.tools(made.design, made.fixture, made.spacer)}
    printed = {p.name for p in printables(made.fixture)}
    of_the_fixture = {n for n in listed if not n.startswith(("spacer", "hold-down", "dowel pin"))}
    assert of_the_fixture == printed


def test_pins_to_be_turned_have_a_name_on_the_drawing() -> None:
    made = inspected("saltmarsh-2g4")
    assert made.radiator and made.fixture
    stations = tuple(replace(s, tool="turned") for s in made.fixture.stations)
    sheet = fixture_drawing(made.design, replace(made.fixture, stations=stations), made.radiator)
    assert any(row[-1].startswith("turned pin") for row in sheet.tables[0].rows)


def test_the_extra_length_is_cut_off_once_and_it_is_said_when() -> None:
    for name in ("ridge-868", "saltmarsh-2g4"):
        made = inspected(name)
        assert made.radiator and made.fixture
        first = lists.trimmed_before(order_of(name), "main")
        ((title, _), *_) = lists.bends(made.radiator, made.fixture, order_of(name))
        in_steps = [s for s in steps_of(name) if "Cut the extra" in s]
        pictures = bending.frames(made.design, made.radiator, made.fixture, order_of(name))
        in_pictures = [f for f in pictures if "Cut off the extra" in f.text]
        assert (f"cut off before bend {first}" in title) is (first is not None)
        assert ("cut off after bending" in title) is (first is None)
        assert (len(in_steps), len(in_pictures)) == ((1, 0) if first is None else (0, 1))


# -- one number for one thing -------------------------------------------------------------------------


@pytest.mark.parametrize("name", ["ridge-868", "boatshed-5g8"])
def test_the_tube_is_cut_to_one_length_everywhere(name: str) -> None:
    """Its wall and the inner conductor that is bared: in the cut list, the steps, the drawing and the plan to buy."""
    made = inspected(name)
    assert made.radiator and made.tray and made.spacer and made.fixture
    pieces = {p.role: p for p in made.radiator.pieces}
    length = number(pieces["tube"].developed_length_mm + pieces["inner"].developed_length_mm, 1)
    pattern = pattern_of(made)
    (row,) = [r for r in lists.materials(made.design, made.radiator, pattern, made.spacer) if "tube" in r[0]]
    assert f"\u00d7 {length} mm" in row[2]
    assert len([s for s in steps_of(name) if f"{length} mm" in s]) == 2
    (drawn,) = [r for t in paper_of(made)["radiator"].tables for r in t.rows if r[0] == "tube"]
    assert drawn[2] == length
    batch = plan_batch(made.design, made.radiator, made.tray, pattern, made.spacer, made.fixture)
    (plan,) = [w for w in batch.wires if w.kind == "tube"]
    assert number(plan.pieces[0][1], 1) == length
    assert plan.needed_mm > made.design.quantity * plan.pieces[0][1]


def test_a_round_dish_has_a_diameter() -> None:
    made = inspected("landing-2g4-own")
    assert made.radiator and made.tray and made.spacer and made.fixture
    batch = plan_batch(made.design, made.radiator, made.tray, pattern_of(made), made.spacer, made.fixture)
    (line,) = [b for b in batch.bill.lines if b.key == "own"]
    assert "160 mm diameter" in line.size and " x " not in line.size


# -- words that fit the design ------------------------------------------------------------------------


@pytest.mark.parametrize("name", DEMOS)
def test_legs_are_spoken_of_only_where_there_are_some(name: str) -> None:
    made = inspected(name)
    assert made.radiator and made.tray and made.fixture
    legs = made.design.feed.style == "legs"
    pattern = pattern_of(made)
    (lay,) = [s for s in steps_of(name) if "Lay the radiator in the check nest" in s]
    said = [
        lay,
        next(t.caption for t in templates(made.radiator, made.tray, pattern, (190.0, 270.0))),
        *(v.title for v in paper_of(made)["fixture"].views if "face DOWN" in v.title),
        next(
            c.how
            for c in checks.first_article(made.design, made.radiator, made.tray, pattern)
            if "nest" in c.what
        ),
    ]
    assert len(said) >= 4
    assert all(("legs" in text) is legs for text in said), said


@pytest.mark.parametrize("name", CUT)
def test_folds_and_drains_are_spoken_of_only_where_there_are_some(name: str) -> None:
    made = inspected(name)
    assert made.radiator and made.tray
    folded = bool(made.tray.lips)
    notes = " ".join(paper_of(made)["blank"].notes)
    captions = [t.caption for t in templates(made.radiator, made.tray, pattern_of(made), (190.0, 270.0))]
    assert ("fold UP" in notes) is folded
    assert any("before folding" in c for c in captions) is folded
    drained = any(h.purpose == "drain" for h in made.tray.holes)
    assert any("drain holes left open" in s for s in steps_of(name)) is drained


def test_round_lobes_have_no_corner_to_measure_at() -> None:
    for name, words in (("creek-915-round", "far side of each lobe"), ("saltmarsh-2g4", "every far corner")):
        made = inspected(name)
        assert made.radiator and made.tray
        (top,) = [
            c
            for c in checks.first_article(made.design, made.radiator, made.tray, pattern_of(made))
            if c.what.startswith("standoff")
        ]
        assert words in top.how


@pytest.mark.parametrize("name", DEMOS)
def test_a_finding_ends_with_one_full_stop(name: str) -> None:
    for f in inspected(name).findings:
        assert not f.message.endswith(".")
        assert not re.search(r"\d\.\d{4,}", f.message), f.message


# -- nothing across the lettering ---------------------------------------------------------------------


def _box(word: Word) -> shapely.Polygon:
    """What a line of lettering covers on paper, a little less than its capitals, so that touching is none."""
    wide = width_mm(word.text, word.height_mm, bold=word.bold)
    left = {"left": 0.0, "centre": -wide / 2.0, "right": -wide}[word.anchor]
    flat = shapely.box(left, 0.0, left + wide, word.height_mm).buffer(-0.2)
    turned = shapely.affinity.rotate(flat, word.rotation_deg, origin=(0.0, 0.0))
    return shapely.affinity.translate(turned, *word.at)


def _lines(view: View, pens: tuple[str, ...]) -> list[shapely.LineString]:
    found = []
    for thing in lay_out(view):
        if isinstance(thing, Stroke) and thing.pen in pens and thing.points:
            found.append(shapely.LineString(thing.points))
    for item in view.items:
        if isinstance(item, Ring):
            x, y = view.at[0] + item.circle.x_mm * view.scale, view.at[1] + item.circle.y_mm * view.scale
            found.append(shapely.Point(x, y).buffer(item.circle.diameter_mm / 2.0 * view.scale).exterior)
    return found


@pytest.mark.parametrize("name", DEMOS)
def test_no_line_of_the_sheet_metal_drawings_runs_through_their_lettering(name: str) -> None:
    """Centre lines, bend lines and rims of holes against every word of the blank's (or dish's) views."""
    made = inspected(name)
    sheet = paper_of(made)["blank" if made.tray is not None and made.tray.own is None else "own-dish"]
    for view in sheet.views:
        lines = _lines(view, ("centre", "bend"))
        words = [w for w in lay_out(view) if isinstance(w, Word)]
        assert lines and words
        for word in words:
            box = _box(word)
            assert not any(box.intersects(line) for line in lines), (view.title, word.text)
        boxes = [_box(w) for w in words]
        pairs = shapely.STRtree(boxes).query(boxes, predicate="intersects").T.tolist()
        assert all(a == b for a, b in pairs), view.title


# A small wire with flat lobes: no low corner to hang a radius on, little room below.
_FLAT = {"side": "11.85 mm", "lobe_angle": "60.5 deg", "standoff": "9.7 mm", "feed_gap": "3.9 mm"}


@cache
def flat_and_small() -> Inspection:
    band = ["5.725 GHz", "5.875 GHz"]
    return inspect(
        design(wire="1.0 mm", band=band, radiator=_FLAT, feed={"style": "tube", "tube": "tube-2.2"})
    )


@pytest.mark.parametrize("name", ["", *DEMOS])
def test_the_radiator_s_sizes_stand_clear_of_each_other_and_of_the_title(name: str) -> None:
    """The radius is where it once ran through another dimension and onto the title."""
    made = inspected(name) if name else flat_and_small()
    assert made.radiator
    view = radiator_drawing(made.design, made.radiator).views[0]
    things = list(lay_out(view))
    dims = [t for t in things if isinstance(t, DimGroup)]
    for radius in (d for d in dims if d.kind == "radius"):
        (word,) = (_box(w) for w in radius.parts if isinstance(w, Word))
        lines = [shapely.LineString(p.points) for p in radius.parts if isinstance(p, Stroke) and p.points]
        for other in (d for d in dims if d is not radius):
            for part in other.parts:
                if isinstance(part, Word):
                    assert not _box(part).intersects(word), (radius.text, part.text)
                    assert not any(_box(part).intersects(line) for line in lines), (radius.text, part.text)
                elif isinstance(part, Stroke) and part.points:
                    assert not word.intersects(shapely.LineString(part.points)), (radius.text, other.text)
        for title in (_box(w) for w in things if isinstance(w, Word)):
            assert not title.intersects(word)


def test_start_is_written_clear_of_the_board_s_holes() -> None:
    for made in (flat_and_small(), *map(inspected, ("saltmarsh-2g4", "boatshed-5g8"))):
        assert made.radiator and made.fixture
        view = fixture_drawing(made.design, made.fixture, made.radiator).views[0]
        (start,) = [w for w in lay_out(view) if isinstance(w, Word) and w.text == "start"]
        assert not any(_box(start).intersects(ring) for ring in _lines(view, ()))


def test_a_bend_no_block_has_room_for_is_not_sent_to_a_block() -> None:
    """Table and steps tell the same of it."""
    made, order = inspected("saltmarsh-2g4"), order_of("saltmarsh-2g4")
    assert made.radiator and made.fixture
    bare = {(p.piece, s.number) for p in order.pieces for s in p.steps if s.tool == BARE}
    assert bare
    shown = lists.bends(made.radiator, made.fixture, order)
    bent = [p for p in made.radiator.pieces if p.bends]
    for piece, (_, rows) in zip(bent, shown, strict=True):
        for row in rows:
            assert ("by hand" in row[-1]) is ((piece.role, int(row[0])) in bare), (piece.role, row)


@pytest.mark.parametrize("name", ["saltmarsh-2g4", "boatshed-5g8"])
def test_the_bench_and_the_cautions_speak_of_what_is_there(name: str) -> None:
    """Legs where there are some, and the dust of laminate where it is laminate."""
    made = inspected(name)
    sheet = BuildSheet(inspection=made, pattern=pattern_of(made))
    told = " ".join(getattr(f, "text", "") for f in proving_story(sheet, 180.0))
    assert ("gap, legs or standoff" in told) is (made.design.feed.style == "legs")
    assert ("Laminate dust" in told) is (not made.design.reflector.metal.foldable)


@pytest.mark.parametrize("name", ["saltmarsh-2g4", "boatshed-5g8"])
def test_the_page_s_symptoms_speak_of_the_feed_there_is(name: str) -> None:
    made = inspected(name)
    page = Report(inspection=made, pattern=pattern_of(made), pieces=(), prints=(), files=())
    told = " ".join(write(e) for e in change_section(page))
    assert ("legs" in told) is (made.design.feed.style == "legs")
    assert "{" not in told


@pytest.mark.parametrize("name", ["saltmarsh-2g4", "boatshed-5g8"])
def test_the_page_speaks_of_folds_only_where_there_are_some(name: str) -> None:
    made = inspected(name)
    page = Report(inspection=made, pattern=pattern_of(made), pieces=(), prints=(), files=())
    told = " ".join(write(e) for e in fit_section(page))
    assert ("\u00b7 - folds" in told) is bool(pattern_of(made).bends)


def test_what_found_no_room_on_the_fixture_says_what_to_do() -> None:
    notes = [f for f in flat_and_small().findings if f.code == "fixture-note" and "angle mark" in f.message]
    assert notes
    assert all("angle the step names" in f.remedy for f in notes)


@pytest.mark.parametrize("name", ["saltmarsh-2g4", "boatshed-5g8", "causeway-2g4-double"])
def test_cut_list_cut_plan_and_bill_have_the_same_wire(name: str) -> None:
    """Lengths as printed, pieces for the whole batch, and wire enough in the bill for all of them."""
    made = inspected(name)
    assert made.radiator and made.tray and made.spacer and made.fixture
    pattern = pattern_of(made)
    batch = plan_batch(made.design, made.radiator, made.tray, pattern, made.spacer, made.fixture)
    sizes = [r[2] for r in lists.materials(made.design, made.radiator, pattern, made.spacer)]
    for plan in batch.wires:
        for role, length, wanted in plan.pieces:
            assert wanted == made.design.quantity
            assert any(size.endswith(f"\u00d7 {number(length, 1)} mm") for size in sizes), (
                role,
                length,
                sizes,
            )
            cut = sum(p.times * dict(p.pieces).get(role, 0) for p in plan.patterns)
            assert cut == wanted
        (line,) = [b for b in batch.bill.lines if b.key == plan.kind]
        assert line.count is not None
        assert line.count * 1000.0 >= sum(length * n for _, length, n in plan.pieces)


@pytest.mark.parametrize("name", ["saltmarsh-2g4", "ridge-868"])
def test_the_cut_list_and_the_bill_count_the_same(name: str) -> None:
    """Screws, nuts, washers, connectors, clamps: whatever the bill counts for the batch stands on the sheet."""
    made = inspected(name)
    assert made.radiator and made.tray and made.spacer and made.fixture
    pattern = pattern_of(made)
    batch = plan_batch(made.design, made.radiator, made.tray, pattern, made.spacer, made.fixture)
    rows = lists.materials(made.design, made.radiator, pattern, made.spacer)
    for line in batch.bill.lines:
        if (
            line.key in ("connector", "plug", "screw", "nut", "washer", "pole_clamp")
            and "fixture" not in line.remark
        ):
            word = line.item.split()[-1] if line.key != "pole_clamp" else "U-bolt"
            (row,) = [
                r for r in rows if word.strip("()") in r[0] and (line.key == "plug") == ("plug" in r[0])
            ] or [None]
            assert row is not None, line.item
            assert row[4] == f"{line.count:g}", (line, row)
