"""Starting values at 2.4 GHz against what common practice quotes for two-lobe elements before a sheet.

"Common practice, no source": side about a quarter wavelength over the wire's outside (30 to 31.5 mm at 2.4 to
2.45 GHz), standoff about an eighth (15 to 16 mm), sheet about one wavelength square or more.
"""

from __future__ import annotations

import pytest

from tests.designs import design


@pytest.mark.parametrize("wire", ["1 mm", "1.5 mm", "1.8 mm", "2.5 mm2", "14 AWG", "2 mm"])
@pytest.mark.parametrize(
    "band", [["2.39 GHz", "2.41 GHz"], ["2.400 GHz", "2.4835 GHz"], ["2.44 GHz", "2.46 GHz"]]
)
def test_two_lobes_at_2g4_start_within_common_practice(wire: str, band: list[str]) -> None:
    d = design(wire=wire, band=band)
    assert d.radiator.side_mm is not None
    outside = d.radiator.side_mm + d.radiator.wire_diameter_mm
    assert 30.0 <= outside <= 31.5
    assert 15.0 <= d.radiator.standoff_mm <= 16.0
    assert min(d.reflector.base_x_mm, d.reflector.base_y_mm) >= d.target.wavelength_mm - 0.5
    assert {v.origin for k, v in d.values if k in ("side", "standoff", "feed_gap")} == {"starting value"}


def test_starting_values_follow_the_wavelength() -> None:
    """Half the frequency, twice the side (over the outside) and standoff, to the 0.05 mm grid."""
    high, low = design(band=["2.40 GHz", "2.50 GHz"]), design(band=["1.20 GHz", "1.25 GHz"])
    assert high.radiator.side_mm is not None and low.radiator.side_mm is not None
    assert low.radiator.side_mm + 1.8 == pytest.approx(2 * (high.radiator.side_mm + 1.8), abs=0.08)
    assert low.radiator.standoff_mm == pytest.approx(2 * high.radiator.standoff_mm, abs=0.08)
