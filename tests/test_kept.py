"""A build that takes over what did not change writes the very pack that a build from nothing writes."""

from __future__ import annotations

import copy
import hashlib
import json
import re
import shutil
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import trimesh

from tests.yard import YARD
from wavejig.pack import build

# What is changed, and what of the earlier build must have been taken over (more may be).
PAPER = (
    'quantity = 6', 'quantity = 9\n[sheet]\npaper = "Letter"\n[station]\ntransmitter_power = "50 mW"',
)  # fmt: skip
CHANGES = [
    pytest.param(PAPER, {"radiator", "reflector", "spacer", "fixture", "assembly", "field solve"}, id="paper"),
    pytest.param(
        ('"14 dB"', '"13 dB"'), {"radiator", "fixture", "field solve"}, id="wanted", marks=pytest.mark.slow
    ),
    pytest.param(
        ('clearance = "0.15 mm"', 'clearance = "0.2 mm"'), {"radiator", "reflector", "field solve"}, id="clearance",
        marks=pytest.mark.slow,
    ),
    pytest.param(('["52 mm", "52 mm"]', '["54 mm", "52 mm"]'), set(), id="base", marks=pytest.mark.slow),
    pytest.param(('"9.7 mm"', '"9.8 mm"'), set(), id="standoff", marks=pytest.mark.slow),
    pytest.param(('side = "12.85 mm"', 'side = "12.8 mm"'), set(), id="side", marks=pytest.mark.slow),
    pytest.param(
        ("[cutter]", '[mounting]\npolarisation = "horizontal"\n[cutter]'), set(), id="hung",
        marks=pytest.mark.slow,
    ),
    pytest.param(
        ("[cutter]", '[tolerances]\nside = "0.2 mm"\nbend_angle = "0.5 deg"\n[cutter]'), {"radiator", "field solve"},
        id="tolerances", marks=pytest.mark.slow,
    ),
    pytest.param(('"yard-5g8"', '"lawn-5g8"'), {"field solve"}, id="name", marks=pytest.mark.slow),
]  # fmt: skip


def tree(folder: Path) -> dict[str, object]:
    """Every file's content. Where the kernel cuts a face into triangles one way or another from build to build in one
    process (the corners are the same), the corners are compared, and the page without its meshes."""
    out: dict[str, object] = {}
    for path in folder.rglob("*"):
        name = path.relative_to(folder).as_posix()
        if path.suffix in (".stl", ".3mf"):
            corners = np.vstack([m.vertices for m in trimesh.load_scene(path).geometry.values()])
            out[name] = np.unique(corners.round(4), axis=0).tobytes()
        elif name == "report.html":
            head, _, rest = path.read_text(encoding="utf-8").partition('id="parts-data">')
            sizes = re.sub(r"[0-9.]+ [kM]?B<", "<", head + rest.partition("</script>")[2])
            out[name] = re.sub(r"files, [0-9.]+ MB", "", sizes)
        elif name == "manifest.json":
            out[name] = sorted(
                f["path"] + f["kind"] + f["part"] for f in json.loads(path.read_text())["files"]
            )
        elif path.is_file():
            out[name] = hashlib.sha256(path.read_bytes()).hexdigest()
    return out


def earlier(yard: tuple[Path, Any], out: Path) -> Any:
    """The memory of the small pack's build, with a copy of that pack to take files from."""
    folder, memory = yard
    memory = copy.copy(memory)
    memory._steps, memory._solved, memory.reused = dict(memory._steps), dict(memory._solved), []
    memory.pack = out / folder.name
    shutil.copytree(folder, memory.pack)
    return memory


@pytest.mark.parametrize(("change", "taken"), CHANGES)
def test_a_rebuild_writes_what_a_fresh_build_writes(
    change: tuple[str, str], taken: set[str], yard: tuple[Path, Any], tmp_path: Path
) -> None:
    assert YARD.count(change[0]) == 1
    text = YARD.replace(*change)
    if "[sheet]" in change[1]:  # tables come after the keys above them
        head, _, rest = YARD.partition("[target]")
        text = (
            head.replace("quantity = 6", "quantity = 9") + change[1].split("\n", 1)[1] + "\n[target]" + rest
        )
    recipe = tmp_path / "yard.toml"
    recipe.write_text(text, encoding="utf-8")
    memory = earlier(yard, tmp_path / "again")
    again = build(recipe, tmp_path / "again", memory=memory)
    assert taken <= set(memory.reused)
    fresh = build(recipe, tmp_path / "fresh")
    one, other = tree(again.folder), tree(fresh.folder)
    assert sorted(one) == sorted(other)
    assert [name for name in one if one[name] != other[name]] == []
    assert tree(again.folder) != tree(yard[0])
    assert again.inspection.findings == fresh.inspection.findings


def test_a_pack_touched_by_hand_is_not_taken_over(yard: tuple[Path, Any], tmp_path: Path) -> None:
    memory = earlier(yard, tmp_path)
    done = memory._steps["radiator"]
    (tmp_path / "stage").mkdir()
    assert memory.recall("radiator", done.given, tmp_path / "stage") is not None
    table = memory.pack / "radiator" / "bend-table.csv"
    table.write_text(table.read_text() + "\n")
    assert memory.recall("radiator", done.given, tmp_path / "stage") is None
    table.unlink()
    assert memory.recall("radiator", done.given, tmp_path / "stage") is None
