"""Files opened by programs that share no code with the writers: their reading of size and closedness."""

from __future__ import annotations

import re
import shutil
import subprocess
from pathlib import Path
from typing import Any

import pytest

from wavejig.files.mesh import measure, tessellate
from wavejig.files.step import NamedSolid, write_step
from wavejig.files.stl import write_stl

NUMBER = r"(-?[\d.]+(?:e[+-]?\d+)?)"


@pytest.mark.skipif(shutil.which("admesh") is None, reason="admesh is not installed")
def test_admesh_finds_closed_stl_of_the_right_size(
    tmp_path: Path, cube: Any, board: Any, bent_wire: Any
) -> None:
    for name, solid in (("cube", cube), ("board", board), ("wire", bent_wire)):
        path = tmp_path / f"{name}.stl"
        write_stl(tessellate(solid, name=name), path, name)
        text = subprocess.run(["admesh", str(path)], capture_output=True, text=True, check=True).stdout
        for fault in (
            "Total disconnected facets",
            "Degenerate facets",
            "Edges fixed",
            "Facets removed",
            "Facets reversed",
            "Backwards edges",
            "Normals fixed",
        ):
            found = re.search(rf"{fault}\s*:\s*(\d+)", text)
            assert found and found[1] == "0", f"{name}: {fault}\n{text}"
        exact = measure(solid)
        volume = re.search(rf"Volume\s*:\s*{NUMBER}", text)
        assert volume and abs(float(volume[1]) - exact.volume_mm3) <= 0.02 * exact.area_mm2
        for axis, low, high in zip("XYZ", exact.bounds_mm[:3], exact.bounds_mm[3:], strict=True):
            box = re.search(rf"Min {axis} = +{NUMBER}, Max {axis} = +{NUMBER}", text)
            assert box and [float(box[1]), float(box[2])] == pytest.approx([low, high], abs=0.02)


@pytest.mark.skipif(shutil.which("gmsh") is None, reason="gmsh is not installed")
def test_gmsh_reads_the_step_cube_as_ten_millimetres(tmp_path: Path, cube: Any) -> None:
    write_step([NamedSolid(name="cube", shape=cube, colour=(1, 0, 0))], tmp_path / "cube.step", "cube")
    script = tmp_path / "look.geo"
    script.write_text(
        'SetFactory("OpenCASCADE");\nGeometry.OCCTargetUnit = "MM";\nv() = ShapeFromFile("cube.step");\n'
        'Printf("volumes %g", #v());\nb() = BoundingBox Volume{v(0)};\n'
        'Printf("box %.9g %.9g %.9g", b(3)-b(0), b(4)-b(1), b(5)-b(2));\n'
        'm() = Volume{:};\nPrintf("count %g", #m());\n'
    )
    done = subprocess.run(
        ["gmsh", str(script), "-", "-nopopup"], capture_output=True, text=True, cwd=tmp_path, check=False
    )
    text = done.stdout + done.stderr
    assert "volumes 1" in text and "count 1" in text, text
    box = re.search(rf"box {NUMBER} {NUMBER} {NUMBER}", text)
    assert box and [float(side) for side in box.groups()] == pytest.approx([10, 10, 10], abs=1e-5), text
