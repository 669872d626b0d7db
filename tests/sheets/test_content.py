"""The sheet's sentences and figures: cautions against the published formulas, steps in their order, limits."""

from __future__ import annotations

import math
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from pypdf import PdfReader

from tests.designs import design
from tests.sheets.conftest import DEMOS, inspected, pattern_of
from wavejig.batch.plates import spacer_sets
from wavejig.fixture.bending.model import BendOrder, BendStep, PieceOrder
from wavejig.sheets import bending, checks, lists
from wavejig.sheets.buildsheet import BuildSheet, write_build_sheet
from wavejig.sheets.feedsteps import screw_for
from wavejig.sheets.laid import laid
from wavejig.sheets.process import assembly_steps
from wavejig.sheets.station import distance_m, eirp_w, exposure, public_limit_w_per_m2, wind
from wavejig.sheets.template import templates
from wavejig.sheets.tiles import OVERLAP_MM, Tile
from wavejig.shop import Inspection, inspect
from wavejig.shop.bench import joint_heat_w


def steps_of(made: Inspection) -> tuple[str, ...]:
    assert made.radiator and made.spacer and made.fixture
    return assembly_steps(made.design, made.radiator, made.spacer, made.fixture)


def place(steps: tuple[str, ...], needle: str) -> int:
    (found,) = [i for i, s in enumerate(steps) if needle in s]
    return found


# -- radio waves and wind -----------------------------------------------------------------------------


def test_distance_against_published_values() -> None:
    """S = EIRP / (4 pi r^2): 0.1 W EIRP makes 10 W/m2 at 0.0282 m, 3.981 W at 0.178 m (closed form)."""
    assert distance_m(0.1, 10.0) == pytest.approx(0.0282, abs=5e-5)
    assert distance_m(3.981, 10.0) == pytest.approx(0.178, abs=5e-4)
    for eirp in (0.1, 3.981, 100.0):
        r = distance_m(eirp, 10.0)
        assert eirp / (4.0 * math.pi * r * r) == pytest.approx(10.0)


def test_eirp_in_decibels() -> None:
    """100 mW (20 dBm) less 1 dB of cable into 9.2 dBi is 28.2 dBm."""
    assert 10.0 * math.log10(eirp_w(0.1, 9.2, 1.0) * 1000.0) == pytest.approx(28.2)


@pytest.mark.parametrize(
    ("mhz", "limit"), [(433.0, 2.165), (868.0, 4.34), (2000.0, 10.0), (2450.0, 10.0), (5800.0, 10.0)]
)
def test_limit_of_the_public(mhz: float, limit: float) -> None:
    assert public_limit_w_per_m2(mhz * 1e6) == pytest.approx(limit)


def test_recipe_figures_are_used_and_marked() -> None:
    given = exposure(design(station={"transmitter_power": "500 mW", "cable_loss": "1.5 dB"}), 9.0)
    assert (given.power_w, given.loss_db, given.gain_dbi) == (0.5, 1.5, 9.0)
    assert not (given.power_assumed or given.loss_assumed or given.gain_assumed)
    assert given.eirp_dbm == pytest.approx(26.9897 - 1.5 + 9.0, abs=1e-3)
    assert given.reflected_m == pytest.approx(2.0 * given.clear_m)
    assumed = exposure(design(), None)
    assert assumed.power_assumed and assumed.loss_assumed and assumed.gain_assumed


def test_kept_distance_is_never_less_than_either() -> None:
    for power in ("1 mW", "100 mW", "10 W", "500 W"):
        e = exposure(design(station={"transmitter_power": power}), 10.0)
        assert e.keep_m >= max(e.reflected_m, e.far_field_m)
        assert e.keep_m < max(e.reflected_m, e.far_field_m) + 0.1 + 1e-9


def test_wind_load() -> None:
    """0.5 x 1.25 x 30^2 x 1.2 on a flat 0.2 m square: 27 N; twice the speed, four times the load."""
    flat = design(reflector={"base": ["200 mm", "200 mm"]}, station={"wind_speed": "108 km/h"})
    made = inspect(flat)
    assert made.tray is not None
    assert wind(flat, made.tray).force_n == pytest.approx(27.0)
    twice = design(reflector={"base": ["200 mm", "200 mm"]}, station={"wind_speed": "60 m/s"})
    assert wind(twice, made.tray).force_n == pytest.approx(108.0)
    cup = inspect(
        design(reflector={"base": ["200 mm", "200 mm"], "lips": "four"}, station={"wind_speed": "30 m/s"})
    )
    assert cup.tray is not None
    assert wind(cup.design, cup.tray).force_n == pytest.approx(27.0 * 1.4 / 1.2)


def test_leaning_lips_catch_more_wind() -> None:
    made = [
        inspect(design(reflector={"lips": "two", "lip_height": "20 mm", "lip_angle": a}))
        for a in ("90 deg", "45 deg")
    ]
    areas = [wind(m.design, m.tray).area_m2 for m in made if m.tray]
    base = made[0].design.reflector
    assert areas[0] == pytest.approx(base.base_x_mm * base.base_y_mm / 1e6)
    assert areas[1] - areas[0] == pytest.approx(
        2 * 0.020 * math.cos(math.radians(45.0)) * base.base_x_mm / 1000.0
    )


# -- order of work ------------------------------------------------------------------------------------


def test_legs_are_soldered_in_the_right_order() -> None:
    """Plug on before heat, big sheet before the pin, all cold before the spacer leaves, flux off before the meter."""
    steps = steps_of(inspected("saltmarsh-2g4"))
    order = [
        "Trial bend", "Lay the radiator in the check nest", "Fit the connector", "Screw a mating plug",
        "Set spacer-a and spacer-b",
        "Lower the radiator", "push a hold-down over", "Clip a heat sink",
        "Solder the ground leg in its hole in the sheet FIRST",
        "Solder the pin leg to the pin", "pull the hold-downs straight out",
        "take the spacer out", "Wash the flux off", "it reads as a SHORT",
        "Measure the match", "Seal:",
    ]  # fmt: skip
    places = [place(steps, needle) for needle in order]
    assert places == sorted(places)


def test_the_lug_is_soldered_before_the_screw_takes_the_heat_away() -> None:
    steps = steps_of(inspect(design(reflector={"material": "aluminium"})))
    assert place(steps, "into its tinned lug now") < place(steps, "Fit the connector")
    assert not [s for s in steps if "in its hole in the sheet" in s]


def test_no_solder_in_a_nest_without_windows() -> None:
    made = inspected("saltmarsh-2g4")
    assert made.fixture is not None
    for window in (True, False):
        steps = " ".join(steps_of(replace(made, fixture=replace(made.fixture, has_window=window))))
        assert ("With the radiator in the nest, solder" in steps) is window
        assert ("Do NOT solder in the check nest" in steps) is not window


def test_heat_is_the_disc_s() -> None:
    """2 pi k t dT / ln(R / r) for 0.8 mm brass (120 W/mK), foot hole 2.1 mm and 1 mm rim, base 123 mm: 35 W."""
    expected = 2.0 * math.pi * 120.0 * 0.8e-3 * 200.0 / math.log(61.5 / 2.05)
    assert joint_heat_w(inspected("saltmarsh-2g4").design) == pytest.approx(expected, rel=1e-6)
    assert any(f"some {expected:.0f} W" in s for s in steps_of(inspected("saltmarsh-2g4")))


def test_the_tube_goes_to_the_sheet_first() -> None:
    steps = steps_of(inspected("ridge-868"))
    order = ["Solder it to the sheet all round FIRST", "Lower the radiator", "Solder the wire to the tube's wall",
             "Bend the inner conductor over", "take the spacer out"]  # fmt: skip
    places = [place(steps, needle) for needle in order]
    assert places == sorted(places)
    assert not [s for s in steps if "mating plug" in s]


def test_enamel_is_scraped_only_where_there_is_some() -> None:
    def wire(**radiator: Any) -> str:
        return " ".join(steps_of(inspect(design(radiator=radiator))))

    assert "Scrape" in wire(insulation="enamel", insulation_thickness="0.04 mm")
    assert "Scrape" not in wire()


def test_hold_downs_are_listed_for_every_set_and_tape_where_there_are_none() -> None:
    made = inspected("saltmarsh-2g4")
    assert made.fixture and made.spacer
    (row,) = [r for r in lists.tools(made.design, made.fixture, made.spacer) if r[0].startswith("hold-down")]
    assert row[2] == str(2 * spacer_sets(made.design))
    dish = " ".join(steps_of(inspected("landing-2g4-own")))
    assert "tape or a weight" in dish and "hold-down" not in dish


def test_posts_stay_and_blocks_leave() -> None:
    posts = " ".join(steps_of(inspect(design(spacer={"style": "posts", "material": "ASA"}))))
    assert "The posts stay" in posts
    assert "take the spacer out" not in posts


def test_screws_fit_their_holes() -> None:
    assert [screw_for(d) for d in (2.6, 3.3, 1.0)] == ["M2.5", "M3", ""]


# -- tables -------------------------------------------------------------------------------------------


def checks_of(made: Inspection) -> tuple[checks.Check, ...]:
    assert made.radiator and made.tray
    return checks.first_article(made.design, made.radiator, made.tray, pattern_of(made))


@pytest.mark.parametrize("name", DEMOS)
def test_first_article_s_limits_hold_the_nominal(name: str) -> None:
    for check in checks_of(inspected(name)):
        if check.low is not None and check.high is not None:
            nominal = float(check.nominal.split()[0].rstrip("\u00b0"))
            assert check.low < nominal < check.high
            assert check.low > 0.0


def test_first_article_is_measured_from_the_shapes_themselves() -> None:
    """Outside of the wire: what the sampled path spans, and a diameter more."""
    made = inspected("saltmarsh-2g4")
    assert made.radiator is not None
    points = made.radiator.main.path.sample(chord_error_mm=0.001)
    across = points[:, 0].max() - points[:, 0].min() + made.design.radiator.wire_diameter_mm
    (found,) = [c for c in checks_of(made) if c.what == "radiator along x"]
    assert found.low is not None
    assert found.low + made.design.tolerances.side_mm == pytest.approx(across, abs=0.002)
    (top,) = [c for c in checks_of(made) if c.what.startswith("standoff")]
    assert top.nominal == "16.25 mm"  # 15.35 to the centre, and half of 1.8


def test_the_cut_list_is_enough_wire() -> None:
    made = inspected("saltmarsh-2g4")
    assert made.radiator and made.spacer
    rows = lists.materials(made.design, made.radiator, pattern_of(made), made.spacer)
    metres = float(next(r[4] for r in rows if r[0] == "main wire").split("=")[1].split()[0])
    assert metres == pytest.approx(12 * made.radiator.main.cut_length_mm / 1000.0, abs=0.005)
    assert next(r for r in rows if r[0] == "flange screw, nut, washer")[3:] == ("4", "48")


# -- pictures -----------------------------------------------------------------------------------------


@pytest.mark.parametrize("name", DEMOS)
def test_there_is_a_picture_of_every_bend(name: str) -> None:
    made = inspected(name)
    assert made.radiator and made.fixture
    shown = bending.frames(made.design, made.radiator, made.fixture, None)
    wanted = sum(len(p.bends) for p in made.radiator.pieces if p.role != "inner")
    assert len(shown) == wanted
    assert all(f.seen.startswith("from ") for f in shown)


@pytest.mark.parametrize("name", DEMOS)
@pytest.mark.parametrize("from_end", [False, True])
def test_a_wire_with_all_bends_made_lies_as_the_finished_one(name: str, from_end: bool) -> None:
    """Held at any bend, from either side, the drawn wire covers the finished one."""
    made = inspected(name)
    assert made.radiator is not None
    piece = made.radiator.main
    every = {b.number for b in piece.bends}
    want = piece.path.sample(chord_error_mm=0.02, step_mm=2.0)[:, :2]
    for bend in (b for b in piece.bends if b.in_plane):
        got = laid(piece, every, bend.number, from_end=from_end)
        for sought in want[::7]:
            assert np.hypot(*(got - sought).T).min() < 1.1


def test_a_wire_not_yet_bent_leaves_the_pin_straight_on() -> None:
    """Before bend 3 the wire runs on in the direction it has before the bend, beyond where the corner will be."""
    piece = inspected("saltmarsh-2g4").radiator.main  # type: ignore[union-attr]
    arc = piece.path.arcs[2]
    got = laid(piece, {1, 2}, 3, from_end=False)
    start = np.array(arc.start[:2])
    heading = np.cross(np.array(arc.normal), np.array(arc.start) - np.array(arc.centre))[:2] / arc.radius_mm
    end = got[-1]
    assert float(np.dot(end - start, heading)) > 100.0  # the rest of the wire is that long
    assert abs(float(np.cross(np.append(heading, 0.0), np.append(end - start, 0.0))[2])) < 0.01


def planned(numbers: tuple[int, ...], held: str) -> BendOrder:
    """An order on the board alone, to see it drawn; nobody asked whether it collides."""
    steps = tuple(
        BendStep(
            piece="main", number=n, place="board", tool="dowel", held=held, pins=numbers[: i + 1], pins_in=(n,),
            pins_out=(), clamp=False, located="stop" if i == 0 else "formed bend", mark_mm=0.0, trim_first=False,
            lift_deg=0.0, rest_deg=0.0, tail_mm=10.0, loaded_angle_deg=90.0, angle_deg=90.0,
        )
        for i, n in enumerate(numbers)
    )  # fmt: skip
    piece = PieceOrder(piece="main", steps=steps, found=True, reason="", remedies=(), looked=0, complete=True)
    return BendOrder(pieces=(piece,))


@pytest.mark.parametrize("held", ["start", "end"])
def test_pictures_follow_the_planned_order(held: str) -> None:
    made = inspected("ridge-868")
    assert made.radiator and made.fixture
    numbers = (1, 2, 3, 4, 5, 6, 7) if held == "start" else (7, 6, 5, 4, 3, 2, 1)
    shown = bending.frames(made.design, made.radiator, made.fixture, planned(numbers, held))
    assert [f.title.split()[-1] for f in shown] == [str(n) for n in numbers]
    assert all(f"Put pin {n} in." in f.text for f, n in zip(shown, numbers, strict=True))
    free = "END" if held == "start" else "START"
    assert all(f"Swing the {free} side" in f.text for f in shown)


def test_a_wire_held_at_its_end_is_bent_from_there() -> None:
    """With only the last bend made, the far straight lies as in the finished wire and the start points away."""
    piece = inspected("ridge-868").radiator.main  # type: ignore[union-attr]
    got = laid(piece, {7}, 7, from_end=True)
    want = piece.path.sample(chord_error_mm=0.02, step_mm=2.0)[:, :2]
    assert np.hypot(*(got[-1] - want[-1])) < 0.05
    assert np.hypot(*(got[0] - want[0])) > 100.0


def test_an_order_that_was_not_found_is_owned_up_to(tmp_path: Path) -> None:
    made = inspected("ridge-868")
    reason = "bend 4 meets the clamp"
    piece = PieceOrder(
        piece="main", steps=(), found=False, reason=reason, remedies=(), looked=9, complete=True
    )
    sheet = BuildSheet(inspection=made, pattern=pattern_of(made), order=BendOrder(pieces=(piece,)))
    write_build_sheet(sheet, tmp_path / "sheet.pdf")
    text = " ".join(" ".join(p.extract_text().split()) for p in PdfReader(tmp_path / "sheet.pdf").pages)
    assert f"no order without a collision was found ({reason})" in text


# -- templates ----------------------------------------------------------------------------------------


def test_tiles_show_the_same_where_they_overlap() -> None:
    """Neighbours are one step apart: each point in the overlap is on both, shifted by it exactly."""
    made = inspected("ridge-868")
    assert made.radiator and made.tray
    frame = (194.0, 275.0)
    tiles = [t for t in templates(made.radiator, made.tray, pattern_of(made), frame) if "BLANK" in t.caption]
    assert len(tiles) == 4
    step = frame[0] - 6.0 - OVERLAP_MM

    def circles(index: int) -> list[tuple[float, float]]:
        found = []
        for s in tiles[index].drawn:
            points = np.array(getattr(s, "points", ()) or [(0.0, 0.0)])
            if len(points) > 20 and np.allclose(points[0], points[-1]):
                found.append((float(points[:-1, 0].mean()), float(points[:-1, 1].mean())))
        return found

    left, right = circles(0), circles(1)
    both = [(a, b) for a in left for b in right if abs(a[0] - step - b[0]) < 0.01 and abs(a[1] - b[1]) < 0.01]
    assert len(left) + len(right) - len(both) == 3  # two clamp holes of the upper half, and the tube's


def rings(tile: Tile) -> dict[float, list[tuple[float, float]]]:
    """Middles of the closed round chains on a page, by their diameter to 0.01 mm."""
    found: dict[float, list[tuple[float, float]]] = {}
    for s in tile.drawn:
        points = np.array(getattr(s, "points", None) or [(0.0, 0.0)])
        if len(points) > 12 and np.allclose(points[0], points[-1]):
            low, high = points.min(axis=0), points.max(axis=0)
            if abs((high - low)[0] - (high - low)[1]) < 0.02:
                middle = (low + high) / 2.0
                found.setdefault(round(float((high - low)[0]), 1), []).append(
                    (float(middle[0]), float(middle[1]))
                )
    return found


@pytest.mark.parametrize(("frame", "turned"), [((500.0, 600.0), False), ((440.0, 400.0), True)])
def test_templates_are_turned_but_never_mirrored(frame: tuple[float, float], turned: bool) -> None:
    """From the tube's hole to each clamp hole it is as far, and the same way round, as in the design."""
    made = inspected("ridge-868")
    assert made.radiator and made.tray
    (tile,) = [
        t for t in templates(made.radiator, made.tray, pattern_of(made), frame) if "BLANK" in t.caption
    ]
    assert ("turned a quarter" in tile.caption) is turned
    holes = {h.purpose: h for h in made.tray.holes if h.purpose == "tube"}
    clamps = [h for h in made.tray.holes if h.purpose == "mounting"]
    drawn = rings(tile)
    ((x0, y0),) = drawn[round(holes["tube"].diameter_mm, 1)]
    got = sorted((round(x - x0, 2), round(y - y0, 2)) for x, y in drawn[round(clamps[0].diameter_mm, 1)])
    away = [(h.x_mm - holes["tube"].x_mm, h.y_mm - holes["tube"].y_mm) for h in clamps]
    want = sorted((round(-y, 2), round(x, 2)) if turned else (round(x, 2), round(y, 2)) for x, y in away)
    assert np.allclose(got, want, atol=0.02)
    assert not np.allclose(sorted((-x, y) for x, y in want), want, atol=0.02)  # a mirrored page would differ
