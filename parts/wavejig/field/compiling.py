"""Says once that the solver is being compiled: numba does it at the first use on a machine, then keeps it."""

from __future__ import annotations

import logging
from collections.abc import Callable, Iterator
from contextlib import contextmanager

MESSAGE = "preparing the field solver for this machine (once, some 15 seconds)"
_log = logging.getLogger("wavejig.field")


@contextmanager
def announced(announce: Callable[[str], None] | None = None) -> Iterator[None]:
    """Within this context, the first compilation calls announce(MESSAGE); without one it is logged."""
    from numba.core import event

    tell = announce if announce is not None else _log.warning

    class Once(event.Listener):  # type: ignore[misc]
        told = False

        def on_start(self, event: object) -> None:
            if not self.told:
                self.told = True
                tell(MESSAGE)

        def on_end(self, event: object) -> None:
            pass

    with event.install_listener("numba:compile", Once()):
        yield
