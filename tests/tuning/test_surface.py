"""The response surface: interpolation, design of solves, fit, and its promise on what it has not seen."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.tuning import resonator
from tests.tuning.articles import near
from wavejig.tuning.explore import MOST_SOLVES
from wavejig.tuning.points import designed_points, random_articles
from wavejig.tuning.surface import (
    best_curve,
    chebyshev_nodes,
    interpolate,
    reflection,
    terms,
    worst_return_loss_db,
)


@given(st.lists(st.complex_numbers(max_magnitude=10.0, allow_nan=False), min_size=5, max_size=5))
def test_a_polynomial_of_that_degree_is_met_exactly(coefficients: list[complex]) -> None:
    nodes = chebyshev_nodes(2.0, 3.0, 5)
    at = np.concatenate([np.linspace(2.0, 3.0, 23), nodes])
    exact = np.polyval(coefficients, at)
    got = interpolate(nodes, np.polyval(coefficients, nodes)[None, :], at[None, :])[0]
    assert np.abs(got - exact).max() <= 1e-9 * (1.0 + np.abs(exact).max())


@pytest.mark.parametrize("dimensions", [3, 8, 11, 13])
def test_designed_points_are_balanced_inside_and_always_the_same(dimensions: int) -> None:
    points = designed_points(dimensions, 60, 16)
    assert points.shape == (60, dimensions)
    assert np.abs(points).max() <= 1.0
    assert not points[0].any()
    corners = points[1:17]
    assert np.allclose(corners.sum(axis=0), 0.0)  # each dimension as often high as low
    assert np.allclose(corners.T @ corners, 16 * 0.49 * np.eye(dimensions))  # and none goes with another
    assert np.array_equal(points, designed_points(dimensions, 60, 16))


def test_terms_count() -> None:
    assert terms(np.zeros((2, 11))).shape == (2, 1 + 11 + 66)


def test_a_series_resonance_is_described_as_an_impedance() -> None:
    f = chebyshev_nodes(2.0e9, 3.0e9, 15)
    z = 50.0 + 400j * (f / 2.45e9 - 2.45e9 / f)
    assert best_curve(f, 1.0 / z, chebyshev_nodes(2.05e9, 2.95e9, 5), 50.0).form == "impedance"
    assert best_curve(f, z / 2500.0, chebyshev_nodes(2.05e9, 2.95e9, 5), 50.0).form == "admittance"


def test_unseen_articles_of_the_circuit() -> None:
    found, known, bench = resonator.explored()
    assert bench.solves == found.solves <= MOST_SOLVES
    values = random_articles(known.dimensions, np.random.default_rng(8).random((200, len(known.names))))
    truth = np.array(
        [
            resonator.admittance(found.article, dict(zip(known.names, row, strict=True)), found.band_hz)
            for row in values
        ]
    )
    miss = worst_return_loss_db(found.surface.reflection(values, found.band_hz)) - worst_return_loss_db(
        reflection(truth, 50.0)
    )
    rms = float(np.sqrt(np.mean(miss**2)))
    assert rms < 0.05
    assert found.error_db / 3.0 < rms < 3.0 * found.error_db  # what it says of itself is about right


def test_the_models_frequency_factor_moves_the_curve() -> None:
    found, _, _ = resonator.explored()
    centre = found.surface.axes.centre[None, :]
    f = found.band_hz
    moved = found.surface.admittance_s(centre, f, np.array([1.01]))
    assert np.allclose(moved, found.surface.admittance_s(centre, f / 1.01))


def test_points_that_cannot_be_drawn_are_pulled_in_and_no_others() -> None:
    """A saltmarsh article with a low standoff breaks the rule of the lap's height, which is no law of nature."""
    from wavejig.tuning.explore import _axes, _drawable, can_be_drawn
    from wavejig.tuning.spread import spread

    recipe, article = near("saltmarsh-2g4")
    axes = _axes(article, spread(recipe, article), wide=True, least_margin=0.0)
    points = axes.centre + axes.half * designed_points(len(axes.names), 40, 16)
    points[:, axes.names.index("lip_angle")] = 89.5
    points[1, axes.names.index("standoff")] = 12.0
    drawn = _drawable(article, axes, points)
    for before, after in zip(points, drawn, strict=True):
        values = dict(zip(axes.names, map(float, after), strict=True))
        assert can_be_drawn(article, values)
        if can_be_drawn(article, dict(zip(axes.names, map(float, before), strict=True))):
            assert np.array_equal(before, after)
    assert not np.array_equal(points[1], drawn[1])
