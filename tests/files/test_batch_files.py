"""The batch's files, read by programs that had no part in writing them."""

from __future__ import annotations

import csv
from collections import Counter
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import Any

import cadquery as cq
import ezdxf
import numpy as np
import pytest
import shapely
import trimesh
from hypothesis import given
from hypothesis import strategies as st
from tests.designs import design

from wavejig.batch.bill import fixture_pins
from wavejig.batch.model import Batch, Bill, BillLine, NestedShapes, PrintPiece, PrintPlan
from wavejig.batch.nest import NumberedBlank
from wavejig.batch.plan import plan as plan_batch
from wavejig.batch.plates import print_plan
from wavejig.files.batch_json import batch_data
from wavejig.files.batchfiles import check_cut_plan, write_batch, write_cut_plan
from wavejig.files.billfile import check_bill, safe_cell, write_bill
from wavejig.files.dxfcheck import check_dxf
from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import Measure, Mesh, measure, tessellate
from wavejig.files.nestfile import NestFiles, check_digits, nest_layers
from wavejig.files.platefile import check_plate, write_plate
from wavejig.reflector.flat import FlatPattern, flat_pattern
from wavejig.shop import Inspection, inspect

PRICES = {
    "currency": "=EUR",
    "wire": 1.13,
    "sheet": 14.0,
    "blank": 3.335,
    "connector": 4.8,
    "screw": 0.08,
    "plastic": 22.0,
}


def made(**tables: Any) -> tuple[Inspection, Batch]:
    found = inspect(design(**tables))
    assert found.tray and found.radiator and found.spacer and found.fixture
    pattern = flat_pattern(found.tray, found.design.name)
    return found, plan_batch(
        found.design, found.radiator, found.tray, pattern, found.spacer, found.fixture, _pieces()
    )


def _solids() -> dict[str, cq.Shape]:
    """Pieces that have a left and a right: a mistaken turn shows."""
    wedge = cq.Workplane("XY").polyline([(0, 0), (40, 0), (40, 12), (0, 25)]).close().extrude(8)
    step = (
        cq.Workplane("XY").box(30, 18, 6, centered=(True, True, False)).faces(">Z").workplane().center(9, 4)
    )
    solids = {"wedge": wedge.val(), "step": step.circle(3).extrude(5).val()}
    out = {}
    for name, shape in solids.items():
        box = shape.BoundingBox()
        out[name] = shape.moved(
            cq.Location(cq.Vector(-(box.xmin + box.xmax) / 2, -(box.ymin + box.ymax) / 2, -box.zmin))
        )
    return out


@pytest.fixture(scope="module")
def meshes() -> dict[str, tuple[Mesh, Measure]]:
    return {name: (tessellate(s, name=name), measure(s)) for name, s in _solids().items()}


def _pieces() -> list[PrintPiece]:
    return [
        PrintPiece(
            part="spacer",
            name=name,
            plastic="PETG",
            size_mm=size,
            height_mm=h,
            volume_mm3=v,
            count=count,
        )
        for name, size, h, v, count in (
            ("wedge", (40.0, 25.0), 8.0, 5920.0, 31),
            ("step", (30.0, 18.0), 11.0, 3381.0, 50),
        )
    ]


def plan_of_plates() -> PrintPlan:
    return print_plan(design(printer={"bed": ["150 mm", "140 mm", "100 mm"]}), _pieces())


# -- nests --------------------------------------------------------------------------------------------


@pytest.mark.parametrize("lips", ["none", "two", "four"])
def test_a_nest_read_back(lips: str, tmp_path: Path) -> None:
    found, batch = made(
        quantity=7,
        reflector={"lips": lips},
        cutter={"stock_sheet": ["700 mm", "420 mm"]},
    )
    assert batch.nest is not None and found.tray is not None
    pattern = flat_pattern(found.tray, found.design.name)
    blank = NumberedBlank(found.design, found.tray, pattern)
    total = 0
    files = NestFiles("x", blank_area_mm2=pattern.area_mm2)
    for number, sheet in enumerate(batch.nest.sheets, start=1):
        path = tmp_path / f"nest-{number}.dxf"
        count = len(sheet.placements)
        files.write(blank.shapes(batch.nest, sheet), path, blanks=count)
        space = ezdxf.readfile(path).modelspace()
        outlines = [e for e in space.query('LWPOLYLINE[layer=="cut"]') if e.is_closed]
        total += len(outlines)
        assert len(outlines) == count
        assert len(space.query('CIRCLE[layer=="cut"]')) == count * len(pattern.holes)
        folds = [e for e in space if e.dxf.layer.startswith("bend-up-90")]
        assert len(folds) == count * {"none": 0, "two": 2, "four": 4}[lips]
        assert {e.dxf.layer for e in space} <= {"cut", "bend-up-90", "marks", "stock-sheet"}
        (edge,) = [e for e in space.query('LWPOLYLINE[layer=="stock-sheet"]') if len(e) == 4]
        assert {(round(x), round(y)) for x, y in edge.get_points("xy")} == {
            (0, 0), (700, 0), (700, 420), (0, 420),
        }  # fmt: skip
    assert total == 7


def nested(quantity: int) -> tuple[FlatPattern, list[NestedShapes]]:
    """A few blanks to a sheet."""
    found, batch = made(quantity=quantity, cutter={"stock_sheet": ["600 mm", "200 mm"]})
    assert batch.nest is not None and found.tray is not None
    pattern = flat_pattern(found.tray, found.design.name)
    blank = NumberedBlank(found.design, found.tray, pattern)
    return pattern, [blank.shapes(batch.nest, sheet) for sheet in batch.nest.sheets]


def test_a_nest_that_lost_a_blank_is_refused(tmp_path: Path) -> None:
    pattern, (shapes,) = nested(2)
    with pytest.raises(FileCheckError, match="outer contours"):
        NestFiles("x", blank_area_mm2=pattern.area_mm2).write(shapes, tmp_path / "n.dxf", blanks=3)
    assert nest_layers(shapes)[0].name == "cut"


def test_a_sheet_made_from_the_first_is_as_good_as_one_made_by_itself(tmp_path: Path) -> None:
    """Numbers whose digits take more strokes than the first sheet's, then a sheet with fewer blanks."""
    pattern, sheets = nested(125)
    files = NestFiles("x", blank_area_mm2=pattern.area_mm2)
    counts = {len(shapes.numbers) for shapes in sheets}
    assert len(counts) > 3, counts
    for number, shapes in enumerate(sheets):
        path, alone = tmp_path / f"{number}.dxf", tmp_path / "alone.dxf"
        outlines = len(shapes.cut) // (1 + len(pattern.holes))
        files.write(shapes, path, blanks=outlines)
        if number in (1, 20, 33, 40, len(sheets) - 1):
            check_dxf(path, nest_layers(shapes), cut_area_mm2=outlines * pattern.area_mm2, blanks=outlines)
            NestFiles("x", blank_area_mm2=pattern.area_mm2).write(shapes, alone, blanks=outlines)
            a, b = ezdxf.readfile(path), ezdxf.readfile(alone)
            assert [(e.dxftype(), e.dxf.layer) for e in a.modelspace()] == [
                (e.dxftype(), e.dxf.layer) for e in b.modelspace()
            ]
            # the handles of all entities and tables, and the next free one
            lines = path.read_text().splitlines()
            tags = zip(lines[0::2], lines[1::2], strict=True)
            handles = [int(value, 16) for code, value in tags if int(code) in (5, 105)]
            assert len(set(handles)) == len(handles)
            assert max(handles) == int(a.header["$HANDSEED"], 16)


@pytest.mark.parametrize("fault", ["digit", "layer", "lost", "elsewhere"])
def test_a_spoiled_copy_of_a_sheet_is_refused(tmp_path: Path, fault: str) -> None:
    pattern, sheets = nested(12)
    files = NestFiles("x", blank_area_mm2=pattern.area_mm2)
    for number, shapes in enumerate(sheets):
        outlines = len(shapes.cut) // (1 + len(pattern.holes))
        files.write(shapes, tmp_path / f"{number}.dxf", blanks=outlines)
    judged = files._judged
    assert judged is not None
    path = tmp_path / "1.dxf"
    check_digits(path, judged.head, judged.tail, sheets[1].numbers)
    data = path.read_bytes()
    digits = data[len(judged.head) : -len(judged.tail)]
    if fault == "digit":
        bad = judged.head + digits.replace(b"\r\n 10\r\n", b"\r\n 10\r\n1", 1) + judged.tail
    elif fault == "layer":
        bad = judged.head + digits.replace(b"\r\nmarks\r\n", b"\r\ncut\r\n", 1) + judged.tail
    elif fault == "lost":
        bad = judged.head + digits[: digits.rindex(b"  0\r\n")] + judged.tail
    else:
        bad = data.replace(b"CIRCLE", b"CIRCEL", 1)
    assert bad != data
    path.write_bytes(bad)
    with pytest.raises(FileCheckError):
        check_digits(path, judged.head, judged.tail, sheets[1].numbers)


# -- plates -------------------------------------------------------------------------------------------


def test_plates_read_back(meshes: dict[str, tuple[Mesh, Measure]], tmp_path: Path) -> None:
    plan = plan_of_plates()
    assert any(s.turn_deg for plate in plan.plates for s in plate.spots)
    printed = {"wedge": 0, "step": 0}
    volumes = {name: figures.volume_mm3 for name, (_, figures) in meshes.items()}
    for number, plate in enumerate(plan.plates):
        path = tmp_path / f"plate-{number}.3mf"
        write_plate(plate, {k: m for k, (m, _) in meshes.items()}, path, "x")
        check_plate(path, plate, plan, {k: figures for k, (_, figures) in meshes.items()})
        shadows = []
        for mesh in _bodies(path):
            low, high = mesh.bounds
            assert low[2] == pytest.approx(0.0, abs=1e-6)
            assert low[0] >= 5.0 - 1e-3 and low[1] >= 5.0 - 1e-3
            assert high[0] <= 145.0 + 1e-3 and high[1] <= 135.0 + 1e-3
            # the section at half a millimetre: what really lies on the bed
            flat = shapely.MultiPoint(mesh.vertices[:, :2]).convex_hull
            shadows.append(flat)
            name = min(volumes, key=lambda n: abs(volumes[n] - mesh.volume))
            assert mesh.volume == pytest.approx(volumes[name], rel=2e-3)
            printed[name] += plate.times
        pairs = shapely.STRtree(shadows).query(shadows, predicate="dwithin", distance=3.9)
        assert all(i == j for i, j in pairs.T.tolist())
    assert printed == {"wedge": 31, "step": 50}


def _bodies(path: Path) -> Iterator[Any]:
    scene = trimesh.load_scene(path)
    for node in scene.graph.nodes_geometry:
        move, geometry = scene.graph[node]
        yield scene.geometry[geometry].copy().apply_transform(move)


def test_a_turned_piece_is_turned_and_not_mirrored(
    meshes: dict[str, tuple[Mesh, Measure]], tmp_path: Path
) -> None:
    plan = plan_of_plates()
    plate = next(p for p in plan.plates if any(s.turn_deg and s.name == "wedge" for s in p.spots))
    spot = next(s for s in plate.spots if s.turn_deg and s.name == "wedge")
    path = tmp_path / "p.3mf"
    write_plate(replace(plate, spots=(spot,)), {k: m for k, (m, _) in meshes.items()}, path, "x")
    (mesh,) = _bodies(path)
    before = meshes["wedge"][0].vertices
    want = np.column_stack([-before[:, 1] + spot.x_mm, before[:, 0] + spot.y_mm, before[:, 2]])
    # each corner of the turned solid is one of the file's, counter-clockwise turn and no mirror
    apart = np.linalg.norm(want[:, None, :] - np.asarray(mesh.vertices)[None, :, :], axis=2).min(axis=1)
    assert apart.max() < 1e-5


def test_a_plate_with_pieces_elsewhere_is_refused(
    meshes: dict[str, tuple[Mesh, Measure]], tmp_path: Path
) -> None:
    plan = plan_of_plates()
    plate = plan.plates[0]
    figures = {k: f for k, (_, f) in meshes.items()}
    only = {k: m for k, (m, _) in meshes.items()}
    moved = replace(plate.spots[0], x_mm=plate.spots[0].x_mm + 3.0)
    for wrong in (
        replace(plate, spots=plate.spots[1:]),
        replace(plate, spots=(moved, *plate.spots[1:])),
        replace(plate, spots=(replace(plate.spots[0], x_mm=1.0), *plate.spots[1:])),
    ):
        path = tmp_path / "p.3mf"
        write_plate(wrong, only, path, "x")
        with pytest.raises(FileCheckError):
            check_plate(path, plate, plan, figures)
    # told as planned, but over the edge or over each other: refused as well
    for wrong in (
        replace(plate, spots=(moved, *plate.spots[1:])),
        replace(plate, spots=(replace(plate.spots[0], y_mm=2.0), *plate.spots[1:])),
    ):
        write_plate(wrong, only, path, "x")
        with pytest.raises(FileCheckError, match=r"all within|between any two"):
            check_plate(path, wrong, plan, figures)


# -- bill and cut plan --------------------------------------------------------------------------------


def test_the_bill_adds_up(tmp_path: Path) -> None:
    _, batch = made(quantity=12, prices=PRICES, wire_stock={"length": "2 m"})
    path = tmp_path / "bill.csv"
    write_bill(batch.bill, path)
    check_bill(path, batch.bill)
    with path.open(newline="") as stream:
        rows = list(csv.DictReader(stream))
    total = rows.pop()
    assert total["line"] == "total"
    by_item = {row["item"]: row for row in rows}
    assert by_item["panel connector"]["count"] == "12"
    assert float(by_item["panel connector"]["cost"]) == pytest.approx(57.6)
    assert by_item["flange screw"]["count"] == "48"
    assert by_item["flange nut"]["price"] == ""
    for row in rows:
        if row["price"]:
            assert float(row["cost"]) == pytest.approx(float(row["price"]) * float(row["count"]), abs=0.0051)
    assert float(total["cost"]) == pytest.approx(sum(float(r["cost"]) for r in rows if r["cost"]), abs=1e-9)
    assert total["currency"] == "'=EUR"
    data = batch_data(batch)
    assert data["bill"]["total"] == pytest.approx(float(total["cost"]))
    wire = next(p for p in batch.wires if p.kind == "wire")
    assert float(by_item["wire"]["count"]) == pytest.approx(2.0 * wire.lengths)


@given(st.text(max_size=12))
def test_no_cell_begins_like_a_formula(text: str) -> None:
    kept = safe_cell(text)
    assert not kept.lstrip(" ").startswith(("=", "+", "-", "@", "\t", "\r", "\n", "\uff1d"))
    assert kept in (text, f"'{text}")


def test_a_bill_in_which_a_cost_was_changed_is_refused(tmp_path: Path) -> None:
    line = BillLine(
        key="screw", item="screw", material="", size="M3", each=1, count=10, unit="pcs", price=0.5
    )
    bill = Bill(lines=(line,), currency="EUR")
    path = tmp_path / "bill.csv"
    write_bill(bill, path)
    check_bill(path, bill)
    path.write_text(path.read_text().replace("5.00,EUR,\ntotal", "6.00,EUR,\ntotal"))
    with pytest.raises(FileCheckError, match="a total of"):
        check_bill(path, bill)


def test_the_cut_plan_covers_the_batch(tmp_path: Path) -> None:
    _, batch = made(quantity=25, wire_stock={"length": "1 m", "cut_loss": "1 mm"}, feed={"leg": "1.2 mm"})
    path = tmp_path / "cut.csv"
    write_cut_plan(batch.wires, path)
    check_cut_plan(path, batch.wires)
    with path.open(newline="") as stream:
        rows = list(csv.DictReader(stream))
    for plan in batch.wires:
        for role, _, wanted in plan.pieces:
            mine = [r for r in rows if r["stock"] == plan.kind and r["piece"] == role]
            assert sum(int(r["times"]) * int(r["pieces"]) for r in mine) == wanted == 25
    path.write_text(path.read_text().replace(",main,", ",mein,"))
    with pytest.raises(FileCheckError, match="0 of main"):
        check_cut_plan(path, batch.wires)


def test_pins_of_the_fixture() -> None:
    """As many as there are holes that take one at a time, each of the size its hole is for.

    Where a leg stands up already the cut end's stop is a thin one; the stop block needs a stop of either size.
    """
    found, _ = made(quantity=3)
    for recipe in (found.design, design(), design(fixture={"style": "stop-block"})):
        inspected = inspect(recipe)
        fixture = inspected.fixture
        assert fixture is not None
        allowance = recipe.printer.hole_allowance_mm
        on_blocks = Counter(round(b.dowel_mm, 3) for b in fixture.blocks)
        bought = Counter({d: n for (d, _), n in fixture_pins(recipe, fixture).items()}) - on_blocks
        if fixture.style == "board":
            holes = [h for h in fixture.board.holes if h.purpose in ("pin", "stop")]
            assert bought == Counter(round(h.diameter_mm - allowance, 3) for h in holes)
        else:
            block = fixture.stop_block
            assert block is not None
            for place in block.places:
                standing = Counter([round(d, 3) for d in (block.mandrel_mm, block.pin_mm, place.stop_mm)])
                assert standing <= bought
            assert sum(bought.values()) == 2 + len({p.stop_mm for p in block.places})


# -- all together -------------------------------------------------------------------------------------


def test_all_files_of_a_batch(meshes: dict[str, tuple[Mesh, Measure]], tmp_path: Path) -> None:
    found, batch = made(quantity=5, reflector={"lips": "four"}, prices=PRICES)
    assert found.tray and batch.nest and batch.prints
    pattern = flat_pattern(found.tray, found.design.name)
    entries = list(write_batch(batch, found.design, found.tray, pattern, meshes, tmp_path))
    names = {e.path for e in entries}
    assert {
        "radiator/cut-plan.csv",
        "bill-of-materials.csv",
        "reflector/nest-1.dxf",
        "print/plate-1.3mf",
    } <= names
    assert sum(n.startswith("reflector/nest-") for n in names) == len(batch.nest.sheets)
    assert sum(n.startswith("print/") for n in names) == len(batch.prints.plates)
    assert {p.relative_to(tmp_path).as_posix() for p in tmp_path.rglob("*") if p.is_file()} == names
    again = tmp_path / "again"
    again.mkdir()
    list(write_batch(batch, found.design, found.tray, pattern, meshes, again))
    for name in names:
        assert (tmp_path / name).read_bytes() == (again / name).read_bytes()
