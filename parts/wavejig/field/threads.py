"""Work in equal shares on as many threads as numba is set to use. The shares never change a result."""

from __future__ import annotations

from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from itertools import pairwise

LEAST = 8  # items below which a second thread costs more than it saves


def count() -> int:
    """Threads in use: numba.set_num_threads, or NUMBA_NUM_THREADS in the environment."""
    import numba

    return int(numba.get_num_threads())


def in_shares(work: Callable[[int, int], None], items: int) -> None:
    """Call work(first, last) for equal shares of range(items), side by side."""
    shares = min(count(), max(1, items // LEAST))
    side_by_side(work, [items * i // shares for i in range(shares + 1)])


def side_by_side(work: Callable[[int, int], None], cuts: list[int]) -> None:
    """Call work(cut, next cut) for each share; work must release the interpreter to gain from it."""
    shares = [(first, last) for first, last in pairwise(cuts) if last > first]
    if len(shares) == 1:
        work(*shares[0])
    elif shares:
        with ThreadPoolExecutor(len(shares)) as pool:
            list(pool.map(lambda share: work(*share), shares))
