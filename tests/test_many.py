"""Several recipes in one call: side by side, told in their order, none stopped by another's failure."""

from __future__ import annotations

import json
import os
import random
import signal
import subprocess
import sys
import threading
import time
from collections.abc import Callable
from pathlib import Path

import pytest

from tests.yard import YARD
from wavejig.cli import main
from wavejig.commands import buildmany
from wavejig.commands.buildone import Options, Outcome

Capture = pytest.CaptureFixture[str]
BAD = YARD.replace('"biquad"', '"biquat"').replace("yard", "bad")
CANNOT = YARD.replace('["52 mm", "52 mm"]', '["12 mm", "12 mm"]').replace("yard", "small")


def recipes(folder: Path, *texts: str) -> list[str]:
    out = []
    for number, text in enumerate(texts):
        path = folder / f"{number}.toml"
        path.write_text(text)
        out.append(str(path))
    return out


def command(*arguments: object) -> list[str]:
    return [sys.executable, "-m", "wavejig", "build", "--skip-field", *map(str, arguments)]


def until(happened: Callable[[], bool], seconds: float = 120.0) -> None:
    ends = time.monotonic() + seconds
    while not happened():
        assert time.monotonic() < ends
        time.sleep(0.02)


def test_failing_recipes_do_not_stop_the_rest(tmp_path: Path) -> None:
    given = recipes(tmp_path, BAD, YARD, CANNOT)
    given.insert(2, str(tmp_path / "none.toml"))
    done = subprocess.run(
        command(*given, "--out", tmp_path / "out", "--jobs", 2, "--json"), capture_output=True, text=True, check=False
    )  # fmt: skip
    assert done.returncode == 2, done.stderr  # the worst of 2, 0, 2, 1
    data = json.loads(done.stdout)
    assert [d["recipe"] for d in data] == given
    assert data[0]["problems"][0]["key"] == "radiator.family"
    assert data[1]["state"] == "built"
    assert "cannot be read" in data[2]["error"]
    assert data[3]["can_be_made"] is False
    assert [p.name for p in (tmp_path / "out").iterdir()] == ["yard-5g8"]
    # in another order, by a person, when the good one is there already
    done = subprocess.run(
        command(*reversed(given), "--out", tmp_path / "out"), capture_output=True, text=True, check=False
    )
    assert done.returncode == 2
    assert "nothing to do: unchanged" in done.stdout and done.stdout.count("files, ") == 1
    places = [
        done.stderr.index(text)
        for text in ("small-5g8 cannot be made", "none.toml: cannot be read", "biquat")
    ]
    assert places == sorted(places)


@pytest.mark.parametrize("way", [signal.SIGINT, pytest.param(signal.SIGTERM, marks=pytest.mark.slow)])
def test_stopping_ends_all_and_leaves_nothing(way: signal.Signals, tmp_path: Path) -> None:
    given = recipes(tmp_path, YARD, YARD.replace("yard", "lawn"))
    out = tmp_path / "out"
    process = subprocess.Popen(
        command(*given, "--out", out, "--jobs", 2), stderr=subprocess.PIPE, text=True, start_new_session=True,
        preexec_fn=lambda: signal.signal(signal.SIGINT, signal.SIG_DFL),  # ignored in a shell's background
    )  # fmt: skip
    until(lambda: out.is_dir() and len([p for p in out.iterdir() if ".building-" in p.name]) == 2)
    if way is signal.SIGINT:
        os.killpg(process.pid, way)  # as a terminal does: to all of them
    else:
        process.send_signal(way)
    _, said = process.communicate(timeout=60)
    assert process.returncode == 3
    assert "packs already on disk are as they were" in said and "Traceback" not in said
    until(lambda: not alive(process.pid), 10.0)
    assert not out.exists() or list(out.iterdir()) == []


def alive(group: int) -> bool:
    """Whether anybody of a process group is left."""
    try:
        os.killpg(group, 0)
    except ProcessLookupError:
        return False
    return True


def test_a_worker_that_dies_takes_no_other_with_it(tmp_path: Path) -> None:
    """And workers do not outlive the process that was to tell of them."""
    given = recipes(tmp_path, YARD, BAD, CANNOT)
    out = tmp_path / "out"
    process = subprocess.Popen(
        command(*given, "--out", out, "--jobs", 1, "--json"), stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True
    )  # fmt: skip
    until(lambda: out.is_dir() and any(".building-" in p.name for p in out.iterdir()))
    (stage,) = [p.name for p in out.iterdir() if ".building-" in p.name]
    os.kill(int(stage.rpartition("-")[2]), signal.SIGKILL)
    told, _ = process.communicate(timeout=120)
    first, second, third = json.loads(told)
    assert "ended with signal SIGKILL" in first["error"] and first["pack"] is None
    assert second["problems"] and third["can_be_made"] is False
    assert process.returncode == 3


@pytest.mark.slow
def test_workers_end_with_their_parent(tmp_path: Path) -> None:
    given = recipes(tmp_path, YARD, YARD.replace("yard", "lawn"))
    out = tmp_path / "out"
    process = subprocess.Popen(command(*given, "--out", out, "--jobs", 2), stderr=subprocess.DEVNULL)
    until(lambda: out.is_dir() and len([p for p in out.iterdir() if ".building-" in p.name]) == 2)
    workers = [int(p.name.rpartition("-")[2]) for p in out.iterdir() if ".building-" in p.name]
    process.kill()
    process.wait()
    until(lambda: not any(Path(f"/proc/{w}/cmdline").exists() for w in workers), 60.0)
    assert not out.exists() or list(out.iterdir()) == []


# -- one pack, one recipe -----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("other", "needle"),
    [(YARD, "both named"), (YARD.replace('"yard-5g8"', "'YARD-5G8' # loud"), "both named")],
)
def test_two_recipes_of_one_name_are_refused(
    other: str, needle: str, tmp_path: Path, capsys: Capture
) -> None:
    given = recipes(tmp_path, YARD, other)
    assert main(["build", *given, "--out", str(tmp_path / "out")]) == 2
    told = capsys.readouterr().err
    assert needle in told and all(path in told for path in given)
    assert not (tmp_path / "out").exists()


def test_a_recipe_given_twice_is_refused(tmp_path: Path, capsys: Capture) -> None:
    (path,) = recipes(tmp_path, YARD)
    assert main(["build", path, str(tmp_path / "." / "0.toml"), "--out", str(tmp_path / "out")]) == 2
    assert "given twice" in capsys.readouterr().err


@pytest.mark.parametrize("jobs", ["0", "-2"])
def test_jobs_that_are_none(jobs: str, tmp_path: Path, capsys: Capture) -> None:
    assert main(["build", *recipes(tmp_path, YARD), f"--jobs={jobs}"]) == 2
    assert "allowed: 1 or more" in capsys.readouterr().err


# -- how many at once -----------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("cores", "free_gib", "expected"), [(8, 64.0, 8), (8, 9.0, 4), (8, 0.5, 1), (1, 64.0, 1), (4, None, 4)]
)
def test_as_many_as_cores_and_memory_allow(
    cores: int, free_gib: float | None, expected: int, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(buildmany, "_cores", lambda: cores)
    monkeypatch.setattr(buildmany, "_free_bytes", lambda: None if free_gib is None else int(free_gib * 2**30))
    assert buildmany.places() == expected


def test_outcomes_come_in_order_and_no_more_run_than_allowed(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A hundred recipes in the order given, though they end in another; never more than three at once."""
    paths = [tmp_path / f"{n}.toml" for n in range(100)]
    now: list[Path] = []
    most = 0

    class Done:
        exitcode = 0

        def __init__(self, path: Path) -> None:
            self.path = path

        def join(self, _: float | None = None) -> None:
            now.remove(self.path)

    def start(path: Path, options: Options, threads: int) -> buildmany._Running:
        nonlocal most
        now.append(path)
        most = max(most, len(now))
        here, there = buildmany.multiprocessing.Pipe(duplex=False)
        there.send(("step", "fixture"))
        done = ("done", Outcome(code=0, data={"n": path.stem}))
        threading.Timer(chance.uniform(0.0, 0.02), lambda: there.send(done)).start()
        ends.append(there)
        return buildmany._Running(path=path, process=Done(path), link=here)  # type: ignore[arg-type]

    chance, ends = random.Random(4), []
    monkeypatch.setattr(buildmany, "_start", start)
    options = Options(out=tmp_path, field=False, from_scratch=False, wait=True)
    known = {path: None for path in paths} | {paths[5]: Outcome(code=0, data={"n": "5"})}
    told = list(buildmany.build_many(paths, known, options, 3, quiet=True))
    assert [o.data["n"] for o in told] == [p.stem for p in paths]
    assert most == 3 and not now
