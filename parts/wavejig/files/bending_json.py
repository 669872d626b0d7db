"""design.json's section on the bending: order, steps, shapes on the way, tolerances."""

from __future__ import annotations

import math
from typing import Any

from wavejig.design.model import Design
from wavejig.fixture.bending.forming import closure_mm, stock_wire
from wavejig.fixture.bending.model import BendOrder, BendStep, PieceOrder
from wavejig.fixture.bending.scene import STOP
from wavejig.fixture.bending.tolerance import Tolerance
from wavejig.fixture.bending.words import before_bending, instruction
from wavejig.fixture.model import Fixture
from wavejig.radiator.model import Radiator

_DIGITS = 9
_COARSE = 3  # printed figures are coarser than what they were worked out with


def bending_data(
    design: Design, radiator: Radiator, fixture: Fixture, order: BendOrder, tolerance: Tolerance | None
) -> dict[str, Any]:
    """The keys "bending" and "tolerance" of the fixture's section."""
    return {
        "bending": {
            "face_down": fixture.face_down,
            "found": order.found,
            "pieces": [_piece(design, radiator, fixture, p) for p in order.pieces],
        },
        "tolerance": None if tolerance is None else _tolerance(tolerance),
    }


def _piece(design: Design, radiator: Radiator, fixture: Fixture, order: PieceOrder) -> dict[str, Any]:
    made = next(p for p in radiator.pieces if p.role == order.piece)
    wire = stock_wire(design, made)
    return {
        "role": order.piece,
        "found": order.found,
        "cheapest": order.complete,
        "reason": order.reason,
        "remedies": list(order.remedies),
        "closure": round(closure_mm(wire, made), 6),
        "pin_changes": order.pin_changes,
        "moves": order.moves,
        "before": list(before_bending(design, wire, order)),
        "order": [s.number for s in order.steps],
        "steps": [
            {
                **_step(s),
                "instruction": instruction(s, wire, fixture, [t.number for t in order.steps[:k]]),
            }
            for k, s in enumerate(order.steps)
        ],
    }


def _step(s: BendStep) -> dict[str, Any]:
    return {
        "bend": s.number,
        "place": s.place,
        "tool": s.tool,
        "held": s.held,
        "pins": list(s.pins),
        "pins_in": list(s.pins_in),
        "pins_out": ["stop" if n == STOP else n for n in s.pins_out],
        "stop": s.stop,
        "clamp": s.clamp,
        "located": s.located,
        "mark": _n(s.mark_mm),
        "trim_first": s.trim_first,
        "lift": _n(s.lift_deg),
        "rest": _n(s.rest_deg),
        "tail": _n(s.tail_mm),
        "loaded_angle": _n(s.loaded_angle_deg),
        "angle": _n(s.angle_deg),
        "block_back": _n(s.tool_back_mm),
    }


def _tolerance(t: Tolerance) -> dict[str, Any]:
    return {
        "inputs": [{"name": i.name, "kind": i.kind, "plus_minus": _n(i.plus_minus)} for i in t.inputs],
        "figures": [
            {
                "name": f.name,
                "nominal": round(f.nominal_mm, _COARSE) + 0.0,
                "worst_case": round(f.worst_mm, _COARSE),
                "root_sum_square": round(f.rss_mm, _COARSE),
                "by_kind": {kind: round(value, _COARSE) for kind, value in f.by_kind},
            }
            for f in t.figures
        ],
        "springback_factor_two": {
            name: [round(half, _COARSE) + 0.0, round(twice, _COARSE) + 0.0]
            for name, half, twice in t.springback
        },
    }


def _n(value: float) -> float:
    assert math.isfinite(value)
    return round(float(value), _DIGITS) + 0.0
