"""Files are read back by a second process, while this one makes the next.

Reading back takes as long as writing, and asks for nothing but the file and the figures it must have. The
second process is a copy of this one ("fork"), which has its kernel loaded already. It opens files to read and
nothing else, so the bytes of a pack do not depend on it; and it ends by itself when this process does.
Where there is no second core, no fork, or threads that a copy would lack, the checks run here, at once.
"""

from __future__ import annotations

import contextlib
import os
import pickle
import signal
import sys
import threading
import warnings
from collections.abc import Callable
from multiprocessing.connection import Connection, Pipe
from typing import Any, NoReturn

_Task = tuple[Callable[..., None], tuple[Any, ...], dict[str, Any]]


class CheckerLostError(RuntimeError):
    """The second process ended before its time, as it does when the kernel crashes on a file."""


class Beside:
    """Checks that are run beside this process. Use as a context: at its end the second process is gone."""

    def __init__(self, *, processes: int | None = None) -> None:
        self._link: Connection | None = None
        self._child = 0
        self._asked: list[_Task] = []
        if (cores() if processes is None else processes) > 1 and _may_fork():
            self._begin()

    def __enter__(self) -> Beside:
        return self

    def __exit__(self, *_: object) -> None:
        self.stop()

    def check(self, function: Callable[..., None], *arguments: Any, **named: Any) -> None:
        """Run a check that raises when it fails: here, or beside; then `settle` raises.

        The function stands at the top of its module, and its arguments are plain data.
        """
        if self._link is None:
            function(*arguments, **named)
            return
        self._asked.append((function, arguments, named))
        try:
            self._link.send(self._asked[-1])
        except OSError:
            self._lost(self._link)

    def settle(self) -> None:
        """Wait for what is being checked, and raise for the first check that failed. Nothing is asked after."""
        if self._link is None:
            return
        try:
            self._link.send(None)
        except OSError:
            self._lost(self._link)
        for task in self._asked:
            try:
                passed: bool = self._link.recv()
            except (OSError, EOFError):
                raise self._gone(task) from None
            if not passed:
                self.stop()
                function, arguments, named = task
                function(*arguments, **named)  # once more, here: the error comes with all it has to say
                raise CheckerLostError(f"{_about(task)}: failed its check once, and passed it then")
        self.stop()

    def stop(self) -> None:
        """End the second process, whatever it is at: it holds nothing."""
        if self._link is None:
            return
        self._link.close()
        self._link = None
        with contextlib.suppress(ProcessLookupError):
            os.kill(self._child, signal.SIGKILL)
        os.waitpid(self._child, 0)
        self._asked = []

    def _lost(self, link: Connection) -> NoReturn:
        """The second process takes no more: say at which check it ended."""
        passed = 0
        with contextlib.suppress(OSError, EOFError):
            while link.recv():
                passed += 1
        raise self._gone(self._asked[min(passed, len(self._asked) - 1)])

    def _gone(self, task: _Task) -> CheckerLostError:
        self.stop()
        return CheckerLostError(f"{_about(task)}: the process that reads files back died of it")

    def _begin(self) -> None:
        here, there = Pipe()
        sys.stdout.flush()
        sys.stderr.flush()
        with warnings.catch_warnings():
            # linear algebra keeps threads of its own, which mend themselves in a copy
            warnings.simplefilter("ignore", DeprecationWarning)
            child = os.fork()
        if child == 0:
            _serve(there)
        there.close()
        self._link, self._child = here, child


def cores() -> int:
    """Cores this process may use; fewer where OMP_NUM_THREADS says so, as side by side builds tell each other."""
    have = len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1
    with contextlib.suppress(ValueError):
        have = min(have, int(os.environ.get("OMP_NUM_THREADS", have)))
    return have


def _may_fork() -> bool:
    """Linux only: other systems' own libraries do not live through it. And no threads of ours, as a server has."""
    return sys.platform == "linux" and threading.active_count() == 1


def _about(task: _Task) -> str:
    return str(task[1][0]) if task[1] else task[0].__name__


def _serve(link: Connection) -> NoReturn:
    """The second process: run what is asked in order, and tell of each whether it passed; the first failure ends it."""
    code = 1
    try:
        for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
            signal.signal(number, signal.SIG_IGN)  # the first process sees to the end of both
        keep = link.fileno()  # all else, the pack's lock among it, belongs to the first process
        os.closerange(3, keep)
        os.closerange(keep + 1, os.sysconf("SC_OPEN_MAX"))
        while (task := link.recv()) is not None:
            function, arguments, named = task
            try:
                function(*arguments, **named)
            except Exception:
                link.send(False)
                break
            link.send(True)
        while link.poll(None):  # until the first process has read it all, and hangs up
            link.recv()
        code = 0
    except (EOFError, OSError, pickle.PickleError):
        pass
    finally:
        os._exit(code)
