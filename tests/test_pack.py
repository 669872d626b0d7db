"""A pack is whole or absent; what is in it can be measured without asking the code that drew it."""

from __future__ import annotations

import csv
import errno
import hashlib
import json
import math
import os
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any

import ezdxf
import numpy as np
import pytest
import trimesh

from tests.recipe.bad_recipes import GOOD
from wavejig import pack
from wavejig.cli import main
from wavejig.geometry.path import PathBend, path_from_bends

RECIPES = Path(__file__).parents[1] / "recipes"
DEMOS = sorted(RECIPES.glob("*.toml"))


@pytest.fixture(scope="module")
def data(saltmarsh: Path) -> dict[str, Any]:
    loaded: dict[str, Any] = json.loads((saltmarsh / "design.json").read_text())
    return loaded


def tree(root: Path) -> dict[str, str]:
    return {
        p.relative_to(root).as_posix(): hashlib.sha256(p.read_bytes()).hexdigest()
        for p in sorted(root.rglob("*"))
        if p.is_file()
    }


# -- contents -----------------------------------------------------------------------------------------


def test_the_contract_s_files_are_there(saltmarsh: Path) -> None:
    files = set(tree(saltmarsh))
    for name in (
        "manifest.json", "design.json", "radiator/radiator.step", "radiator/radiator.dxf", "radiator/bend-table.csv",
        "reflector/tray.step", "reflector/blank.dxf", "reflector/blank-cut.dxf", "reflector/blank-cut-r12-mm.dxf",
        "reflector/nest-1.dxf", "radiator/cut-plan.csv", "print/plate-1.3mf", "bill-of-materials.csv",
        "assembly.step", "assembly.glb",
        "field/model.json", "field/match.s1p", "field/pattern.csv", "field/field.json",
    ):  # fmt: skip
        assert name in files
    for part in ("fixture", "spacer"):
        stems = {Path(f).stem for f in files if f.startswith(f"{part}/") and f.endswith(".stl")}
        assert stems
        for stem in stems:
            assert {f"{part}/{stem}.{kind}" for kind in ("step", "stl", "3mf")} <= files


def test_the_manifest_lists_every_file_as_it_is(saltmarsh: Path) -> None:
    manifest = json.loads((saltmarsh / "manifest.json").read_text())
    assert {f["path"]: f["sha256"] for f in manifest["files"]} == {
        k: v for k, v in tree(saltmarsh).items() if k != "manifest.json"
    }
    for entry in manifest["files"]:
        assert set(entry) == {"path", "kind", "part", "units", "bytes", "sha256"}
        assert entry["bytes"] == (saltmarsh / entry["path"]).stat().st_size
    assert manifest["versions"]["wavejig"]


def test_design_json_keeps_the_contract_s_keys(data: dict[str, Any]) -> None:
    assert data["units"] == {"length": "mm", "angle": "deg", "frequency": "Hz"}
    wire = data["radiator"]
    for key in ("wire_diameter", "neutral_axis_factor", "developed_length", "cut_length", "centreline", "bends",
                "pieces", "joints"):  # fmt: skip
        assert key in wire
    assert wire["pieces"][0]["role"] == "ground-leg"
    sheet = data["reflector"]
    assert set(sheet) >= {
        "kind",
        "base",
        "thickness",
        "inside_radius",
        "k_factor",
        "lips",
        "flat_size",
        "holes",
    }
    assert data["values"]["side"]["from"] == "tuned"
    assert all(set(f) >= {"code", "severity", "message", "where"} for f in data["findings"])


def test_bend_table_csv_alone_rebuilds_the_centreline(saltmarsh: Path, data: dict[str, Any]) -> None:
    """From the printed three digits, walked from the start of the centreline, to within a hundredth."""
    with (saltmarsh / "radiator/bend-table.csv").open(newline="") as stream:
        rows = [r for r in csv.DictReader(stream) if r["piece"] == "main"]
    wire = data["radiator"]
    d = float(rows[0]["wire_diameter_mm"])
    first, second = wire["centreline"][0], wire["centreline"][1]
    direction = np.subtract(first["end"], first["start"])
    u, v = np.subtract(second["middle"], second["start"]), np.subtract(second["end"], second["start"])
    path = path_from_bends(
        [
            PathBend(
                feed_mm=float(r["feed_mm"]),
                rotation_deg=float(r["rotation_deg"]),
                angle_deg=float(r["angle_deg"]),
                radius_mm=float(r["inside_radius_mm"]) + d / 2.0,
            )
            for r in rows
        ],
        0.0,
        start=tuple(first["start"]),
        direction=tuple(direction),
        normal=tuple(np.cross(u, v)),
    )
    last_arc = [s for s in wire["centreline"] if s["kind"] == "arc"][-1]
    assert math.dist(path.end, last_arc["end"]) < 0.02


def test_the_blank_measured_from_its_dxf(saltmarsh: Path, data: dict[str, Any]) -> None:
    """Flat size and hole places read off the file: base + lips less two deductions each way."""
    document = ezdxf.readfile(saltmarsh / "reflector/blank-cut.dxf")
    assert document.header["$INSUNITS"] == 4
    outline = [e for e in document.modelspace() if e.dxftype() == "LWPOLYLINE"]
    assert len(outline) == 1 and outline[0].closed
    points = np.array([p[:2] for p in outline[0].get_points()])
    size = points.max(axis=0) - points.min(axis=0)
    sheet = data["reflector"]
    t, r, k = sheet["thickness"], sheet["inside_radius"], sheet["k_factor"]
    deduction = 2.0 * (r + t) - math.pi / 2.0 * (r + k * t)
    lip = sheet["lips"][0]["height"]
    for axis in (0, 1):
        assert size[axis] == pytest.approx(sheet["base"][axis] + 2.0 * (lip - deduction), abs=1e-5)
    circles = sorted(
        (c.dxf.center.x, c.dxf.center.y, 2 * c.dxf.radius) for c in document.modelspace().query("CIRCLE")
    )
    holes = sorted((h["x"], h["y"], h["diameter"]) for h in sheet["holes"])
    assert np.allclose(circles, holes, atol=1e-5)


def test_both_dxf_versions_cut_the_same(saltmarsh: Path) -> None:
    areas = []
    for name in ("blank-cut.dxf", "blank-cut-r12-mm.dxf"):
        space = ezdxf.readfile(saltmarsh / "reflector" / name).modelspace()
        assert {e.dxf.layer for e in space} == {"cut"}
        areas.append(sorted(round(math.pi * c.dxf.radius**2, 6) for c in space.query("CIRCLE")))
    assert areas[0] == areas[1]


def test_prints_are_in_mm_and_stand_on_the_bed(saltmarsh: Path) -> None:
    for path in [*saltmarsh.glob("fixture/*.stl"), *saltmarsh.glob("spacer/*.stl")]:
        mesh = trimesh.load(path)
        assert mesh.is_watertight and mesh.is_winding_consistent and mesh.body_count == 1, path.name
        assert mesh.bounds[0][2] == pytest.approx(0.0, abs=1e-6), path.name
        assert max(mesh.extents[:2]) <= 220.0, path.name


def test_the_assembly_does_not_interfere(saltmarsh: Path) -> None:
    """Wire, sheet and spacers of the STEP file do not share volume."""
    import cadquery as cq

    parts = cq.importers.importStep(str(saltmarsh / "assembly.step")).val().Solids()
    assert len(parts) >= 5
    for i, a in enumerate(parts):
        for b in parts[i + 1 :]:
            assert a.intersect(b).Volume() < 1e-3


# -- whole or absent ----------------------------------------------------------------------------------


def built_good(tmp_path: Path) -> tuple[Path, Path]:
    recipe, out = tmp_path / "spare.toml", tmp_path / "out"
    recipe.write_text(GOOD)
    return recipe, out


def fail_at(monkeypatch: pytest.MonkeyPatch, step: str, error: BaseException) -> None:
    from wavejig.files.packfiles import PackFiles

    def broken(self: PackFiles) -> None:
        raise error

    monkeypatch.setattr(PackFiles, step, broken)


@pytest.mark.parametrize(
    ("error", "code", "needle"),
    [
        (OSError(errno.ENOSPC, "No space left on device"), 3, "No space left"),
        (PermissionError(errno.EACCES, "Permission denied", "x"), 3, "Permission denied"),
        (KeyboardInterrupt(), 3, "interrupted"),
    ],
    ids=["disk-full", "permission", "ctrl-c"],
)
def test_a_failed_build_leaves_the_old_pack_and_nothing_else(
    error: BaseException,
    code: int,
    needle: str,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    recipe, out = built_good(tmp_path)
    old = out / "spare"
    old.mkdir(parents=True)
    (old / "manifest.json").write_text("{}")
    (old / "keep").write_text("the earlier pack")
    before = tree(out)
    fail_at(monkeypatch, "write_assembly", error)
    assert main(["build", str(recipe), "--skip-field", "--out", str(out)]) == code
    told = capsys.readouterr().err
    assert needle in told and "Traceback" not in told
    assert tree(out) == before
    assert [p.name for p in out.iterdir()] == ["spare"]


def test_a_folder_that_is_no_pack_is_not_touched(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    recipe, out = built_good(tmp_path)
    (out / "spare").mkdir(parents=True)
    (out / "spare" / "thesis.txt").write_text("years of work")
    assert main(["build", str(recipe), "--out", str(out)]) == 3
    assert "not a pack" in capsys.readouterr().err
    assert (out / "spare" / "thesis.txt").read_text() == "years of work"


@pytest.mark.skipif(os.geteuid() == 0 and not shutil.which("setpriv"), reason="needs to drop root's rights")
def test_a_read_only_folder_exits_3(tmp_path: Path) -> None:
    recipe, out = built_good(tmp_path)
    out.mkdir()
    out.chmod(0o555)
    for folder in (tmp_path, *tmp_path.parents):
        if folder.name.startswith(("test_", "pytest-", "popen-")):
            folder.chmod(0o755)
    command = [sys.executable, "-m", "wavejig", "build", "--skip-field", str(recipe), "--out", str(out)]
    if os.geteuid() == 0:
        command = ["setpriv", "--reuid=65534", "--clear-groups", *command]
    env = {**os.environ, "PYTHONDONTWRITEBYTECODE": "1", "HOME": str(tmp_path)}
    done = subprocess.run(command, capture_output=True, text=True, env=env, check=False)
    out.chmod(0o755)
    assert done.returncode == 3, done.stderr
    assert "ermission" in done.stderr and "Traceback" not in done.stderr
    assert list(out.iterdir()) == []


# -- demo recipes -------------------------------------------------------------------------------------


@pytest.mark.slow
@pytest.mark.parametrize("path", DEMOS, ids=lambda p: p.stem)
def test_every_demo_recipe_builds(path: Path, tmp_path: Path) -> None:
    assert main(["build", str(path), "--out", str(tmp_path)]) == 0
    pack.build(path, tmp_path)  # again over itself, tuned values kept
    field = json.loads((tmp_path / path.stem / "field" / "field.json").read_text())
    assert field["meets_target"]


def test_two_processes_write_the_same_bytes(saltmarsh: Path, tmp_path: Path) -> None:
    # a cache of its own, still empty: what was tuned is worked out anew, on one thread
    env = {**os.environ, "PYTHONHASHSEED": "7", "TZ": "Pacific/Auckland", "LC_ALL": "C"}
    env |= {"OMP_NUM_THREADS": "1", "OPENBLAS_NUM_THREADS": "1", "NUMBA_NUM_THREADS": "1"}
    subprocess.run(
        [
            sys.executable,
            "-m",
            "wavejig",
            "build",
            str(RECIPES / "saltmarsh-2g4.toml"),
            "--out",
            str(tmp_path),
        ],
        check=True,
        capture_output=True,
        env=env,
    )
    assert tree(tmp_path / "saltmarsh-2g4") == tree(saltmarsh)
