"""DXF in both versions: mm, closed, arcs kept, nothing twice, damage noticed."""

from __future__ import annotations

import dataclasses
import importlib
import math
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.files.dxf import BendLine, Drawing, Layer, Version, bend_layer_name, entity_numbers, write_dxf
from wavejig.files.dxfcheck import check_dxf
from wavejig.files.errors import DrawingError, FileCheckError
from wavejig.geometry.lettering import strokes
from wavejig.geometry.plane import Circle, Contour, Stroke

ezdxf: Any = importlib.import_module("ezdxf")  # it exports its functions in a way type checkers miss

QUARTER = math.tan(math.pi / 8)  # bulge of a square corner
VERSIONS: tuple[Version, ...] = ("R2010", "R12")

# 100 x 60 plate, corners of radius 5, a half-round notch of radius 5 in the top edge
OUTLINE = Contour(
    vertices=(
        (5, 0, 0),
        (95, 0, QUARTER),
        (100, 5, 0),
        (100, 55, QUARTER),
        (95, 60, 0),
        (60, 60, 0),
        (60, 55, -1.0),
        (50, 55, 0),
        (50, 60, 0),
        (5, 60, QUARTER),
        (0, 55, 0),
        (0, 5, QUARTER),
    )
)
SLOT = Contour(vertices=((20, 10, 0), (30, 10, 1.0), (30, 14, 0), (20, 14, 1.0)))
HOLE = Circle(x_mm=50, y_mm=30, diameter_mm=4.1)
# plate - four corners (square less quarter disc) - notch (rectangle and half disc) - slot - hole
AREA_MM2 = (
    6000
    - 4 * (25 - math.pi * 25 / 4)
    - (10 * 5 + math.pi * 25 / 2)
    - (40 + math.pi * 4)
    - math.pi * 4.1**2 / 4
)
BLANK = Drawing(
    cut=(OUTLINE, SLOT, HOLE),
    bends=(
        BendLine(start=(0, 20), end=(100, 20), direction="up", angle_deg=90.0),
        BendLine(start=(0, 40), end=(100, 40), direction="down", angle_deg=32.5),
    ),
    marks=strokes("THIS FACE UP ↑ 0.8", 3.0, 10.0, 25.0),
)


@pytest.fixture(params=VERSIONS)
def version(request: pytest.FixtureRequest) -> Any:
    return request.param


@pytest.fixture
def blank(tmp_path: Path, version: Version) -> Path:
    path = tmp_path / "blank.dxf"
    write_dxf(BLANK.layers(), path, version=version, title="blank")
    return path


def test_a_blank_comes_back_with_its_area(blank: Path, version: Version) -> None:
    check_dxf(blank, BLANK.layers(), version=version)
    check_dxf(blank, BLANK.layers(), version=version, cut_area_mm2=AREA_MM2)


def test_layers_of_a_drawing_are_named_for_their_process(blank: Path) -> None:
    document = ezdxf.readfile(blank)
    used = {entity.dxf.layer for entity in document.modelspace()}
    assert used == {"cut", "bend-up-90", "bend-down-32_5", "marks"}
    assert [name for name in used if "cut" in name] == ["cut"]
    kinds = {entity.dxftype() for entity in document.modelspace()}
    assert kinds <= {"LWPOLYLINE", "POLYLINE", "CIRCLE", "LINE"}
    assert {e.dxf.color for e in document.modelspace()} == {256}  # by layer


def test_header_says_version_and_millimetres(blank: Path, version: Version) -> None:
    text = blank.read_bytes().decode("ascii")
    lines = [line.strip() for line in text.split("\r\n")]
    assert lines[lines.index("$ACADVER") + 2] == ("AC1009" if version == "R12" else "AC1024")
    assert text.endswith("EOF\r\n") and "\n" not in text.replace("\r\n", "")
    if version == "R12":
        assert "$INSUNITS" not in lines and "$MEASUREMENT" not in lines
        assert "LWPOLYLINE" not in lines and lines.count("POLYLINE") >= 2
    else:
        assert lines[lines.index("$INSUNITS") + 2] == "4"
        assert lines[lines.index("$MEASUREMENT") + 2] == "1"
    at = lines.index("$EXTMAX")
    assert [float(lines[at + i]) for i in (2, 4)] == [100.0, 60.0]


def test_a_ten_millimetre_square_is_ten_millimetres(tmp_path: Path, version: Version) -> None:
    path = tmp_path / "square.dxf"
    write_dxf(Drawing(cut=(Contour.rectangle(0, 0, 10, 10),)).layers(), path, version=version)
    (square,) = ezdxf.readfile(path).modelspace()
    xs = [x for x, *_ in square.get_points()] if version != "R12" else [p[0] for p in square.points()]
    assert max(xs) - min(xs) == 10.0
    check_dxf(
        path, Drawing(cut=(Contour.rectangle(0, 0, 10, 10),)).layers(), version=version, cut_area_mm2=100.0
    )


def test_the_process_wide_option_is_put_back(tmp_path: Path) -> None:
    for state in (True, False):
        ezdxf.options.write_fixed_meta_data_for_testing = state
        write_dxf(BLANK.layers(), tmp_path / f"{state}.dxf")
        assert ezdxf.options.write_fixed_meta_data_for_testing is state
        with pytest.raises(FileNotFoundError):
            write_dxf(BLANK.layers(), tmp_path / "nowhere" / "x.dxf")
        assert ezdxf.options.write_fixed_meta_data_for_testing is state
    assert (tmp_path / "True.dxf").read_bytes() == (tmp_path / "False.dxf").read_bytes()


def test_a_title_cannot_break_out_of_its_line(tmp_path: Path, awkward_name: str) -> None:
    path = tmp_path / "t.dxf"
    write_dxf(BLANK.layers(), path, title=awkward_name + "\r\n  0\r\nEOF\r\n")
    check_dxf(path, BLANK.layers())
    (name,) = [text for tag, text in ezdxf.readfile(path).header.custom_vars if tag == "Title"]
    assert "\n" not in name and name.startswith("=a<b>&")


def test_lettering_is_strokes_and_never_in_the_cut_file(tmp_path: Path, version: Version) -> None:
    path = tmp_path / "cut.dxf"
    bare = Drawing(cut=BLANK.cut).layers()
    write_dxf(bare, path, version=version)
    check_dxf(path, bare, version=version, cut_area_mm2=AREA_MM2)
    assert {entity.dxf.layer for entity in ezdxf.readfile(path).modelspace()} == {"cut"}


@given(
    x=st.floats(-500, 500),
    y=st.floats(-500, 500),
    width=st.floats(1, 400),
    height=st.floats(1, 400),
    turn=st.floats(0.05, 0.95),
)
def test_bulged_contours_keep_their_area(
    tmp_path_factory: pytest.TempPathFactory, x: float, y: float, width: float, height: float, turn: float
) -> None:
    """A rectangle with arcs bellying out on two sides: area by the sector formula, read back within 1e-6."""
    contour = Contour(
        vertices=((x, y, 0), (x + width, y, turn), (x + width, y + height, 0), (x, y + height, turn))
    )
    angle = 4 * math.atan(turn)
    radius = height / 2 / math.sin(angle / 2)
    area = width * height + radius**2 * (angle - math.sin(angle))
    path = tmp_path_factory.mktemp("belly") / "b.dxf"
    layers = Drawing(cut=(contour,)).layers()
    for version in VERSIONS:
        write_dxf(layers, path, version=version)
        check_dxf(path, layers, version=version, cut_area_mm2=area)


# ---- refused before it reaches a machine


@pytest.mark.parametrize(
    ("layers", "message"),
    [
        ([], "no entity on any layer"),
        ([Layer(name="cut", entities=())], "no entity on any layer"),
        ([Layer(name="cut here", entities=(HOLE,))], r"layer 'cut here': need a name"),
        ([Layer(name="c" * 32, entities=(HOLE,))], "31 letters"),
        ([Layer(name="schnitt-é", entities=(HOLE,))], "need a name"),
        ([Layer(name="cut", entities=(HOLE,)), Layer(name="CUT", entities=(SLOT,))], "name of its own"),
        ([Layer(name="cut", entities=(HOLE,), colour=0)], "colour 0, need 1 to 255"),
        ([Layer(name="cut", entities=(Stroke(points=((0, 0), (1, 0))),))], "entity 1: got an open stroke"),
        ([Layer(name="m", entities=(Stroke(points=()),))], "no points"),
        ([Layer(name="m", entities=(Stroke(points=((0, 0),)),))], "stroke of one point"),
        ([Layer(name="m", entities=(Stroke(points=((0, 0), (0, 1e-5))),))], "edge shorter than 0.001"),
        ([Layer(name="cut", entities=(Contour.polygon([(0, 0), (1, 0)]),))], "contour of 2 corners"),
        ([Layer(name="cut", entities=(Contour(vertices=((0, 0, 1),)),))], "contour of one corner"),
        ([Layer(name="cut", entities=(Contour.polygon([(0, 0), (1, math.nan), (1, 1)]),))], "not finite"),
        ([Layer(name="cut", entities=(Contour.polygon([(0, 0), (1, 0), (1, 1), (0, 0)]),))], "shorter than"),
        ([Layer(name="cut", entities=(Circle(x_mm=0, y_mm=0, diameter_mm=0),))], "diameter of 0"),
        ([Layer(name="cut", entities=(HOLE, HOLE))], "layers cut and cut: drawn twice near"),
        ([Layer(name="cut", entities=(HOLE,)), Layer(name="m", entities=(HOLE,))], "layers cut and m"),
    ],
)
def test_drawings_no_cutter_should_get_are_refused(tmp_path: Path, layers: list[Layer], message: str) -> None:
    with pytest.raises(DrawingError, match=message):
        write_dxf(layers, tmp_path / "x.dxf")
    assert list(tmp_path.iterdir()) == []


def test_bend_layer_names_carry_direction_and_angle() -> None:
    def name(direction: Any, angle: float) -> str:
        return bend_layer_name(BendLine(start=(0, 0), end=(1, 0), direction=direction, angle_deg=angle))

    assert name("up", 90.0) == "bend-up-90"
    assert name("down", 32.504) == "bend-down-32_5"
    assert name("up", 89.999999) == "bend-up-90"
    assert name("up", 0.25) == "bend-up-0_25"


# ---- caught when read back


def test_a_file_cut_short_anywhere_is_caught(blank: Path, version: Version) -> None:
    data = blank.read_bytes()
    ending = b"  0\r\nENDSEC\r\n  0\r\nEOF\r\n"
    for part in (0.0, 0.1, 0.4, 0.6, 0.8, 0.95, 0.999):
        for tail in (b"", ending, b"EOF"):
            blank.write_bytes(data[: int(part * len(data))] + tail)
            with pytest.raises(FileCheckError, match=r"^blank\.dxf: found .*, expected "):
                check_dxf(blank, BLANK.layers(), version=version)


def test_a_wrong_version_is_caught(blank: Path, version: Version) -> None:
    other: Version = "R12" if version == "R2010" else "R2010"
    with pytest.raises(FileCheckError, match="DXF version AC"):
        check_dxf(blank, BLANK.layers(), version=other)


def change(path: Path, **header: int) -> Any:
    document = ezdxf.readfile(path)
    for key, value in header.items():
        document.header[f"${key}"] = value
    return document


@pytest.mark.parametrize("header", [{"INSUNITS": 6}, {"INSUNITS": 1}, {"INSUNITS": 0}, {"MEASUREMENT": 0}])
def test_wrong_units_are_caught(tmp_path: Path, header: dict[str, int]) -> None:
    path = tmp_path / "blank.dxf"
    write_dxf(BLANK.layers(), path)
    change(path, **header).saveas(path)
    with pytest.raises(FileCheckError, match=r"expected \(4, 1\): mm"):
        check_dxf(path, BLANK.layers())


def test_damage_by_another_program_is_caught(tmp_path: Path) -> None:
    """Each kind of harm is done to the file through ezdxf, then found."""
    path = tmp_path / "blank.dxf"

    def open_contour(space: Any) -> None:
        space.query("LWPOLYLINE[layer=='cut']").first.closed = False

    def straightened(space: Any) -> None:
        contour = space.query("LWPOLYLINE[layer=='cut']").first
        contour.set_points([(x, y, 0.0) for x, y, _ in contour.get_points("xyb")], format="xyb")

    harms: dict[str, Callable[[Any], Any]] = {
        "an open contour": open_contour,
        "LWPOLYLINE 1 on layer cut with": straightened,
        "2 entities on layer cut": lambda space: space.delete_entity(space.query("CIRCLE").first),
        "TEXT on layer marks": lambda space: space.add_text("up", dxfattribs={"layer": "marks"}),
        "SPLINE on layer cut": lambda s: s.add_spline([(0, 0), (1, 1), (2, 0)], dxfattribs={"layer": "cut"}),
        "entities on layers": lambda space: space.add_line((0, 0), (1, 1), dxfattribs={"layer": "0"}),
        "CIRCLE 3 on layer cut": lambda s: setattr(s.query("CIRCLE").first.dxf, "radius", 2.0501),
    }
    for message, harm in harms.items():
        write_dxf(BLANK.layers(), path)
        document = ezdxf.readfile(path)
        harm(document.modelspace())
        document.saveas(path)
        with pytest.raises(FileCheckError, match=message):
            check_dxf(path, BLANK.layers())


def test_a_wrong_area_is_caught(blank: Path, version: Version) -> None:
    for factor in (1 - 3e-6, 1 + 3e-6):
        with pytest.raises(FileCheckError, match="an area of"):
            check_dxf(blank, BLANK.layers(), version=version, cut_area_mm2=AREA_MM2 * factor)


PLATE = Contour.rectangle(0, 0, 50, 50)


@pytest.mark.parametrize(
    ("cut", "message"),
    [
        ((PLATE, Circle(x_mm=50, y_mm=25, diameter_mm=5)), "contours 1 and 2 touching"),
        ((PLATE, Circle(x_mm=47.5, y_mm=25, diameter_mm=5)), "contours 1 and 2 touching"),
        ((PLATE, Circle(x_mm=60, y_mm=25, diameter_mm=5)), "2 outer contours, expected 1"),
        (
            (PLATE, Circle(x_mm=25, y_mm=25, diameter_mm=9), Circle(x_mm=25, y_mm=25, diameter_mm=4)),
            "inside a hole",
        ),
        (
            (PLATE, Circle(x_mm=20, y_mm=25, diameter_mm=9), Circle(x_mm=25, y_mm=25, diameter_mm=9)),
            "2 and 3 touching",
        ),
        ((Contour.polygon([(0, 0), (10, 10), (10, 0), (0, 10)]),), "crossing itself"),
        ((Contour.polygon([(0, 0), (10, 0), (10, 10), (5, 0.0), (0, 10)]),), "drawn twice|crossing itself"),
    ],
)
def test_contours_that_cannot_be_cut_are_caught(
    tmp_path: Path, version: Version, cut: tuple[Any, ...], message: str
) -> None:
    path = tmp_path / "x.dxf"
    layers = Drawing(cut=cut).layers()
    with pytest.raises((FileCheckError, DrawingError), match=message):
        write_dxf(layers, path, version=version)
        check_dxf(path, layers, version=version)


def test_a_nest_of_several_blanks_states_how_many(tmp_path: Path) -> None:
    path = tmp_path / "nest-1.dxf"
    cut = tuple(
        part
        for i in range(3)
        for part in (
            OUTLINE.moved(110.0 * i, 0.0),
            SLOT.moved(110.0 * i, 0.0),
            dataclasses.replace(HOLE, x_mm=50.0 + 110.0 * i),
        )
    )
    layers = Drawing(cut=cut).layers()
    write_dxf(layers, path)
    check_dxf(path, layers, blanks=3, cut_area_mm2=3 * AREA_MM2)
    with pytest.raises(FileCheckError, match="3 outer contours, expected 2"):
        check_dxf(path, layers, blanks=2)


def test_a_drawing_without_cut_layers_is_compared_number_for_number(tmp_path: Path, version: Version) -> None:
    path = tmp_path / "radiator.dxf"
    line = Stroke(points=((0.0, -20.0), (10.0, -20.1), (20.0, -27.0)))
    ring = Stroke(points=((30.0, -20.0), (35.0, -20.0), (35.0, -15.0), (30.0, -20.0)))
    layers = (
        Layer(name="outline", entities=(OUTLINE,)),
        Layer(name="centreline", entities=(line, ring), linetype="DASHED"),
    )
    write_dxf(layers, path, version=version)
    check_dxf(path, layers, version=version)
    moved = dataclasses.replace(
        layers[1], entities=(dataclasses.replace(line, points=(*line.points[:2], (20.0, -27.001))), ring)
    )
    with pytest.raises(FileCheckError, match="1 on layer centreline with"):
        check_dxf(path, (layers[0], moved), version=version)
    assert len(entity_numbers(ring)) == 9  # a closed stroke gets the flag, not its first point again


def test_missing_file_and_folder_are_os_errors(tmp_path: Path, version: Version) -> None:
    with pytest.raises(FileNotFoundError):
        check_dxf(tmp_path / "no.dxf", BLANK.layers(), version=version)
    with pytest.raises(FileNotFoundError):
        write_dxf(BLANK.layers(), tmp_path / "no" / "x.dxf", version=version)
