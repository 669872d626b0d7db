"""The swept wire: one valid solid of Pappus' volume, that contains its centreline and nothing a radius off."""

from __future__ import annotations

import math

import pytest

from tests.designs import design
from wavejig.files.mesh import measure
from wavejig.radiator.plan import plan
from wavejig.radiator.solid import piece_solid

cq = pytest.importorskip("cadquery")


@pytest.mark.parametrize("family", ["quad", "biquad", "double-biquad", "twin-loop"])
@pytest.mark.parametrize("style", ["legs", "tube"])
def test_wire_solid(family: str, style: str) -> None:
    for piece in plan(design(family, feed={"style": style})).pieces:
        solid = piece_solid(piece)
        assert solid.isValid()
        assert len(solid.Solids()) == 1 and len(solid.Shells()) == 1
        section = math.pi * piece.diameter_mm**2 / 4.0
        assert solid.Volume() == pytest.approx(section * piece.path.length_mm, rel=1e-6)
        # one cylinder a straight, one torus a bend, two ends
        kinds = [f.geomType() for f in solid.Faces()]
        assert kinds.count("CYLINDER") == len(piece.path.lines)
        assert kinds.count("TORUS") == len(piece.path.arcs)
        assert kinds.count("PLANE") == 2
        low, high = piece.path.bounds()
        box = measure(solid).bounds_mm
        r = piece.diameter_mm / 2.0
        for axis in range(3):
            assert box[axis] >= low[axis] - r - 1e-3
            assert box[axis + 3] <= high[axis] + r + 1e-3
