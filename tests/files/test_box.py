"""Tight boxes: exact for cylinders and torus sectors in any place of their seam."""

from __future__ import annotations

import math

import cadquery as cq
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from wavejig.files.box import tight_box
from wavejig.files.mesh import tessellate


@settings(max_examples=10)
@given(
    turn=st.floats(5.0, 340.0),
    tilt=st.floats(0.0, 360.0),
    lean=st.floats(0.0, 180.0),
    radius=st.floats(2.0, 30.0),
    thickness=st.floats(0.3, 1.8),
)
def test_a_torus_sector_is_as_large_as_its_triangles(
    turn: float, tilt: float, lean: float, radius: float, thickness: float
) -> None:
    disc = cq.Face.makeFromWires(
        cq.Wire.makeCircle(thickness, cq.Vector(radius, 0, 0), cq.Vector(0, 1, 0)), []
    )
    sector = cq.Solid.revolve(disc, turn, cq.Vector(0, 0, 0), cq.Vector(0, 0, 1))
    placed = sector.rotate(cq.Vector(), cq.Vector(1, 0, 0), lean).rotate(
        cq.Vector(), cq.Vector(0.3, 1, 0.2), tilt
    )
    mesh = tessellate(placed, name="sector", chord_error_mm=0.01, angle_deg=8.0)
    box = tight_box(placed)
    low, high = mesh.vertices.min(axis=0), mesh.vertices.max(axis=0)
    for axis in range(3):
        assert -1e-6 <= low[axis] - box[axis] <= 0.02
        assert -1e-6 <= box[axis + 3] - high[axis] <= 0.02


def test_by_hand() -> None:
    disc = cq.Face.makeFromWires(cq.Wire.makeCircle(1.0, cq.Vector(5, 0, 0), cq.Vector(0, 1, 0)), [])
    quarter = cq.Solid.revolve(disc, 45.0, cq.Vector(0, 0, 0), cq.Vector(0, 0, 1))
    half = math.sqrt(0.5)
    assert tight_box(quarter) == pytest.approx((4.0 * half, 0.0, -1.0, 6.0, 6.0 * half, 1.0), abs=1e-9)
