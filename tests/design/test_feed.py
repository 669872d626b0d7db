"""Where the feed lands: never in its connector, in the pin's bore or beside it, tube clear of both terminals."""

from __future__ import annotations

import math

import pytest

from tests.designs import design
from wavejig.stock.connectors import connectors

ALL = [c.name for c in connectors()]


@pytest.mark.parametrize("name", ALL)
@pytest.mark.parametrize("mounting", ["auto", "behind", "in-front"])
@pytest.mark.parametrize("wire", ["1 mm", "1.8 mm"])
def test_the_ground_leg_never_lands_on_the_pin_side(name: str, mounting: str, wire: str) -> None:
    d = design(wire=wire, feed={"connector": name, "mounting": mounting})
    feed = d.feed
    assert feed.connector is not None
    reach = math.dist(feed.foot, feed.connector_at)
    leg = feed.leg_diameter_mm / 2.0
    if d.conflicts:
        return  # told as errors; what they say is tested below
    if feed.ground == "flange":
        assert reach - leg >= feed.connector.dielectric_diameter_mm / 2.0
        assert reach + leg <= feed.connector.flange_mm / 2.0
    else:
        assert reach - leg >= feed.clear_radius_mm + 0.99
    if feed.ground == "sheet":
        gap = reach - feed.foot_hole_mm / 2.0 - feed.connector_hole_mm / 2.0
        assert gap >= max(d.reflector.thickness_mm, 1.0) - 1e-9


def test_the_connector_sits_under_the_pin_terminal_when_the_leg_enters_its_bore() -> None:
    feed = design().feed
    assert feed.pin_joint == "bore"
    assert feed.connector_at == feed.terminal_pin == (0.0, design().radiator.feed_gap_mm / 2.0)


def test_a_leg_too_thick_for_the_bore_is_lapped_beside_the_pin() -> None:
    feed = design(feed={"connector": "sma-4hole-post"}).feed
    assert feed.pin_joint == "lap" and feed.connector is not None
    aside = math.dist(feed.connector_at, feed.pin_leg)
    assert aside == pytest.approx((feed.connector.pin_diameter_mm + feed.leg_diameter_mm) / 2.0 + 0.1)


def test_calliper_figures_replace_the_table() -> None:
    wide = design(feed={"calliper": {"rear_cutout": "14 mm", "pin_bore": "1.5 mm"}})
    assert wide.feed.connector_hole_mm == 14.0
    assert wide.feed.pin_joint == "lap"
    assert math.dist(wide.feed.foot, wide.feed.connector_at) > math.dist(
        design().feed.foot, design().feed.connector_at
    )


@pytest.mark.parametrize("tube", ["tube-1.2", "tube-2.2", "tube-3.6"])
@pytest.mark.parametrize("family", ["quad", "biquad", "double-biquad", "twin-loop"])
def test_an_automatic_gap_leaves_room_for_the_tube(tube: str, family: str) -> None:
    d = design(family, feed={"style": "tube", "tube": tube})
    assert not d.conflicts
    feed = d.feed
    assert feed.tube is not None
    bare = math.dist(feed.tube_at, feed.terminal_pin) - feed.tube.outer_diameter_mm / 2.0
    assert bare >= 1.0 + d.radiator.wire_diameter_mm / math.sqrt(2.0) - 1e-9


def test_aluminium_grounds_through_a_lug() -> None:
    assert design(reflector={"material": "aluminium"}).feed.ground == "lug"
    assert design(reflector={"material": "brass"}).feed.ground == "sheet"
    front = design(feed={"connector": "sma-4hole-cup", "mounting": "in-front"}).feed
    assert front.ground == "flange"


def test_a_spacing_inside_the_cut_out_is_a_conflict() -> None:
    d = design(feed={"leg_spacing": "4 mm"})
    assert [c.key for c in d.conflicts] == ["feed.leg_spacing"]
    assert "4.00 mm" in d.conflicts[0].message
