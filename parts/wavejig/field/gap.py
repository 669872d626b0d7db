"""The feed gap: a port's voltage spread along the wire, so that the mesh does not decide its capacitance.

A voltage across a gap of no width has an endless capacitance of its own, which a finer mesh sees more and
more of (about 0.4 mS for each halving at 2.4 GHz and 1.8 mm wire, measured). A real gap has a width: two
terminals some millimetres apart, a connector's insulator round its pin. So the field is spread evenly over
GAP_DIAMETERS of the wire, on the port's wire, and half and half on both where just two wires meet. Where
segments are longer than that it makes next to no difference, where they are shorter the answer settles.
The width is ours, of the order of the usual terminals and insulators; no source.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from wavejig.field.model import Model, Port

Index = NDArray[np.int64]

GAP_DIAMETERS = 0.5  # each way


def spread_gap(
    model: Model, wire_ends: Index, corners: Index, on_ground: NDArray[np.bool_], port: Port
) -> list[tuple[int, float]]:
    """(half, volts) for 1 volt: the field times each half's current, positive into the port's wire."""
    node = int(wire_ends[port.wire, port.end])
    others = _others(wire_ends, node, port.wire)
    plain = len(others) == 1 and not on_ground[node] and not np.any(corners == node)
    parts = _walk(model, wire_ends, corners, on_ground, port.wire, port.end, 1.0, 0.5 if plain else 1.0)
    if plain:
        parts += _walk(model, wire_ends, corners, on_ground, *others[0], -1.0, 0.5)
    return parts


def _others(wire_ends: Index, node: int, wire: int) -> list[tuple[int, int]]:
    """Further wires at a node, with the end that is there."""
    return [(int(w), int(e)) for w, e in np.argwhere(wire_ends == node) if int(w) != wire]


def _walk(
    model: Model,
    wire_ends: Index,
    corners: Index,
    on_ground: NDArray[np.bool_],
    wire: int,
    end: int,
    flow: float,
    volts: float,
) -> list[tuple[int, float]]:
    """Spread volts over one gap's length from an end of a wire on, through plain joints; flow: +1 into it."""
    reach = 2.0 * GAP_DIAMETERS * model.wires[wire].radius_m
    spans: list[tuple[int, int, float, float]] = []  # wire, end come from, its length, length covered
    left = reach
    while True:
        w = model.wires[wire]
        length = float(np.linalg.norm(np.subtract(w.end, w.start)))
        spans.append((wire, end, length, min(left, length)))
        left -= length
        node = int(wire_ends[wire, 1 - end])
        onward = _others(wire_ends, node, wire)
        visited = {s[0] for s in spans}
        if (
            left <= 0.0
            or len(onward) != 1
            or onward[0][0] in visited
            or on_ground[node]
            or np.any(corners == node)
        ):
            break
        wire, end = onward[0]
    covered = sum(s[3] for s in spans)
    parts = []
    for wire, end, length, cover in spans:
        share = volts * cover / covered
        # a half's mean current over the covered part, counted along the flow
        along = flow * (1.0 if end == 0 else -1.0)
        mean = cover / length / 2.0
        parts.append((3 * wire + end, share * along * (1.0 - mean)))
        parts.append((3 * wire + 1 - end, share * along * mean))
    return parts
