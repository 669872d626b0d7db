"""Hold-downs: they press, stay off wire and solder, come off straight out, and print lying down."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import cadquery as cq
import numpy as np
import pytest
from shapely import Point, Polygon, box
from tests.dishes import BOX, dish_design
from tests.spacer.test_solid import SLOW, hardware_bodies, overlap_mm3, plain, shifted, wire_bodies

from wavejig.design import Design, resolve
from wavejig.design.version import version_code
from wavejig.files.mesh import tessellate
from wavejig.files.printable import require_printable
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.recipe.reader import read_recipe
from wavejig.spacer.bed import BED_MARGIN_MM
from wavejig.spacer.holddown import SOFT_WAY
from wavejig.spacer.keepout import keepouts
from wavejig.spacer.model import HoldDown, Spacer
from wavejig.spacer.plan import plan
from wavejig.spacer.profile import Frame
from wavejig.spacer.solid import hold_downs, printables
from wavejig.spacer.withdraw import hold_downs_off_mm
from wavejig.stock.processes import plastic

Antenna = tuple[Design, Radiator]
RECIPES = sorted((Path(__file__).parents[2] / "recipes").glob("*.toml"))
HELD = ["biquad", "small", *(pytest.param(n, marks=SLOW) for n in ("four lobes", "quad", "insulated"))]


def planned(antenna: Antenna) -> Spacer:
    spacer = plan(*antenna)
    assert not spacer.conflicts
    assert {h.piece for h in spacer.hold_downs} == {p.name for p in spacer.pieces}
    return spacer


def side(h: HoldDown) -> Polygon:
    """Its side view, v and z."""
    shape = Polygon(h.profile.points())
    assert shape.is_valid and h.profile.area_mm2 > 0.0
    return shape


def sheet(design: Design) -> list[cq.Shape]:
    """The base with its holes left out, below z = 0, and lips and what stands on it."""
    r = design.reflector
    base = (
        cq.Workplane().box(r.base_x_mm, r.base_y_mm, r.thickness_mm).translate((0, 0, -r.thickness_mm / 2.0))
    )
    stands = hardware_bodies(design)
    first = len(stands) - 2 * len(r.lips)  # the lips come last, each a wall and its fold
    # a lip's height is measured from where the outer faces meet, below the sheet
    lips = shifted(stands[first:], 0.0, 0.0, -r.thickness_mm)
    return [base.val(), *stands[:first], *lips]


def open_by(h: HoldDown, design: Design) -> float:
    """How far the mouth must spring, from the side view alone: what is gripped less the narrowest of the mouth."""
    v, top = h.contact_mm
    line = box(v - 1e-4, -100.0, v + 1e-4, 200.0).intersection(side(h))
    jaw, arm = sorted(line.geoms, key=lambda g: g.bounds[1])
    return (top + design.reflector.thickness_mm) - (arm.bounds[1] - jaw.bounds[3])


@pytest.mark.parametrize("name", ["biquad", "four lobes", "quad", "small", "insulated"])
def test_it_presses_and_the_plastic_stands_it(name: str, named: Callable[[str], Antenna]) -> None:
    design, _ = named(name)
    for h in planned(named(name)).hold_downs:
        assert open_by(h, design) == pytest.approx(h.press_mm, abs=1e-3) and h.press_mm >= 0.8
        assert 0.0 < h.strain <= h.strain_limit < 0.015
        assert 5.0 < h.force_n <= 30.0


def test_force_and_strain_against_a_beam_cut_into_pieces(named: Callable[[str], Antenna]) -> None:
    """The frame's give summed along its middle line, moment by moment, for a force that opens it."""
    design, _ = named("biquad")
    (h, *_) = planned(named("biquad")).hold_downs
    v1 = h.profile.bounds()[2]
    depth = -design.reflector.thickness_mm - h.profile.bounds()[1]
    back = v1 - depth / 2.0
    apart = h.contact_mm[1] + design.reflector.thickness_mm + depth
    e = plastic(design.spacer.plastic).youngs_modulus_gpa * 1000.0
    stiff = e * h.width_mm * depth**3 / 12.0
    line = [
        np.linspace(h.contact_mm[0], back, 4001),
        np.full(4001, back),
        np.linspace(back, h.contact_mm[0], 4001),
    ]
    lengths = [back - h.contact_mm[0], apart, back - h.contact_mm[0]]
    arms = [v - h.contact_mm[0] for v in line]
    give = sum(float(np.mean(a**2)) * n for a, n in zip(arms, lengths, strict=True)) / stiff
    assert h.force_n == pytest.approx(h.press_mm / give, rel=0.02)
    bending = h.force_n * max(float(a.max()) for a in arms)
    assert h.strain == pytest.approx(bending * depth / 2.0 / stiff, rel=0.02)


@pytest.mark.parametrize("name", HELD)
def test_it_touches_only_the_grip_and_comes_off_straight_out(
    name: str, named: Callable[[str], Antenna]
) -> None:
    design, radiator = named(name)
    spacer = plain(planned((design, radiator)))
    bare = replace(spacer, hold_downs=tuple(replace(h, marks=()) for h in spacer.hold_downs))
    stays = [*wire_bodies(design, radiator, grow_mm=0.5), *sheet(design)]
    pieces = {p.name: p.placed() for p in printables(design, radiator, spacer)}
    for h, made in zip(bare.hold_downs, hold_downs(design, bare), strict=True):
        part = made.placed()
        for who, piece in pieces.items():
            shared = overlap_mm3(part, [piece])
            # the wedge over the grip's back: no more than what it springs by, over its bearing
            assert 0.0 < shared < h.press_mm * h.width_mm * 8.0 if who == h.piece else shared == 0.0
        dx, dy = h.withdrawal
        for pull in np.linspace(0.0, h.off_mm, 7):
            (moved,) = shifted([part], dx * pull, dy * pull, 0.0)
            assert overlap_mm3(moved, stays) < 1e-3, f"{h.name} of {h.piece} after {pull:.1f} mm"
        # pulled off, nothing of it is over or under the sheet any more
        last = moved.BoundingBox()
        start = min(dx * last.xmin + dy * last.ymin, dx * last.xmax + dy * last.ymax)
        assert start > h.edge_mm


def test_pushed_further_in_it_meets_the_edge(named: Callable[[str], Antenna]) -> None:
    """It stops where it presses, and the test above would see it in the sheet."""
    for name in ("biquad", "small"):
        design, _ = named(name)
        spacer = plain(planned(named(name)))
        for h, made in zip(spacer.hold_downs, hold_downs(design, spacer), strict=True):
            way = np.array(h.withdrawal) * (design.printer.clearance_mm + 0.3)
            (moved,) = shifted([made.placed()], -way[0], -way[1], 0.0)
            assert overlap_mm3(moved, sheet(design)) > 0.0


@pytest.mark.parametrize("path", RECIPES, ids=lambda p: p.stem)
def test_every_demo_recipe_has_them_or_says_why_not(path: Path) -> None:
    design = resolve(read_recipe(path).recipe)
    radiator = plan_radiator(design)
    spacer = plan(design, radiator)
    assert not spacer.conflicts
    held = {h.piece for h in spacer.hold_downs}
    told = " ".join(n for n in spacer.notes if SOFT_WAY in n)
    for piece in spacer.pieces:
        assert (piece.name in held) != (piece.name in told)
        assert f"V{version_code(design)}" in piece.text and piece.marks
    off = hold_downs_off_mm(design, radiator, spacer)
    for h in spacer.hold_downs:
        assert off[h.piece] >= 0.9
        v0, _, v1, _ = h.profile.bounds()
        u = (h.middle_mm - h.width_mm / 2.0, h.middle_mm + h.width_mm / 2.0)
        plan_view = Polygon(
            Frame(direction=h.withdrawal).world([(u[0], v0), (u[1], v0), (u[1], v1), (u[0], v1)])
        )
        for disc in keepouts(design, radiator):
            assert plan_view.distance(Point(disc.x_mm, disc.y_mm)) >= disc.radius_mm - 1e-9
        assert version_code(design) in h.text and h.marks
    bed = (design.printer.bed_x_mm, design.printer.bed_y_mm, design.printer.bed_z_mm)
    for name, made in {p.name: p for p in hold_downs(design, spacer)}.items():
        found = require_printable(tessellate(made.solid, name=name), bed, BED_MARGIN_MM)
        assert found.overhang_deg < 1.0 and found.bridge_mm == 0.0


@pytest.mark.parametrize("name", ["biquad", "four lobes", "quad", "insulated", "round"])
def test_pieces_carry_the_version(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    code = version_code(design)
    other = replace(design, printer=replace(design.printer, clearance_mm=design.printer.clearance_mm + 0.05))
    assert len(code) == 4 and code != version_code(other)
    for piece in plan(design, radiator).pieces:
        assert design.name in piece.text and f"V{code}" in piece.text and piece.marks


def test_posts_have_none(named: Callable[[str], Antenna]) -> None:
    spacer = plan(*named("posts"))
    assert spacer.hold_downs == () and not any(SOFT_WAY in n for n in spacer.notes)


def test_a_dish_a_far_edge_and_a_tall_lip_are_told(make: Callable[..., Antenna]) -> None:
    def why(design: Design, radiator: Radiator) -> str:
        spacer = plan(design, radiator)
        assert not spacer.conflicts and spacer.hold_downs == ()
        return " ".join(n for n in spacer.notes if SOFT_WAY in n)

    dish = dish_design(BOX)
    assert "the dish's wall stands round it" in why(dish, plan_radiator(dish))
    wide = make(
        {"radiator": {"family": "biquad", "wire": "1.8 mm"}, "reflector": {"base": ["123 mm", "320 mm"]}}
    )
    assert "the sheet's edge is 127 mm from it" in why(*wide)
    tall = {"lips": "four", "lip_height": "60 mm", "base": ["123 mm", "123 mm"]}
    told = why(*make({"radiator": {"family": "biquad", "wire": "1.8 mm"}, "reflector": tall}))
    assert "the arm must pass over it" in told


def test_a_grip_stands_above_its_lip(make: Callable[..., Antenna]) -> None:
    """Up to what a printed grip bears; then the hand-hold and the hold-down's arm clear the lip."""
    for height in (10.0, 25.0, 30.0):
        lips = {"lips": "four", "lip_height": f"{height} mm", "base": ["140 mm", "140 mm"]}
        design, radiator = make({"radiator": {"family": "biquad", "wire": "1.8 mm"}, "reflector": lips})
        for piece in planned((design, radiator)).pieces:
            top = height - design.reflector.thickness_mm
            assert piece.layers[-1].top_mm >= top + 2.5 - 1e-9
