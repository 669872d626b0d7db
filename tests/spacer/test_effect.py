"""The bound on what posts do to the antenna: closed forms and limits."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.design import Design
from wavejig.radiator.model import Radiator
from wavejig.spacer.effect import filled_share, post_effect
from wavejig.spacer.plan import plan

Antenna = tuple[Design, Radiator]


@given(post=st.floats(1.0, 30.0), wave=st.floats(40.0, 800.0), turns=st.integers(1, 3))
def test_the_share_is_the_integral_of_the_standing_wave(post: float, wave: float, turns: int) -> None:
    k = 2.0 * math.pi / wave
    s = np.linspace(-post / 2.0, post / 2.0, 4001)
    whole = turns * wave / 2.0  # sin^2 over whole wavelengths
    assert filled_share(post, wave, turns * wave) == pytest.approx(
        float(np.trapezoid(np.sin(k * s) ** 2, s)) / whole, rel=1e-5, abs=1e-12
    )
    both = filled_share(post, wave, turns * wave) + filled_share(post, wave, turns * wave, from_maximum=True)
    assert both == pytest.approx(post / whole)


def test_a_short_post_at_the_node_counts_with_the_cube_of_its_width() -> None:
    """k^2 a^3/12 over half the wire, the first term of the series."""
    k = 2.0 * math.pi / 123.0
    assert filled_share(2.0, 123.0, 246.0) == pytest.approx(k**2 * 2.0**3 / 12.0 / 123.0, rel=1e-3)


@pytest.mark.parametrize("name", ["posts", "round posts"])
def test_posts_where_the_current_is_do_little(name: str, named: Callable[[str], Antenna]) -> None:
    design, radiator = named(name)
    found = post_effect(design, radiator, plan(design, radiator).posts)
    assert found is not None
    assert 0.0 < found.shift < 0.01 and 0.0 < found.loss < 0.01
    assert found.shift_at_side_corner > 10.0 * found.shift
    low, high = found.permittivity
    assert 1.0 < low <= high and found.loss_tangent > 0.0 and found.source
    assert found.shift_hz == pytest.approx(
        found.shift * 2.44175e9 if name == "posts" else found.shift * 915e6
    )


@pytest.mark.parametrize("name", ["posts", "round posts"])
def test_posts_stand_at_the_corner_opposite_the_feed_only(name: str, named: Callable[[str], Antenna]) -> None:
    """As far along the lobe as it goes, on the axis through the feed; side corners lie off it."""
    design, radiator = named(name)
    far = max(abs(p[0]) for p in radiator.main.path.sample(chord_error_mm=0.01))
    for post in plan(design, radiator).posts:
        assert abs(post.hole.y_mm) < 0.01
        assert far - 3.0 < abs(post.hole.x_mm) < far + 3.0


def test_a_block_that_comes_out_has_no_effect(named: Callable[[str], Antenna]) -> None:
    design, radiator = named("biquad")
    assert post_effect(design, radiator, plan(design, radiator).posts) is None
