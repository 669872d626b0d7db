"""Sheet stock: gauges, thicknesses, sizes, smallest radii; refusals."""

from __future__ import annotations

import pytest

from wavejig.stock.errors import StockError
from wavejig.stock.metals import metal_names, sheet_metal, wire_metal
from wavejig.stock.sheet import (
    gauge_thickness_mm,
    minimum_inside_radius_mm,
    sheet_size,
    sheet_sizes,
    usual_thicknesses_mm,
)


@pytest.mark.parametrize("metal", [name for name in metal_names("sheet") if name != "laminate-fr4"])
def test_higher_gauges_are_thinner(metal: str) -> None:
    thicknesses = [gauge_thickness_mm(gauge, metal) for gauge in range(8, 31)]
    assert thicknesses == sorted(set(thicknesses), reverse=True)


def test_one_gauge_is_four_thicknesses() -> None:
    metals = ("copper", "tinplate", "galvanised-steel", "stainless-steel")
    assert len({gauge_thickness_mm(18, metal) for metal in metals}) == 4


@pytest.mark.parametrize("name", metal_names("sheet"))
def test_every_sheet_metal_has_usual_thicknesses(name: str) -> None:
    thicknesses = usual_thicknesses_mm(name)
    assert thicknesses
    assert list(thicknesses) == sorted(set(thicknesses))


def test_sheet_sizes_have_their_longer_side_first() -> None:
    assert {size.kind for size in sheet_sizes()} == {"metal", "laminate"}
    for size in sheet_sizes():
        assert size.length_mm >= size.width_mm > 0
        assert sheet_size(size.name) is size


def test_radius_by_factor_where_no_table_lists_the_metal() -> None:
    brass = sheet_metal("brass", "hard")
    assert minimum_inside_radius_mm(brass, 0.8) == pytest.approx(brass.min_inside_radius_factor * 0.8)


def test_listed_radii_are_interpolated_and_held_beyond_the_list() -> None:
    sheet = sheet_metal("aluminium-5052", "H32")
    assert minimum_inside_radius_mm(sheet, 0.5) == 0.0
    halfway_mm = 25.4 * (1 / 32 + 1 / 16) / 2
    assert minimum_inside_radius_mm(sheet, halfway_mm) == pytest.approx(0.5 * halfway_mm)
    assert minimum_inside_radius_mm(sheet, 6.0) == pytest.approx(1.5 * 6.0)


def test_wire_does_not_use_the_table_of_sheets() -> None:
    wire = wire_metal("aluminium-5052", "H32")
    assert minimum_inside_radius_mm(wire, 0.5) == pytest.approx(wire.min_inside_radius_factor * 0.5)


def test_refusals() -> None:
    with pytest.raises(StockError, match=r"sheet gauge: got 31, need one of 8 to 30. Nearest: 30."):
        gauge_thickness_mm(31, "copper")
    with pytest.raises(StockError, match=r"laminate-fr4 is not sold by gauge; .* usual are 0.4"):
        gauge_thickness_mm(18, "fr4")
    with pytest.raises(StockError, match=r'sheet metal: got "bras".*Nearest: "brass"'):
        gauge_thickness_mm(18, "bras")
    with pytest.raises(StockError, match=r"laminate-fr4 cannot be folded; keep it flat"):
        minimum_inside_radius_mm(sheet_metal("laminate-fr4"), 1.6)
    with pytest.raises(StockError, match=r'sheet size: got "smal".*Nearest: "small"'):
        sheet_size("smal")
