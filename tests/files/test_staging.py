"""Killed before any step of putting a pack in its place, what is there is the whole old pack or the whole new one."""

from __future__ import annotations

import errno
import json
import os
import shutil
import subprocess
import sys
import threading
from pathlib import Path

import pytest

from wavejig.files import staging as module
from wavejig.files.staging import staging

# Puts a pack of a few files in its place, and ends without ceremony just before the n-th thing it does to the disk.
# "aside": as on a system that cannot exchange folders in one step.
PUT = """
import os, sys
from pathlib import Path
from wavejig.files import staging

out, last, aside = Path(sys.argv[1]), int(sys.argv[2]), sys.argv[3] == "aside"
if aside:
    staging._exchange = lambda: None
else:
    call = staging._exchange()
    def exchange(one, other):
        count("exchange", ())
        call(one, other)
    staging._exchange = lambda: exchange
seen = 0
TOUCHES = {"open", "exchange", "os.rename", "os.mkdir", "os.rmdir", "os.remove", "os.chmod", "os.scandir", "os.listdir"}

def count(event, args):
    global seen
    if event in TOUCHES:
        seen += 1
        if seen == last:
            os._exit(9)

sys.addaudithook(count)
with staging.staging(out, "spare") as stage:
    (stage / "field").mkdir()
    for name in ("manifest.json", "a", "field/b"):
        (stage / name).write_text("new")
print(seen)
"""


def put(out: Path, last: int, way: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-c", PUT, str(out), str(last), way], capture_output=True, text=True, check=False
    )


def pack(folder: Path) -> dict[str, str]:
    return {p.relative_to(folder).as_posix(): p.read_text() for p in folder.rglob("*") if p.is_file()}


OLD = {"manifest.json": "old", "a": "old", "c": "old"}
NEW = {"manifest.json": "new", "a": "new", "field/b": "new"}


def lay(out: Path) -> None:
    shutil.rmtree(out, ignore_errors=True)
    (out / "spare").mkdir(parents=True)
    for name, text in OLD.items():
        (out / "spare" / name).write_text(text)


@pytest.mark.parametrize("way", ["exchange", "aside"])
def test_killed_at_every_step(way: str, tmp_path: Path) -> None:
    out = tmp_path / "out"
    lay(out)
    done = put(out, 0, way)
    assert done.returncode == 0, done.stderr
    steps = int(done.stdout)
    assert steps > 20
    states = []
    for last in range(1, steps + 1, 1 if way == "exchange" else 2):
        lay(out)
        assert put(out, last, way).returncode == 9
        there = pack(out / "spare") if (out / "spare").exists() else None
        states.append(
            "old" if there == OLD else "new" if there == NEW else "none" if there is None else "torn"
        )
        with pytest.raises(RuntimeError), staging(out, "spare"):  # what the next build finds, and leaves
            assert pack(out / "spare") in (OLD, NEW)
            raise RuntimeError
        assert [p.name for p in out.iterdir()] == ["spare"]
    assert "torn" not in states and {"old", "new"} <= set(states)
    assert states == sorted(states, key=["old", "none", "new"].index)  # and only once, and never back
    if way == "exchange" and sys.platform == "linux":
        assert "none" not in states


@pytest.mark.skipif(sys.platform != "linux", reason="folders are exchanged in one step on Linux")
def test_who_reads_meanwhile_always_finds_a_pack(tmp_path: Path) -> None:
    lay(tmp_path)
    (tmp_path / "spare" / "manifest.json").write_text(json.dumps({"n": 0}))
    missing, seen, end = [], set(), threading.Event()

    def read() -> None:
        while not end.is_set():
            try:
                seen.add(json.loads((tmp_path / "spare" / "manifest.json").read_text())["n"])
            except OSError as err:
                missing.append(err)

    reader = threading.Thread(target=read)
    reader.start()
    for n in range(1, 60):
        with staging(tmp_path, "spare") as stage:
            (stage / "manifest.json").write_text(json.dumps({"n": n}))
    end.set()
    reader.join()
    assert not missing and len(seen) > 5


def test_a_swap_that_fails_brings_the_old_pack_back(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    lay(tmp_path)
    rename = Path.rename

    def stubborn(self: Path, target: Path) -> Path:
        if ".building-" in self.name:
            raise OSError(errno.EBUSY, "Device or resource busy")
        return rename(self, target)

    monkeypatch.setattr(module, "_exchange", lambda: None)
    monkeypatch.setattr(Path, "rename", stubborn)
    with pytest.raises(OSError, match="busy"), staging(tmp_path, "spare") as stage:
        (stage / "manifest.json").write_text("new")
    assert pack(tmp_path / "spare") == OLD
    assert [p.name for p in tmp_path.iterdir()] == ["spare"]


def test_a_disk_that_cannot_exchange_is_met_by_setting_aside(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def cannot(one: Path, other: Path) -> None:
        raise OSError(errno.EINVAL, "Invalid argument")

    lay(tmp_path)
    monkeypatch.setattr(module, "_exchange", lambda: cannot)
    with staging(tmp_path, "spare") as stage:
        (stage / "manifest.json").write_text("new")
    assert pack(tmp_path / "spare") == {"manifest.json": "new"}
    assert [p.name for p in tmp_path.iterdir()] == ["spare"]


def test_leftovers_of_a_pack_whose_name_begins_alike_are_not_ours(tmp_path: Path) -> None:
    others = [
        ".spare.building-2.building-7",
        ".spare.building-two.building-7",
        ".spare.replaced-x.replaced-1",
    ]
    for name in [*others, ".spare.building-7", ".spare.replaced-9"]:
        (tmp_path / name).mkdir()
    (tmp_path / ".spare.replaced-9" / "manifest.json").write_text("old")
    with staging(tmp_path, "spare") as stage:
        assert (tmp_path / "spare" / "manifest.json").read_text() == "old"  # caught between two renames
        (stage / "manifest.json").write_text("new")
    assert sorted(p.name for p in tmp_path.iterdir()) == sorted([*others, "spare"])


def test_every_file_is_on_the_disk_before_it_takes_the_old_one_s_place(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    done: list[str] = []
    fsync = os.fsync

    def noted(handle: int) -> None:
        done.append(str(Path(f"/proc/self/fd/{handle}").readlink()) if sys.platform == "linux" else "")
        fsync(handle)

    lay(tmp_path)
    monkeypatch.setattr(os, "fsync", noted)
    with staging(tmp_path, "spare") as stage:
        (stage / "field").mkdir()
        for name in NEW:
            (stage / name).write_text("new")
    if sys.platform == "linux":
        inside = {str(stage / name) for name in (*NEW, "field")} | {str(stage)}
        assert set(done) == inside | {str(tmp_path)} and done[-1] == str(tmp_path)


def test_a_pack_has_the_rights_the_user_s_mask_gives(tmp_path: Path) -> None:
    before = os.umask(0o027)
    try:
        with staging(tmp_path, "spare") as stage:
            (stage / "manifest.json").write_text("new")
    finally:
        os.umask(before)
    assert (tmp_path / "spare").stat().st_mode & 0o777 == 0o750
