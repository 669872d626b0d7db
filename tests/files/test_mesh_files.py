"""STL, 3MF and GLB: layout by the specifications, size kept, damage noticed, names harmless."""

from __future__ import annotations

import dataclasses
import json
import struct
import time
import xml.etree.ElementTree as ET
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import trimesh

from wavejig.files.errors import FileCheckError
from wavejig.files.glb import ColouredMesh, check_glb, write_glb
from wavejig.files.mesh import Measure, Mesh, measure, tessellate
from wavejig.files.names import clean_name
from wavejig.files.stl import check_stl, read_stl, write_stl
from wavejig.files.threemf import check_3mf, write_3mf

CORE = "{http://schemas.microsoft.com/3dmanufacturing/core/2015/02}"
ORANGE = (1.0, 0.5, 0.0)
Checker = Callable[[Path], None]


@pytest.fixture(scope="module")
def board_mesh(board: Any) -> Mesh:
    return tessellate(board, name="board")


@pytest.fixture(scope="module")
def board_figures(board: Any) -> Measure:
    return measure(board)


@pytest.fixture(params=["stl", "3mf", "glb"])
def written(
    request: pytest.FixtureRequest, tmp_path: Path, board_mesh: Mesh, board_figures: Measure
) -> tuple[Path, Callable[[Mesh, Path], None], Callable[..., None]]:
    """A file of each kind of the same board, its writer, and its check for given figures."""
    kind = request.param
    path = tmp_path / f"board.{kind}"

    def write(mesh: Mesh, to: Path) -> None:
        if kind == "stl":
            write_stl(mesh, to, "board")
        elif kind == "3mf":
            write_3mf([mesh], to, "board")
        else:
            write_glb([ColouredMesh(mesh=mesh, colour=ORANGE)], to)

    def check(figures: Measure = board_figures, **options: Any) -> None:
        if kind == "stl":
            check_stl(path, figures, **options)
        elif kind == "3mf":
            check_3mf(path, {"board": figures}, **options)
        else:
            check_glb(path, [("board", figures, ORANGE)], **options)

    write(board_mesh, path)
    return path, write, check


def test_a_sound_file_passes(written: Any) -> None:
    written[2]()


def test_a_file_cut_short_anywhere_is_caught(written: Any) -> None:
    path, _, check = written
    data = path.read_bytes()
    for size in (0, 3, 83, 84, len(data) // 3, len(data) // 2, len(data) - 50, len(data) - 1):
        path.write_bytes(data[:size])
        with pytest.raises(FileCheckError, match=rf"^{path.name}: found .*, expected "):
            check()


def test_a_missing_triangle_is_caught(written: Any, board_mesh: Mesh) -> None:
    """The mesh type refuses an open surface, so the triangle is taken out behind its back."""
    path, write, check = written
    torn = object.__new__(Mesh)
    for field, value in (("name", "board"), ("vertices", board_mesh.vertices)):
        object.__setattr__(torn, field, value)
    object.__setattr__(torn, "faces", board_mesh.faces[:-1])
    write(torn, path)
    with pytest.raises(FileCheckError, match="open edges"):
        check()
    turned = board_mesh.faces.copy()
    turned[0] = turned[0][::-1]
    object.__setattr__(torn, "faces", turned)
    write(torn, path)
    with pytest.raises(FileCheckError, match=r"open edges|disagree on the outside"):
        check()


@pytest.mark.parametrize("factor", [1 / 25.4, 0.1, 0.99, 1.01, 25.4, 1000.0])
def test_a_wrong_scale_is_caught(written: Any, board_mesh: Mesh, factor: float) -> None:
    path, write, check = written
    write(dataclasses.replace(board_mesh, vertices=board_mesh.vertices * factor), path)
    with pytest.raises(FileCheckError, match=r"volume of|in the box"):
        check()


def test_a_shifted_piece_is_caught(written: Any, board_mesh: Mesh) -> None:
    path, write, check = written
    write(dataclasses.replace(board_mesh, vertices=board_mesh.vertices + np.array([0.0, 0.0, 0.05])), path)
    with pytest.raises(FileCheckError, match="in the box"):
        check()


def test_a_volume_past_the_chord_bound_is_caught(written: Any, board_figures: Measure) -> None:
    _, _, check = written
    bound = 0.02 * board_figures.area_mm2
    off = dataclasses.replace(board_figures, volume_mm3=board_figures.volume_mm3 + 1.2 * bound)
    with pytest.raises(FileCheckError, match="volume of"):
        check(off)


def test_a_missing_folder_is_an_os_error(written: Any, board_mesh: Mesh) -> None:
    path, write, _ = written
    with pytest.raises(FileNotFoundError):
        write(board_mesh, path.parent / "nowhere" / path.name)


def test_a_missing_file_is_an_os_error(written: Any) -> None:
    path, _, check = written
    path.unlink()
    with pytest.raises(FileNotFoundError):
        check()


def test_stl_layout(tmp_path: Path, cube: Any) -> None:
    """84 + 50 n bytes, little-endian, header ASCII that does not begin "solid"; corners wind outwards."""
    path = tmp_path / "cube.stl"
    write_stl(tessellate(cube, name="cube"), path, "solid é COLOR=x" + "y" * 200)
    data = path.read_bytes()
    assert len(data) == 84 + 50 * 12 and data[80:84] == struct.pack("<I", 12)
    assert data[:80].isascii() and not data.lower().startswith(b"solid") and b"=" not in data[:80]
    header, corners = read_stl(path)
    assert header.startswith("mm; solid e")
    stored = np.frombuffer(data[84:96], dtype="<f4")
    across = np.cross(corners[0, 1] - corners[0, 0], corners[0, 2] - corners[0, 0])
    np.testing.assert_allclose(across / np.linalg.norm(across), stored, atol=1e-6)
    assert corners.min() == 0.0 and corners.max() == 10.0


def test_stl_counts_bodies(tmp_path: Path, cube: Any) -> None:
    import cadquery

    pair = cadquery.Compound.makeCompound([cube, cube.moved(cadquery.Location((30, 0, 0)))])
    path = tmp_path / "pair.stl"
    write_stl(tessellate(pair, name="pair"), path, "pair")
    check_stl(path, measure(pair), bodies=2)
    with pytest.raises(FileCheckError, match="found the piece in 2 bodies, expected 1"):
        check_stl(path, measure(pair))


def test_stl_that_begins_like_text_is_caught(tmp_path: Path, cube: Any) -> None:
    path = tmp_path / "cube.stl"
    write_stl(tessellate(cube, name="cube"), path, "cube")
    path.write_bytes(b"solid" + path.read_bytes()[5:])
    with pytest.raises(FileCheckError, match='begins with "solid"'):
        check_stl(path, measure(cube))


def test_3mf_layout(tmp_path: Path, cube: Any, awkward_name: str) -> None:
    """Parts, unit, names, metadata, counter-clockwise triangles: 3MF Core Specification 1.x."""
    path = tmp_path / "two.3mf"
    meshes = [tessellate(cube, name=awkward_name), tessellate(cube, name="=cmd|x")]
    write_3mf(meshes, path, awkward_name)
    with zipfile.ZipFile(path) as archive:
        assert archive.namelist() == ["[Content_Types].xml", "_rels/.rels", "3D/3dmodel.model"]
        assert {i.date_time for i in archive.infolist()} == {(1980, 1, 1, 0, 0, 0)}
        assert {i.compress_type for i in archive.infolist()} == {zipfile.ZIP_DEFLATED}
        model = ET.fromstring(archive.read("3D/3dmodel.model"))
        relation = ET.fromstring(archive.read("_rels/.rels"))[0]
    assert relation.attrib["Target"] == "/3D/3dmodel.model"
    assert model.attrib["unit"] == "millimeter"
    assert [m.text for m in model.iter(f"{CORE}metadata")] == [clean_name(awkward_name), "wavejig"]
    objects = list(model.iter(f"{CORE}object"))
    assert [o.attrib["name"] for o in objects] == [clean_name(awkward_name), "=cmd|x"]
    assert [i.attrib["objectid"] for i in model.iter(f"{CORE}item")] == [o.attrib["id"] for o in objects]
    xyz = np.array([[float(v.attrib[k]) for k in "xyz"] for v in objects[0].iter(f"{CORE}vertex")])
    tri = np.array(
        [[int(t.attrib[k]) for k in ("v1", "v2", "v3")] for t in objects[0].iter(f"{CORE}triangle")]
    )
    a, b, c = (xyz[tri[:, i]] for i in range(3))
    assert np.einsum("ij,ij->", a, np.cross(b, c)) / 6.0 == pytest.approx(1000.0, rel=1e-9)
    check_3mf(path, {awkward_name: measure(cube), "=cmd|x": measure(cube)})


def rewrite_model(path: Path, old: bytes, new: bytes) -> None:
    with zipfile.ZipFile(path) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    assert old in parts["3D/3dmodel.model"]
    parts["3D/3dmodel.model"] = parts["3D/3dmodel.model"].replace(old, new)
    with zipfile.ZipFile(path, "w") as archive:
        for name, data in parts.items():
            archive.writestr(name, data)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (b'unit="millimeter"', b'unit="inch"', "found the unit 'inch', expected 'millimeter'"),
        (b'name="cube"', b'name="cubf"', r"pieces \['cubf'\], expected \['cube'\]"),
        (b'<item objectid="1"/>', b"", "its reader refuses|no mesh"),
        (b"</build>", b"", "its reader refuses"),
    ],
)
def test_3mf_damage_is_caught(tmp_path: Path, cube: Any, old: bytes, new: bytes, message: str) -> None:
    path = tmp_path / "cube.3mf"
    write_3mf([tessellate(cube, name="cube")], path, "cube")
    rewrite_model(path, old, new)
    with pytest.raises(FileCheckError, match=message):
        check_3mf(path, {"cube": measure(cube)})


def test_3mf_without_its_relations_is_caught(tmp_path: Path, cube: Any) -> None:
    path = tmp_path / "cube.3mf"
    write_3mf([tessellate(cube, name="cube")], path, "cube")
    with zipfile.ZipFile(path) as archive:
        model = archive.read("3D/3dmodel.model")
    with zipfile.ZipFile(path, "w") as archive:
        archive.writestr("3D/3dmodel.model", model)
    with pytest.raises(FileCheckError, match="expected sound parts"):
        check_3mf(path, {"cube": measure(cube)})


def test_3mf_of_fifty_thousand_triangles_is_quick(tmp_path: Path) -> None:
    """A grid box of 50 000 triangles in under 2 s, on a machine shared with others (0.1 s alone)."""
    box = trimesh.creation.icosphere(subdivisions=6).subdivide()  # 4 x 81 920
    keep = Mesh(name="ball", vertices=box.vertices, faces=box.faces)
    start = time.process_time()
    write_3mf([keep], tmp_path / "ball.3mf", "ball")
    per_50k = (time.process_time() - start) * 50_000 / len(keep.faces)
    assert per_50k < 2.0


def test_glb_layout(tmp_path: Path, cube: Any) -> None:
    """Metres, y up, linear colour, exact bounds, padded chunks: glTF 2.0."""
    path = tmp_path / "cube.glb"
    mesh = tessellate(cube, name="cube")
    write_glb([ColouredMesh(mesh=mesh, colour=(1.0, 0.5, 0.0))], path)
    data = path.read_bytes()
    magic, version, total, json_size, json_kind = struct.unpack("<4sII I4s", data[:20])
    assert (magic, version, total, json_kind) == (b"glTF", 2, len(data), b"JSON")
    tree = json.loads(data[20 : 20 + json_size])
    bin_size, bin_kind = struct.unpack("<I4s", data[20 + json_size : 28 + json_size])
    assert (json_size % 4, bin_size % 4, bin_kind) == (0, 0, b"BIN\0")
    assert 28 + json_size + bin_size == len(data) and tree["buffers"] == [{"byteLength": bin_size}]
    (position,) = [a for a in tree["accessors"] if a["type"] == "VEC3"]
    # our box (0..10, 0..10, 0..10) mm, z up, is x 0..0.01, y 0..0.01, z -0.01..0 m, y up
    np.testing.assert_allclose(position["min"], [0, 0, -0.01], atol=1e-9)
    np.testing.assert_allclose(position["max"], [0.01, 0.01, 0], atol=1e-9)
    assert tree["nodes"] == [{"name": "cube", "mesh": 0}]
    factor = tree["materials"][0]["pbrMetallicRoughness"]["baseColorFactor"]
    assert factor == pytest.approx([1.0, 0.214041, 0.0, 1.0], abs=1e-6)  # sRGB 0.5 is 0.2140 linear


def test_glb_turns_our_z_into_its_y(tmp_path: Path) -> None:
    import cadquery

    post = cadquery.Solid.makeBox(1, 2, 30)
    path = tmp_path / "post.glb"
    write_glb([ColouredMesh(mesh=tessellate(post, name="post"), colour=ORANGE)], path)
    scene = trimesh.load_scene(path)
    np.testing.assert_allclose(scene.bounds, [[0, 0, -0.002], [0.001, 0.03, 0]], atol=1e-9)
    check_glb(path, [("post", measure(post), ORANGE)])


def test_glb_names_and_colours(tmp_path: Path, cube: Any, board: Any, awkward_name: str) -> None:
    path = tmp_path / "two.glb"
    pieces = [(awkward_name, cube, (0.2, 0.4, 0.6)), ("=board", board, (0.8, 0.1, 0.1))]
    write_glb([ColouredMesh(mesh=tessellate(s, name=n), colour=c) for n, s, c in pieces], path)
    check_glb(path, [(n, measure(s), c) for n, s, c in pieces])
    with pytest.raises(FileCheckError, match="coloured"):
        check_glb(path, [(n, measure(s), (0.2, 0.5, 0.6)) for n, s, _ in pieces])
    with pytest.raises(FileCheckError, match=r"expected \['other'\]"):
        check_glb(path, [("other", measure(cube), (0.2, 0.4, 0.6))])
    with pytest.raises(ValueError, match="need red, green and blue from 0 to 1"):
        write_glb([ColouredMesh(mesh=tessellate(cube, name="c"), colour=(255, 0, 0))], path)


@pytest.mark.parametrize("names", [[], ["a", "a"], ["a\x01", "a\x02"]])
def test_no_piece_or_one_name_twice_is_refused(tmp_path: Path, cube: Any, names: list[str]) -> None:
    meshes = [tessellate(cube, name=name) for name in names]
    with pytest.raises(ValueError, match=r"got no piece at all|twice, need at least one piece"):
        write_3mf(meshes, tmp_path / "x.3mf", "x")
    with pytest.raises(ValueError, match=r"got no piece at all|twice, need at least one piece"):
        write_glb([ColouredMesh(mesh=mesh, colour=ORANGE) for mesh in meshes], tmp_path / "x.glb")
    assert list(tmp_path.iterdir()) == []
