"""Pieces pulled out past all that stays: the stated figures, and that a bad way out would be told."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import cadquery as cq
import numpy as np
import pytest

from wavejig.design import Design, resolve
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan as plan_radiator
from wavejig.recipe.reader import read_recipe
from wavejig.shop.ways import way_findings
from wavejig.spacer.bed import BED_MARGIN_MM
from wavejig.spacer.plan import extent_mm, plan
from wavejig.spacer.solid import printables
from wavejig.spacer.withdraw import moves_mm, withdrawals

Antenna = tuple[Design, Radiator]
RECIPES = sorted((Path(__file__).parents[2] / "recipes").glob("*.toml"))
BLOCKS = ["biquad", "four lobes", "quad", "round", "small", "insulated"]


def check(design: Design, radiator: Radiator) -> None:
    spacer = plan(design, radiator)
    ways = withdrawals(design, radiator, spacer)
    assert [w.piece for w in ways] == [p.name for p in spacer.pieces]
    for way, piece in zip(ways, spacer.pieces, strict=True):
        assert way.free, way
        # beside the wire the rim keeps the printer's clearance, less outlines' and chords' smoothing
        assert way.least_rim_mm >= design.printer.clearance_mm - 0.03
        assert way.lip_mm >= 0.0
        assert way.standoff_off_mm <= 0.1
        assert f"{piece.travel_mm:g} mm towards" in way.way
    assert sum(w.carries for w in ways) >= 4


@pytest.mark.parametrize("path", RECIPES, ids=lambda p: p.stem)
def test_demo_pieces_come_out(path: Path) -> None:
    design = resolve(read_recipe(path).recipe)
    check(design, plan_radiator(design))


@pytest.mark.parametrize("name", BLOCKS)
def test_named_pieces_come_out(name: str, named: Callable[[str], Antenna]) -> None:
    check(*named(name))


@pytest.mark.parametrize("fault", ["lifted at once", "too short a travel", "the other way"])
def test_a_piece_that_would_be_caught_is_told(fault: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named("biquad")
    spacer = plan(design, radiator)
    first, *rest = spacer.pieces
    travel = {"lifted at once": 0.0, "too short a travel": first.travel_mm - 2.5}.get(fault, first.travel_mm)
    way = first.withdrawal if fault != "the other way" else (0.0, -first.withdrawal[1])
    bad = replace(spacer, pieces=(replace(first, travel_mm=travel, withdrawal=way), *rest))
    caught, *others = withdrawals(design, radiator, bad)
    assert not caught.free and all(w.free for w in others)
    (told,) = way_findings((), (caught, *others))
    assert told.code == "spacer-caught" and first.name in told.message


def test_the_way_starts_at_rest_goes_out_and_then_only_up(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("biquad")
    for piece in plan(design, radiator).pieces:
        moves = moves_mm(piece)
        assert np.all(moves[0] == 0.0)
        steps = np.diff(moves, axis=0)
        out = steps[:, :2] @ np.array(piece.withdrawal)
        assert np.all((out > 0) != (steps[:, 2] > 0))
        assert np.linalg.norm(moves[-1][:2]) == pytest.approx(piece.travel_mm)
        assert moves[-1][2] > piece.layers[-1].top_mm


@pytest.mark.parametrize("name", ["biquad", pytest.param("four lobes", marks=pytest.mark.slow)])
def test_the_wire_lies_at_the_standoff_on_four_places_or_more(
    name: str, named: Callable[[str], Antenna]
) -> None:
    """Measured on the solids: under the middle of each stretch carried, how high the plastic stands."""
    design, radiator = named(name)
    spacer = plan(design, radiator)
    bare = replace(spacer, pieces=tuple(replace(p, marks=()) for p in spacer.pieces))
    lobes: list[tuple[float, float]] = []
    for piece, made in zip(bare.pieces, printables(design, radiator, bare), strict=True):
        for carry in piece.carries:
            x, y = ((a + b) / 2.0 for a, b in zip(carry.start, carry.end, strict=True))
            probe = cq.Solid.makeCylinder(0.05, 100.0, cq.Vector(x, y, -1.0))
            shared = made.placed().intersect(probe)
            top = max(s.BoundingBox().zmax for s in shared.Solids())
            assert top + design.radiator.covered_diameter_mm / 2.0 == pytest.approx(
                design.radiator.standoff_mm, abs=0.1
            )
            lobes.append((x, y))
    assert len(lobes) >= 4
    # both lobes: on either side of the feed
    assert min(x for x, _ in lobes) < 0.0 < max(x for x, _ in lobes)


def test_pieces_leave_the_bed_s_margin_free(make: Callable[..., Antenna]) -> None:
    """A piece that just fits the bare bed is split or turned, so that skirt and clips have room."""
    design, radiator = make({"radiator": {"family": "biquad", "wire": "1.8 mm"}})
    length = extent_mm(plan(design, radiator).pieces[0])[0]
    tight = math.ceil(length) + 1.0
    bed = [f"{tight:g} mm", f"{tight:g} mm", "100 mm"]
    design, radiator = make({"radiator": {"family": "biquad", "wire": "1.8 mm"}, "printer": {"bed": bed}})
    for made in printables(design, radiator, plan(design, radiator)):
        box = made.solid.BoundingBox()
        assert max(box.xlen, box.ylen) <= tight - 2.0 * BED_MARGIN_MM
