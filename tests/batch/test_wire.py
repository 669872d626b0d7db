"""The cut plan: every piece, no length cut beyond itself, and how near it is to the best there can be."""

from __future__ import annotations

import itertools
import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from tests.designs import design
from wavejig.batch.wire import StockTooShortError, cut_patterns, fewest_lengths, wire_plans
from wavejig.radiator.plan import plan as plan_radiator

wanted_lists = st.lists(st.tuples(st.floats(5.0, 400.0), st.integers(1, 60)), min_size=1, max_size=4)


@given(wanted_lists, st.floats(400.0, 5000.0), st.floats(0.0, 5.0))
def test_every_piece_comes_out_of_a_length(pieces: list[tuple[float, int]], room: float, loss: float) -> None:
    wanted = [(f"p{i}", length, count) for i, (length, count) in enumerate(pieces)]
    if max(length for _, length, _ in wanted) + loss > room:
        with pytest.raises(StockTooShortError, match=r"a length gives"):
            cut_patterns(wanted, room, loss)
        return
    patterns = cut_patterns(wanted, room, loss)
    for role, _, count in wanted:
        assert sum(p.times * dict(p.pieces).get(role, 0) for p in patterns) == count
    lengths = {role: length for role, length, _ in wanted}
    for p in patterns:
        used = sum(n * (lengths[role] + loss) for role, n in p.pieces)
        assert used <= room + 1e-3
        assert used + p.rest_mm == pytest.approx(room, abs=1e-3)
    bought = sum(p.times for p in patterns)
    fewest = fewest_lengths([(length + loss, count) for _, length, count in wanted], room)
    assert fewest <= bought <= 11 / 9 * _at_most(wanted, room, loss) + 6 / 9


def _at_most(wanted: list[tuple[str, float, int]], room: float, loss: float) -> int:
    """Lengths of a plain plan, one kind to a length: what the best cannot exceed."""
    return sum(math.ceil(count / ((room + 1e-6) // (length + loss))) for _, length, count in wanted)


@given(st.lists(st.integers(1, 10), min_size=1, max_size=7), st.integers(10, 15))
def test_the_bound_is_one(sizes: list[int], room: int) -> None:
    """By trying every way to share small batches out."""
    bound = fewest_lengths([(float(s), 1) for s in sizes], float(room))
    assert bound <= _best(tuple(sorted(sizes, reverse=True)), room)


def _best(sizes: tuple[int, ...], room: int) -> int:
    for bins in range(1, len(sizes) + 1):
        if _fits(sizes, [room] * bins):
            return bins
    raise AssertionError


def _fits(sizes: tuple[int, ...], rests: list[int]) -> bool:
    if not sizes:
        return True
    for rest in set(rests):
        if rest >= sizes[0]:
            left = list(rests)
            left[left.index(rest)] -= sizes[0]
            if _fits(sizes[1:], left):
                return True
    return False


def test_the_second_bound_sees_pieces_that_cannot_share() -> None:
    """Five of 0.6 fill three lengths, but no two of them share one."""
    assert fewest_lengths([(0.6, 5)], 1.0) == 5


@pytest.mark.parametrize("quantity", [1, 7, 200])
@pytest.mark.parametrize(
    ("length", "loss", "waste"), [("600 mm", "0 mm", "50 mm"), ("5 m", "1.2 mm", "80 mm")]
)
def test_a_design_s_plan(quantity: int, length: str, loss: str, waste: str) -> None:
    made = design(quantity=quantity, wire_stock={"length": length, "cut_loss": loss, "end_waste": waste})
    radiator = plan_radiator(made)
    (plan,) = wire_plans(made, radiator)
    assert plan.kind == "wire"
    assert plan.used_mm == pytest.approx(quantity * sum(p.cut_length_mm for p in radiator.pieces))
    lengths = {role: each for role, each, _ in plan.pieces}
    for p in plan.patterns:
        cut = sum(n * (lengths[role] + plan.cut_loss_mm) for role, n in p.pieces)
        assert cut + plan.end_waste_mm <= (plan.stock_mm or 0.0) + 1e-6
    assert plan.fewest <= plan.lengths
    assert 0.0 < plan.waste < 1.0


def test_legs_of_other_wire_and_tube_have_stock_of_their_own() -> None:
    other = design(feed={"leg": "1.2 mm"}, quantity=3)
    assert [p.kind for p in wire_plans(other, plan_radiator(other))] == ["wire", "leg-wire"]
    tube = design(feed={"style": "tube"}, quantity=3, wire_stock={"tube_length": "1 m"})
    plans = {p.kind: p for p in wire_plans(tube, plan_radiator(tube))}
    assert set(plans) == {"wire", "tube"}
    assert plans["tube"].material == "tube-3.6" and plans["tube"].stock_mm == 1000.0
    # nothing said of the wire: one length, to the centimetre, end waste counted
    wire = plans["wire"]
    assert wire.lengths == 1 and wire.needed_mm % 10.0 == 0.0
    assert 0.0 <= wire.needed_mm - wire.used_mm - wire.end_waste_mm < 10.0


def test_plans_are_the_same_in_any_order() -> None:
    wanted = [("a", 120.0, 9), ("b", 45.5, 20), ("c", 300.0, 4)]
    plans = {
        sum(p.times for p in cut_patterns(order, 1000.0, 1.0)) for order in itertools.permutations(wanted)
    }
    assert len(plans) == 1
