"""What is caught on its way out is told with its numbers; what comes free is not."""

from __future__ import annotations

from wavejig.fixture.liftout import LiftOut
from wavejig.shop.ways import way_findings
from wavejig.spacer.withdraw import Withdrawal


def lifted(least: float) -> LiftOut:
    return LiftOut(plate="board", way="straight up", height_mm=5.0, least_mm=least, least_beside_mm=least)


def pulled(rim: float, lip: float) -> Withdrawal:
    return Withdrawal(
        piece="spacer-a",
        way="10 mm towards y+, then straight up",
        travel_mm=10.0,
        least_wire_mm=0.0,
        least_rim_mm=rim,
        least_hardware_mm=0.3,
        lip_mm=lip,
        carries=4,
        standoff_off_mm=0.0,
    )


def test_free_ways_raise_nothing() -> None:
    assert not list(way_findings((lifted(0.0), lifted(-0.005)), (pulled(0.25, 3.0),)))


def test_caught_things_are_told() -> None:
    found = list(way_findings((lifted(-0.4),), (pulled(-0.2, 3.0), pulled(0.2, -1.5))))
    assert [f.code for f in found] == ["wire-caught", "spacer-caught", "spacer-caught"]
    assert "0.40 mm" in found[0].message and "0.20 mm" in found[1].message and "1.50 mm" in found[2].message
    assert all(f.remedy and f.where for f in found)
