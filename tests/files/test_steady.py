"""Solids in one exact state: the same bytes whatever the memory looked like, and the same solid as before."""

from __future__ import annotations

import math
from pathlib import Path

import cadquery as cq
import pytest
from tests.yard import YARD

from wavejig.files.mesh import measure, tessellate
from wavejig.files.steady import steady
from wavejig.files.step import NamedSolid, write_step
from wavejig.fixture import solid as fixture_solid
from wavejig.pack import inspect_recipe

RED = (0.8, 0.1, 0.1)


def bent_wire() -> cq.Shape:
    straight = cq.Solid.makeCylinder(0.9, 20.0, cq.Vector(0, 0, 0), cq.Vector(0, 0, 1))
    bend = cq.Solid.makeTorus(5.0, 0.9, cq.Vector(5, 0, 20), cq.Vector(0, 1, 0))
    return straight.fuse(bend)


def plate() -> cq.Shape:
    body = cq.Workplane().box(40.0, 30.0, 4.0).edges("|Z").fillet(3.0).faces(">Z").workplane().hole(3.2)
    return body.cut(cq.Workplane().box(7.0, 60.0, 1.0)).val()


SHAPES = {
    "plate": plate(),
    "wire": bent_wire(),
    "turned": plate().rotate(cq.Vector(1, 2, 3), cq.Vector(3, 1, 7), 33.3),
    "placed": plate().moved(cq.Location(cq.Vector(11.1, -7.7, 3.3), cq.Vector(1, 1, 0), 77.7)),
    "mirrored": plate().mirror("XY").moved(cq.Location(cq.Vector(0.1, 0.2, 0.3))),
    "cone": cq.Solid.makeCone(5.0, 2.0, 7.0).cut(cq.Solid.makeCylinder(1.0, 9.0)),
}


@pytest.mark.parametrize("name", SHAPES)
def test_it_is_the_same_solid(name: str) -> None:
    shape = SHAPES[name]
    before = measure(shape)
    kept = steady(name, shape, RED)
    made = kept.named()
    assert (made.name, made.colour) == (name, RED)
    assert made.shape.isValid() and len(made.shape.Solids()) == len(shape.Solids())
    after = measure(made.shape)
    assert after.volume_mm3 == pytest.approx(before.volume_mm3, rel=1e-9)
    assert after.area_mm2 == pytest.approx(before.area_mm2, rel=1e-9)
    assert after.bounds_mm == pytest.approx(before.bounds_mm, abs=2e-7)
    assert measure(shape) == before  # and what was given is as it was
    assert kept.named().shape is not made.shape


@pytest.mark.parametrize("name", SHAPES)
def test_noise_in_the_last_bits_is_gone(name: str) -> None:
    """Moved there and back, a solid differs from itself by some 1e-15; its state does not."""
    shape = SHAPES[name]
    there = cq.Vector(math.pi * 10.0, math.e * 10.0, math.sqrt(2.0))
    noisy = shape.translate(there).translate(there * -1.0)
    assert steady(name, noisy, RED) == steady(name, shape, RED)


def test_booleans_with_planes_in_common_come_out_alike(tmp_path: Path) -> None:
    """The check nest of the small demo: its windows share planes, whose last bit goes by memory addresses."""
    recipe = tmp_path / "yard.toml"
    recipe.write_text(YARD)
    fixture = inspect_recipe(recipe)[1].fixture
    assert fixture is not None
    states, files, meshes = set(), set(), set()
    clutter: list[object] = []
    for round_ in range(4):
        ((name, shape),) = fixture_solid._plate(fixture.nest)
        state = steady(name, shape, RED)
        states.add(state)
        mesh = tessellate(state.named().shape, name=name)
        meshes.add((mesh.vertices.tobytes(), mesh.faces.tobytes()))
        write_step(
            [NamedSolid(name=name, shape=state.named().shape, colour=RED)], tmp_path / "n.step", "nest"
        )
        files.add((tmp_path / "n.step").read_bytes())
        clutter.append([bytearray(i * 7 % 5000) for i in range(3000 * (round_ + 1))])  # addresses move
    assert len(states) == len(files) == len(meshes) == 1
