"""Rectangles in bins: never over each other, never over the edge, none lost, none that would have fitted left out."""

from __future__ import annotations

import itertools

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.batch.rectangles import Laid, bins_of, most_equal

sizes = st.floats(1.0, 300.0)
pairs = st.tuples(sizes, sizes)
gaps = st.floats(0.0, 20.0)


def boxes(
    laid: tuple[Laid, ...], size_of: dict[int, tuple[float, float]]
) -> list[tuple[float, float, float, float]]:
    out = []
    for p in laid:
        w, h = size_of[p.number]
        if p.turned:
            w, h = h, w
        out.append((p.x_mm, p.y_mm, p.x_mm + w, p.y_mm + h))
    return out


def check(found: list[tuple[float, float, float, float]], room: tuple[float, float], gap: float) -> None:
    for x0, y0, x1, y1 in found:
        assert x0 >= 0.0 and y0 >= 0.0
        assert x1 <= room[0] + 1e-6 and y1 <= room[1] + 1e-6
    for a, b in itertools.combinations(found, 2):
        apart = max(b[0] - a[2], a[0] - b[2], b[1] - a[3], a[1] - b[3])
        assert apart >= gap - 1e-6


@given(pairs, pairs, gaps, st.booleans(), st.sampled_from([("none",), ("all",), ("none", "all", "any")]))
def test_equal_ones(
    size: tuple[float, float], room: tuple[float, float], gap: float, sheared: bool, turns: tuple[str, ...]
) -> None:
    if (room[0] + gap) * (room[1] + gap) / ((size[0] + gap) * (size[1] + gap)) > 400:
        return  # seconds of the same
    found = most_equal(size, room, gap, turns=turns, sheared=sheared)
    check(boxes(found, dict.fromkeys(range(1000), size)), room, gap)
    if "any" not in turns:
        assert {p.turned for p in found} <= {turns == ("all",)}
    # plain rows and columns are a layout: nothing below that will do
    ways = [size] if turns == ("none",) else [size[::-1]] if turns == ("all",) else [size, size[::-1]]
    rows = max(
        int((room[0] + gap - 0.01) // (w + gap + 0.001)) * int((room[1] + gap - 0.01) // (h + gap + 0.001))
        for w, h in ways
    )
    assert len(found) >= rows


@given(st.lists(st.tuples(st.floats(1.0, 100.0), st.floats(1.0, 60.0)), max_size=25), gaps)
def test_mixed_ones(wanted: list[tuple[float, float]], gap: float) -> None:
    room = (100.0, 100.0)
    bins = bins_of(wanted, room, gap)
    assert sorted(p.number for one in bins for p in one) == list(range(len(wanted)))
    for one in bins:
        check(boxes(one, dict(enumerate(wanted))), room, gap)


def test_one_too_large_is_named() -> None:
    with pytest.raises(ValueError, match=r"120 x 101 mm: fits no bin of 100 x 100 mm"):
        bins_of([(10.0, 10.0), (120.0, 101.0)], (100.0, 100.0), 2.0)
    assert most_equal((101.0, 10.0), (100.0, 100.0), 2.0, turns=("none",)) == ()


def test_one_that_fits_to_the_last_hair() -> None:
    assert len(most_equal((100.0, 50.0), (100.0, 100.0), 0.0, turns=("none",))) == 2
    assert len(most_equal((49.0, 49.0), (100.0, 100.0), 2.0, turns=("none",))) == 4
