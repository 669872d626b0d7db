"""Work in equal shares on as many threads as numba is set to use. The shares never change a result."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor

LEAST = 64  # items below which a second thread costs more than it saves


def count() -> int:
    """Threads in use: numba.set_num_threads, or NUMBA_NUM_THREADS in the environment."""
    import numba

    return int(numba.get_num_threads())


def in_shares(work: Callable[[int, int], None], items: int) -> None:
    """Call work(first, last) for shares of range(items), side by side; work must release the interpreter."""
    shares = min(count(), max(1, items // LEAST))
    if shares <= 1:
        if items:
            work(0, items)
        return
    cuts = [items * i // shares for i in range(shares + 1)]
    with ThreadPoolExecutor(shares) as pool:
        list(pool.map(work, cuts[:-1], cuts[1:]))
