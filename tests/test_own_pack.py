"""The pack of an antenna in a dish somebody already has: a drill template instead of a blank, all read back."""

from __future__ import annotations

import itertools
import json
import math
from pathlib import Path

import cadquery as cq
import pytest
import trimesh
from ezdxf.entities.lwpolyline import LWPolyline
from ezdxf.filemanagement import readfile
from ezdxf.path import make_path
from pypdf import PdfReader

from wavejig import pack

RECIPE = Path(__file__).parents[1] / "recipes" / "landing-2g4-own.toml"


@pytest.fixture(scope="module")
def quick(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Built with its starting values and without the field: everything that is made, nothing solved."""
    return pack.build(RECIPE, tmp_path_factory.mktemp("own"), predict=False).folder


def files(folder: Path) -> set[str]:
    return {p.relative_to(folder).as_posix() for p in folder.rglob("*") if p.is_file()}


def test_it_holds_a_drill_template_and_no_blank(quick: Path) -> None:
    held = files(quick)
    assert {"reflector/own.step", "reflector/drill-template.dxf", "reflector/drill-template.pdf"} <= held
    assert {f"fixture/drill-template.{kind}" for kind in ("step", "stl", "3mf")} <= held
    assert {"drawings/own-dish.dxf", "drawings/own-dish.pdf"} <= held
    for name in held:
        assert (
            "blank" not in name and "tray" not in name and "nest-" not in name.replace("check-nest-", "")
        ), name
    listed = {f["path"] for f in json.loads((quick / "manifest.json").read_text())["files"]}
    assert listed == held - {"manifest.json"}


def test_design_json_says_what_it_is(quick: Path) -> None:
    sheet = json.loads((quick / "design.json").read_text())["reflector"]
    assert (sheet["kind"], sheet["base"], sheet["lips"]) == ("own", [160.0, 160.0], [])
    assert sheet["own"] == {"shape": "round", "depth": 45.0, "slope": 5.0, "radius": 2.0, "rim": 0.0}
    assert sheet["thickness"] == 0.5 and sheet["inside_radius"] == 2.0


def test_the_template_is_for_drilling_and_true_to_size(quick: Path) -> None:
    """Read back by another library: the holes of design.json, the floor's circle, a bar of 100 mm, no cut."""
    document = readfile(quick / "reflector/drill-template.dxf")
    assert document.units == 4
    space = document.modelspace()
    assert not [e for e in space if "cut" in e.dxf.layer.lower()]
    holes = json.loads((quick / "design.json").read_text())["reflector"]["holes"]
    drawn = sorted(
        (round(c.dxf.center.x, 5), round(c.dxf.center.y, 5), round(2.0 * c.dxf.radius, 5))
        for c in space.query('CIRCLE[layer=="drill"]')
    )
    assert drawn == sorted((round(h["x"], 5), round(h["y"], 5), round(h["diameter"], 5)) for h in holes)
    (edge,) = space.query('*[layer=="floor-edge"]')
    assert (
        isinstance(edge, LWPolyline)
        and edge.closed
        and [tuple(v) for v in edge.get_points("xyb")] == [(80.0, 0.0, 1.0), (-80.0, 0.0, 1.0)]
    )
    bars = [list(make_path(e).flattening(1.0)) for e in space.query('*[layer=="scale-bar-100-mm"]')]
    assert max(a.distance(b) for a, *_, b in bars) == pytest.approx(100.0)


def test_the_paper_template_is_1_to_1(quick: Path) -> None:
    """The floor's circle and the bars, measured in the page's own drawing commands."""
    page = PdfReader(quick / "reflector/drill-template.pdf").pages[0]
    words = page.extract_text()
    assert "DRILL TEMPLATE 1:1" in words and "100 mm" in words and "seen from the radiator side" in words
    runs: list[tuple[float, ...]] = []

    def look(operator: bytes, operands: list[float], matrix: list[float], _: list[float]) -> None:
        if operator in (b"m", b"l", b"c"):
            x, y = float(operands[-2]), float(operands[-1])
            a, b, c, d, e, f = (float(v) for v in matrix)
            runs.append((a * x + c * y + e, b * x + d * y + f, float(operator == b"c")))

    page.extract_text(visitor_operand_before=look)
    mm = 72.0 / 25.4
    curved = [(x / mm, y / mm) for x, y, is_curve in runs if is_curve]
    spread = max(x for x, _ in curved) - min(x for x, _ in curved)
    assert spread == pytest.approx(160.0, abs=0.02)
    straight = sorted({round(math.dist(p[:2], q[:2]) / mm, 2) for p, q in itertools.pairwise(runs)})
    assert 100.0 in straight


def test_the_dish_is_in_the_assembly(quick: Path) -> None:
    solid = cq.importers.importStep(str(quick / "reflector/own.step")).val()
    assert solid.isValid()
    box = solid.BoundingBox()
    assert (box.zmin, box.zmax) == pytest.approx((-0.5, 45.0), abs=1e-6)
    across = 160.0 + 2.0 * (45.0 * math.tan(math.radians(5.0)) + 0.5 / math.cos(math.radians(5.0)))
    assert box.xlen == pytest.approx(across, abs=1e-4)
    scene = trimesh.load(quick / "assembly.glb")
    assert any("reflector" in name for name in scene.geometry)
    high = scene.bounds[:, 2] * 1000.0
    assert high[1] >= 45.0 - 0.01  # the rim stands above wire and spacer


def test_the_build_sheet_is_about_drilling_not_folding(quick: Path) -> None:
    text = " ".join(" ".join(p.extract_text().split()) for p in PdfReader(quick / "build-sheet.pdf").pages)
    for said in (
        "round dish of 160 mm", "your own dish", "Measure the dish inside before anything is bent or drilled",
        "centre-punch", "never hold it by hand", "Eye protection", "Deburr", "DRILL TEMPLATE 1:1",
        "mouth of the dish", "depth of the dish", "own-measure",
    ):  # fmt: skip
        assert said in text, said
    for never in ("Folds of the reflector", "Fold the blank", "K-factor", "deduction", "REFLECTOR BLANK", "blank along",
                  "cutting files", "reflector blank"):  # fmt: skip
        assert never not in text, never


@pytest.mark.slow
def test_the_whole_pack_keeps_its_promise(tmp_path: Path) -> None:
    """Tuned and predicted: meets what the recipe wants over the whole band, on a mesh twice as fine too."""
    from tests.tuning.test_tune import in_band_worst

    built = pack.build(RECIPE, tmp_path)
    assert built.keeps_its_promise and built.prediction is not None
    worst = built.prediction.worst.return_loss_db
    assert worst >= 10.0
    assert all(b == pytest.approx(1.0, abs=2e-3) for b in built.prediction.power_balance)
    field = json.loads((built.folder / "field/field.json").read_text())
    assert field and (built.folder / "field/model.json").is_file()
    values = json.loads((built.folder / "design.json").read_text())["values"]
    assert values["side"]["from"] == "tuned" and values["own_diameter"]["from"] == "recipe"
    assert in_band_worst(built.inspection.design, 2.0) == pytest.approx(worst, abs=1.0)
