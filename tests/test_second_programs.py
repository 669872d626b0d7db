"""Our files in other people's programs: a slicer, a mesh checker, a kernel-based mesher, a plane CAD viewer.

Each program is named by what it does and skipped, with a visible count, where it is not installed.
"""

from __future__ import annotations

import os
import re
import shutil
import subprocess
from pathlib import Path

import pytest
import trimesh


def run(program: str, *arguments: str, folder: Path) -> str:
    """Output of a program; skips the test where there is none."""
    if shutil.which(program) is None:
        pytest.skip(f"{program} is not installed")
    env = {**os.environ, "QT_QPA_PLATFORM": "offscreen", "XDG_RUNTIME_DIR": str(folder), "HOME": str(folder)}
    done = subprocess.run(
        [program, *arguments], capture_output=True, text=True, cwd=folder, env=env, timeout=240, check=False
    )
    assert done.returncode == 0, done.stdout + done.stderr
    return done.stdout + done.stderr


def prints(pack: Path) -> list[Path]:
    found = [*sorted(pack.glob("fixture/*.stl")), *sorted(pack.glob("spacer/*.stl"))]
    assert len(found) >= 6
    return found


def test_a_slicer_takes_every_print_as_one_manifold_part(saltmarsh: Path, tmp_path: Path) -> None:
    for path in prints(saltmarsh):
        for file in (path, path.with_suffix(".3mf")):
            told = run("prusa-slicer", "--info", str(file), folder=tmp_path)
            assert "manifold = yes" in told and "number_of_parts =  1" in told, told
            size = [float(re.search(rf"size_{axis} = ([\d.]+)", told)[1]) for axis in "xyz"]  # type: ignore[index]
            assert size == pytest.approx(trimesh.load(path).extents.tolist(), abs=1e-3)


def test_a_slicer_prints_each_piece_without_support(saltmarsh: Path, tmp_path: Path) -> None:
    for path in prints(saltmarsh):
        slice_without_support(path, tmp_path)


@pytest.mark.slow
@pytest.mark.parametrize(
    "stem",
    [
        "ridge-868",
        "creek-915-round",
        "causeway-2g4-double",
        "boatshed-5g8",
        "slipway-path",
        "landing-2g4-own",
    ],
)
def test_a_slicer_prints_the_other_demos_too(stem: str, tmp_path: Path) -> None:
    """Printed parts alone, as the pack writes them."""
    from wavejig.files.mesh import tessellate
    from wavejig.files.stl import write_stl
    from wavejig.fixture.bending.order import fitted, plan_order
    from wavejig.fixture.solid import printables as fixture_printables
    from wavejig.pack import inspect_recipe
    from wavejig.spacer.solid import hold_downs
    from wavejig.spacer.solid import printables as spacer_printables

    _, found = inspect_recipe(Path(__file__).parents[1] / "recipes" / f"{stem}.toml")
    assert found.fixture and found.spacer and found.radiator
    pieces = [
        *fixture_printables(fitted(found.fixture, plan_order(found.design, found.radiator, found.fixture))),
        *spacer_printables(found.design, found.radiator, found.spacer),
        *{part.name: part for part in hold_downs(found.design, found.spacer)}.values(),
    ]
    for piece in pieces:
        path = tmp_path / f"{piece.name}.stl"
        write_stl(tessellate(piece.solid, name=piece.name), path, piece.name)
        told = run("prusa-slicer", "--info", str(path), folder=tmp_path)
        assert "manifold = yes" in told and "number_of_parts =  1" in told, told
        slice_without_support(path, tmp_path)


def slice_without_support(path: Path, folder: Path) -> None:
    """G-code of one piece, no support in it. Whether any is needed is measured on the mesh when it is built:
    the slicer's command line does not tell."""
    target = folder / "out.gcode"
    run("prusa-slicer", "--export-gcode", "-o", str(target), str(path), folder=folder)
    code = target.read_text()
    assert "; support_material = 0" in code
    assert ";TYPE:Support material" not in code
    assert code.count("\nG1 ") > 300, path.name


def test_a_mesh_checker_finds_nothing_to_mend(saltmarsh: Path, tmp_path: Path) -> None:
    for path in prints(saltmarsh):
        told = run("admesh", str(path), folder=tmp_path)
        for fault in ("Edges fixed", "Facets removed", "Facets added", "Facets reversed", "Backwards edges"):
            assert re.search(rf"{fault}\s*:\s*0\b", told), told
        assert re.search(r"Total disconnected facets\s*:\s*0\s+0", told), told


def test_a_mesher_reads_the_step_files_in_mm(saltmarsh: Path, tmp_path: Path) -> None:
    """It meshes the tray's and the wire's surface; the volume inside is ours to within the chords."""
    import cadquery as cq

    for name in ("reflector/tray.step", "radiator/radiator.step"):
        target = tmp_path / "out.stl"
        run(
            "gmsh", str(saltmarsh / name), "-2", "-o", str(target), "-format", "stl", "-v", "1", "-clmax", "6",
            "-setnumber", "Mesh.MeshSizeFromCurvature", "24", folder=tmp_path,
        )  # fmt: skip
        mesh = trimesh.load(target)
        solids = cq.importers.importStep(str(saltmarsh / name)).val().Solids()
        exact = sum(s.Volume() for s in solids)
        assert mesh.volume == pytest.approx(exact, rel=0.03)
        assert max(mesh.extents) < 200.0


def test_a_plane_cad_viewer_draws_both_dxf_versions(saltmarsh: Path, tmp_path: Path) -> None:
    for name in ("blank.dxf", "blank-cut.dxf", "blank-cut-r12-mm.dxf"):
        shutil.copy(saltmarsh / "reflector" / name, tmp_path)
        run("librecad", "dxf2pdf", "-a", "-p", "420x297", str(tmp_path / name), folder=tmp_path)
        page = (tmp_path / name).with_suffix(".pdf").read_bytes()
        assert page.startswith(b"%PDF") and len(page) > 1500
