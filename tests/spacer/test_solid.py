"""The printed bodies, moved against the wire, the connector and the lips as solids."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterable
from dataclasses import replace
from itertools import pairwise

import cadquery as cq
import numpy as np
import pytest

from wavejig.design import Design
from wavejig.geometry.path import Arc, Segment
from wavejig.radiator.model import Radiator
from wavejig.spacer.model import BlockPiece, Spacer
from wavejig.spacer.plan import plan
from wavejig.spacer.solid import Printable, SpacerSolidError, printables

Antenna = tuple[Design, Radiator]
BLOCKS = ["biquad", "four lobes", "quad", "round", "small", "insulated"]
SLOW = pytest.mark.slow
SWEPT = [
    "biquad",
    "small",
    *(pytest.param(n, marks=SLOW) for n in ("four lobes", "quad", "round", "insulated")),
]
NOTHING_MM3 = 1e-4


def body(segment: Segment, radius_mm: float) -> cq.Shape:
    """One straight or arc of wire as a solid."""
    start = cq.Vector(*segment.start)
    if not isinstance(segment, Arc):
        along = cq.Vector(*segment.end) - start
        return cq.Solid.makeCylinder(radius_mm, along.Length, start, along)
    travel = np.cross(segment.normal, np.subtract(segment.start, segment.centre))
    ring = cq.Wire.makeCircle(radius_mm, start, cq.Vector(*travel))
    centre = cq.Vector(*segment.centre)
    return cq.Solid.revolve(ring, [], segment.angle_deg, centre, centre + cq.Vector(*segment.normal))


def wire_bodies(design: Design, radiator: Radiator, grow_mm: float = 0.0) -> list[cq.Shape]:
    """Every straight and arc of every piece, over its insulation, grown by `grow_mm` all round."""
    cover = design.radiator.insulation_thickness_mm + grow_mm
    return [
        body(segment, piece.diameter_mm / 2.0 + cover)
        for piece in radiator.pieces
        for segment in piece.path.segments
        if segment.length_mm > 1e-6
    ]


def hardware_bodies(design: Design) -> list[cq.Shape]:
    """Flange screw heads or washers (7 mm, M3), connector, lips with their folds."""
    out: list[cq.Shape] = [
        cq.Solid.makeCylinder(3.5, 3.0, cq.Vector(h.x_mm, h.y_mm, 0.0)) for h in design.feed.flange_holes
    ]
    if design.feed.style == "legs":
        x, y = design.feed.connector_at
        out.append(cq.Solid.makeCylinder(design.feed.connector_hole_mm / 2.0, 6.0, cq.Vector(x, y, 0.0)))
    sheet = design.reflector
    for lip in sheet.lips:
        assert lip.angle_deg == 90.0
        half, across = sheet.base_x_mm / 2.0, sheet.base_y_mm
        if lip.edge[0] == "y":
            half, across = sheet.base_y_mm / 2.0, sheet.base_x_mm
        # upright from its inner face out; at the root the fold fills the radius (taken as a square)
        wall = cq.Workplane().box(sheet.thickness_mm, across, lip.height_mm)
        wall = wall.translate((half - sheet.thickness_mm / 2.0, 0.0, lip.height_mm / 2.0))
        root = cq.Workplane().box(sheet.inside_radius_mm, across, sheet.inside_radius_mm)
        inner = half - sheet.thickness_mm - sheet.inside_radius_mm / 2.0
        root = root.translate((inner, 0.0, sheet.inside_radius_mm / 2.0))
        turn = {"x+": 0.0, "y+": 90.0, "x-": 180.0, "y-": 270.0}[lip.edge]
        for part in (wall, root):
            out.append(part.rotate((0, 0, 0), (0, 0, 1), turn).val())
    return out


def overlap_mm3(part: cq.Shape, others: Iterable[cq.Shape]) -> float:
    """Volume the part shares with others."""
    return sum(shared.Volume() for shared in touching(part, others))


def touching(part: cq.Shape, others: Iterable[cq.Shape]) -> list[cq.Shape]:
    """The bodies the part shares with others, each connected one by itself."""
    box = part.BoundingBox()
    out = []
    for other in others:
        b = other.BoundingBox()
        apart = b.xmin > box.xmax or b.xmax < box.xmin or b.ymin > box.ymax or b.ymax < box.ymin
        if apart or b.zmin > box.zmax or b.zmax < box.zmin:
            continue
        out += [piece for piece in part.intersect(other).Solids() if piece.Volume() > NOTHING_MM3]
    return out


def plain(spacer: Spacer) -> Spacer:
    """Without engraving: the booleans of these tests are then quick, and the part is larger, not smaller."""
    return replace(spacer, pieces=tuple(replace(p, marks=()) for p in spacer.pieces))


def built(antenna: Antenna) -> list[tuple[BlockPiece, cq.Shape]]:
    """Each piece of an antenna's block and its solid in the assembly."""
    design, radiator = antenna
    spacer = plain(plan(design, radiator))
    assert not spacer.conflicts
    return [
        (p, made.placed())
        for p, made in zip(spacer.pieces, printables(design, radiator, spacer), strict=True)
    ]


def shifted(shapes: Iterable[cq.Shape], x: float, y: float, z: float) -> list[cq.Shape]:
    return [s.moved(cq.Location(cq.Vector(x, y, z))) for s in shapes]


@pytest.mark.parametrize("name", SWEPT)
def test_block_slides_out_and_lifts_without_touching(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    obstacles = [*wire_bodies(design, radiator), *hardware_bodies(design)]
    top = design.radiator.standoff_mm + 20.0
    for piece, part in built((design, radiator)):
        dx, dy = piece.withdrawal
        for travel in np.linspace(0.0, piece.travel_mm, 12):
            (moved,) = shifted([part], dx * travel, dy * travel, 0.0)
            assert overlap_mm3(moved, obstacles) == 0.0, f"{piece.name} after {travel:.1f} mm"
        for lift in (0.5, design.radiator.covered_diameter_mm, top):
            (moved,) = shifted([part], dx * piece.travel_mm, dy * piece.travel_mm, lift)
            assert overlap_mm3(moved, obstacles) == 0.0, f"{piece.name} lifted {lift:.1f} mm"


@pytest.mark.parametrize("name", ["biquad", "small"])
def test_block_cannot_be_lifted_before_its_travel(name: str, named: Callable[[str], Antenna]) -> None:
    """The other way round: the test above would see it if the travel were too short."""
    design, radiator = named(name)
    wire = wire_bodies(design, radiator)
    for piece, part in built((design, radiator)):
        dx, dy = piece.withdrawal
        early = piece.travel_mm - 2.5  # play, clearance and the rounding up are less than this
        (moved,) = shifted([part], dx * early, dy * early, 1.0)
        assert overlap_mm3(moved, wire) > 0.0


@pytest.mark.parametrize("name", BLOCKS)
def test_wire_rests_on_two_slopes_of_every_lobe(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    wire = wire_bodies(design, radiator)
    for piece, part in built((design, radiator)):
        assert overlap_mm3(part, wire) == 0.0
        spots = [s.Center().toTuple()[:2] for s in touching(part, shifted(wire, 0.0, 0.0, -0.02))]
        assert len(piece.carries) >= 2 * piece.lobes
        for lobe in range(piece.lobes):
            assert {c.side for c in piece.carries if c.lobe == lobe} == {"before", "after"}
        for carry in piece.carries:
            (x0, y0), (x1, y1) = carry.start, carry.end
            middle = ((x0 + x1) / 2.0, (y0 + y1) / 2.0)
            nearest = min(np.hypot(x - middle[0], y - middle[1]) for x, y in spots)
            assert nearest < carry.length_mm / 2.0, f"{piece.name}: nothing rests near {middle}"


@pytest.mark.parametrize("name", SWEPT)
def test_block_places_the_wire_within_twice_the_clearance(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    parts = [part for _, part in built((design, radiator))]
    clearance = design.printer.clearance_mm
    # a little up, so that only the rims can touch
    wire = shifted(wire_bodies(design, radiator), 0.0, 0.0, 0.05)
    for dx, dy in ((1, 0), (-1, 0), (0, 1), (0, -1)):
        free = shifted(wire, dx * 0.9 * clearance, dy * 0.9 * clearance, 0.0)
        assert sum(overlap_mm3(p, free) for p in parts) == 0.0
        held = shifted(wire, dx * 2.0 * clearance, dy * 2.0 * clearance, 0.0)
        assert sum(overlap_mm3(p, held) for p in parts) > 0.0


@pytest.mark.parametrize("name", ["biquad", "small"])
def test_no_plastic_near_solder(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    spots = [design.feed.terminal_pin, design.feed.terminal_ground]
    spots += [j.at[:2] for j in radiator.joints if abs(j.at[2] - design.radiator.standoff_mm) < 2.0]
    for _, part in built((design, radiator)):
        for x, y in spots:
            at = cq.Vertex.makeVertex(x, y, design.radiator.standoff_mm)
            assert part.distance(at) >= 8.0 - 0.01


@pytest.mark.parametrize("name", [*BLOCKS, "posts"])
def test_printed_bodies_lie_on_the_bed_and_narrow_upwards(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    spacer = plan(design, radiator)
    for made in printables(design, radiator, spacer):
        box = made.solid.BoundingBox()
        assert made.solid.isValid() and made.solid.ShapeType() == "Solid" and made.solid.Volume() > 0
        assert box.zmin == pytest.approx(0.0, abs=1e-6)
        assert (box.xmin + box.xmax, box.ymin + box.ymax) == pytest.approx((0.0, 0.0), abs=1e-6)
        assert box.xlen <= design.printer.bed_x_mm and box.ylen <= design.printer.bed_y_mm
        assert box.zmax <= design.printer.bed_z_mm
        # no face looks down but the bottom and the flat end of a screw hole no wider than a nozzle bridges
        for face in made.solid.Faces():
            down = face.normalAt().z < -1e-6
            if down and face.BoundingBox().zmin > 1e-6:
                assert name == "posts" and face.BoundingBox().xlen < 4.0


def test_engraving_takes_away_what_its_strokes_cover(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("biquad")
    spacer = plan(design, radiator)
    cut = printables(design, radiator, spacer)
    whole = printables(design, radiator, plain(spacer))
    for piece, a, b in zip(spacer.pieces, cut, whole, strict=True):
        length = sum(
            float(np.hypot(q[0] - p[0], q[1] - p[1])) for m in piece.marks for p, q in pairwise(m.points)
        )
        taken = b.solid.Volume() - a.solid.Volume()
        # strokes overlap where they meet and end in squares: between 70 and 115 per cent of their length
        assert 0.7 < taken / (length * piece.mark_width_mm * piece.marks_depth_mm) < 1.15
        assert a.solid.BoundingBox().zmax == pytest.approx(b.solid.BoundingBox().zmax)
        box = a.solid.cut(b.solid)
        assert box.Volume() == pytest.approx(0.0, abs=1e-3)


@pytest.mark.parametrize("name", ["posts", pytest.param("round posts", marks=SLOW)])
def test_post_carries_and_places_the_wire(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    wire = wire_bodies(design, radiator)
    spacer = plan(design, radiator)
    assert not spacer.conflicts and len(spacer.posts) == 2
    clearance = design.printer.clearance_mm
    for post, made in zip(spacer.posts, printables(design, radiator, spacer), strict=True):
        part = made.placed()
        assert overlap_mm3(part, wire) == 0.0
        assert overlap_mm3(part, shifted(wire, 0.0, 0.0, -0.02)) > 0.0
        raised = shifted(wire, 0.0, 0.0, 0.05)
        for sign in (1, -1):  # along the lobe's axis; the wire itself runs across it here
            assert overlap_mm3(part, shifted(raised, sign * 0.9 * clearance, 0.0, 0.0)) == 0.0
            assert overlap_mm3(part, shifted(raised, sign * 2.0 * clearance, 0.0, 0.0)) > 0.0
        for lift in (
            0.3,
            design.radiator.wire_diameter_mm,
        ):  # it goes on from below, or the wire in from above
            assert overlap_mm3(part, shifted(wire, 0.0, 0.0, lift)) == 0.0
        # the screw enters where the sheet's hole is: a thinner one passes, a thicker one does not
        x, y = post.hole.x_mm, post.hole.y_mm
        assert any(
            (h.x_mm, h.y_mm) == pytest.approx((x, y)) for h in design.reflector.holes if h.purpose == "spacer"
        )
        depth = post.hole_depth_mm
        assert overlap_mm3(part, [cq.Solid.makeCylinder(1.3, depth, cq.Vector(x, y, 0.0))]) == 0.0
        assert overlap_mm3(part, [cq.Solid.makeCylinder(1.5, depth, cq.Vector(x, y, 0.0))]) > 0.0
        assert part.Volume() > 0.0 and depth < post.seat_z_mm - 1.5


def test_a_body_that_falls_apart_is_refused(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("quad")
    spacer = plain(plan(design, radiator))
    piece = spacer.pieces[0]
    afloat = replace(piece.layers[1], bottom_mm=piece.layers[1].bottom_mm + 1.0, top_mm=40.0)
    broken = replace(spacer, pieces=(replace(piece, layers=(piece.layers[0], afloat)),))
    with pytest.raises(SpacerSolidError, match="spacer-a: the kernel made 2 bodies"):
        printables(design, radiator, broken)


def test_a_long_piece_is_turned_to_fit(make: Callable[..., Antenna], named: Callable[[str], Antenna]) -> None:
    radiator_tables = {"family": "biquad", "wire": "1.8 mm"}
    design, radiator = make({"radiator": radiator_tables, "printer": {"bed": ["60 mm", "90 mm", "100 mm"]}})
    spacer = plan(design, radiator)
    assert not spacer.conflicts
    made: tuple[Printable, ...] = printables(design, radiator, spacer)
    for part, piece in zip(made, spacer.pieces, strict=True):
        box = part.solid.BoundingBox()
        assert box.xlen <= 60.0 and box.ylen > 60.0
        placed = part.placed().BoundingBox()
        assert (placed.xmin, placed.ymin, placed.xmax, placed.ymax) == pytest.approx(
            piece.layers[0].contour.bounds(), abs=1e-4
        )


def test_making_both_pieces_is_quick(named: Callable[[str], Antenna]) -> None:
    """Engraved, both pieces: a boolean per letter would take several seconds."""
    design, radiator = named("biquad")
    spacer = plan(design, radiator)
    printables(design, radiator, spacer)
    start = time.process_time()
    printables(design, radiator, spacer)
    assert time.process_time() - start < 2.5
