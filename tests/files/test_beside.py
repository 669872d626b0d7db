"""Checks beside: each is run, the first that fails is raised as if it had run here, and nothing is left behind."""

from __future__ import annotations

import fcntl
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from wavejig.files.beside import Beside, CheckerLostError, cores
from wavejig.files.errors import FileCheckError

pytestmark = pytest.mark.skipif(sys.platform != "linux", reason="a second process is started on Linux only")


def note(path: Path, text: str = "") -> None:
    """A check that leaves a trace of who ran it."""
    path.write_text(f"{os.getpid()} {text}")


def refuse(path: Path) -> None:
    raise FileCheckError(path, "nothing right", "something")


def die(path: Path) -> None:
    """As the kernel does on some broken files; not where the tests run."""
    if os.getpid() != int(path.read_text()):
        os.kill(os.getpid(), signal.SIGSEGV)


def linger(path: Path) -> None:
    path.write_text(str(os.getpid()))
    time.sleep(30.0)


def test_checks_run_in_another_process_all_of_them(tmp_path: Path) -> None:
    with Beside(processes=2) as beside:
        for i in range(20):
            beside.check(note, tmp_path / f"{i}", text=f"number {i}")
        beside.settle()
    ran = [(tmp_path / f"{i}").read_text().split(" ", 1) for i in range(20)]
    assert [text for _, text in ran] == [f"number {i}" for i in range(20)]
    assert len({pid for pid, _ in ran}) == 1 and ran[0][0] != str(os.getpid())


def test_one_process_checks_at_once(tmp_path: Path) -> None:
    with Beside(processes=1) as beside:
        beside.check(note, tmp_path / "a")
        assert (tmp_path / "a").read_text().split()[0] == str(os.getpid())
        with pytest.raises(FileCheckError):
            beside.check(refuse, tmp_path / "b")
        beside.settle()


def test_the_first_failure_is_raised_with_all_it_says(tmp_path: Path) -> None:
    with Beside(processes=2) as beside:
        beside.check(note, tmp_path / "a")
        beside.check(refuse, tmp_path / "b.step")
        beside.check(refuse, tmp_path / "c.step")
        with pytest.raises(FileCheckError, match=r"b\.step: found nothing right"):
            beside.settle()


@pytest.mark.parametrize("more", [0, 2000])  # few wait in the link; many find it broken
def test_a_check_that_kills_its_process_is_named(tmp_path: Path, more: int) -> None:
    path = tmp_path / "deadly.step"
    path.write_text(str(os.getpid()))

    def all_of_it() -> None:
        with Beside(processes=2) as beside:
            beside.check(note, tmp_path / "a")
            beside.check(die, path)
            for _ in range(more):
                beside.check(note, tmp_path / "b")
            beside.settle()

    with pytest.raises(CheckerLostError, match=r"deadly\.step"):
        all_of_it()


def test_leaving_early_ends_it(tmp_path: Path) -> None:
    path = tmp_path / "pid"
    with Beside(processes=2) as beside:
        beside.check(linger, path)
        while not (path.exists() and path.read_text()):
            time.sleep(0.01)
    with pytest.raises(ProcessLookupError):
        os.kill(int(path.read_text()), 0)


def test_it_holds_no_lock_of_ours(tmp_path: Path) -> None:
    def locked() -> int:
        handle = os.open(tmp_path / "lock", os.O_RDWR | os.O_CREAT)
        fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        return handle

    handle = locked()
    with Beside(processes=2) as beside:
        beside.check(note, tmp_path / "a")
        while not (tmp_path / "a").exists():
            time.sleep(0.01)
        os.close(handle)  # as a process that dies does
        os.close(locked())
        beside.settle()


def test_it_ends_when_the_first_process_is_killed(tmp_path: Path) -> None:
    code = (
        "import sys, time\nfrom pathlib import Path\nfrom tests.files.test_beside import note\n"
        "from wavejig.files.beside import Beside\n"
        "with Beside(processes=2) as beside:\n"
        "    beside.check(note, Path(sys.argv[1]))\n    time.sleep(60)\n"
    )
    path = tmp_path / "pid"
    first = subprocess.Popen([sys.executable, "-c", code, str(path)], cwd=Path(__file__).parents[2])
    while not (path.exists() and path.read_text()):
        assert first.poll() is None
        time.sleep(0.02)
    first.kill()
    first.wait()
    second, ends = int(path.read_text().split()[0]), time.monotonic() + 20.0
    while _alive(second):
        assert time.monotonic() < ends, "the second process outlives the first"
        time.sleep(0.05)


def _alive(pid: int) -> bool:
    try:
        return Path(f"/proc/{pid}/stat").read_text().rsplit(")", 1)[1].split()[0] != "Z"
    except FileNotFoundError:
        return False


def test_the_environment_can_ask_for_fewer_cores(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("OMP_NUM_THREADS", "1")
    assert cores() == 1
    monkeypatch.setenv("OMP_NUM_THREADS", "many")
    assert cores() == len(os.sched_getaffinity(0))
