"""The folded solid against the blank, the point mapping, and itself: volume, surface, corner clearances."""

from __future__ import annotations

import math
from collections.abc import Callable

import cadquery as cq
import numpy as np
import pytest

from wavejig.design.model import Hole, ReflectorDesign
from wavejig.reflector.mapping import fold
from wavejig.reflector.model import Tray
from wavejig.reflector.solid import tray_solid
from wavejig.reflector.tray import plan

Sheet = Callable[..., ReflectorDesign]

HOLES = (
    Hole(x_mm=0.0, y_mm=5.0, diameter_mm=16.0, purpose="connector"),
    Hole(x_mm=20.0, y_mm=-30.0, diameter_mm=5.5, purpose="mounting"),
)
SHAPES = [
    ("", "relief", 90.0, 0.8, 1.0),
    ("y-y+", "relief", 90.0, 0.8, 1.0),
    ("x-x+", "relief", 30.0, 1.5, 3.0),
    ("x+y+", "relief", 60.0, 1.0, 0.0),
    ("x-x+y-y+", "relief", 90.0, 0.8, 0.0),
    ("x-x+y-y+", "relief", 90.0, 2.0, 4.0),
    ("x-x+y-y+", "relief", 5.0, 0.8, 1.0),
    ("x-x+y-y+", "relief", 45.0, 0.8, 1.0),
    ("x-x+y-y+", "mitre", 90.0, 0.8, 1.0),
    ("x-x+y-y+", "mitre", 90.0, 3.0, 0.0),
    ("x-x+y-y+", "mitre", 60.0, 1.0, 0.5),
    ("x-x+y-y+", "mitre", 45.0, 0.8, 6.0),
    ("x-x+y-y+", "mitre", 20.0, 1.5, 2.0),
    ("x-x+y-y+", "mitre", 5.0, 0.8, 1.0),
]


def _tray(sheet: Sheet, lips: str, style: str, angle: float, t: float, r: float) -> Tray:
    return plan(
        sheet(
            lips,
            20.0,
            angle,
            corner_style=style,
            thickness_mm=t,
            inside_radius_mm=r,
            holes=HOLES,
            base_x_mm=90.0,
        )
    )


@pytest.mark.parametrize("shape", SHAPES)
def test_one_valid_solid_with_the_volume_of_its_blank(
    sheet: Sheet, shape: tuple[str, str, float, float, float]
) -> None:
    """Only bends change volume: b (R + T/2) T per width, against b (R + K T) T on the blank.

    Were any two pieces to overlap, the joined volume would fall short.
    """
    tray = _tray(sheet, *shape)
    *_, t, r = shape
    solid = tray_solid(tray)
    assert solid.isValid()
    assert solid.ShapeType() == "Solid"
    want = t * (tray.outline.area_mm2 - sum(c.area_mm2 for c in tray.circles))
    for lip in tray.lips:
        b, width = math.radians(lip.angle_deg), lip.left.half_mm + lip.right.half_mm
        want += width * t * b * (t / 2.0 - lip.k_factor * t)
    assert solid.Volume() == pytest.approx(want, rel=1e-9)
    bends = [f for f in solid.Faces() if f.geomType() == "CYLINDER" and _axis_level(f)]
    assert len(bends) == len(tray.lips) * (2 if r else 1)


def _axis_level(face: cq.Face) -> bool:
    """True for a cylinder about a level axis as wide as a lip: a bend, not a hole or a rounded corner."""
    box = face.BoundingBox()
    return max(box.xlen, box.ylen) > 40.0


@pytest.mark.parametrize("shape", SHAPES)
def test_the_folded_cut_edge_lies_on_the_solid(
    sheet: Sheet, shape: tuple[str, str, float, float, float]
) -> None:
    """Points of the blank's edge, carried over by `fold`, lie on the solid's skin at every depth."""
    tray = _tray(sheet, *shape)
    solid = tray_solid(tray)
    shell = solid.Shells()[0]
    edge = tray.outline.points(0.3)
    for depth in (0.0, 0.4, 1.0):
        for p in fold(tray, edge, depth)[:: 1 if depth == 0.4 else 4]:
            assert shell.distance(cq.Vertex.makeVertex(*p.tolist())) < 1e-6


@pytest.mark.parametrize("shape", [s for s in SHAPES if len(s[0]) == 8])
def test_lips_keep_apart_at_the_corner(sheet: Sheet, shape: tuple[str, str, float, float, float]) -> None:
    """Relief: both tangents' ends are the relief's diagonal apart. Mitre: the stated gap, exactly."""
    tray = _tray(sheet, *shape)
    _, style, _, t, _ = shape
    solid = tray_solid(tray)
    x0, y0 = tray.base_reach_mm("x+"), tray.base_reach_mm("y+")
    # what hangs over the edge on either side of the corner's diagonal; a lip that crossed it would touch
    far, just = 400.0, 1e-6
    corner, end = (x0 + just, y0 + just), (x0 + far, y0 + far)
    by_x = solid.intersect(_prism([corner, (x0 + just, 0.0), (x0 + far, 0.0), end]))
    by_y = solid.intersect(_prism([corner, end, (0.0, y0 + far), (0.0, y0 + just)]))
    assert min(by_x.Volume(), by_y.Volume()) > 100.0
    distance = by_x.distance(by_y)
    if style == "relief":
        notch = math.hypot(x0 - tray.lip("y+").left.half_mm, y0 - tray.lip("x+").right.half_mm)
        assert distance == pytest.approx(notch, abs=1e-5)
        assert distance >= math.sqrt(2.0) * max(t, 1.0) - 1e-5
    else:
        assert tray.lip("x+").right.ear_mm is not None
        assert distance == pytest.approx(tray.practice.mitre_gap_mm, abs=1e-5)


def _prism(corners: list[tuple[float, float]]) -> cq.Solid:
    """A tall upright prism over these corners."""
    wire = cq.Wire.makePolygon([cq.Vector(x, y, -400.0) for x, y in corners], close=True)
    return cq.Solid.extrudeLinear(wire, [], cq.Vector(0.0, 0.0, 800.0))


def test_size_and_place_of_a_standing_tray(sheet: Sheet) -> None:
    """Outer faces at half the base; base from -T to 0; lips up to height - T; holes where they were put."""
    solid = tray_solid(_tray(sheet, "x-x+y-y+", "relief", 90.0, 0.8, 1.0))
    box = solid.BoundingBox(1e-4)
    assert (box.xmin, box.xmax, box.ymin, box.ymax) == pytest.approx((-45.0, 45.0, -55.0, 55.0), abs=1e-3)
    assert (box.zmin, box.zmax) == pytest.approx((-0.8, 19.2), abs=1e-3)
    for hole in HOLES:
        at = np.array([hole.x_mm, hole.y_mm])
        assert not solid.isInside(cq.Vector(*at, -0.4))
        for turn in np.linspace(0.0, 2.0 * math.pi, 9):
            rim = np.array([math.cos(turn), math.sin(turn)]) * hole.diameter_mm / 2.0
            assert not solid.isInside(cq.Vector(*(at + 0.99 * rim), -0.4))
            assert solid.isInside(cq.Vector(*(at + 1.01 * rim), -0.4))
    assert solid.isInside(cq.Vector(44.6, 0.0, 10.0))
    assert not solid.isInside(cq.Vector(44.1, 0.0, 10.0))
    # the round inside of the bend: its axis stands 1 mm above the tangent, 1.8 mm inside the mould line
    diagonal = math.sqrt(0.5)
    assert not solid.isInside(cq.Vector(43.2 + 0.99 * diagonal, 0.0, 1.0 - 0.99 * diagonal))
    assert solid.isInside(cq.Vector(43.2 + 1.01 * diagonal, 0.0, 1.0 - 1.01 * diagonal))
    assert solid.isInside(cq.Vector(43.2 + 1.79 * diagonal, 0.0, 1.0 - 1.79 * diagonal))
    assert not solid.isInside(cq.Vector(43.2 + 1.81 * diagonal, 0.0, 1.0 - 1.81 * diagonal))


def test_faces_in_one_plane_are_one_face(sheet: Sheet) -> None:
    """A channel: base 2, bends 2 x 2, flanges 2 x 2, tips 2, their round corners 4, sides 2."""
    assert len(tray_solid(plan(sheet("y-y+"))).Faces()) == 18
