"""Many articles solved side by side, through any concurrent.futures executor.

A solve is one geometry at a handful of frequencies. Each worker computes with one thread, so that the
answer does not depend on how many workers there are; the processes start afresh ("spawn"), because a
forked copy of running threads is not safe. Nothing heavy is imported here before a worker has been told
its thread count.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Executor, ProcessPoolExecutor
from contextlib import contextmanager
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import numpy as np
    from numpy.typing import NDArray

    from wavejig.tuning.asbuilt import Nominal

_THREAD_LIMITS = ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "NUMBA_NUM_THREADS")
Told = Callable[[int, int], None]


class ClusterError(RuntimeError):
    """The cluster cannot be used; the message says what to do."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Job:
    """One solve: an article's dimensions and the frequencies to solve it at."""

    nominal: Nominal
    values: dict[str, float]
    frequencies_hz: tuple[float, ...]


def admittance(job: Job) -> NDArray[np.complex128]:
    """(F,) siemens at the port. Raises ArticleError for an article that cannot be drawn."""
    import warnings

    import numpy as np

    from wavejig.field import ModelWarning, solve

    model = job.nominal.model(job.values)
    with warnings.catch_warnings():
        # at the far edge of the frequencies a triangle may be a little long: `match` tells what matters
        warnings.simplefilter("ignore", ModelWarning)
        response = solve(model, np.array(job.frequencies_hz))
    return np.asarray(response.admittance_s[:, 0, 0])


def solve_all(
    executor: Executor, jobs: Sequence[Job], told: Told = lambda done, of: None
) -> list[NDArray[np.complex128]]:
    """Admittances of all jobs, in their order. told: called with how many are done of how many."""
    futures = [executor.submit(admittance, job) for job in jobs]
    out = []
    try:
        for done, future in enumerate(futures, start=1):
            out.append(future.result())
            told(done, len(futures))
    except BaseException:
        for future in futures:
            future.cancel()
        raise
    return out


@contextmanager
def workers(cluster: str | None = None, count: int | None = None) -> Iterator[Executor]:
    """An executor: processes on this machine (count: as many as there are cores), or a Dask cluster.

    Raises ClusterError when the cluster's library is absent or nobody answers at the address.
    """
    if cluster is not None:
        with _cluster(cluster) as executor:
            yield executor
        return
    import multiprocessing

    context = multiprocessing.get_context("spawn")
    kept = {name: os.environ.get(name) for name in _THREAD_LIMITS}
    os.environ.update(dict.fromkeys(_THREAD_LIMITS, "1"))  # read by the libraries as each worker loads them
    try:
        with ProcessPoolExecutor(count or _cores(), mp_context=context) as pool:
            # all workers are started with these settings before the first job returns
            yield pool
    finally:
        for name, value in kept.items():
            if value is None:
                os.environ.pop(name, None)
            else:
                os.environ[name] = value


def _cores() -> int:
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


@contextmanager
def _cluster(address: str) -> Iterator[Any]:
    try:
        from distributed import Client
    except ImportError as err:
        raise ClusterError(
            "solving on a cluster needs the optional extra: pip install 'wavejig[cluster]'"
        ) from err
    try:
        client = Client(address, timeout="10s", set_as_default=False)
    except (OSError, ValueError, TypeError) as err:
        raise ClusterError(f"no cluster answers at {address}: {err}") from err
    try:
        yield client.get_executor(pure=False)
    finally:
        client.close()
