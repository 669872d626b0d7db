"""Planned trays against hand-made geometry, and what is refused."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from shapely.geometry import LineString, Polygon

from wavejig.design.model import CutterDesign, Hole, Lip, ReflectorDesign
from wavejig.reflector.flat import flat_pattern, with_kerf
from wavejig.reflector.tray import CornerPractice, TrayError, corner_practice, hole_edge_to_bend_mm, plan

Sheet = Callable[..., ReflectorDesign]
INCH = 25.4


def test_worked_u_channel(sheet: Sheet) -> None:
    """1 x 2 x 1 in channel, T 0.040, R 0.16: setback 0.200, flats 0.8 / 1.6 / 0.8 in.

    Source: FAA-H-8083-31 family, sheet metal chapter, worked U-channel.
    """
    tray = plan(
        sheet(
            "x-x+",
            height_mm=1.0 * INCH,
            base_x_mm=2.0 * INCH,
            base_y_mm=4.0 * INCH,
            thickness_mm=0.040 * INCH,
            inside_radius_mm=0.16 * INCH,
        )
    )
    for lip in tray.lips:
        assert lip.setback_mm / INCH == pytest.approx(0.200, abs=1e-12)
        assert lip.flange_mm / INCH == pytest.approx(0.8, abs=1e-12)
    assert (tray.base_reach_mm("x+") + tray.base_reach_mm("x-")) / INCH == pytest.approx(1.6, abs=1e-12)


def test_blank_of_a_unit_fold_by_hand(sheet: Sheet) -> None:
    """R = T = 1, K = 0.44, 90 deg: the deduction is 4 - 0.72 pi = 1.73805 (bend arc pi/2 x 1.44)."""
    tray = plan(sheet("y-y+", height_mm=20.0, thickness_mm=1.0, inside_radius_mm=1.0, k_factor=0.44))
    deduction = 4.0 - 0.72 * math.pi
    assert tray.lips[0].deduction_mm == pytest.approx(deduction, abs=1e-12)
    x0, y0, x1, y1 = tray.outline.bounds()
    assert (x1 - x0, y1 - y0) == pytest.approx((130.0, 110.0 + 2.0 * (20.0 - deduction)), abs=1e-9)
    # two lips run the full width: the blank is a rectangle with four round corners and nothing else
    assert tray.outline.area_mm2 == pytest.approx(130.0 * (y1 - y0) - (4.0 - math.pi) * 2.0**2, abs=1e-9)


def test_a_shops_own_deduction_is_used_as_it_stands(sheet: Sheet) -> None:
    tray = plan(sheet(bend_deduction_mm=1.7, k_factor=0.33))
    x0, y0, x1, y1 = tray.outline.bounds()
    assert (x1 - x0, y1 - y0) == pytest.approx((130.0 + 2 * 13.3, 110.0 + 2 * 13.3), abs=1e-9)
    # 90 deg, R 1, T 0.8: allowance 3.6 - 1.7 = 1.9 = pi/2 (1 + 0.8 K)
    assert tray.lips[0].k_factor == pytest.approx((1.9 / (math.pi / 2) - 1.0) / 0.8, abs=1e-12)


def test_flat_sheet_is_a_rounded_rectangle(sheet: Sheet) -> None:
    tray = plan(sheet(""))
    assert tray.outline.bounds() == pytest.approx((-65.0, -55.0, 65.0, 55.0), abs=1e-9)
    assert tray.outline.area_mm2 == pytest.approx(130.0 * 110.0 - (4.0 - math.pi) * 4.0, abs=1e-9)


def test_relieved_blank_by_hand(sheet: Sheet) -> None:
    """90 deg, R 1, T 0.8: tangents 1.8 inside the mould lines, notch 1 mm further, its corner R 0.5."""
    tray = plan(sheet())
    tip_x, tip_y = 65.0 + 15.0 - tray.lips[0].deduction_mm, 55.0 + 15.0 - tray.lips[0].deduction_mm
    half_x, half_y = 65.0 - 2.8, 55.0 - 2.8
    cross = 4.0 * (tip_x * half_y + half_x * (tip_y - half_y))
    tips, notches = 8 * (1.0 - math.pi / 4) * 2.0**2, 4 * (1.0 - math.pi / 4) * 0.5**2
    assert tray.outline.area_mm2 == pytest.approx(cross - tips + notches, abs=1e-9)


@pytest.mark.parametrize("angle", [5.0, 30.0, 60.0, 90.0])
@pytest.mark.parametrize("style", ["relief", "mitre"])
@pytest.mark.parametrize(("t", "r"), [(0.5, 0.0), (0.8, 1.0), (2.0, 3.0), (1.0, 8.0)])
def test_notches_reach_past_every_bend(sheet: Sheet, angle: float, style: str, t: float, r: float) -> None:
    """Common practice: relief at least T and 1 mm wide, at least R + T deep, and no sharp inner corner."""
    tray = plan(
        sheet(angle_deg=angle, corner_style=style, thickness_mm=t, inside_radius_mm=r, height_mm=25.0)
    )
    blank = Polygon(tray.outline.points(0.001))
    wide = max(t, 1.0)
    for sx in (-1, 1):
        for sy in (-1, 1):
            # nothing of the sheet lies where both bends would meet, nor for the relief's width inside that
            (a, b), (c, d) = (
                (tray.base_reach_mm(f"{axis}+") - wide, tray.lip(f"{axis}+").bend_end_mm) for axis in "xy"
            )
            fillet = wide / 2.0
            clear = Polygon([(a, c + fillet), (a + fillet, c), (b, c), (b, d), (a, d)])
            notch = Polygon([(sx * x, sy * y) for x, y in clear.exterior.coords])
            assert blank.intersection(notch).area == pytest.approx(0.0, abs=wide * 0.05)
    for edge, other in (("x+", "y+"), ("y+", "x+")):
        lip = tray.lip(edge)
        assert tray.half_mm(other) - lip.right.half_mm >= r + t - 1e-9
        assert tray.base_reach_mm(other) - lip.right.half_mm >= wide - 1e-9
    radii = [
        math.dist(p[:2], q[:2]) / (2.0 * math.sin(2.0 * math.atan(-p[2])))
        for p, q in zip(
            tray.outline.vertices, (*tray.outline.vertices[1:], tray.outline.vertices[0]), strict=True
        )
        if p[2] < 0.0
    ]
    assert sum(radius >= wide / 2.0 - 1e-9 for radius in radii) >= 4


def test_mitred_lips_are_wider_than_relieved_ones(sheet: Sheet) -> None:
    """90 deg: the inner faces cross T inside the mould lines; each lip stops gap / sqrt 2 short of that."""
    lip = plan(sheet(corner_style="mitre")).lip("x+")
    assert lip.right.reach_mm(10.0) == pytest.approx(55.0 - 0.8 - 0.5 / math.sqrt(2.0), abs=1e-12)
    # at 45 deg each lip must lean cos 45 sideways per mm of its own height to follow the diagonal
    lip = plan(sheet(corner_style="mitre", angle_deg=45.0)).lip("x+")
    assert (lip.right.reach_mm(11.0) - lip.right.reach_mm(10.0)) == pytest.approx(math.sqrt(0.5), abs=1e-12)


@given(
    lips=st.sampled_from(["", "x+", "x-x+", "y-y+", "x+y+", "x-x+y+", "x-x+y-y+"]),
    style=st.sampled_from(["relief", "mitre"]),
    angle=st.floats(5.0, 90.0),
    height=st.floats(3.0, 60.0),
    thickness=st.floats(0.3, 3.0),
    radius=st.floats(0.0, 6.0),
    factor=st.floats(1.0, 5.0),
)
def test_every_blank_is_one_simple_loop_and_scales(
    sheet: Sheet,
    lips: str,
    style: str,
    angle: float,
    height: float,
    thickness: float,
    radius: float,
    factor: float,
) -> None:
    assume(height > (radius + thickness) * math.tan(math.radians(angle) / 2.0) + 0.01)
    design = sheet(lips, height, angle, corner_style=style, thickness_mm=thickness, inside_radius_mm=radius)
    tray = plan(design)
    blank = Polygon(tray.outline.points(0.001))
    assert blank.is_valid
    assert blank.exterior.is_ccw
    assert blank.area == pytest.approx(tray.outline.area_mm2, rel=1e-4)
    for x, y, bulge in tray.outline.vertices:
        assert math.isfinite(x + y)
        assert abs(bulge) < 1.0
    big = plan(
        replace(
            design,
            thickness_mm=thickness * factor,
            inside_radius_mm=radius * factor,
            base_x_mm=design.base_x_mm * factor,
            base_y_mm=design.base_y_mm * factor,
            lips=tuple(replace(lip, height_mm=height * factor) for lip in design.lips),
        ),
        CornerPractice(round_mm=2.0 * factor, mitre_gap_mm=0.5 * factor, relief_mm=factor),
    )
    scaled = np.array(tray.outline.vertices) * (factor, factor, 1.0)
    np.testing.assert_allclose(np.array(big.outline.vertices), scaled, atol=1e-9 * factor, rtol=1e-9)


def test_distance_from_holes_to_bends(sheet: Sheet) -> None:
    hole = Hole(x_mm=50.0, y_mm=-20.0, diameter_mm=4.0, purpose="mounting")
    found = {edge: d for _, edge, d in hole_edge_to_bend_mm(plan(sheet(holes=(hole,))))}
    assert found == pytest.approx(
        {"x+": 63.2 - 52.0, "x-": 63.2 + 48.0, "y+": 53.2 + 18.0, "y-": 53.2 - 22.0}
    )


def _hole(x: float, y: float, d: float) -> tuple[Hole, ...]:
    return (Hole(x_mm=x, y_mm=y, diameter_mm=d, purpose="other"),)


@pytest.mark.parametrize(
    ("change", "says"),
    [
        ({"thickness_mm": 0.0}, r"sheet thickness: got 0 mm, need more than 0"),
        ({"thickness_mm": math.nan}, r"sheet thickness: got nan"),
        ({"base_y_mm": -3.0}, r"base along y: got -3 mm"),
        ({"base_x_mm": math.inf}, r"base along x: got inf"),
        ({"inside_radius_mm": -0.1}, r"inside bend radius: got -0.1 mm, need 0 or more"),
        ({"kind": "dish"}, r"need 'flat' or 'tray'"),
        ({"kind": "flat"}, r"flat reflector with 4 lips"),
        ({"lips": ()}, r"tray reflector with 0 lips"),
        ({"corner_style": "welded"}, r"need 'relief' or 'mitre'"),
        ({"up": "z+"}, r"upper edge: got 'z\+'"),
        ({"lips": (Lip(edge="x", height_mm=9.0, angle_deg=90.0),)}, r"lips at x: need"),
        ({"lips": (Lip(edge="x+", height_mm=9.0, angle_deg=90.0),) * 2}, r"at most once"),
        ({"lips": (Lip(edge="x+", height_mm=9.0, angle_deg=91.0),)}, r"angle 91 deg; need .* at most 90"),
        ({"lips": (Lip(edge="x+", height_mm=9.0, angle_deg=0.0),)}, r"angle 0 deg; need more than 0"),
        ({"lips": (Lip(edge="x+", height_mm=math.nan, angle_deg=90.0),)}, r"height nan mm"),
        ({"lips": (Lip(edge="x+", height_mm=1.7, angle_deg=90.0),)}, r"height 1.7 mm ends inside .* 1.80 mm"),
        ({"base_x_mm": 11.0}, r"base along x: got 11 mm, need more than 11.20 mm"),
        ({"k_factor": 1.2}, r"lip x\+: K-factor: got 1.2"),
        ({"bend_deduction_mm": 3.0}, r"lip x\+: bend deduction: got 3 mm, need 0.773 to 2.029 mm"),
        ({"holes": _hole(62.0, 0.0, 4.0)}, r"reaches 0.80 mm into the bend at x\+"),
        ({"holes": _hole(61.8, 51.8, 2.0)}, r"cuts the edge of the sheet"),
        ({"holes": _hole(0.0, 0.0, 0.0)}, r"need a diameter above 0"),
        ({"holes": _hole(math.nan, 0.0, 4.0)}, r"cuts the edge of the sheet"),
        ({"holes": (*_hole(0.0, 0.0, 4.0), *_hole(3.0, 0.0, 2.0))}, r"overlaps the other hole of 4 mm"),
    ],
)
def test_what_cannot_be_folded_is_refused_with_its_numbers(
    sheet: Sheet, change: dict[str, Any], says: str
) -> None:
    with pytest.raises(TrayError, match=says):
        plan(sheet(**change) if "lips" not in change else replace(sheet(), **change))


def test_unlike_lips_cannot_be_mitred_nor_share_a_deduction(sheet: Sheet) -> None:
    lips = (Lip(edge="x+", height_mm=9.0, angle_deg=90.0), Lip(edge="y+", height_mm=9.0, angle_deg=45.0))
    with pytest.raises(TrayError, match="one height and angle, got 9 mm at 45 deg; 9 mm at 90 deg"):
        plan(replace(sheet(corner_style="mitre"), lips=lips))
    with pytest.raises(TrayError, match=r"different angles \(45, 90 deg\)"):
        plan(replace(sheet(bend_deduction_mm=1.7), lips=lips))
    assert len(plan(replace(sheet(), lips=lips)).lips) == 2


def test_a_hole_over_the_cut_edge_of_a_flat_sheet_is_refused(sheet: Sheet) -> None:
    with pytest.raises(TrayError, match="cuts the edge"):
        plan(sheet("", holes=_hole(63.5, 0.0, 4.0)))
    with pytest.raises(TrayError, match="cuts the edge"):
        plan(sheet("", holes=_hole(200.0, 0.0, 4.0)))


def test_short_lips_are_rounded_on_the_flange_only(sheet: Sheet) -> None:
    """Lips 2.4 high have 0.6 of flange: the full width must still stand at the end of the bend."""
    tray = plan(sheet("y-y+", height_mm=2.4))
    assert tray.lips[0].flange_mm == pytest.approx(0.6)
    y = max(lip.bend_end_mm for lip in tray.lips)
    blank = Polygon(tray.outline.points(0.0005))
    across = blank.intersection(LineString([(-200.0, y), (200.0, y)]))
    assert across.length == pytest.approx(130.0, abs=1e-6)
    at_tip = blank.intersection(LineString([(-200.0, y + 0.59), (200.0, y + 0.59)]))
    assert at_tip.length < 130.0


@pytest.mark.parametrize("kerf", [0.2, 1.0, 2.0])
@pytest.mark.parametrize("style", ["relief", "mitre"])
@pytest.mark.parametrize("angle", [5.0, 90.0])
def test_corners_suit_the_cutter(sheet: Sheet, kerf: float, style: str, angle: float) -> None:
    """Whatever the kerf, half of it fits every inner radius and all of it fits the mitre's gap."""
    cutter = CutterDesign(
        process="waterjet",
        kerf_mm=kerf,
        offset_in_file=True,
        smallest_hole_mm=2.0,
        stock_x_mm=1e3,
        stock_y_mm=1e3,
    )
    practice = corner_practice(cutter)
    pattern = flat_pattern(plan(sheet(angle_deg=angle, corner_style=style), practice))
    cut = with_kerf(pattern, kerf)
    assert Polygon(cut.outline.points(0.001)).is_valid
    assert (practice == CornerPractice()) == (kerf < 0.25)
