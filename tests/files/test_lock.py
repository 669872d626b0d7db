"""One build of a pack at a time, whoever dies."""

from __future__ import annotations

import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from wavejig.files import lock as module
from wavejig.files.lock import LockedError, locked

HOLD = """
import sys, time
from pathlib import Path
from wavejig.files import lock as module
from wavejig.files.lock import locked
with locked(Path(sys.argv[1]), sys.argv[2]):
    print("held", flush=True)
    time.sleep(60)
"""
# Adds one to a number in a file, over and over: two at once would lose some.
COUNT = """
import sys
from pathlib import Path
from wavejig.files import lock as module
from wavejig.files.lock import locked
number = Path(sys.argv[1])
for _ in range(40):
    with locked(number.parent / "out", "spare"):
        number.write_text(str(int(number.read_text()) + 1))
"""


def holder(out: Path, name: str) -> subprocess.Popen[str]:
    process = subprocess.Popen(
        [sys.executable, "-c", HOLD, str(out), name], stdout=subprocess.PIPE, text=True
    )
    assert process.stdout is not None
    with process.stdout as said:
        assert said.readline() == "held\n"
    return process


def test_it_leaves_nothing_behind(tmp_path: Path) -> None:
    out = tmp_path / "deep" / "out"
    with locked(out, "spare") as waited:
        assert not waited
        assert [p.name for p in out.iterdir()] == [".spare.lock"]
    assert list(tmp_path.iterdir()) == []  # nor folders that nothing was put into
    with locked(out, "spare"):
        (out / "spare").mkdir()
    assert [p.name for p in out.iterdir()] == ["spare"]


def test_another_process_is_refused_and_told_whose_it_is(tmp_path: Path) -> None:
    process = holder(tmp_path, "spare")
    try:
        with pytest.raises(LockedError, match=f"process {process.pid} on .* is building this pack"), locked(
            tmp_path, "spare", wait=False
        ):  # fmt: skip
            pass
        with locked(tmp_path, "other", wait=False):  # another pack in the same folder is nobody's business
            pass
    finally:
        process.kill()
        process.wait()


@pytest.mark.parametrize("way", [signal.SIGKILL, signal.SIGTERM, signal.SIGINT])
def test_a_dead_owner_holds_nothing(way: signal.Signals, tmp_path: Path) -> None:
    process = holder(tmp_path, "spare")
    process.send_signal(way)
    process.wait()
    with locked(tmp_path, "spare", wait=False) as waited:
        assert not waited
    assert list(tmp_path.iterdir()) == []


def test_it_is_waited_for(tmp_path: Path) -> None:
    process = holder(tmp_path, "spare")
    told: list[str] = []

    def heard(text: str) -> None:
        told.append(text)
        process.kill()
        process.wait()

    began = time.monotonic()
    with locked(tmp_path, "spare", told=heard) as waited:
        assert waited
    assert time.monotonic() - began < 30.0
    assert len(told) == 1 and str(process.pid) in told[0] and "--no-wait" in told[0]


def test_never_two_at_once_though_the_file_goes_away_each_time(tmp_path: Path) -> None:
    number = tmp_path / "number"
    number.write_text("0")
    command = [sys.executable, "-c", COUNT, str(number)]
    processes = [subprocess.Popen(command) for _ in range(3)]
    assert [p.wait(timeout=120) for p in processes] == [0, 0, 0]
    assert number.read_text() == "120"
    # whoever made the folder takes it away again while it is empty; nobody's file is left
    assert [p.name for p in tmp_path.iterdir()] in (["number"], ["number", "out"], ["out", "number"])
    assert list((tmp_path / "out").glob("*")) == []


def test_a_file_that_was_taken_away_before_it_was_locked_is_no_lock(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Its last holder took it away, and the next made another, between our opening it and our locking it."""
    real, path = module._lock, tmp_path / ".spare.lock"
    seen: list[int] = []

    def late(handle: int) -> bool:
        if not seen:
            path.unlink()
            path.touch()
        seen.append(handle)
        return real(handle)

    monkeypatch.setattr(module, "_lock", late)
    with locked(tmp_path, "spare"):
        assert len(seen) == 2
        assert path.read_text().startswith("process ")
