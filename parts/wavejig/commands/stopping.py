"""Being told to stop ends a build as ctrl-C does: what was begun is cleared away, and the message says why."""

from __future__ import annotations

import contextlib
import signal
import threading
from collections.abc import Iterator
from types import FrameType

# A closed terminal, a shutdown or `kill`. Not every system has both.
_STOPS = [getattr(signal, name) for name in ("SIGTERM", "SIGHUP") if hasattr(signal, name)]
_WORDS = {"SIGTERM": "told to stop (SIGTERM)", "SIGHUP": "the terminal was closed (SIGHUP)"}


class Stopped(KeyboardInterrupt):
    """A signal asked us to stop; str() says which."""


def _stop(number: int, frame: FrameType | None) -> None:
    raise Stopped(_WORDS[signal.Signals(number).name])


@contextlib.contextmanager
def stoppable() -> Iterator[None]:
    """Those signals raise Stopped within the block. One that was set to be ignored (`nohup`) stays so."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = {number: signal.getsignal(number) for number in _STOPS}
    for number, handler in before.items():
        if handler is signal.SIG_DFL:
            signal.signal(number, _stop)
    try:
        yield
    finally:
        for number, handler in before.items():
            if handler is signal.SIG_DFL:
                signal.signal(number, handler)
