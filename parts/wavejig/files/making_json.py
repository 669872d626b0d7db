"""design.json's sections on the printed parts: fixture, spacer, and what was measured on each print."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from wavejig.files.printable import LONGEST_BRIDGE_MM, STEEPEST_DEG, Printability
from wavejig.fixture.liftout import LiftOut
from wavejig.fixture.model import Fixture, Plate
from wavejig.fixture.tiles import stack_up
from wavejig.spacer.effect import PostEffect
from wavejig.spacer.keepout import SOLDER_FREE_MM
from wavejig.spacer.model import Spacer
from wavejig.spacer.withdraw import Withdrawal

_DIGITS = 9
_COARSE = 3  # measured clearances: printed figures are coarser than the chords they were measured on


@dataclass(frozen=True, slots=True, kw_only=True)
class Made:
    """What a build measures on the printed parts. hold_downs_off: by spacer piece, least air to the wire while
    its hold-down is pulled off; prints: part, count, figures."""

    lift_outs: tuple[LiftOut, ...]
    withdrawals: tuple[Withdrawal, ...]
    hold_downs_off: dict[str, float]
    posts: PostEffect | None
    prints: tuple[tuple[str, int, Printability], ...]


def fixture_data(fixture: Fixture, made: Made) -> dict[str, Any]:
    """Stations of the board, loads, tiles, and what to have at hand beside the prints."""
    plates = [p for p in (fixture.board, fixture.nest) if p.tiles]
    pins = fixture.pins
    return {
        "version": fixture.version,
        "style": fixture.style,
        "style_reason": fixture.style_reason,
        "stations": [
            {
                "bend": s.number,
                "at": [_n(v) for v in s.at],
                "tool": s.tool,
                "tool_diameter": _n(s.tool_diameter_mm),
                "turn": s.turn,
                "loaded_angle": _n(s.loaded_angle_deg),
            }
            for s in fixture.stations
        ],
        "pins": {
            "hole_depth": _n(pins.depth_mm),
            "hole_depth_needed": _c(pins.needed_mm),
            "dowel_length": _n(pins.dowel_length_mm),
            "rise": _n(pins.rise_mm),
            "lever": _n(pins.lever_mm),
            "hold": _n(pins.hold_mm),
            "plastic": pins.plastic,
            "source": pins.source,
            "loads": [
                {
                    "bend": p.station,
                    "tool": p.tool,
                    "diameter": _n(p.diameter_mm),
                    "moment_nmm": _c(p.moment_nmm),
                    "force_n": _c(p.force_n),
                    "pressure_mpa": _c(p.pressure_mpa),
                    "post_stress_mpa": _c(p.post_mpa),
                    "allowable_mpa": _c(p.allowable_mpa),
                }
                for p in pins.loads
            ],
        },
        "tiles": {plate.name: len(plate.tiles) for plate in plates},
        "tile_stack_up": {plate.name: _stack_up(plate) for plate in plates if len(plate.tiles) > 1},
        "nest_band": _n(fixture.nest_band_mm),
        "bend_blocks": [
            {
                "name": b.name,
                "bends": list(b.bends),
                "loaded_angle": _n(b.loaded_angle_deg),
                "dowel": _n(b.dowel_mm),
            }
            for b in fixture.blocks
        ],
        "feet": 4 if fixture.foot_height_mm and fixture.style == "board" else 0,
        "stop_block": _stop_block(fixture),
        "trial_gauges": [
            {
                "name": g.plate.name,
                "former": g.tool,
                "former_diameter": _n(g.tool_diameter_mm),
                "loaded_angle": _n(g.loaded_angle_deg),
                "least_angle": _n(g.least_angle_deg),
                "step": _n(g.step_deg),
                "read_error": _n(g.read_error_deg),
            }
            for g in fixture.gauges
        ],
        "drill_template": None
        if fixture.template is None
        else {
            "tiles": len(fixture.template.plate.tiles),
            "pilot": _n(fixture.template.pilot_mm),
            "holes": [[_n(h.x_mm), _n(h.y_mm), _n(h.diameter_mm)] for h in fixture.template.holes],
            "left_out": [[_n(h.x_mm), _n(h.y_mm), _n(h.diameter_mm)] for h in fixture.template.left_out],
        },
        "lift_out": [
            {
                "plate": m.plate,
                "way": m.way,
                "height": _c(m.height_mm),
                "least_clearance": _c(m.least_mm),
                "least_beside": _c(m.least_beside_mm),
            }
            for m in made.lift_outs
        ],
    }


def spacer_data(spacer: Spacer, made: Made) -> dict[str, Any]:
    """Pieces with the way each comes out, and posts with their electrical effect."""
    ways = {w.piece: w for w in made.withdrawals}
    return {
        "style": spacer.style,
        "plastic": spacer.plastic,
        "solder_free": SOLDER_FREE_MM,
        "pieces": [
            {
                "name": p.name,
                "withdrawal": [_n(v) for v in p.withdrawal],
                "travel": _n(p.travel_mm),
                "slack_along": _c(p.slack_along_mm),
                "slack_across": None if p.slack_across_mm == float("inf") else _c(p.slack_across_mm),
                **_way(ways.get(p.name)),
            }
            for p in spacer.pieces
        ],
        "hold_downs": [
            {
                "name": h.name,
                "piece": h.piece,
                "press": _c(h.press_mm),
                "force_n": _c(h.force_n),
                "strain": round(h.strain, 5),
                "allowed_strain": round(h.strain_limit, 5),
                "off": _c(h.off_mm),
                "least_to_wire": _c(made.hold_downs_off[h.piece]),
            }
            for h in spacer.hold_downs
        ],
        "posts": [
            {"name": p.name, "at": [_n(p.hole.x_mm), _n(p.hole.y_mm)], "screw": p.screw} for p in spacer.posts
        ],
        "posts_effect": _effect(made.posts),
    }


def prints_data(made: Made) -> list[dict[str, Any]]:
    """What was measured on the mesh of each print."""
    return [
        {
            "file": f"{part}/{p.name}",
            "count": count,
            "size": [_c(v) for v in p.size_mm],
            "steepest_overhang_deg": _c(p.overhang_deg),
            "longest_bridge": _c(p.bridge_mm),
            "allowed_overhang_deg": STEEPEST_DEG,
            "allowed_bridge": LONGEST_BRIDGE_MM,
        }
        for part, count, p in made.prints
    ]


def _stack_up(plate: Plate) -> dict[str, Any]:
    s = stack_up(plate.tiles)
    return {"joints": s.joints, "worst": _c(s.worst_mm), "rss": _c(s.rss_mm)}


def _stop_block(fixture: Fixture) -> dict[str, Any] | None:
    block = fixture.stop_block
    if block is None:
        return None
    return {
        "printed": fixture.style == "stop-block",
        "lanes": block.lanes,
        "bends": [
            {
                "bend": p.bend,
                "lane": p.lane,
                "stop": p.stop,
                "stop_side": p.side,
                "feed": _n(p.feed_mm),
                "turn": p.turn,
            }
            for p in block.places
        ],
    }


def _way(w: Withdrawal | None) -> dict[str, Any]:
    if w is None:
        return {}
    return {
        "way": w.way,
        "carries": w.carries,
        "standoff_off": _c(w.standoff_off_mm),
        "least_to_wire": _c(w.least_wire_mm),
        "least_rim_to_wire": _c(w.least_rim_mm),
        "least_to_hardware": None if w.least_hardware_mm == float("inf") else _c(w.least_hardware_mm),
        "left_before_lip": None if w.lip_mm == float("inf") else _c(w.lip_mm),
    }


def _effect(e: PostEffect | None) -> dict[str, Any] | None:
    if e is None:
        return None
    return {
        "permittivity": [_n(v) for v in e.permittivity],
        "loss_tangent": _n(e.loss_tangent),
        "frequency_down_at_most": round(e.shift, 6),
        "frequency_down_at_most_hz": round(e.shift_hz, -3),
        "power_lost_at_most": round(e.loss, 6),
        "at_side_corners_it_would_be": round(e.shift_at_side_corner, 6),
        "assumed_q": e.assumed_q,
        "source": e.source,
    }


def _n(value: float) -> float:
    return round(float(value), _DIGITS) + 0.0


def _c(value: float) -> float:
    return round(float(value), _COARSE) + 0.0
