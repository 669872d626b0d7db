"""First articles out by more than any tolerance: what is assumed of them, and that they are found."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import norm

from tests.tuning import resonator
from tests.tuning.test_found import swept
from wavejig.tuning.fitting import OFFSET
from wavejig.tuning.found import Deviation, find
from wavejig.tuning.slips import Mixture, before, cases, chance_of_one


@pytest.fixture(scope="module")
def circuit() -> resonator.Explored:
    return resonator.explored(wide=True)[0]


def test_the_cases_are_every_combination_and_certain_together() -> None:
    found = cases([0, 1, 4])
    assert len(found) == 8
    assert found[0].slipped == ()
    assert found[-1].slipped == (0, 1, 4)
    assert sum(c.chance for c in found) == pytest.approx(1.0)
    assert sum(c.chance for c in found if 1 in c.slipped) == pytest.approx(chance_of_one(3))
    assert [c.chance for c in cases([])] == [1.0]


def test_the_interval_of_a_mixture_leaves_a_fortieth_on_either_side() -> None:
    weights, means, sigmas = np.array([0.7, 0.3]), np.array([[0.0], [3.0]]), np.array([[1.0], [0.2]])
    low, high = Mixture(weights=weights, means=means, sigmas=sigmas).interval()

    def below(x: float) -> float:
        return float(0.7 * norm.cdf(x) + 0.3 * norm.cdf((x - 3.0) / 0.2))

    assert below(low[0]) == pytest.approx(0.025)
    assert below(high[0]) == pytest.approx(0.975)
    assert before(1.0, 1.0, 0.1) == pytest.approx(1.959964, abs=1e-5)
    assert before(1.0, 5.0, 0.1) > 3.0


def test_a_mixture_s_covariance_is_that_of_its_draws() -> None:
    rng = np.random.default_rng(3)
    covariances = np.array([[[1.0, 0.5], [0.5, 2.0]], [[0.3, -0.1], [-0.1, 0.2]]])
    means = np.array([[0.0, 1.0], [2.0, -1.0]])
    weights = np.array([0.6, 0.4])
    mixture = Mixture(
        weights=weights, means=means, sigmas=np.sqrt(np.array([np.diag(c) for c in covariances]))
    )
    drawn = np.concatenate(
        [rng.multivariate_normal(means[k], covariances[k], int(200_000 * weights[k])) for k in range(2)]
    )
    assert mixture.covariance(covariances) == pytest.approx(np.cov(drawn.T), abs=0.02)


@pytest.mark.parametrize(("key", "slip"), [("side", 0.44), ("standoff", 0.7), ("standoff", -0.65)])
def test_a_slip_of_several_tolerances_is_found(circuit: resonator.Explored, key: str, slip: float) -> None:
    fit = find(circuit, swept(circuit, {key: slip})).right
    d = fit.get(key)
    assert d.value == pytest.approx(slip, abs=0.15)
    assert d.interval[0] <= slip <= d.interval[1]
    assert d.told
    assert set(fit.slipped) <= {key}
    assert fit.misfit < 1.3


def test_a_slip_is_called_one(circuit: resonator.Explored) -> None:
    assert find(circuit, swept(circuit, {"standoff": -0.65})).right.slipped == ("standoff",)


def test_what_the_spread_explains_is_no_slip(circuit: resonator.Explored) -> None:
    fit = find(circuit, swept(circuit, {"side": 0.15, "standoff": -0.1})).right
    assert fit.slipped == ()
    assert fit.chance > 0.5


def test_a_reading_leaves_no_room_for_a_slip(circuit: resonator.Explored) -> None:
    drawn = circuit.article.values["standoff"]
    fit = find(circuit, swept(circuit, {"standoff": 0.7}), {"standoff": drawn + 0.7}, 0.05).right
    assert "standoff" not in fit.slipped
    d = fit.get("standoff")
    assert d.value == pytest.approx(0.7, abs=0.1)
    assert d.told  # by the calliper


def deviation(half: float, *, before_mm: float = 0.5, tolerance: float | None = 0.3) -> Deviation:
    return Deviation(
        key="standoff",
        unit="mm",
        value=0.0,
        interval=(-half, half),
        sigma=half / 2.0,
        prior_sigma=0.15,
        before=before_mm,
        tolerance=tolerance,
    )


def test_cannot_tell_is_an_answer_no_narrower_or_too_wide_to_judge_by() -> None:
    assert deviation(0.29).told
    assert not deviation(0.31).told  # wider than the tolerance: in order or not?
    assert not deviation(0.29, before_mm=0.4).told  # 0.4 was to be expected anyway
    assert deviation(1.0, before_mm=78.0, tolerance=None).told


def test_the_reference_plane_is_told_without_a_tolerance(circuit: resonator.Explored) -> None:
    d = find(circuit, swept(circuit, {})).right.get(OFFSET)
    assert d.tolerance is None
    assert d.told
