"""Several recipes side by side: a process each, so that one that fails or dies takes no other with it.

As many run at once as there are cores, and as fit in the memory that is free. Each begins afresh ("spawn"),
so a pack gets the same bytes as when it is built alone. Ctrl-C reaches the whole group of a terminal; the
workers leave it to this process, which tells each to stop and waits until it has cleared its things away.
"""

from __future__ import annotations

import contextlib
import multiprocessing
import os
import signal
import sys
import threading
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from multiprocessing.connection import Connection, wait
from multiprocessing.process import BaseProcess
from pathlib import Path

from wavejig.commands.buildone import Options, Outcome, build_one, failed
from wavejig.commands.stopping import Stopped, stoppable
from wavejig.commands.telling import announce
from wavejig.progress import Meter

WORKER_BYTES = 2 << 30  # a large build with its field solve, measured on the demo recipes, with room
_STOP_S = 20.0  # for clearing away; a call into the kernel or the solver is not interrupted before its end
_LIMITS = ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "NUMBA_NUM_THREADS")


@dataclass(slots=True)
class _Running:
    """A worker at its recipe."""

    path: Path
    process: BaseProcess
    link: Connection
    step: str = "starting"
    outcome: Outcome | None = field(default=None)


def build_many(
    recipes: Sequence[Path], known: Mapping[Path, Outcome | None], options: Options, jobs: int | None, *, quiet: bool
) -> Iterator[Outcome]:  # fmt: skip
    """Outcomes in the order of `recipes`; `known` are those that need no work."""
    outcomes = {path: outcome for path, outcome in known.items() if outcome is not None}
    todo = [path for path in recipes if path not in outcomes]
    running: list[_Running] = []
    most = min(len(todo), jobs or places())
    meter = Meter("", sys.stderr, quiet=quiet)
    told: set[str] = set()
    turn = iter(recipes)
    upcoming = next(turn, None)
    try:
        while todo or running or upcoming is not None:
            while upcoming is not None and upcoming in outcomes:
                meter.end()
                yield outcomes[upcoming]
                upcoming = next(turn, None)
            while todo and len(running) < most:
                running.append(_start(todo.pop(0), options, max(1, _cores() // most)))
            meter.title = f"{len(outcomes)} of {len(recipes)} done"
            meter.step(", ".join(f"{r.path.stem}: {r.step}" for r in running))
            wait([r.link for r in running], timeout=1.0)
            for one in list(running):
                for text in _hear(one):
                    if text not in told:  # each worker that has to compile the solver says so
                        told.add(text)
                        meter.end()
                        announce(text)
                if one.outcome is not None:
                    one.process.join()
                    running.remove(one)
                    outcomes[one.path] = one.outcome
    finally:
        meter.end()
        _end(running)


def places() -> int:
    """How many may run at once: one a core, and one for each 2 GiB that is free."""
    free = _free_bytes()
    return max(1, min(_cores(), _cores() if free is None else free // WORKER_BYTES))


def _cores() -> int:
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


def _free_bytes() -> int | None:
    """Memory that is free, as far as the system tells; within a control group, what is left of its share."""
    free = None
    with contextlib.suppress(OSError, ValueError, StopIteration):
        line = next(
            t for t in Path("/proc/meminfo").read_text().splitlines() if t.startswith("MemAvailable:")
        )
        free = int(line.split()[1]) * 1024
    with contextlib.suppress(OSError, ValueError):
        group = Path("/sys/fs/cgroup")
        left = int((group / "memory.max").read_text()) - int((group / "memory.current").read_text())
        free = left if free is None else min(free, left)
    return free


def _start(path: Path, options: Options, threads: int) -> _Running:
    """A worker of its own, told by its environment how many threads its libraries may use."""
    context = multiprocessing.get_context("spawn")
    here, there = context.Pipe(duplex=False)
    before = {name: os.environ.get(name) for name in _LIMITS}
    os.environ.update({name: str(threads) for name in _LIMITS if before[name] is None})
    try:
        process = context.Process(target=_work, args=(path, options, there), name=f"wavejig {path.stem}")
        process.start()
    finally:
        for name, value in before.items():
            if value is None:
                os.environ.pop(name, None)
    there.close()  # ours; the worker's own end says by closing that it has ended
    return _Running(path=path, process=process, link=here)


def _hear(one: _Running) -> list[str]:
    """Take what a worker has said: its step, its outcome; gives what is to be told at once."""
    said = []
    try:
        while one.outcome is None and one.link.poll():
            kind, what = one.link.recv()
            if kind == "step":
                one.step = what
            elif kind == "said":
                said.append(what)
            else:
                one.outcome = what
    except (EOFError, OSError):
        one.process.join()
        code = one.process.exitcode or 0
        how = f"signal {signal.Signals(-code).name}" if code < 0 else f"exit code {code}"
        one.outcome = failed(
            one.path,
            f"{one.path}: pack not written: its process ended with {how}; an earlier pack is as it was",
        )
    return said


def _end(running: list[_Running]) -> None:
    """Tell the workers that are left to stop, and wait for it."""
    for one in running:
        one.process.terminate()
    for one in running:
        one.process.join(_STOP_S)
        if one.process.exitcode is None:
            one.process.kill()  # its half-built folder is cleared by the next build
            one.process.join()


def _work(path: Path, options: Options, link: Connection) -> None:
    """In the worker."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    threading.Thread(target=_end_with_parent, daemon=True).start()

    def say(kind: str, what: object) -> None:
        with contextlib.suppress(OSError):  # nobody listens any more
            link.send((kind, what))

    try:
        with stoppable():
            outcome = build_one(path, options, lambda s: say("step", s), lambda s: say("said", s))
    except Stopped:
        sys.exit(3)
    say("done", outcome)


def _end_with_parent() -> None:
    """Stop when the process that started us has died: nobody is there to tell the outcome to."""
    parent = multiprocessing.parent_process()
    if parent is not None:
        wait([parent.sentinel])
        os.kill(os.getpid(), signal.SIGTERM)
