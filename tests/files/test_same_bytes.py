"""The same solids and drawings give the same bytes: in another process, folder, time zone, order of hashing."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

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
