"""Panel connectors and tubes: each row could be a real part; refusals."""

from __future__ import annotations

import math

import pytest

from wavejig.stock.connectors import Connector, Tube, connector, connectors, tube, tubes
from wavejig.stock.errors import StockError


@pytest.mark.parametrize("part", connectors(), ids=lambda part: part.name)
def test_connector_could_be_made(part: Connector) -> None:
    assert connector(part.name) is part
    assert "measure yours" in part.source
    assert 0 <= part.pin_bore_mm < part.pin_diameter_mm < part.dielectric_diameter_mm
    assert 0 < part.dielectric_length_mm < part.pin_length_mm
    assert part.dielectric_diameter_mm < part.front_cutout_mm
    if part.mounting == "flange":
        assert (part.nut_mm, part.washer_mm) == (0, 0)
        assert part.dielectric_diameter_mm < part.rear_cutout_mm < part.front_cutout_mm
        assert part.hole_pitch_mm + part.hole_diameter_mm < part.flange_mm
        # the holes stay clear of the cut-out: metal is left between them
        diagonal_mm = part.hole_pitch_mm * math.sqrt(2)
        assert (diagonal_mm - part.hole_diameter_mm - part.front_cutout_mm) / 2 > 0.5
    else:
        assert (part.flange_mm, part.hole_pitch_mm, part.hole_diameter_mm, part.rear_cutout_mm) == (
            0,
            0,
            0,
            0,
        )
        assert part.front_cutout_mm < part.nut_mm <= part.washer_mm
    assert part.flange_thickness_mm > 0


def test_the_series_are_there() -> None:
    assert {part.series for part in connectors()} == {"SMA", "N", "BNC", "TNC"}
    assert connector("sma-4hole-post").pin_bore_mm == 0
    assert connector("n-4hole").pin_bore_mm >= 2.0


@pytest.mark.parametrize("part", tubes(), ids=lambda part: part.name)
def test_tube_could_be_made(part: Tube) -> None:
    assert tube(part.name) is part
    assert float(part.name.removeprefix("tube-")) == pytest.approx(part.outer_diameter_mm, abs=0.0501)
    assert 0 < part.inner_diameter_mm < part.dielectric_diameter_mm < part.outer_diameter_mm
    assert part.min_bend_radius_mm > part.outer_diameter_mm


def test_refusals() -> None:
    with pytest.raises(StockError, match=r'connector: got "sma-4-hole-post".*Nearest: "sma-4hole-post"'):
        connector("sma-4-hole-post")
    with pytest.raises(StockError, match=r'semi-rigid tube: got "tube-2.1", need one of tube-1.2, tube-2.2'):
        tube("tube-2.1")
