"""A build that takes over what did not change writes the very pack that a build from nothing writes."""

from __future__ import annotations

import hashlib
import json
import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from tests.yard import YARD
from wavejig.files import kept as kept_module
from wavejig.files import origin, record
from wavejig.files.fingerprint import fingerprint
from wavejig.files.kept import Kept
from wavejig.files.manifest import Entry, check_manifest
from wavejig.pack import build, inspect_recipe, retell

# What is changed, and what of the earlier build must have been taken over (more may be).
PAPER = (
    'quantity = 6', 'quantity = 9\n[sheet]\npaper = "Letter"\n[station]\ntransmitter_power = "50 mW"',
)  # fmt: skip
CHANGES = [
    pytest.param(
        PAPER, {"radiator", "reflector", "spacer", "fixture", "assembly", "field solve"}, id="paper",
        marks=pytest.mark.slow,
    ),
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
    pytest.param(
        ("[cutter]", '[spacer]\nmaterial = "ASA"\n[cutter]'), {"radiator", "reflector", "fixture", "field solve"},
        id="spacer",
    ),
    pytest.param(
        ('["5.725 GHz", "5.875 GHz"]', '["5.730 GHz", "5.870 GHz"]'), {"fixture"}, id="band", marks=pytest.mark.slow
    ),
    pytest.param(
        ("[printer]", '[printer]\nbed = ["120 mm", "120 mm", "120 mm"]'), {"radiator", "reflector", "field solve"},
        id="bed", marks=pytest.mark.slow,
    ),
    pytest.param(('"yard-5g8"', '"lawn-5g8"'), {"field solve"}, id="name", marks=pytest.mark.slow),
]  # fmt: skip


def tree(folder: Path) -> dict[str, str]:
    """Every file's digest."""
    return {
        path.relative_to(folder).as_posix(): hashlib.sha256(path.read_bytes()).hexdigest()
        for path in folder.rglob("*")
        if path.is_file()
    }


def earlier(yard: tuple[Path, Any], out: Path) -> Kept:
    """What the small pack's build left, with a copy of that pack to take files from; once through the disk."""
    folder, memory = yard
    shutil.copytree(folder, out / folder.name)
    record.keep(Kept(pack=out / folder.name, steps=memory.steps))
    kept = record.recall(out / folder.name)
    assert kept.steps.keys() == memory.steps.keys()
    for key, prediction in memory.solves.items():
        record.Solved().keep_solved(key, prediction)
    return kept


def changed(change: tuple[str, str]) -> str:
    assert YARD.count(change[0]) == 1
    text = YARD.replace(*change)
    if "[sheet]" in change[1]:  # tables come after the keys above them
        head, _, rest = YARD.partition("[target]")
        text = (
            head.replace("quantity = 6", "quantity = 9") + change[1].split("\n", 1)[1] + "\n[target]" + rest
        )
    return text


@pytest.mark.parametrize(("change", "taken"), CHANGES)
def test_a_rebuild_writes_what_a_fresh_build_writes(
    change: tuple[str, str], taken: set[str], yard: tuple[Path, Any], tmp_path: Path
) -> None:
    recipe = tmp_path / "yard.toml"
    recipe.write_text(changed(change), encoding="utf-8")
    memory = earlier(yard, tmp_path / "again")
    again = build(recipe, tmp_path / "again", memory=memory)
    assert taken <= set(memory.reused)
    fresh = build(recipe, tmp_path / "fresh")
    one, other = tree(again.folder), tree(fresh.folder)
    assert sorted(one) == sorted(other)
    assert [name for name in one if one[name] != other[name]] == []
    assert one != tree(yard[0])
    assert again.inspection.findings == fresh.inspection.findings


class Unread:
    """Stands for what a step does not look at."""

    def __getattribute__(self, name: str) -> Any:
        raise AssertionError(f"{name} is read")


@pytest.mark.slow
def test_no_step_reads_what_it_is_not_compared_by(tmp_path: Path) -> None:
    """Each step run with the parts of the design that are left out of its inputs taken away."""
    from wavejig.files.packfiles import PackFiles

    recipe = tmp_path / "yard.toml"
    recipe.write_text(YARD)
    inspection = inspect_recipe(recipe)[1]
    design = inspection.design
    files = PackFiles(inspection, tmp_path / "stage", predict=False)
    files.root.mkdir()
    run = []
    for step in files.steps():
        aside = kept_module._ASIDE.get(step.title)
        if aside is not None:
            gone = aside - {"target"} | kept_module._NEVER
            files.design = replace(design, **{name: Unread() for name in gone})
            if (
                "target" in aside
            ):  # which stays, being needed for names and scales; but no number of the match
                files.design = replace(files.design, target=replace(design.target, return_loss_db=Unread()))
            run.append(step.title)
        step.run()
        files.design = design
    assert set(run) == set(kept_module._ASIDE)


def test_a_remark_changes_the_recipe_and_the_manifest_alone(yard: tuple[Path, Any], tmp_path: Path) -> None:
    folder = tmp_path / yard[0].name
    shutil.copytree(yard[0], folder)
    recipe = tmp_path / "yard.toml"
    recipe.write_text(YARD.replace("52 mm", "52.0 mm") + "# a remark\n", encoding="utf-8")
    found = origin.look(recipe, tmp_path, field=True)
    assert found is not None and not found.same_text
    retell(recipe, found)
    before, after = tree(yard[0]), tree(folder)
    assert before.keys() == after.keys()
    assert {name for name in after if after[name] != before[name]} == {"recipe.toml", "manifest.json"}
    found = origin.look(recipe, tmp_path, field=True)
    assert found is not None and found.same_text
    check_manifest(folder)


def test_a_pack_touched_by_hand_is_not_taken_over(yard: tuple[Path, Any], tmp_path: Path) -> None:
    memory = earlier(yard, tmp_path)
    assert memory.pack is not None
    done = memory.steps["radiator"]
    (tmp_path / "stage").mkdir()
    assert memory.recall("radiator", done.given, tmp_path / "stage") is not None
    table = memory.pack / "radiator" / "bend-table.csv"
    table.write_text(table.read_text() + "\n")
    assert memory.recall("radiator", done.given, tmp_path / "stage") is None
    table.unlink()
    assert memory.recall("radiator", done.given, tmp_path / "stage") is None


# -- what is there already --------------------------------------------------------------------------------


@pytest.mark.slow
def test_a_remark_leads_to_what_a_fresh_build_of_that_text_writes(tmp_path: Path) -> None:
    recipe = tmp_path / "yard.toml"
    recipe.write_text(YARD)
    build(recipe, tmp_path / "kept", predict=False)
    recipe.write_text("# a remark that makes the recipe longer\n" * 40 + YARD)
    found = origin.look(recipe, tmp_path / "kept", field=False)
    assert found is not None and not found.same_text
    retell(recipe, found)
    fresh = build(recipe, tmp_path / "fresh", predict=False)
    assert tree(fresh.folder) == tree(tmp_path / "kept" / "yard-5g8")


def cut_short(pack: Path) -> None:
    (pack / "design.json").write_bytes((pack / "design.json").read_bytes()[:-2])


def edited(pack: Path) -> None:
    table = pack / "radiator" / "bend-table.csv"
    table.write_bytes(table.read_bytes().replace(b"1", b"2", 1))  # of the same length


def added(pack: Path) -> None:
    (pack / "fixture" / "more.stl").write_text("")


def gone(pack: Path) -> None:
    (pack / "report.html").unlink()


def linked(pack: Path) -> None:
    shutil.move(pack / "report.html", pack.parent / "elsewhere.html")
    (pack / "report.html").symlink_to(pack.parent / "elsewhere.html")


def in_manifest(key: str, value: Any) -> Callable[[Path], None]:
    def change(pack: Path) -> None:
        data = json.loads((pack / "manifest.json").read_text())
        table, _, name = key.rpartition(".")
        (data[table] if table else data)[name] = value
        (pack / "manifest.json").write_text(json.dumps(data))

    return change


@pytest.mark.parametrize(
    "touch",
    [
        cut_short, edited, added, gone, linked, in_manifest("made.program", "0"), in_manifest("versions.numpy", "1.0"),
        in_manifest("made.field", False), in_manifest("made", None), in_manifest("files", [3]),
        lambda pack: (pack / "manifest.json").write_text("[" * 100_000),
    ],
)  # fmt: skip
def test_a_pack_that_is_not_what_would_be_written_is_seen_through(
    touch: Callable[[Path], None], yard: tuple[Path, Any], tmp_path: Path
) -> None:
    pack = tmp_path / yard[0].name
    shutil.copytree(yard[0], pack)
    shutil.copy(pack / "recipe.toml", tmp_path / "r.toml")
    assert origin.look(tmp_path / "r.toml", tmp_path, field=True) is not None
    touch(pack)
    assert origin.look(tmp_path / "r.toml", tmp_path, field=True) is None


@pytest.mark.parametrize(("change", "taken"), CHANGES)
def test_a_change_of_numbers_is_seen(
    change: tuple[str, str], taken: set[str], yard: tuple[Path, Any], tmp_path: Path
) -> None:
    (tmp_path / "r.toml").write_text(changed(change), encoding="utf-8")
    assert origin.look(tmp_path / "r.toml", yard[0].parent, field=True) is None
    assert (
        origin.look(yard[0] / "recipe.toml", yard[0].parent, field=False) is None
    )  # nor is it without a field


def test_an_unchanged_recipe_loads_nothing_and_touches_nothing(yard: tuple[Path, Any]) -> None:
    """What makes it cheap; `python tests/bench --only rebuild` tells how cheap, against loading the kernel."""
    pack = yard[0]
    before = tree(pack), (pack / "manifest.json").stat().st_mtime_ns
    heavy = "{'cadquery', 'OCP', 'numba', 'matplotlib', 'numpy', 'pydantic', 'trimesh'}"
    code = (
        "import sys\nfrom wavejig.cli import main\n"
        "code = main(['build', sys.argv[1], '--out', sys.argv[2], '--json'])\n"
        f"sys.exit(code or len({heavy} & set(sys.modules)))"
    )
    command = [sys.executable, "-c", code, str(pack / "recipe.toml"), str(pack.parent)]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    (data,) = json.loads(done.stdout)
    assert data["state"] == "unchanged" and data["name"] == pack.name and data["findings"]
    assert (tree(pack), (pack / "manifest.json").stat().st_mtime_ns) == before


# -- what is kept between processes -------------------------------------------------------------------------


def test_a_record_that_does_not_count_is_as_none(
    yard: tuple[Path, Any], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    kept = earlier(yard, tmp_path)
    assert kept.pack is not None and kept.steps
    (file,) = (record.cache_folder() / "built").iterdir()
    whole = file.read_bytes()
    for data in (b"", whole[:-1], whole[:40], whole[:-1] + bytes([whole[-1] ^ 1]), b"x" + whole):
        file.write_bytes(data)
        assert record.recall(kept.pack).steps == {}
    file.write_bytes(whole)
    assert record.recall(kept.pack).steps
    monkeypatch.setattr(record, "program", lambda: "another")
    assert record.recall(kept.pack).steps == {}


def test_a_record_calls_nothing(tmp_path: Path) -> None:
    """What a pickle could do in the hands of a trusting reader."""

    class Evil:
        def __reduce__(self) -> Any:
            return os.mkdir, (str(tmp_path / "made"),)

    for value in (Evil(), {"radiator": Evil()}, build, subprocess.Popen, record.cache_folder):
        record._write(record._place(tmp_path / "pack"), value)
        assert record.recall(tmp_path / "pack").steps == {}
    assert not (tmp_path / "made").exists()


def test_the_least_used_is_thrown_away_first(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(record, "MOST_BYTES", 2500)
    for age, name in enumerate("abcd"):
        path = record.cache_folder() / "built" / f"{name}.kept"
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_bytes(bytes(1000))
        os.utime(path, (1e9 - age, 1e9 - age))
    record._tidy(record.cache_folder())
    assert sorted(p.name for p in path.parent.iterdir()) == ["a.kept", "b.kept"]


def test_fingerprints_go_by_content() -> None:
    same = [
        ({"a": 1.0, "b": (2, 3)}, {"b": [2, 3], "a": 1.0}),
        ({3, 1, 2}, {2, 3, 1}),
        (np.arange(6.0), np.arange(12.0)[::2] / 2.0),
    ]
    for one, other in same:
        assert fingerprint(one) == fingerprint(other)
    other_than = [
        (1.0, 1), (0.0, -0.0), (0.1 + 0.2, 0.3), ("1", 1), (["ab", "c"], ["a", "bc"]), ([1, [2]], [[1], 2]),
        (np.zeros(4), np.zeros((2, 2))), (np.zeros(2), np.zeros(2, dtype=np.float32)), (None, "None"), (True, 1),
        (Entry(path="a", kind="b", part="", units=""), Entry(path="a", kind="", part="b", units="")),
    ]  # fmt: skip
    for one, other in other_than:
        assert fingerprint(one) != fingerprint(other), (one, other)
    with pytest.raises(TypeError):
        fingerprint(object())
