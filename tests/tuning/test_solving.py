"""Solves side by side: the same numbers whatever the workers; a cluster; faults told."""

from __future__ import annotations

import builtins
from typing import Any

import numpy as np
import pytest

from tests.tuning.articles import near
from wavejig.tuning.solving import ClusterError, Job, admittance, solve_all, workers


def jobs(count: int) -> list[Job]:
    _, article = near("boatshed-5g8")
    f = (5.7e9, 5.8e9)
    return [
        Job(nominal=article, values={"side": 11.4 + 0.05 * i, "standoff": 6.4}, frequencies_hz=f)
        for i in range(count)
    ]


def test_one_worker_or_two_the_same_to_the_last_bit_and_in_order() -> None:
    asked = jobs(4)
    told: list[tuple[int, int]] = []
    with workers(count=1) as executor:
        one = solve_all(executor, asked, lambda done, of: told.append((done, of)))
    with workers(count=2) as executor:
        two = solve_all(executor, asked[::-1])[::-1]
    assert all(np.array_equal(a, b) for a, b in zip(one, two, strict=True))
    assert told == [(1, 4), (2, 4), (3, 4), (4, 4)]
    here = admittance(asked[2])
    assert np.allclose(here, one[2], rtol=1e-9)


def test_a_fault_in_one_job_is_the_answers_fault() -> None:
    from wavejig.tuning.asbuilt import ArticleError

    _, article = near("boatshed-5g8")
    bad = Job(nominal=article, values={"feed_gap": 80.0}, frequencies_hz=(5.8e9,))
    with workers(count=1) as executor, pytest.raises(ArticleError, match="feed gap"):
        solve_all(executor, [bad])


def test_without_the_cluster_library_it_says_what_to_install(monkeypatch: pytest.MonkeyPatch) -> None:
    real = builtins.__import__

    def without(name: str, *args: Any, **kwargs: Any) -> Any:
        if name == "distributed":
            raise ImportError(name)
        return real(name, *args, **kwargs)

    monkeypatch.setattr(builtins, "__import__", without)
    with pytest.raises(ClusterError, match=r"pip install 'wavejig\[cluster\]'"), workers("tcp://127.0.0.1:1"):
        pass


@pytest.mark.filterwarnings("ignore")  # the cluster's own: ports, event loops, closing
def test_a_local_cluster_gives_the_same_numbers() -> None:
    distributed = pytest.importorskip("distributed")
    asked = jobs(3)
    with workers(count=1) as executor:
        expected = solve_all(executor, asked)
    with (
        distributed.LocalCluster(
            n_workers=1, threads_per_worker=1, processes=True, dashboard_address=None
        ) as cluster,
        workers(cluster.scheduler_address) as executor,
    ):
        got = solve_all(executor, asked)
    assert all(np.array_equal(a, b) for a, b in zip(expected, got, strict=True))


@pytest.mark.slow
@pytest.mark.filterwarnings("ignore")
def test_nobody_at_the_address() -> None:
    pytest.importorskip("distributed")
    with pytest.raises(ClusterError, match="no cluster answers"), workers("tcp://127.0.0.1:9"):
        pass
