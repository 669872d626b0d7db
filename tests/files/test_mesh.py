"""Meshes: closed, consistent, near the solid, the same whatever was done to the shape before."""

from __future__ import annotations

import math
from typing import Any

import cadquery
import numpy as np
import pytest

from wavejig.files.errors import MeshError
from wavejig.files.mesh import WELD_MM, Mesh, measure, tessellate

TETRAHEDRON = np.array([[0.0, 0, 0], [1, 0, 0], [0, 1, 0], [0, 0, 1]])
OUTWARD = np.array([[0, 2, 1], [0, 1, 3], [1, 2, 3], [0, 3, 2]])


def ball(radius_mm: float) -> Any:
    """Whole sphere about the origin."""
    return cadquery.Workplane().sphere(radius_mm).val()


def test_tetrahedron_by_hand() -> None:
    mesh = Mesh(name="t", vertices=TETRAHEDRON, faces=OUTWARD)
    assert mesh.volume_mm3 == pytest.approx(1.0 / 6.0, rel=1e-15)
    assert mesh.area_mm2 == pytest.approx(1.5 + math.sqrt(3.0) / 2.0, rel=1e-15)
    assert mesh.bounds_mm == (0.0, 0.0, 0.0, 1.0, 1.0, 1.0)
    np.testing.assert_allclose(mesh.normals[0], [0, 0, -1])
    np.testing.assert_allclose(mesh.normals[2], np.full(3, 1 / math.sqrt(3.0)))


def test_arrays_are_read_only_copies() -> None:
    vertices = TETRAHEDRON.copy()
    mesh = Mesh(name="t", vertices=vertices, faces=OUTWARD)
    vertices[0] = 9.0
    assert mesh.vertices[0].tolist() == [0.0, 0.0, 0.0]
    with pytest.raises(ValueError, match="read-only"):
        mesh.vertices[0] = 1.0
    with pytest.raises(ValueError, match="read-only"):
        mesh.faces[0] = 1


@pytest.mark.parametrize(
    ("vertices", "faces", "message"),
    [
        (TETRAHEDRON, OUTWARD[:-1], r"fin: the surface does not close: 3 open and 0 doubled edges"),
        (TETRAHEDRON, np.vstack([OUTWARD, OUTWARD[:1]]), "0 open and 3 doubled"),
        (TETRAHEDRON, np.vstack([OUTWARD[:-1], OUTWARD[-1:, ::-1]]), "does not close"),
        (TETRAHEDRON, OUTWARD[:, ::-1], "inside out"),
        (TETRAHEDRON * [1, 1, 0], OUTWARD, "need more than 0"),
        (TETRAHEDRON, OUTWARD + 1, "face with vertex 4, need 0 to 3"),
        (TETRAHEDRON * math.nan, OUTWARD, "not finite"),
        (TETRAHEDRON[:, :2], OUTWARD, r"vertices of shape \(4, 2\)"),
        (TETRAHEDRON, OUTWARD[:0], r"faces of shape \(0, 3\)"),
    ],
)
def test_what_bounds_no_volume_is_refused(vertices: Any, faces: Any, message: str) -> None:
    with pytest.raises(MeshError, match=message):
        Mesh(name="fin", vertices=vertices, faces=faces)


def test_measure_gives_textbook_figures() -> None:
    sphere = measure(ball(7).moved(cadquery.Location((1, 2, 3))))
    assert sphere.volume_mm3 == pytest.approx(4 / 3 * math.pi * 343, rel=1e-9)
    assert sphere.area_mm2 == pytest.approx(4 * math.pi * 49, rel=1e-9)
    assert sphere.bounds_mm == pytest.approx((-6, -5, -4, 8, 9, 10), abs=1e-6)
    torus = measure(cadquery.Solid.makeTorus(20, 3))
    assert torus.volume_mm3 == pytest.approx(2 * math.pi**2 * 20 * 9, rel=1e-9)


@pytest.mark.parametrize("piece", ["cube", "ring", "bent_wire", "board"])
def test_solids_close_and_keep_their_volume(piece: str, request: pytest.FixtureRequest) -> None:
    solid = request.getfixturevalue(piece)
    exact = measure(solid)
    if piece == "bent_wire":  # Pappus: section times the way of its centre
        way_mm = 30 + 4 * math.pi / 2 + 21
        assert exact.volume_mm3 == pytest.approx(math.pi * 0.9**2 * way_mm, rel=1e-6)
    for chord_error_mm in (0.1, 0.02, 0.005):
        mesh = tessellate(solid, name=piece, chord_error_mm=chord_error_mm)
        assert abs(mesh.volume_mm3 - exact.volume_mm3) <= chord_error_mm * exact.area_mm2
        np.testing.assert_allclose(mesh.bounds_mm, exact.bounds_mm, atol=chord_error_mm)


def test_triangles_stay_within_the_chord_error_of_a_sphere() -> None:
    """Every corner on the sphere, every middle of a triangle at most the chord error inside it."""
    mesh = tessellate(ball(10), name="ball", chord_error_mm=0.02)
    np.testing.assert_allclose(np.linalg.norm(mesh.vertices, axis=1), 10.0, atol=1e-9)
    middles = np.linalg.norm(mesh.vertices[mesh.faces].mean(axis=1), axis=1)
    assert 10.0 - middles.min() <= 0.02


def test_a_cube_is_eight_corners_and_twelve_triangles(cube: Any) -> None:
    mesh = tessellate(cube, name="cube")
    assert (len(mesh.vertices), len(mesh.faces)) == (8, 12)
    assert mesh.volume_mm3 == pytest.approx(1000.0, rel=1e-12)
    assert mesh.area_mm2 == pytest.approx(600.0, rel=1e-12)


def test_an_earlier_finer_tessellation_has_no_say() -> None:
    fresh, used = ball(10), ball(10)
    used.tessellate(0.001, 0.05)
    a, b = tessellate(fresh, name="a"), tessellate(used, name="b")
    np.testing.assert_array_equal(a.vertices, b.vertices)
    np.testing.assert_array_equal(a.faces, b.faces)


def test_a_mirrored_and_a_moved_solid_keep_their_outside(board: Any) -> None:
    exact = measure(board)
    for solid in (board.mirror("YZ"), board.moved(cadquery.Location((100, -50, 3), (0, 1, 0), 77))):
        mesh = tessellate(solid, name="board")
        assert mesh.volume_mm3 == pytest.approx(exact.volume_mm3, abs=0.02 * exact.area_mm2)


def test_corners_across_a_rounding_step_are_still_one() -> None:
    """Two corners half a weld apart, on either side of a multiple of the weld length, are merged."""
    from wavejig.files.mesh import _weld

    apart = TETRAHEDRON[OUTWARD].reshape(-1, 3) + 0.5 * WELD_MM
    apart[::2] -= 0.3 * WELD_MM
    mesh = Mesh(name="t", **_weld(apart, np.arange(12).reshape(4, 3)))
    assert (len(mesh.vertices), len(mesh.faces)) == (4, 4)


def test_open_shells_and_touching_bodies_are_refused(cube: Any) -> None:
    shell = cadquery.Shell.makeShell(cube.Faces()[:-1])
    with pytest.raises(MeshError, match="lid: the surface does not close: 4 open"):
        tessellate(shell, name="lid")
    neighbour = cube.moved(cadquery.Location((10, 10, 0)))
    with pytest.raises(MeshError, match="pair: the surface does not close: 0 open and 2 doubled"):
        tessellate(cadquery.Compound.makeCompound([cube, neighbour]), name="pair")
    with pytest.raises(MeshError, match="line: got a shape without faces"):
        tessellate(cadquery.Edge.makeLine((0, 0, 0), (1, 0, 0)), name="line")


@pytest.mark.parametrize(("chord", "angle"), [(0.0, 12.0), (math.nan, 12.0), (0.1, 0.0), (0.1, 91.0)])
def test_fineness_that_cannot_be_is_refused(cube: Any, chord: float, angle: float) -> None:
    with pytest.raises(ValueError, match="cube: got a chord error"):
        tessellate(cube, name="cube", chord_error_mm=chord, angle_deg=angle)
