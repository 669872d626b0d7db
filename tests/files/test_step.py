"""STEP: names, colours, millimetres, validity; nothing of the process left behind or carried in."""

from __future__ import annotations

import dataclasses
from pathlib import Path
from typing import Any

import cadquery
import pytest
from OCP.Interface import Interface_Static
from OCP.Message import Message

from wavejig.files.errors import FileCheckError
from wavejig.files.step import NamedSolid, kernel_settings, step_name, write_step
from wavejig.files.stepcheck import check_step

ORANGE, BLUE = (1.0, 0.5, 0.0), (0.1, 0.2, 0.9)


@pytest.fixture
def one(cube: Any) -> list[NamedSolid]:
    return [NamedSolid(name="cube", shape=cube, colour=ORANGE)]


@pytest.fixture
def several(cube: Any, ring: Any, bent_wire: Any, board: Any) -> list[NamedSolid]:
    """An assembly in which two posts are one body placed twice."""
    shapes = {"wire": bent_wire, "ring": ring, "board": board}
    shapes |= {f"post {i}": cube.moved(cadquery.Location((60 + 20 * i, 0, 0))) for i in (1, 2)}
    return [
        NamedSolid(name=name, shape=shape, colour=(0.1 * i, 0.5, 1.0 - 0.1 * i))
        for i, (name, shape) in enumerate(shapes.items())
    ]


def test_one_part_comes_back(tmp_path: Path, one: list[NamedSolid]) -> None:
    path = tmp_path / "cube.step"
    write_step(one, path, "cube")
    check_step(path, one)
    text = path.read_text(encoding="ascii")
    assert "SI_UNIT(.MILLI.,.METRE.)" in text and "NEXT_ASSEMBLY" not in text
    head = [text.index(word) for word in ("FILE_DESCRIPTION", "FILE_NAME", "FILE_SCHEMA")]
    assert head == sorted(head)


def test_a_ten_millimetre_cube_is_ten_millimetres(tmp_path: Path, one: list[NamedSolid]) -> None:
    path = tmp_path / "cube.step"
    write_step(one, path, "cube")
    box = cadquery.importers.importStep(str(path)).val().BoundingBox()
    assert (box.xlen, box.ylen, box.zlen) == pytest.approx((10, 10, 10), abs=1e-6)


def test_an_assembly_comes_back_with_names_and_colours(tmp_path: Path, several: list[NamedSolid]) -> None:
    path = tmp_path / "all.step"
    write_step(several, path, "all")
    check_step(path, several)
    again = cadquery.Assembly.importStep(str(path))
    assert {child.name for child in again.children} == {solid.name for solid in several}


def test_writing_leaves_the_caller_s_shape_alone(tmp_path: Path, board: Any) -> None:
    board.tessellate(0.1)
    before = board.hashCode(), board.isValid(), board.Volume()
    write_step([NamedSolid(name="board", shape=board, colour=BLUE)], tmp_path / "b.step", "b")
    assert (board.hashCode(), board.isValid(), board.Volume()) == before


def test_the_same_bytes_whatever_was_written_before(tmp_path: Path, several: list[NamedSolid]) -> None:
    paths = [tmp_path / "sub" / "first.step", tmp_path / "second.step"]
    paths[0].parent.mkdir()
    for path in paths:
        write_step(several, path, "all")
    assert paths[0].read_bytes() == paths[1].read_bytes()
    assert b"NEXT_ASSEMBLY_USAGE_OCCURRENCE('1'" in paths[0].read_bytes()


def test_settings_and_voice_of_the_kernel_are_put_back(
    tmp_path: Path, one: list[NamedSolid], capfd: pytest.CaptureFixture[str]
) -> None:
    plain, path = tmp_path / "plain.step", tmp_path / "cube.step"
    write_step(one, plain, "cube")
    with kernel_settings():
        pass  # the translator knows its settings only once it has been woken
    before = Interface_Static.CVal_s("write.step.unit"), Interface_Static.CVal_s("write.step.schema")
    Interface_Static.SetCVal_s("write.step.unit", "INCH")
    Interface_Static.SetCVal_s("write.step.schema", "AP203")
    printers = list(Message.DefaultMessenger_s().Printers())
    try:
        write_step(one, path, "cube")
        check_step(path, one)
        path_broken = tmp_path / "broken.step"
        path_broken.write_bytes(b"ISO-10303-21;\n???\n#1=P('');\nEND-ISO-10303-21;\n")
        with pytest.raises(FileCheckError, match="cannot read"):
            check_step(path_broken, one)
        assert Interface_Static.CVal_s("write.step.unit") == "INCH"
        assert Interface_Static.CVal_s("write.step.schema") == "AP203"
    finally:
        Interface_Static.SetCVal_s("write.step.unit", before[0])
        Interface_Static.SetCVal_s("write.step.schema", before[1])
    assert plain.read_bytes() == path.read_bytes()
    assert len(list(Message.DefaultMessenger_s().Printers())) == len(printers) > 0
    assert capfd.readouterr() == ("", "")


def test_awkward_names_come_back(tmp_path: Path, cube: Any, awkward_name: str) -> None:
    long = "x" * 61 + "é" * 40 + "back\\slash" + "'" * 30
    solids = [
        NamedSolid(name=name, shape=cube.moved(cadquery.Location((20 * i, 0, 0))), colour=ORANGE)
        for i, name in enumerate((awkward_name, long, "=SUM(A1)", "<&>", "post #99999"))
    ]
    path = tmp_path / "names.step"
    write_step(solids, path, awkward_name)
    assert path.read_bytes().isascii()
    check_step(path, solids)


def test_names_are_kept_to_plain_ascii() -> None:
    assert step_name("aé\\b'c #2\x01") == "ae_b'c #2_"
    assert step_name("\U0001f527") == "_"


def edited(path: Path, old: bytes, new: bytes) -> None:
    data = path.read_bytes()
    assert old in data
    path.write_bytes(data.replace(old, new))


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (b"SI_UNIT(.MILLI.,.METRE.)", b"SI_UNIT($,.METRE.)", "length units .*, expected millimetre"),
        (b"PRODUCT('cube','cube'", b"PRODUCT('cuba','cuba'", r"pieces \['cuba'\], expected \['cube'\]"),
        (b"(10.,0.,0.)", b"(10.001,0.,0.)", "volume of|faults|in the box"),
        (b"COLOUR_RGB('',1.,", b"COLOUR_RGB('',0.,", "coloured"),
        (b"MANIFOLD_SOLID_BREP", b"SOLID_BREP_MANIFOLD", "found"),
        (b"ISO-10303-21;\nHEADER", b"ISO-10303-22;\nHEADER", "something else"),
        (b"END-ISO-10303-21;", b"", "cut short"),
    ],
)
def test_damage_is_caught(
    tmp_path: Path, one: list[NamedSolid], old: bytes, new: bytes, message: str
) -> None:
    path = tmp_path / "cube.step"
    write_step(one, path, "cube")
    edited(path, old, new)
    with pytest.raises(FileCheckError, match=message):
        check_step(path, one)


@pytest.mark.parametrize("part", [0.0, 0.01, 0.3, 0.6, 0.9])
def test_a_file_cut_short_is_caught_even_with_its_end_in_place(
    tmp_path: Path, several: list[NamedSolid], part: float
) -> None:
    path = tmp_path / "all.step"
    write_step(several, path, "all")
    data = path.read_bytes()
    path.write_bytes(data[: int(part * len(data))])
    with pytest.raises(FileCheckError):
        check_step(path, several)
    path.write_bytes(data[: int(part * len(data))] + b"\nENDSEC;\nEND-ISO-10303-21;\n")
    with pytest.raises(FileCheckError):
        check_step(path, several)


def test_another_solid_is_caught(tmp_path: Path, one: list[NamedSolid], several: list[NamedSolid]) -> None:
    path = tmp_path / "cube.step"
    write_step(one, path, "cube")
    cube = one[0].shape
    for shape, message in (
        (cube.moved(cadquery.Location((0, 0, 2e-4))), "in the box"),
        (cadquery.Solid.makeBox(10, 10, 10.0001), "volume of"),
        (cube.mirror("XY"), "in the box"),
        (cadquery.Compound.makeCompound([cube, cube.moved(cadquery.Location((20, 0, 0)))]), "in 1 solids"),
    ):
        with pytest.raises(FileCheckError, match=message):
            check_step(path, [dataclasses.replace(one[0], shape=shape)])
    with pytest.raises(FileCheckError, match="pieces"):
        check_step(path, several)


def test_a_missing_folder_is_an_os_error(tmp_path: Path, one: list[NamedSolid]) -> None:
    with pytest.raises(FileNotFoundError):
        write_step(one, tmp_path / "nowhere" / "cube.step", "cube")
    with pytest.raises(FileNotFoundError):
        check_step(tmp_path / "cube.step", one)


def test_what_is_no_named_coloured_solid_is_refused(tmp_path: Path, one: list[NamedSolid]) -> None:
    path = tmp_path / "x.step"
    face = cadquery.Face.makePlane(1, 1)
    for solids, message in (
        ([], "got no piece at all"),
        ([one[0], dataclasses.replace(one[0], name="cub\u00e9")], "'cube' twice"),
        (one * 2, "'cube' twice"),
        (
            [dataclasses.replace(one[0], shape=face)],
            "x.step: cube: got a Face, need at least one closed solid",
        ),
        ([dataclasses.replace(one[0], colour=(255, 0, 0))], "need three numbers from 0 to 1"),
    ):
        with pytest.raises(ValueError, match=message):
            write_step(solids, path, "x")
    assert not path.exists()
