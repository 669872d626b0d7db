"""Wire sizes: properties and refusals. Published figures are in tests/published."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.stock.errors import StockError
from wavejig.stock.wire import area_diameter_mm, awg_diameter_mm, metric_diameters_mm, swg_diameter_mm


def test_higher_gauges_are_thinner() -> None:
    awg = [awg_diameter_mm(gauge) for gauge in range(-3, 41)]
    swg = [swg_diameter_mm(number) for number in range(1, 31)]
    assert awg == sorted(awg, reverse=True)
    assert swg == sorted(swg, reverse=True)
    assert list(metric_diameters_mm()) == sorted(metric_diameters_mm())


@given(st.floats(1e-3, 1e3))
def test_area_and_diameter_are_one_circle(area_mm2: float) -> None:
    assert math.pi * area_diameter_mm(area_mm2) ** 2 / 4 == pytest.approx(area_mm2, rel=1e-12)


@pytest.mark.parametrize(("gauge", "nearest"), [(-4, "-3"), (41, "40"), (1000, "40")])
def test_awg_off_the_scale(gauge: int, nearest: str) -> None:
    with pytest.raises(StockError) as caught:
        awg_diameter_mm(gauge)
    assert f"got {gauge}, need one of -3 to 40. Nearest: {nearest}." in str(caught.value)


@pytest.mark.parametrize(("number", "nearest"), [(0, "1"), (31, "30")])
def test_swg_off_the_scale(number: int, nearest: str) -> None:
    with pytest.raises(StockError, match=f"got {number}, need one of 1 to 30. Nearest: {nearest}."):
        swg_diameter_mm(number)


@pytest.mark.parametrize("area_mm2", [0.0, -1.5, math.inf, math.nan])
def test_no_wire_has_such_an_area(area_mm2: float) -> None:
    with pytest.raises(StockError, match=r"need a positive one; usual are 0.5, 0.75, 1, 1.5"):
        area_diameter_mm(area_mm2)
