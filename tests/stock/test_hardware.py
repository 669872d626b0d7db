"""Screws, dowels, fits: consistent rows and refusals."""

from __future__ import annotations

import math
from typing import Any

import pytest

from wavejig.stock.errors import StockError
from wavejig.stock.hardware import (
    Screw,
    clearance_hole_mm,
    dowel_diameters_mm,
    fit_limits_mm,
    screw,
    screws,
    tap_drill_mm,
)


@pytest.mark.parametrize("item", screws(), ids=lambda item: item.name)
def test_screw_could_be_made(item: Screw) -> None:
    assert item.name == f"M{item.diameter_mm:g}"
    assert tap_drill_mm(item.name) < item.diameter_mm < item.clearance_fine_mm
    assert item.clearance_fine_mm < item.clearance_medium_mm < item.clearance_coarse_mm
    # a head and a washer must not fall through the coarse hole
    assert item.clearance_coarse_mm < min(item.cap_head_mm, item.pan_head_mm, item.nut_across_flats_mm)
    assert item.cap_head_mm < item.washer_mm


def test_dowels_rise() -> None:
    assert list(dowel_diameters_mm()) == sorted(set(dowel_diameters_mm()))


@pytest.mark.parametrize("diameter_mm", [0.0, -1.0, 30.01, math.nan])
def test_fit_off_the_table(diameter_mm: float) -> None:
    with pytest.raises(StockError, match=r"need above 0 and up to 30 mm"):
        fit_limits_mm(diameter_mm, "m6")


def test_refusals() -> None:
    wrong: Any = "tight"
    with pytest.raises(StockError, match=r'screw: got "m3", need one of M2, M2.5, M3.*Nearest: "M3"'):
        screw("m3")
    with pytest.raises(StockError, match=r'got "tight", need one of fine, medium, coarse'):
        clearance_hole_mm("M3", wrong)
    with pytest.raises(StockError, match=r'got "tight", need one of H7, h6, m6'):
        fit_limits_mm(3.0, wrong)
