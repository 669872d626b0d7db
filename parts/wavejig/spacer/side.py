"""The radiator as one half of the block sees it: curves over the columns across its withdrawal. mm."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from wavejig.design.model import Design
from wavejig.spacer import profile
from wavejig.spacer.keepout import HARDWARE_PLAY_MM, Keepout, Wires
from wavejig.spacer.profile import STEP_MM, Columns, Frame

# Common practice, no source.
HUMP_FLOOR = 0.35  # a hump is wire that rises above this share of the highest
LEAST_HUMP_MM = 3.0  # across; what is narrower is a jog, not a lobe
_ROOM_MM = 30.0  # columns beyond the radiator: no piece reaches further
_FARTHEST_SHIFT_MM = 5.0  # a wire that moves this far is not located at all


@dataclass(frozen=True, slots=True, kw_only=True)
class Hump:
    """Wire that rises towards the withdrawal side and falls again: a lobe. Columns first, peak, last."""

    first: int
    peak: int
    last: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """What a piece of one withdrawal direction must hold and avoid; arrays hold one v per column.

    wire: centreline of the main wire in the standoff plane, the outermost; -inf where there is none.
    edge: outer edge of all wire with the printer's clearance; bare_edge: without it. blocked: outer edge
    of the keep-outs among the lobes; outer: keep-outs wholly beyond the wire. base_mm, peak_mm: lowest
    (not below 0) and highest v of `wire`.
    """

    frame: Frame
    columns: Columns
    wire: np.ndarray
    edge: np.ndarray
    bare_edge: np.ndarray
    blocked: np.ndarray
    outer: tuple[Keepout, ...]
    humps: tuple[Hump, ...]
    base_mm: float
    peak_mm: float


def look(design: Design, wires: Wires, discs: tuple[Keepout, ...], frame: Frame) -> Side:
    """Look at the radiator along a withdrawal direction."""
    uv = frame.local(wires.points[:, :2])
    columns = Columns.over(float(uv[:, 0].min()) - _ROOM_MM, float(uv[:, 0].max()) + _ROOM_MM)
    wire = np.max([columns.line(frame.local(chain)) for chain in wires.chords], axis=0)
    there = np.isfinite(wire)
    peak, base = float(wire[there].max()), max(0.0, float(wire[there].min()))
    clearance = design.printer.clearance_mm
    off = ~wires.flat
    blocked = columns.envelope(uv[off], wires.radius_mm[off] + clearance + HARDWARE_PLAY_MM)
    centres = frame.local(np.array([[d.x_mm, d.y_mm] for d in discs]))
    radii = np.array([d.radius_mm for d in discs])
    inner = centres[:, 1] - radii < peak
    blocked = profile.widened(np.maximum(blocked, columns.envelope(centres[inner], radii[inner])))
    return Side(
        frame=frame,
        columns=columns,
        wire=wire,
        edge=profile.widened(columns.envelope(uv, wires.radius_mm + clearance)),
        bare_edge=columns.envelope(uv, wires.radius_mm),
        blocked=blocked,
        outer=tuple(d for d, near in zip(discs, inner, strict=True) if not near),
        humps=_humps(wire, base + HUMP_FLOOR * (peak - base)),
        base_mm=base,
        peak_mm=peak,
    )


def _humps(wire: np.ndarray, floor_mm: float) -> tuple[Hump, ...]:
    out = []
    for first, last in profile.runs(wire >= floor_mm):
        if (last - first) * STEP_MM < LEAST_HUMP_MM:
            continue
        heights = wire[first : last + 1]
        at_top = np.flatnonzero(heights >= float(heights.max()) - 1e-6)
        # the middle of a flat top, not its first column
        out.append(Hump(first=first, peak=first + int(at_top[at_top.size // 2]), last=last))
    return tuple(out)


def slack_along_mm(s: Side, span: slice, rim: np.ndarray) -> float:
    """How far the wire can move along the withdrawal before it meets the rim (one v per column of span)."""
    return float((rim - s.bare_edge[span]).min())


def slack_across_mm(s: Side, span: slice, rim: np.ndarray) -> float:
    """The larger of the two side shifts at which the wire first meets the rim; inf if it never does."""
    padded = np.full(s.columns.u.size, np.inf)
    padded[span] = rim
    worst = 0.0
    for sign in (-1, 1):
        for k in range(1, round(_FARTHEST_SHIFT_MM / STEP_MM)):
            if np.any(np.roll(s.bare_edge, sign * k) > padded):
                worst = max(worst, k * STEP_MM)
                break
        else:
            return math.inf
    return worst


def in_the_way(s: Side, u_low: float, u_high: float, v_high: float) -> tuple[Keepout, ...]:
    """Keep-outs beyond the wire that a piece between these columns meets before v_high."""
    out = []
    for disc in s.outer:
        du, dv = s.frame.local(np.array([[disc.x_mm, disc.y_mm]]))[0]
        if u_low - disc.radius_mm < du < u_high + disc.radius_mm and dv - disc.radius_mm < v_high:
            out.append(disc)
    return tuple(out)


def highest_block(s: Side, span: slice) -> tuple[float, float]:
    """x, y of the point among `span` where keep-outs reach furthest out."""
    column = span.start + int(np.argmax(s.blocked[span]))
    return s.frame.world([(float(s.columns.u[column]), float(s.blocked[column]))])[0]
