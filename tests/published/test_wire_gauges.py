"""Wire and sheet gauges against the standards' printed figures and the rules they were drawn up by."""

from __future__ import annotations

import math

import pytest

from wavejig.stock.sheet import gauge_thickness_mm
from wavejig.stock.tables import table
from wavejig.stock.wire import area_diameter_mm, awg_diameter_mm, metric_diameters_mm, swg_diameter_mm

MM_PER_INCH = 25.4


@pytest.mark.parametrize(
    ("gauge", "diameter_mm"),
    [(10, 2.5882), (12, 2.0525), (14, 1.6277), (16, 1.2908), (18, 1.0237), (20, 0.8118)],
)
def test_awg_diameters(gauge: int, diameter_mm: float) -> None:
    """ASTM B258: d = 0.127 mm x 92^((36 - n)/39), to the four decimals given."""
    assert awg_diameter_mm(gauge) == pytest.approx(diameter_mm, abs=0.5e-4)


@pytest.mark.parametrize("row", table("awg").rows, ids=lambda row: str(row["label"]))
def test_awg_formula_rounds_to_the_printed_inches(row: dict[str, float]) -> None:
    """ASTM B258, diameters in inches as printed, from memory; tolerance = the last printed digit's half."""
    assert awg_diameter_mm(int(row["gauge"])) / MM_PER_INCH == pytest.approx(row["diameter_in"], abs=0.5e-4)


def test_awg_is_defined_by_two_diameters_and_39_equal_ratios() -> None:
    """ASTM B258: 4/0 is 0.4600 in, 36 is 0.0050 in, 39 steps of one ratio between; nothing else defined."""
    assert awg_diameter_mm(-3) / MM_PER_INCH == pytest.approx(0.46, rel=1e-12)
    assert awg_diameter_mm(36) / MM_PER_INCH == pytest.approx(0.005, rel=1e-12)
    steps = {round(awg_diameter_mm(g) / awg_diameter_mm(g + 1), 12) for g in range(-3, 40)}
    assert steps == {round(math.exp(math.log(92.0) / 39.0), 12)}


def test_swg_table() -> None:
    """BS 3737:1964, numbers 1 to 30 in inches, from secondary sources."""
    printed_in = """
        .300 .276 .252 .232 .212 .192 .176 .160 .144 .128 .116 .104 .092 .080 .072 .064 .056 .048 .040 .036
        .032 .028 .024 .022 .020 .018 .0164 .0148 .0136 .0124
    """
    for number, inches in enumerate(printed_in.split(), start=1):
        assert swg_diameter_mm(number) == pytest.approx(float(inches) * MM_PER_INCH, rel=1e-12)


def test_class_1_resistances() -> None:
    """IEC 60228 class 1, highest resistance at 20 C in ohm/km, from memory."""
    printed = {1.0: 18.1, 1.5: 12.1, 2.5: 7.41, 4.0: 4.61, 6.0: 3.08}
    held = {row["area_mm2"]: row["max_resistance_ohm_per_km"] for row in table("mm2").rows}
    assert {area: held[area] for area in printed} == printed


@pytest.mark.parametrize("row", table("mm2").rows, ids=lambda row: f"{row['area_mm2']:g} mm2")
def test_nominal_diameter_lies_between_what_resistance_and_size_allow(row: dict[str, float]) -> None:
    """IEC 60228 sets the size by resistance: the thinnest wire that meets it is below sqrt(4 A/pi).

    Copper of 17.241 nohm m (IEC 60028); the nominal diameter is within the standard's largest.
    """
    thinnest_mm = math.sqrt(4.0 / math.pi * 17.241 / row["max_resistance_ohm_per_km"])
    assert 0.95 * area_diameter_mm(row["area_mm2"]) < thinnest_mm < area_diameter_mm(row["area_mm2"])
    assert area_diameter_mm(row["area_mm2"]) < row["max_diameter_mm"]


def test_metric_wire_is_the_r20_series() -> None:
    """IEC 60317-0-1 diameters (from memory) are ISO 3's R20: each within 1.3 % of 10^(k/20), k running."""
    sizes = metric_diameters_mm()
    assert {0.5, 0.56, 0.63, 0.71, 0.8, 0.9, 1.0, 1.12, 1.25, 1.4, 1.6, 1.8, 2.0} <= set(sizes)
    for k, size in enumerate(sizes, start=-6):
        assert size == pytest.approx(10.0 ** (k / 20.0), rel=0.013)


# ounces per square foot by gauge, US standard gauge of 1893, from memory
OUNCES = dict(
    zip(
        range(8, 31),
        [110, 100, 90, 80, 70, 60, 50, 45, 40, 36, 32, 28, 24, 22, 20, 18, 16, 14, 12, 11, 10, 9, 8],
        strict=True,
    )
)


@pytest.mark.parametrize("gauge", OUNCES)
def test_sheet_gauges_follow_from_their_weights(gauge: int) -> None:
    """Steel: the 1893 weight over 41.82 lb/(ft2 in); galvanised: 2.5 oz more; stainless: oz/640 in.

    Non-ferrous: the formula of ASTM B258. All to the fourth decimal of an inch, as printed.
    """
    half_digit_mm = 0.5001e-4 * MM_PER_INCH
    ounces = OUNCES[gauge]
    for metal, inches in (
        ("tinplate", ounces / 16.0 / 41.82),
        ("galvanised-steel", (ounces + 2.5) / 16.0 / 41.82),
        ("stainless-steel", ounces / 640.0),
        ("brass", 0.005 * 92.0 ** ((36 - gauge) / 39)),
    ):
        expected_mm = pytest.approx(inches * MM_PER_INCH, abs=half_digit_mm)
        assert gauge_thickness_mm(gauge, metal) == expected_mm, metal
