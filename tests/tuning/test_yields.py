"""Virtual articles: pass fraction, batch, remedies; against brute force on the circuit itself."""

from __future__ import annotations

import json

import numpy as np
import pytest

from tests.tuning import resonator
from tests.tuning.articles import near
from wavejig.recipe.models import Measured, Tolerances
from wavejig.tuning.points import cut_normal, random_articles
from wavejig.tuning.surface import reflection, worst_return_loss_db
from wavejig.tuning.yielddata import yield_data
from wavejig.tuning.yields import FREQUENCY, _wilson, find_yield
from wavejig.tuning.yieldtext import yield_text


def brute_force(found: resonator.Explored, wanted_db: float, articles: int = 3000) -> float:
    """Pass fraction from the circuit, without a surface."""
    known = found.spread
    u = np.random.default_rng(77).random((articles, len(known.names) + 1))
    values = random_articles(known.dimensions, u[:, :-1])
    share = cut_normal(u[:, -1], known.frequency_sigma)
    worst = [
        float(
            worst_return_loss_db(
                reflection(
                    resonator.admittance(
                        found.article, dict(zip(known.names, row, strict=True)), found.band_hz / (1.0 + e)
                    )[None, :],
                    50.0,
                )
            )[0]
        )
        for row, e in zip(values, share, strict=True)
    ]
    return float(np.mean(np.array(worst) >= wanted_db))


@pytest.mark.parametrize("wanted_db", [10.0, 12.0, 14.0])
def test_pass_fraction_agrees_with_brute_force(wanted_db: float) -> None:
    found, _, _ = resonator.explored()
    got = find_yield(found, 12, wanted_db, articles=8000, share_points=256)
    assert got.passing.low <= got.passing.value <= got.passing.high
    assert got.passing.value == pytest.approx(brute_force(found, wanted_db), abs=0.03)
    assert got.expected == pytest.approx(12 * got.passing.value)
    assert 0 <= got.batch_low <= got.batch_high <= 12
    assert got.batch_low - 1 < got.expected < got.batch_high + 1


def test_the_models_error_outweighs_and_is_told_apart() -> None:
    found, _, _ = resonator.explored()
    got = find_yield(found, 12, 12.0, articles=8000, share_points=1024)
    assert got.shop.value > got.passing.value
    assert set(got.shares) == {*found.spread.names, FREQUENCY}
    assert FREQUENCY not in got.shop_shares
    assert got.shop_shares["side"].total > 0.5  # the only thing that moves the circuit's resonance
    assert got.shares["base_x"].total < 0.01  # nothing of the circuit hangs on it
    assert got.shares["base_x"].first < 0.02


def test_a_measured_correction_takes_the_models_error_away() -> None:
    recipe, _ = near("boatshed-5g8")
    told = Measured.model_validate({"frequency": 1.0, "frequency_error": 0.0})
    found, _, _ = resonator.explored(recipe=recipe.model_copy(update={"measured": told}))
    got = find_yield(found, 12, 12.0, articles=4000, share_points=256)
    assert got.passing == got.shop
    assert got.shares[FREQUENCY].total == 0.0


def test_the_remedy_brings_what_it_says() -> None:
    recipe, _ = near("boatshed-5g8")
    told = Measured.model_validate({"frequency": 1.0, "frequency_error": 0.0})
    changed = recipe.model_copy(update={"measured": told})
    found, _, _ = resonator.explored(recipe=changed)
    wanted = 13.0
    got = find_yield(found, 12, wanted, articles=6000, share_points=256)
    assert got.passing.value < 0.95
    side = next(r for r in got.remedies if r.key == "side")
    assert side.needed is not None and side.needed < side.now
    tighter = changed.model_copy(
        update={"tolerances": Tolerances.model_validate({"side": f"{side.needed:.4f} mm"})}
    )
    again, _, _ = resonator.explored(recipe=tighter)
    assert find_yield(again, 12, wanted, articles=6000, share_points=256).passing.value == pytest.approx(
        0.95, abs=0.01
    )


def test_what_misses_as_drawn_is_told_first() -> None:
    found, _, _ = resonator.explored()
    got = find_yield(found, 12, 35.0, articles=2000, share_points=256)
    assert not got.nominal_passes
    assert got.passing.value == 0.0
    assert all(r.needed is None for r in got.remedies)
    assert "tune it first" in yield_text(got)


def test_the_surfaces_error_widens_the_interval() -> None:
    from dataclasses import replace

    found, _, _ = resonator.explored()
    sharp = find_yield(found, 12, 13.0, articles=4000, share_points=256).passing
    blunt = find_yield(replace(found, error_db=0.5), 12, 13.0, articles=4000, share_points=256).passing
    assert blunt.high - blunt.low > 2.0 * (sharp.high - sharp.low)


@pytest.mark.parametrize(
    ("p", "n", "low", "high"),
    [(0.0, 10, 0.0, 0.2775), (0.5, 10, 0.2366, 0.7634), (0.9, 100, 0.8256, 0.9448)],
)
def test_wilson_interval(p: float, n: int, low: float, high: float) -> None:
    """Closed form evaluated by hand for (0, 10): z^2 / (n + z^2) = 0.2775; the others likewise."""
    assert _wilson(p, n) == pytest.approx((low, high), abs=1e-4)


def test_the_same_every_time_and_whole_as_data() -> None:
    found, _, _ = resonator.explored()
    one = json.dumps(yield_data(find_yield(found, 6, 10.0, articles=2000, share_points=256)))
    again, _, _ = resonator.explored()
    assert one == json.dumps(yield_data(find_yield(again, 6, 10.0, articles=2000, share_points=256)))
    data = json.loads(one)
    assert sum(data["histogram"]["counts"]) == 2000
    assert len(data["histogram"]["edges_db"]) == len(data["histogram"]["counts"]) + 1


def test_text_names_every_dimension_and_its_source() -> None:
    found, known, _ = resonator.explored()
    text = yield_text(find_yield(found, 6, 10.0, articles=2000, share_points=256))
    for d in known.dimensions:
        assert d.title in text
        assert d.source in text
    assert "nine batches of ten" in text
    assert f"{found.solves} solves" in text
