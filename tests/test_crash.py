"""A build that ends at any moment, in any way, leaves the whole old pack or the whole new one, and says so."""

from __future__ import annotations

import json
import os
import random
import resource
import shutil
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from tests.yard import YARD
from wavejig.files.lock import locked
from wavejig.files.origin import differing
from wavejig.files.staging import staging

MOMENTS = 60  # over a whole build; --whole takes them all
SAMPLE = 2
NEW = YARD.replace("quantity = 6", "quantity = 7")


def command(*arguments: object) -> list[str]:
    return [sys.executable, "-m", "wavejig", "build", "--skip-field", *map(str, arguments)]


def state(out: Path, old: str) -> str:
    """ "old" or "new", by the recipe in it, once every file is as its manifest says."""
    pack = out / "yard-5g8"
    manifest = json.loads((pack / "manifest.json").read_text())
    assert differing(pack, manifest) == []
    text = (pack / "recipe.toml").read_text()
    assert text in (old, NEW)
    return "old" if text == old else "new"


@pytest.fixture(scope="module")
def first(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, float]:
    """An old pack, and the processor seconds that its build took."""
    folder = tmp_path_factory.mktemp("first")
    (folder / "yard.toml").write_text(YARD)
    process = subprocess.Popen(
        command(folder / "yard.toml", "--out", folder / "out"), stdout=subprocess.DEVNULL
    )
    took = 0.0
    while process.poll() is None:
        took = max(took, worked(process.pid))
        time.sleep(0.01)
    assert process.returncode == 0
    return folder / "out", took


def worked(process: int) -> float:
    """Processor seconds of a process so far, which other work on the machine does not lengthen; 0.0 of none."""
    try:
        fields = Path(f"/proc/{process}/stat").read_text().rpartition(")")[2].split()
    except (FileNotFoundError, ProcessLookupError):
        return 0.0
    return (int(fields[11]) + int(fields[12])) / os.sysconf("SC_CLK_TCK")  # proc(5): utime, stime


def laid(first: tuple[Path, float], tmp_path: Path) -> tuple[Path, Path]:
    """The new recipe, and a folder with the old pack."""
    shutil.copytree(first[0], tmp_path / "out")
    (tmp_path / "yard.toml").write_text(NEW)
    return tmp_path / "yard.toml", tmp_path / "out"


def stage_of(out: Path) -> str:
    """How far a killed build had come, by the files it leaves."""
    lying = [p for p in out.iterdir() if ".building-" in p.name]
    if not lying:
        return "before or after"
    made = sorted(p.relative_to(lying[0]).as_posix() for p in lying[0].rglob("*") if p.is_file())
    return f"{len(made)} files"


@pytest.mark.parametrize(
    "number",
    [pytest.param(n, marks=() if n % (MOMENTS // SAMPLE) == 7 else pytest.mark.slow) for n in range(MOMENTS)],
)
def test_killed_at_a_random_moment(number: int, first: tuple[Path, float], tmp_path: Path) -> None:
    """`-s` shows what was met: the moment, how far the build had come, and what was there afterwards."""
    recipe, out = laid(first, tmp_path)
    moment = random.Random(number).uniform(0.0, 1.0) * first[1]
    process = subprocess.Popen(
        command(recipe, "--out", out, "--from-scratch"), stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL
    )
    while process.poll() is None and worked(process.pid) < moment:
        time.sleep(0.002)
    process.kill()
    code = process.wait()
    lying, found = stage_of(out), state(out, YARD)
    sys.stdout.write(f"killed {number}: {moment:.2f} s of {first[1]:.2f}: {lying}: {found} (exit {code})\n")
    if code == 0:
        assert found == "new" and [p.name for p in out.iterdir()] == ["yard-5g8"]
        return
    assert code == -signal.SIGKILL
    # the next build takes no notice of the dead one's lock, and clears what it left
    (tmp_path / "next.toml").write_text(YARD + "# next\n")
    subprocess.run(
        command(tmp_path / "next.toml", "--out", out, "--no-wait"), check=True, capture_output=True
    )
    assert [p.name for p in out.iterdir()] == ["yard-5g8"]
    assert state(out, YARD + "# next\n") == "old"


@pytest.mark.skipif(sys.platform != "linux", reason="tells from /proc that a process stands still")
def test_sixty_moments_of_one_build(first: tuple[Path, float], tmp_path: Path) -> None:
    """What a kill leaves on the disk is what lies there while the process stands still: stopped, copied, let go on."""
    recipe, out = laid(first, tmp_path)
    chance = random.Random(60)
    moments = sorted(chance.uniform(0.0, 1.0) * first[1] for _ in range(MOMENTS))
    process = subprocess.Popen(command(recipe, "--out", out, "--from-scratch"), stdout=subprocess.DEVNULL)
    found = []
    for number, moment in enumerate(moments):
        while process.poll() is None and worked(process.pid) < moment:
            time.sleep(0.002)
        if process.poll() is None:
            process.send_signal(signal.SIGSTOP)
            until(lambda: process.poll() is not None or standing(process.pid))
        left = Path(shutil.copytree(out, tmp_path / f"left-{number}"))
        process.send_signal(signal.SIGCONT)
        lying, there = stage_of(left), state(left, YARD)
        with (
            pytest.raises(ZeroDivisionError),
            locked(left, "yard-5g8", wait=False),
            staging(left, "yard-5g8"),
        ):
            raise ZeroDivisionError  # the next build, as far as it clears up; it fails before its end
        assert [p.name for p in left.iterdir()] == ["yard-5g8"]
        assert state(left, YARD) == there
        shutil.rmtree(left)
        found.append((lying, there))
        sys.stdout.write(f"{number}: {moment:.2f} s of {first[1]:.2f}: {lying}: {there}\n")
    assert process.wait() == 0 and state(out, YARD) == "new"
    states = [there for _, there in found]
    assert states == sorted(states, key=["old", "new"].index)
    assert len({lying for lying, _ in found}) > 8  # the moments are spread over the build


def standing(process: int) -> bool:
    """Whether a process, threads and all, has been stopped."""
    return Path(f"/proc/{process}/stat").read_text().rpartition(")")[2].split()[0] == "T"


WAYS = {signal.SIGINT: "interrupted", signal.SIGTERM: "SIGTERM", signal.SIGHUP: "terminal was closed"}
# The command line as it is, but for the walk itself: its pack is one file and a long wait.
SLOW_BUILD = """
import sys, time
from pathlib import Path
from wavejig import pack
from wavejig.cli import main
from wavejig.files.lock import locked
from wavejig.files.staging import staging

def build(path, out, step, **rest):
    with locked(out, "yard-5g8", wait=rest["wait"], told=rest["announce"]), staging(out, "yard-5g8") as stage:
        (stage / "half").write_text("half")
        time.sleep(60)

pack.build = build
sys.exit(main(sys.argv[1:]))
"""


def started(recipe: Path, out: Path, *more: str) -> subprocess.Popen[str]:
    arguments = ["build", "--skip-field", "--from-scratch", str(recipe), "--out", str(out), *more]
    process = subprocess.Popen(
        [sys.executable, "-c", SLOW_BUILD, *arguments], stderr=subprocess.PIPE, text=True, preexec_fn=heeding
    )
    until(lambda: any((p / "half").exists() for p in out.iterdir()))
    return process


def heeding() -> None:
    """Ctrl-C counts, though these tests may themselves run in the background of a shell, where it does not."""
    signal.signal(signal.SIGINT, signal.SIG_DFL)


def until(happened: Callable[[], bool], seconds: float = 60.0) -> None:
    ends = time.monotonic() + seconds
    while not happened():
        assert time.monotonic() < ends
        time.sleep(0.02)


@pytest.mark.parametrize("way", WAYS, ids=lambda w: w.name)
def test_told_to_stop(way: signal.Signals, first: tuple[Path, float], tmp_path: Path) -> None:
    recipe, out = laid(first, tmp_path)
    process = started(recipe, out)
    process.send_signal(way)
    _, said = process.communicate(timeout=30)
    assert process.returncode == 3
    assert WAYS[way] in said and "as they were" in said and "Traceback" not in said
    assert [p.name for p in out.iterdir()] == ["yard-5g8"]
    assert state(out, YARD) == "old"


def test_nohup_is_respected(first: tuple[Path, float], tmp_path: Path) -> None:
    recipe, out = laid(first, tmp_path)
    signal.signal(signal.SIGHUP, signal.SIG_IGN)  # as nohup does; a child takes it over
    try:
        process = started(recipe, out)
    finally:
        signal.signal(signal.SIGHUP, signal.SIG_DFL)
    process.send_signal(signal.SIGHUP)
    with pytest.raises(subprocess.TimeoutExpired):
        process.wait(0.5)
    process.terminate()
    process.communicate(timeout=30)
    assert process.returncode == 3


def test_a_second_build_is_refused_or_waits(first: tuple[Path, float], tmp_path: Path) -> None:
    """And who has a file of the old pack open meanwhile goes on reading the old one."""
    recipe, out = laid(first, tmp_path)
    with (out / "yard-5g8" / "report.html").open("rb") as reader:
        before = reader.read(1000)
        second_build(recipe, out)
        reader.seek(0)
        assert reader.read(1000) == before
    assert state(out, YARD) == "new"
    assert [p.name for p in out.iterdir()] == ["yard-5g8"]


def second_build(recipe: Path, out: Path) -> None:
    one = started(recipe, out)
    refused = subprocess.run(
        command(recipe, "--out", out, "--no-wait"), capture_output=True, text=True, check=False
    )
    assert refused.returncode == 3
    assert f"process {one.pid} on" in refused.stderr and "is building this pack" in refused.stderr
    assert any((p / "half").exists() for p in out.iterdir())  # what a living build has begun is left alone
    waiting = subprocess.Popen(command(recipe, "--out", out), stderr=subprocess.PIPE, text=True)
    assert waiting.stderr is not None
    assert f"process {one.pid} on" in waiting.stderr.readline()
    one.kill()
    one.communicate()
    waiting.communicate(timeout=300)
    assert waiting.returncode == 0


@pytest.mark.slow
def test_twice_at_once_is_built_once(first: tuple[Path, float], tmp_path: Path) -> None:
    recipe, out = laid(first, tmp_path)
    both = [
        subprocess.Popen(command(recipe, "--out", out, "--json"), stdout=subprocess.PIPE, text=True)
        for _ in range(2)
    ]  # fmt: skip
    states = [json.loads(p.communicate(timeout=600)[0])[0]["state"] for p in both]
    assert sorted(states) == ["built", "unchanged"]
    assert state(out, YARD) == "new"
    assert [p.name for p in out.iterdir()] == ["yard-5g8"]


def test_a_disk_that_is_full(first: tuple[Path, float], tmp_path: Path) -> None:
    """The system's limit on the size of a file stands for the disk: the writers meet an OSError in mid-file."""
    recipe, out = laid(first, tmp_path)

    def limit() -> None:
        resource.setrlimit(resource.RLIMIT_FSIZE, (30_000, 30_000))

    done = subprocess.run(
        command(recipe, "--out", out, "--from-scratch"),
        capture_output=True, text=True, check=False, preexec_fn=limit,
        env={**os.environ, "PYTHONDONTWRITEBYTECODE": "1"},
    )  # fmt: skip
    assert done.returncode == 3, done.stderr
    assert "File too large" in done.stderr and "an earlier pack is as it was" in done.stderr
    assert "Traceback" not in done.stderr
    assert state(out, YARD) == "old"
    assert [p.name for p in out.iterdir()] == ["yard-5g8"]


@pytest.mark.slow
@pytest.mark.skipif(os.geteuid() != 0 or sys.platform != "linux", reason="a small disk takes root to mount")
@pytest.mark.parametrize("share", [0.2, 0.5, 0.9])
def test_a_small_disk(share: float, first: tuple[Path, float], tmp_path: Path) -> None:
    """The old pack fits; of the new one beside it, that share."""
    old = sum(p.stat().st_size + 4096 for p in first[0].rglob("*"))  # rounded up to pages, as the disk does
    room = int((1.0 + share) * old)
    disk = tmp_path / "disk"
    disk.mkdir()
    mounted = subprocess.run(
        ["mount", "-t", "tmpfs", "-o", f"size={room}", "none", str(disk)], capture_output=True, check=False
    )
    if mounted.returncode:
        pytest.skip("no leave to mount a small disk here")
    try:
        recipe, out = laid(first, disk)
        done = subprocess.run(command(recipe, "--out", out), capture_output=True, text=True, check=False)
        assert done.returncode == 3, done.stderr
        assert "No space left" in done.stderr and "an earlier pack is as it was" in done.stderr
        assert state(out, YARD) == "old"
        assert [p.name for p in out.iterdir()] == ["yard-5g8"]
    finally:
        subprocess.run(["umount", str(disk)], check=True)
