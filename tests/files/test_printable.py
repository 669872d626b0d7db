"""Overhangs and bridges measured on meshes whose answers are known from their drawing."""

from __future__ import annotations

import math
from typing import Any

import cadquery as cq
import numpy as np
import pytest

from wavejig.files.errors import MeshError
from wavejig.files.mesh import Mesh, tessellate
from wavejig.files.printable import Printability, printability, require_printable

BED = (100.0, 100.0, 100.0)


def box(x: float, y: float, z: float, at: tuple[float, float, float] = (0.0, 0.0, 0.0)) -> cq.Solid:
    return cq.Solid.makeBox(x, y, z).moved(cq.Location(cq.Vector(*at)))


def measured(shape: Any) -> Printability:
    return printability(tessellate(shape, name="piece"))


def gate(gap: float, turn: float = 0.0) -> Any:
    """Two walls with a lintel over the gap between them, turned on the bed."""
    shape = box(5, 10, 20).fuse(box(5, 10, 20, (5 + gap, 0, 0)), box(10 + gap, 10, 5, (0, 0, 20))).clean()
    return shape.rotate(cq.Vector(), cq.Vector(0, 0, 1), turn)


def test_a_block_has_no_overhang() -> None:
    found = measured(box(10, 20, 30))
    assert (found.overhang_deg, found.bridge_mm, found.ledge_mm, found.bodies) == (0.0, 0.0, 0.0, 1)
    assert found.size_mm == pytest.approx((10.0, 20.0, 30.0))
    assert found.faults(BED, 5.0) == ()


@pytest.mark.parametrize("turn", [0.0, 45.0, 90.0])
@pytest.mark.parametrize("gap", [4.0, 9.9])
def test_a_bridge_is_as_long_as_its_gap(gap: float, turn: float) -> None:
    found = measured(gate(gap, turn))
    assert found.bridge_mm == pytest.approx(gap, rel=2e-3)
    assert found.ledge_mm == 0.0 and found.faults(BED, 5.0) == ()


def test_a_long_bridge_is_a_fault() -> None:
    (fault,) = measured(gate(12.0)).faults(BED, 5.0)
    assert "bridges 12.0 mm" in fault
    with pytest.raises(MeshError, match=r"piece: cannot be printed as it lies: it bridges 12\.0 mm"):
        require_printable(tessellate(gate(12.0), name="piece"), BED, 5.0)


@pytest.mark.parametrize("ledge", [0.5, 3.0, 20.0])
def test_a_ledge_is_no_bridge_however_short(ledge: float) -> None:
    shape = box(10, 10, 10).fuse(box(10 + ledge, 10, 5, (0, 0, 10))).clean()
    found = measured(shape)
    assert found.ledge_mm == pytest.approx(min(ledge, 10.0), rel=0.02)
    assert found.overhang_deg == 90.0
    assert any("rests on one side only" in f for f in found.faults(BED, 5.0))


@pytest.mark.parametrize(("lean", "good"), [(30.0, True), (49.0, True), (51.0, False), (70.0, False)])
def test_a_slope_is_judged_by_its_lean_from_upright(lean: float, good: bool) -> None:
    out = 10.0 * math.tan(math.radians(lean))
    points = [(0, 0), (10, 0), (10, 5), (10 + out, 15), (0, 15)]
    shape = cq.Workplane("XZ").polyline(points).close().extrude(-10).val()
    found = measured(shape)
    if good:
        assert found.overhang_deg == pytest.approx(lean, abs=0.01)
    assert (found.faults(BED, 5.0) == ()) is good


def test_a_hole_lying_down_bridges_the_part_of_its_roof_that_is_too_flat() -> None:
    """Of a round roof what leans more than 50 degrees: chords of 2 r sin 40 degrees, to a facet."""
    shape = box(20, 20, 20).cut(cq.Solid.makeCylinder(4.0, 30.0, cq.Vector(10, -5, 10), cq.Vector(0, 1, 0)))
    found = measured(shape)
    roof = 8.0 * math.sin(math.radians(40.0))
    assert roof - 0.9 < found.bridge_mm < roof + 0.9
    assert found.ledge_mm == 0.0


def test_a_ring_shaped_ceiling_is_no_bridge() -> None:
    """A mushroom's underside is held at its inner rim alone."""
    shape = cq.Solid.makeCylinder(5.0, 10.0).fuse(cq.Solid.makeCylinder(12.0, 3.0, cq.Vector(0, 0, 10)))
    assert measured(shape.clean()).ledge_mm > 6.0


def test_the_bed_s_margin_counts() -> None:
    found = measured(box(94, 20, 20))
    assert any("bed" in f for f in found.faults(BED, 5.0))
    assert found.faults(BED, 3.0) == ()


def test_two_bodies_are_told() -> None:
    a = tessellate(box(5, 5, 5), name="a")
    both = Mesh(
        name="pair",
        vertices=np.vstack([a.vertices, np.add(a.vertices, [20.0, 0.0, 0.0])]),
        faces=np.vstack([a.faces, a.faces + len(a.vertices)]),
    )
    assert printability(both).bodies == 2
    assert any("2 bodies" in f for f in printability(both).faults(BED, 5.0))


def test_a_piece_off_the_bed_is_refused() -> None:
    with pytest.raises(MeshError, match="lowest point"):
        measured(box(5, 5, 5, (0, 0, 1)))
