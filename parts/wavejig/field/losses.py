"""Losses and sleeves: impedance along wires and over sheets, added to the matrix where halves overlap.

Surface impedance (1 + j) Rs with Rs = sqrt(pi f mu0 / sigma) (smooth metal much thicker than its skin
depth; any text, e.g. Ramo, Whinnery and Van Duzer). A wire's current is even round it: Zs / (2 pi a) per
metre. A sheet's current is the sum of its two faces'; all of it is taken to flow on one, which is nearly so
for a reflector and never too low for it. An insulated wire has the sleeve's inductance,
(mu0 / 2 pi)(1 - 1/er) ln(b/a) per metre: Richmond and Newman, Radio Science 11 (1976), from memory,
re-derived; its capacitance is in the kernel's equivalent radius.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from wavejig.field.elements import Elements
from wavejig.field.model import Insulation, Model
from wavejig.field.quadrature import triangle_rule, unit_rule
from wavejig.field.units import MU_0_H_PER_M
from wavejig.field.unknowns import FAN, FAN_LATEST, SEGMENT, TRIANGLE

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Index = NDArray[np.int64]


def surface_resistance_ohm(frequency_hz: float, conductivity_s_per_m: float) -> float:
    """Rs of smooth thick metal, ohm per square."""
    return math.sqrt(math.pi * frequency_hz * MU_0_H_PER_M / conductivity_s_per_m)


def sleeve_inductance_h_per_m(radius_m: float, insulation: Insulation) -> float:
    """Inductance per metre that an insulating sleeve adds to a wire of its equivalent radius."""
    ratio = insulation.outer_radius_m / radius_m
    return MU_0_H_PER_M / (2.0 * math.pi) * (1.0 - 1.0 / insulation.permittivity) * math.log(ratio)


def loss_rows(model: Model, elements: Elements, frequency_hz: float) -> tuple[Index, Index, Complex]:
    """Entries (row, column, ohm) to add to the impedance matrix; repeated entries add up."""
    series = _series_ohm_per_m(model, elements, frequency_hz)
    sheet = 0.0 + 0.0j
    if model.sheet_conductivity_s_per_m is not None:
        sheet = (1.0 + 1.0j) * surface_resistance_ohm(frequency_hz, model.sheet_conductivity_s_per_m)
    halves: list[tuple[Index, Index, Complex]] = []
    wires = np.flatnonzero((elements.kind == SEGMENT) & (series != 0.0))
    length = 2.0 * elements.size_m[wires]
    for a in range(2):
        for b in range(2):
            overlap = length / (3.0 if a == b else 6.0)
            halves.append((3 * wires + a, 3 * wires + b, np.asarray(series[wires] * overlap)))
    if sheet != 0.0:
        halves += [(a, b, np.asarray(sheet * g)) for a, b, g in _sheet_overlaps(model, elements)]
    if not halves:
        nothing = np.zeros(0, dtype=np.int64)
        return nothing, nothing, np.zeros(0, dtype=np.complex128)
    first = np.concatenate([h[0] for h in halves])
    second = np.concatenate([h[1] for h in halves])
    return _to_unknowns(elements, first, second, np.concatenate([h[2] for h in halves]))


def _series_ohm_per_m(model: Model, elements: Elements, frequency_hz: float) -> Complex:
    per_wire = np.zeros(max(len(model.wires), 1), dtype=np.complex128)
    for i, w in enumerate(model.wires):
        if w.conductivity_s_per_m is not None:
            rs = surface_resistance_ohm(frequency_hz, w.conductivity_s_per_m)
            per_wire[i] += (1.0 + 1.0j) * rs / (2.0 * math.pi * w.radius_m)
        if w.insulation is not None:
            per_wire[i] += 2.0j * math.pi * frequency_hz * sleeve_inductance_h_per_m(w.radius_m, w.insulation)
    series = np.zeros(len(elements.kind), dtype=np.complex128)
    wires = elements.kind == SEGMENT
    series[wires] = per_wire[elements.source[wires]]
    return series


def _sheet_overlaps(model: Model, elements: Elements) -> list[tuple[Index, Index, Array]]:
    """Integrals of current times current over each triangle: flat shapes and fans, (half, half, value)."""
    rows: list[tuple[Index, Index, Array]] = []
    plain = np.flatnonzero(elements.kind == TRIANGLE)
    bary, weights = triangle_rule(2)
    corners = elements.shapes.corners[plain]
    points = np.einsum("ij,njk->nik", bary, corners)
    arms = (points[:, None] - corners[:, :, None]) / (2.0 * elements.shapes.area[plain])[:, None, None, None]
    gram = np.einsum("naik,nbik,i,n->nab", arms, arms, weights, elements.shapes.area[plain])
    for a in range(3):
        for b in range(3):
            rows.append((3 * plain + a, 3 * plain + b, gram[:, a, b]))
    of_triangle = dict(zip(elements.source[plain].tolist(), plain.tolist(), strict=True))
    by_source: dict[int, list[int]] = {}
    for fan in np.flatnonzero(elements.kind == FAN).tolist():
        by_source.setdefault(int(elements.source[fan]), []).append(fan)
    for source, fans in by_source.items():
        whole = of_triangle[source]
        area = float(elements.shapes.area[whole])
        for fan in fans:
            own = _fan_overlap(elements, fan)
            rows.append(_row(3 * fan, 3 * fan, own))
            for a in range(3):
                cross = _fan_with(elements, fan, elements.shapes.corners[whole, a], area)
                rows += [_row(3 * fan, 3 * whole + a, cross), _row(3 * whole + a, 3 * fan, cross)]
    return rows


def _row(first: int, second: int, value: float) -> tuple[Index, Index, Array]:
    return np.array([first]), np.array([second]), np.array([value])


def _fan_start(elements: Elements, fan: int, reach_m: float) -> float:
    """Where a fan's carried current begins, as a part of the way to the far side: at the wire's surface."""
    return min(float(elements.radius_m[fan]) / reach_m, FAN_LATEST)


def _fan_overlap(elements: Elements, fan: int) -> float:
    """The fan's current with itself: (share^2 / 2A) |e|^2 (carried - u^2)^2 / u, carried 1 from the foot on."""
    v = elements.shapes.corners[fan]
    nodes, weights = unit_rule(6)
    total = 0.0
    for t, w in zip(nodes, weights, strict=True):
        e2 = float(np.sum(((1.0 - t) * v[1] + t * v[2] - v[0]) ** 2))
        u = _fan_start(elements, fan, math.sqrt(e2))
        total += w * e2 * (u**4 / 4.0 - math.log(u) - (1.0 - u**2) + (1.0 - u**4) / 4.0)
    return float(elements.share[fan] ** 2 * total / (2.0 * elements.shapes.area[fan]))


def _fan_with(elements: Elements, fan: int, corner: Array, area: float) -> float:
    """The fan's current with the triangle's flow from one of its corners."""
    v = elements.shapes.corners[fan]
    nodes, weights = unit_rule(4)
    total = 0.0
    for t, wt in zip(nodes, weights, strict=True):
        e = (1.0 - t) * v[1] + t * v[2] - v[0]
        start = _fan_start(elements, fan, float(np.linalg.norm(e)))
        for low, high, carried in ((0.0, start, 0.0), (start, 1.0, 1.0)):
            for x, wx in zip(nodes, weights, strict=True):
                u = low + (high - low) * x
                total += wt * wx * (high - low) * (carried - u * u) * float(e @ (v[0] + u * e - corner))
    return float(elements.share[fan] * total / (2.0 * area))


def _to_unknowns(
    elements: Elements, first: Index, second: Index, value: Complex
) -> tuple[Index, Index, Complex]:
    start = elements.half_start
    a_count, b_count = start[first + 1] - start[first], start[second + 1] - start[second]
    many = a_count * b_count
    pair = np.repeat(np.arange(len(first)), many)
    step = np.arange(len(pair)) - np.repeat(np.cumsum(many) - many, many)
    a = start[first][pair] + step // b_count[pair]
    b = start[second][pair] + step % b_count[pair]
    scale = elements.half_coefficient[a] * elements.half_coefficient[b]
    return elements.half_unknown[a], elements.half_unknown[b], value[pair] * scale
