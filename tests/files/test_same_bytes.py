"""The same solids and drawings give the same bytes: in another process, folder, time zone, order of hashing."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest
from tests.yard import YARD

WRITE_ALL = """
import sys
from pathlib import Path
import cadquery
from wavejig.files.dxf import BendLine, Drawing, write_dxf
from wavejig.files.glb import ColouredMesh, write_glb
from wavejig.files.mesh import tessellate
from wavejig.files.step import NamedSolid, write_step
from wavejig.files.stl import write_stl
from wavejig.files.threemf import write_3mf
from wavejig.geometry.lettering import strokes
from wavejig.geometry.plane import Circle, Contour

plate = cadquery.Workplane().box(40, 30, 4).edges("|Z").fillet(3).faces(">Z").workplane().hole(3.2).val()
solids = [NamedSolid(name="plate", shape=plate, colour=(0.8, 0.45, 0.3))]
for i in range(7):
    post = cadquery.Solid.makeCylinder(2, 10).moved(cadquery.Location((30 + 6 * i, 0, 0)))
    solids.append(NamedSolid(name=f"post {i}", shape=post, colour=(0.1 * i, 0.5, 1 - 0.1 * i)))
drawing = Drawing(
    cut=(Contour.rectangle(0, 0, 50, 40), Circle(x_mm=20, y_mm=20, diameter_mm=4)),
    bends=tuple(
        BendLine(start=(0, y), end=(50, y), direction="up" if y < 20 else "down", angle_deg=y) for y in (10, 15, 30)
    ),
    marks=strokes("UP 90", 3, 5, 5),
).layers()
for folder in sys.argv[1:]:
    out = Path(folder)
    meshes = [tessellate(s.shape, name=s.name) for s in solids]
    write_step(solids, out / "all.step", "all")
    write_step(solids[:1], out / "plate.step", "plate")
    write_stl(meshes[0], out / "plate.stl", "plate")
    write_3mf(meshes, out / "all.3mf", "all")
    write_glb([ColouredMesh(mesh=m, colour=s.colour) for m, s in zip(meshes, solids)], out / "all.glb")
    for version in ("R2010", "R12"):
        write_dxf(drawing, out / f"{version}.dxf", version=version, title="drawing")
"""


def run(folders: list[Path], hash_seed: str, zone: str, language: str) -> None:
    for folder in folders:
        folder.mkdir(parents=True)
    environment = os.environ | {
        "PYTHONHASHSEED": hash_seed,
        "TZ": zone,
        "LC_ALL": language,
        "PYTHONPATH": os.pathsep.join(p for p in sys.path if p),
    }
    command = [sys.executable, "-c", WRITE_ALL, *map(str, folders)]
    done = subprocess.run(command, env=environment, capture_output=True, text=True, timeout=300, check=False)
    assert done.returncode == 0, done.stderr
    assert done.stdout == ""  # results only; the kernel keeps its remarks to itself


def test_two_processes_and_a_second_writing_give_the_same_bytes(tmp_path: Path) -> None:
    folders = [tmp_path / "a", tmp_path / "longer name" / "b", tmp_path / "c"]
    run(folders[:2], "1", "Pacific/Kiritimati", "C")
    run(folders[2:], "4242", "America/Anchorage", "C.UTF-8")
    first = {path.name: path.read_bytes() for path in folders[0].iterdir()}
    assert len(first) == 7
    for folder in folders[1:]:
        other = {path.name: path.read_bytes() for path in folder.iterdir()}
        assert [name for name in first if first[name] != other[name]] == []
        assert other.keys() == first.keys()
    whole = b"".join(first.values())
    assert str(tmp_path).encode() not in whole


@pytest.mark.slow
def test_a_pack_built_alone_is_the_one_built_among_others_by_somebody_else(tmp_path: Path) -> None:
    """Side by side, one thread, another user, folder, time zone, language, order of hashing; and step by step."""
    recipe, other = tmp_path / "yard.toml", tmp_path / "lawn.toml"
    recipe.write_text(YARD)
    other.write_text(YARD.replace("yard", "lawn"))
    build = [sys.executable, "-m", "wavejig", "build", "--skip-field"]
    alone = tmp_path / "alone"
    subprocess.run([*build, str(recipe), "--out", str(alone)], check=True, capture_output=True)

    theirs = tmp_path / "a much longer" / "name"
    theirs.mkdir(parents=True)
    somebody = []
    if os.geteuid() == 0 and shutil.which("setpriv"):
        somebody = ["setpriv", "--reuid=65534", "--clear-groups"]
        probe = [*somebody, sys.executable, "-c", "import pydantic, sys; print(sys.version)"]
        said = subprocess.run(probe, capture_output=True, text=True, check=False)
        if said.stdout.strip() != sys.version.strip():
            somebody = []  # this very Python lies where only root may go
        os.chown(theirs, 65534, -1)
        for folder in (tmp_path, *tmp_path.parents):
            if folder.name.startswith(("test_", "pytest-", "popen-")):
                folder.chmod(0o755)
    around = os.environ | {
        "PYTHONHASHSEED": "99", "TZ": "Pacific/Kiritimati", "LC_ALL": "C", "HOME": str(theirs), "OMP_NUM_THREADS": "1",
        "WAVEJIG_CACHE": str(theirs / "cache"), "PYTHONDONTWRITEBYTECODE": "1",
    }  # fmt: skip
    subprocess.run(
        [*somebody, *build, str(recipe), "--out", str(theirs / "out")],
        check=True,
        capture_output=True,
        env=around,
    )
    assert packed(theirs / "out" / "yard-5g8") == packed(alone / "yard-5g8")
    subprocess.run(
        [*build, str(other), str(recipe), "--jobs", "2", "--out", str(tmp_path / "both")],
        check=True, capture_output=True, env=around | {"WAVEJIG_CACHE": str(tmp_path / "cache")},
    )  # fmt: skip
    assert packed(tmp_path / "both" / "yard-5g8") == packed(alone / "yard-5g8")

    # and by way of another spacer and back
    steps = tmp_path / "steps"
    between = tmp_path / "between.toml"
    between.write_text(YARD + '[spacer]\nmaterial = "ASA"\n')
    for path in (between, recipe):
        done = subprocess.run(
            [*build, str(path), "--out", str(steps), "--json"], check=True, capture_output=True, text=True
        )
    assert set(json.loads(done.stdout)[0]["taken_over"]) >= {"radiator", "reflector", "fixture"}
    assert packed(steps / "yard-5g8") == packed(alone / "yard-5g8")


def packed(folder: Path) -> dict[str, bytes]:
    """Every file of a pack."""
    return {p.relative_to(folder).as_posix(): p.read_bytes() for p in folder.rglob("*") if p.is_file()}
