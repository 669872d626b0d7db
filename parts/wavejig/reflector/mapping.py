"""Carry points from the flat blank to the folded sheet and back, and list the folded sheet's plane faces.

In a bend, a point at d on the blank sits at the angle (d - tangent) / (R + K T) round the bend's axis,
which lies R above the tangent; lengths are true on the neutral surface, K T from the inside.
Lengths in mm. Imports numpy only.
"""

from __future__ import annotations

import itertools
import math

import numpy as np

from wavejig.reflector.corners import base_corners, flange_corners
from wavejig.reflector.model import Tray, TrayError, TrayLip, along, outward

_ON_SHEET_MM = 1e-5


def fold(tray: Tray, points_flat: np.ndarray, depth: float | np.ndarray) -> np.ndarray:
    """Where points of the blank are once it is folded.

    points_flat: (n, 2) mm on the blank; depth: fraction of the thickness below the radiator-side face,
    0 to 1, one for all or (n,). Returns (n, 3) mm. Raises TrayError for a point in a corner notch, which
    belongs to no panel.
    """
    flat = np.asarray(points_flat, dtype=float)
    depths = np.broadcast_to(np.asarray(depth, dtype=float), flat.shape[:1])
    if np.any((depths < 0.0) | (depths > 1.0)):
        raise TrayError(
            f"depth: got {depths.min():g} to {depths.max():g}, need 0 (radiator side) to 1 (back)"
        )
    below = depths * tray.thickness_mm
    out = np.column_stack([flat, -below])
    lost = np.zeros(len(flat), dtype=bool)
    claimed = np.zeros(len(flat), dtype=bool)
    for lip in tray.lips:
        n, u = outward(lip.edge), along(lip.edge)
        d, s = flat @ n, flat @ u
        beyond = d > lip.tangent_mm
        mine = beyond & (_excess_mm(lip, d - lip.bend_end_mm, s) <= _ON_SHEET_MM)
        lost |= beyond
        claimed |= mine
        across, up = _bent(tray, lip, d[mine], below[mine])
        out[mine] = np.column_stack([across[:, None] * n + s[mine, None] * u, up])
    lost &= ~claimed
    if lost.any():
        x, y = flat[lost][0]
        raise TrayError(f"point {x:.3f}, {y:.3f} mm is off the blank: in a corner, between two lips")
    return out


def unfold(tray: Tray, points: np.ndarray) -> np.ndarray:
    """Where points in or on the folded sheet were on the blank; the inverse of `fold`.

    points: (n, 3) mm. Returns (n, 2) mm. Raises TrayError for a point outside the sheet's thickness or its
    lips. At the very edge of a sharp inside bend (R = 0) all of the bend's width falls on one line; such a
    point comes back at the bend's start.
    """
    p = np.asarray(points, dtype=float)
    best = p[:, :2].copy()
    miss = _outside(p[:, 2], -tray.thickness_mm, 0.0)
    for axis, name in enumerate("xy"):
        low, high = -tray.base_reach_mm(name + "-"), tray.base_reach_mm(name + "+")
        miss = np.maximum(miss, _outside(p[:, axis], low, high))
    for lip in tray.lips:
        n, u = outward(lip.edge), along(lip.edge)
        d, depth_mm = _unbent(tray, lip, p[:, :2] @ n, p[:, 2])
        s = p[:, :2] @ u
        off = np.maximum(_outside(depth_mm, 0.0, tray.thickness_mm), lip.tangent_mm - d)
        off = np.maximum(off, _excess_mm(lip, d - lip.bend_end_mm, s))
        better = off < miss
        miss = np.where(better, off, miss)
        best[better] = d[better, None] * n + s[better, None] * u
    worst = int(miss.argmax()) if len(miss) else 0
    if len(miss) and not miss[worst] <= _ON_SHEET_MM:
        x, y, z = p[worst]
        raise TrayError(f"point {x:.3f}, {y:.3f}, {z:.3f} mm is {miss[worst]:.3g} mm off the folded sheet")
    return best


def panels(tray: Tray, strips_per_bend: int = 4) -> tuple[np.ndarray, ...]:
    """The radiator-side face as plane polygons: base, then per lip its bend's strips and its flange.

    Each is (m, 3) mm, counter-clockwise seen from the radiator side, corners sharp (their small rounding
    left out). Neighbours share the corners of their common edge exactly. A bend's strips are chords of
    its inside arc; a sharp bend (R = 0) has none.
    """
    base = np.array([(x, y, 0.0) for x, y, _ in base_corners(tray)])
    out = [base]
    for lip in tray.lips:
        ends = np.array([-lip.left.half_mm, lip.right.half_mm])
        if tray.inside_radius_mm > 0.0:
            stations = np.linspace(lip.tangent_mm, lip.bend_end_mm, strips_per_bend + 1)
            for near, far in itertools.pairwise(stations):
                out.append(_face(tray, lip, np.array([near, far, far, near]), ends[[0, 0, 1, 1]]))
        corners = np.array(flange_corners(lip, tray.practice))
        out.append(_face(tray, lip, lip.bend_end_mm + corners[:, 0], corners[:, 1]))
    return tuple(out)


def _face(tray: Tray, lip: TrayLip, d: np.ndarray, s: np.ndarray) -> np.ndarray:
    """(n, 3) points of the radiator-side face at (d, s) of a lip."""
    across, up = _bent(tray, lip, d, np.zeros_like(d))
    return np.column_stack([across[:, None] * outward(lip.edge) + s[:, None] * along(lip.edge), up])


def _bent(tray: Tray, lip: TrayLip, d: np.ndarray, below_mm: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Distance outward and height of points at d on the blank, `below_mm` under the radiator-side face."""
    r = tray.inside_radius_mm
    angle = math.radians(lip.angle_deg)
    turned = np.clip((d - lip.tangent_mm) / lip.allowance_mm, 0.0, 1.0) * angle
    straight = np.maximum(d - lip.bend_end_mm, 0.0)
    across = lip.tangent_mm + (r + below_mm) * np.sin(turned) + straight * math.cos(angle)
    up = r - (r + below_mm) * np.cos(turned) + straight * math.sin(angle)
    return across, up


def _unbent(tray: Tray, lip: TrayLip, across: np.ndarray, up: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """d on the blank and depth under the radiator-side face, both mm, for points in the bend or flange."""
    r = tray.inside_radius_mm
    angle = math.radians(lip.angle_deg)
    x, z = across - lip.tangent_mm, up - r
    w = x * math.cos(angle) + z * math.sin(angle)
    turned = np.arctan2(x, -z)
    in_flange = w >= 0.0
    d_bend = lip.tangent_mm + turned / angle * lip.allowance_mm
    d = np.where(in_flange, lip.bend_end_mm + w, d_bend)
    depth = np.where(in_flange, x * math.sin(angle) - z * math.cos(angle), np.hypot(x, z)) - r
    return d, depth


def _excess_mm(lip: TrayLip, w: np.ndarray, s: np.ndarray) -> np.ndarray:
    """How far beyond the lip's end the points (w, s) lie; 0 or less on the lip."""
    reaches = []
    for end in (lip.left, lip.right):
        reach = np.full_like(w, end.half_mm)
        if end.ear_mm is not None:
            # the ear's root is rounded, by up to half its height above the bend: that is sheet too
            reach = np.where(w >= end.ear_mm / 2.0, end.ear_base_mm + end.ear_slope * w, reach)
        reaches.append(reach)
    excess: np.ndarray = np.maximum(-s - reaches[0], s - reaches[1])
    return excess


def _outside(value: np.ndarray, low: float, high: float) -> np.ndarray:
    off: np.ndarray = np.maximum(np.maximum(low - value, value - high), 0.0)
    return off
