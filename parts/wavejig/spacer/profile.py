"""Curves v(u) on an even grid of columns: envelopes of wires, openings, outlines.

A spacer piece is described in its own axes: v runs the way it is pulled out, u across (turned so that
u, v is right-handed seen from above). Whatever the piece must pass is then a curve of least v for each
column u: a piece that stays above the curve can be pulled along +v for ever without touching.
Lengths in mm. Imports numpy only.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from wavejig.geometry.plane import Contour

STEP_MM = 0.05  # column width: a tenth of the finest nozzle's line
# How far a smoothed outline may be off the curve it stands for; below what a printer resolves.
_OUTLINE_ERROR_MM = 0.01
# A jump of more than this from one column to the next is drawn as an upright edge.
_UPRIGHT_MM = 8.0 * STEP_MM


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """Axes of one piece: v along `direction`, u to its right-hand side (u x v = +z)."""

    direction: tuple[float, float]

    def local(self, xy: np.ndarray) -> np.ndarray:
        """(n, 2) u, v of (n, 2) x, y."""
        dx, dy = self.direction
        return np.column_stack([xy[:, 0] * dy - xy[:, 1] * dx, xy[:, 0] * dx + xy[:, 1] * dy])

    def world(self, uv: Iterable[tuple[float, float]]) -> list[tuple[float, float]]:
        """x, y of u, v points."""
        dx, dy = self.direction
        return [(u * dy + v * dx, -u * dx + v * dy) for u, v in uv]


@dataclass(frozen=True, slots=True, kw_only=True)
class Columns:
    """An even grid of columns u."""

    u: np.ndarray

    @staticmethod
    def over(low_mm: float, high_mm: float) -> Columns:
        """Columns from `low_mm` to `high_mm`, on multiples of STEP_MM."""
        return Columns(u=np.arange(math.floor(low_mm / STEP_MM), math.ceil(high_mm / STEP_MM) + 1) * STEP_MM)

    def index(self, u_mm: float) -> int:
        """Number of the column nearest to u, held to the grid."""
        return int(np.clip(round((u_mm - float(self.u[0])) / STEP_MM), 0, self.u.size - 1))

    def envelope(self, points: np.ndarray, radius_mm: np.ndarray | float) -> np.ndarray:
        """Upper edge of discs about `points`, per column; -inf where there is none.

        points: (n, 2) u, v; radius_mm: one or n. Points along a wire must lie closer than its radius.
        """
        top = np.full(self.u.size, -np.inf)
        if not len(points):
            return top
        radius = np.broadcast_to(np.asarray(radius_mm, dtype=float), (len(points),))
        centre = np.round((points[:, 0] - self.u[0]) / STEP_MM).astype(int)
        widest = math.ceil(float(radius.max()) / STEP_MM) + 1
        for k in range(-widest, widest + 1):
            column = centre + k
            inside = (column >= 0) & (column < self.u.size)
            away = self.u[np.clip(column, 0, self.u.size - 1)] - points[:, 0]
            square = radius**2 - away**2
            inside &= square >= 0
            np.maximum.at(top, column[inside], points[inside, 1] + np.sqrt(square[inside]))
        return top

    def line(self, points: np.ndarray) -> np.ndarray:
        """Greatest v of the chords through `points` in order, per column; -inf where there is none."""
        top = np.full(self.u.size, -np.inf)
        for (u0, v0), (u1, v1) in pairwise(points.tolist()):
            low, high = min(u0, u1), max(u0, u1)
            i = math.ceil((low - float(self.u[0])) / STEP_MM - 1e-9)
            j = math.floor((high - float(self.u[0])) / STEP_MM + 1e-9)
            i, j = max(i, 0), min(j, self.u.size - 1)
            if i > j:
                continue
            span = u1 - u0
            t = (self.u[i : j + 1] - u0) / span if abs(span) > 1e-12 else np.zeros(j + 1 - i)
            v = v0 + (v1 - v0) * t if abs(span) > 1e-12 else np.full(j + 1 - i, max(v0, v1))
            top[i : j + 1] = np.maximum(top[i : j + 1], v)
        return top


def widened(curve: np.ndarray) -> np.ndarray:
    """Each column raised to its neighbours: what lies between two columns is then covered too."""
    padded = np.concatenate([[-np.inf], curve, [-np.inf]])
    raised: np.ndarray = np.maximum(np.maximum(padded[:-2], padded[1:-1]), padded[2:])
    return raised


def without_spikes(curve: np.ndarray, width_mm: float) -> np.ndarray:
    """The curve, raised where material above it would reach down in a finger thinner than `width_mm`."""
    n = max(1, round(width_mm / STEP_MM)) + 1
    if n >= curve.size:
        return np.full(curve.size, curve.max())
    highest: np.ndarray = np.lib.stride_tricks.sliding_window_view(curve, n).max(axis=1)
    padded = np.concatenate([np.full(n - 1, np.inf), highest, np.full(n - 1, np.inf)])
    out: np.ndarray = np.lib.stride_tricks.sliding_window_view(padded, n).min(axis=1)
    return out


def runs(mask: np.ndarray) -> list[tuple[int, int]]:
    """First and last column of each unbroken stretch of True."""
    edges = np.flatnonzero(np.diff(np.concatenate([[False], mask, [False]]).astype(int)))
    return [(int(a), int(b) - 1) for a, b in zip(edges[::2], edges[1::2], strict=True)]


def settled(columns: Columns, curve: np.ndarray, under: np.ndarray | None = None) -> np.ndarray:
    """The curve with its fine steps smoothed into few straights, nowhere off by more than 0.01 mm.

    under: a settled curve that `curve` does not pass below. The result keeps to that, and where both
    are the same it has the same corners, so that layers built on them share their walls.
    """
    u, out = columns.u, curve.copy()
    fixed = np.zeros(u.size, dtype=bool)
    if under is not None:
        same = np.abs(curve - under) < 1e-9
        bend = np.zeros(u.size, dtype=bool)
        bend[1:-1] = np.abs(np.diff(under, 2)) > 1e-9
        ends = same & ~(np.roll(same, 1) & np.roll(same, -1))
        fixed = same & (bend | ends)
    for a, b in _stretches(curve, under):
        held = fixed[a : b + 1].copy()
        while True:
            keep = _corners(u[a : b + 1], curve[a : b + 1], held, _OUTLINE_ERROR_MM)
            smooth = np.interp(u[a : b + 1], u[a : b + 1][keep], curve[a : b + 1][keep])
            low = np.zeros(keep.size, dtype=bool) if under is None else smooth < under[a : b + 1] - 1e-9
            if not np.any(low):
                break
            held |= low
        out[a : b + 1] = smooth
    return out


def above(
    columns: Columns, low: np.ndarray, top_mm: float, frame: Frame, under: np.ndarray | None = None
) -> Contour:
    """Outline, in x and y, of what lies between the settled curve `low` and v = `top_mm`.

    under: the settled curve of the layer below, if there is one; the outline then stays within that one's.
    """
    u, v = columns.u, low
    stretches = _stretches(low, under)
    points: list[tuple[float, float]] = []
    for n, (a, b) in enumerate(stretches):
        keep = _corners(u[a : b + 1], v[a : b + 1], np.zeros(b + 1 - a, dtype=bool), 1e-7)
        points += [(float(x), float(y)) for x, y in zip(u[a : b + 1][keep], v[a : b + 1][keep], strict=True)]
        if n + 1 < len(stretches):
            # the upright edge to the next stretch stands on the side that leaves less material
            edge = float(u[b + 1] if v[b] > v[b + 1] else u[b])
            points += [(edge, float(v[b])), (edge, float(v[b + 1]))]
    points += [(float(u[-1]), top_mm), (float(u[0]), top_mm)]
    return Contour.polygon(_without_repeats(frame.world(points)))


def _stretches(curve: np.ndarray, under: np.ndarray | None) -> list[tuple[int, int]]:
    """First and last column of each stretch without a jump, in the curve or in the one below it."""
    jump = np.abs(np.diff(curve)) > _UPRIGHT_MM
    if under is not None:
        jump |= np.abs(np.diff(under)) > _UPRIGHT_MM
    after = (np.flatnonzero(jump) + 1).tolist()
    return list(zip([0, *after], [*(i - 1 for i in after), curve.size - 1], strict=True))


def _corners(u: np.ndarray, v: np.ndarray, held: np.ndarray, error_mm: float) -> np.ndarray:
    """Douglas-Peucker (1973): which points to keep, `held` among them, so that none left out is off by more."""
    keep = held.copy()
    keep[[0, -1]] = True
    stack = list(pairwise(np.flatnonzero(keep).tolist()))
    while stack:
        a, b = stack.pop()
        if b - a < 2:
            continue
        du, dv = u[b] - u[a], v[b] - v[a]
        away = np.abs((u[a + 1 : b] - u[a]) * dv - (v[a + 1 : b] - v[a]) * du) / math.hypot(du, dv)
        worst = int(np.argmax(away))
        if away[worst] > error_mm:
            keep[a + 1 + worst] = True
            stack += [(a, a + 1 + worst), (a + 1 + worst, b)]
    return keep


def _without_repeats(points: list[tuple[float, float]]) -> list[tuple[float, float]]:
    """Without points that repeat the last one or lie on a straight between their neighbours."""
    out: list[tuple[float, float]] = []
    for p in points:
        if out and math.dist(p, out[-1]) < 1e-6:
            continue
        if len(out) > 1 and _straight(out[-2], out[-1], p):
            out[-1] = p
        else:
            out.append(p)
    while len(out) > 3 and (math.dist(out[0], out[-1]) < 1e-6 or _straight(out[-2], out[-1], out[0])):
        out.pop()
    return out


def _straight(a: tuple[float, float], b: tuple[float, float], c: tuple[float, float]) -> bool:
    """Whether a, b, c follow each other on one straight."""
    ux, uy, vx, vy = b[0] - a[0], b[1] - a[1], c[0] - b[0], c[1] - b[1]
    small = 1e-9 * max(1.0, math.hypot(ux, uy) * math.hypot(vx, vy))
    return abs(ux * vy - uy * vx) < small and ux * vx + uy * vy > 0
