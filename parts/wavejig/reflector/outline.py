"""Closed outlines of sheet: rounding corners, growing by half a kerf, clearances to edges.

Lengths in mm. Outlines run counter-clockwise. Imports numpy only.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from wavejig.geometry.plane import Contour, Vertex

_TINY = 1e-9


class OutlineError(ValueError):
    """An outline that cannot be cut: an arc vanishes, an edge turns over, or the loop crosses itself."""


def rounded(corners: Sequence[tuple[float, float, float]]) -> Contour:
    """The polygon through `corners` = (x_mm, y_mm, radius_mm), each corner rounded by a tangent arc.

    A radius is lowered where its arc would use more than half of a neighbouring edge. Corners in line
    with their neighbours are left out.
    """
    points = _distinct([np.array(c, dtype=float) for c in corners])
    out: list[Vertex] = []
    for i, here in enumerate(points):
        before, after = here[:2] - points[i - 1][:2], points[(i + 1) % len(points)][:2] - here[:2]
        a, b = float(np.hypot(*before)), float(np.hypot(*after))
        into, onward = before / a, after / b
        turn = math.atan2(_cross(into, onward), float(into @ onward))
        if abs(turn) < _TINY:
            continue
        tangent = math.tan(abs(turn) / 2.0)
        setback = min(float(here[2]) * tangent, a / 2.0, b / 2.0)
        if setback < _TINY:
            out.append((float(here[0]), float(here[1]), 0.0))
            continue
        start, end = here[:2] - into * setback, here[:2] + onward * setback
        out.append((float(start[0]), float(start[1]), math.tan(turn / 4.0)))
        out.append((float(end[0]), float(end[1]), 0.0))
    return Contour(vertices=_merged(out))


def grown(contour: Contour, distance_mm: float) -> Contour:
    """The parallel outline `distance_mm` outside a counter-clockwise one (inside, when negative); exact.

    Arcs keep their angle and change their radius; sharp corners between straights are extended to
    where the moved straights meet. Raises OutlineError when an arc or an edge would vanish, where an arc
    meets its neighbour at an angle, and when the result crosses itself.
    """
    vertices = contour.vertices
    n = len(vertices)
    tangents = [_tangents(vertices[i], vertices[(i + 1) % n]) for i in range(n)]
    moved: list[Vertex] = []
    for i, (x, y, bulge) in enumerate(vertices):
        into, onward = tangents[i - 1][1], tangents[i][0]
        n1, n2 = _right(into), _right(onward)
        if float(np.hypot(*(n1 - n2))) > 1e-6 and (bulge or vertices[i - 1][2]):
            raise OutlineError(
                f"outline corner at {x:.3f}, {y:.3f} mm: an arc meets its neighbour at an angle there; "
                "only tangent arcs can be offset"
            )
        shift = distance_mm * (n1 + n2) / (1.0 + float(n1 @ n2))
        moved.append((x + float(shift[0]), y + float(shift[1]), bulge))
    for i in range(n):
        a, b = vertices[i], vertices[(i + 1) % n]
        p, q = moved[i], moved[(i + 1) % n]
        along = (b[0] - a[0]) * (q[0] - p[0]) + (b[1] - a[1]) * (q[1] - p[1])
        if along <= 0.0:
            what = f"arc of radius {_radius(a, b):.3f} mm" if a[2] else "edge"
            raise OutlineError(
                f"offset {distance_mm:g} mm: the {what} from {a[0]:.3f}, {a[1]:.3f} mm would vanish; "
                "use a thinner cut or leave the offset to the shop"
            )
    out = Contour(vertices=tuple(moved))
    if crosses_itself(out):
        raise OutlineError(
            f"offset {distance_mm:g} mm: edges of the outline would overlap; "
            "use a thinner cut or leave the offset to the shop"
        )
    return out


def crosses_itself(contour: Contour, chord_error_mm: float = 0.01) -> bool:
    """True when edges of the loop, as chords within `chord_error_mm`, meet anywhere but at its corners."""
    p = contour.points(chord_error_mm)
    q = np.roll(p, -1, axis=0)
    d = q - p
    # every pair of segments: on which side of one do the ends of the other lie
    start = d[:, None, 0] * (p[None, :, 1] - p[:, None, 1]) - d[:, None, 1] * (p[None, :, 0] - p[:, None, 0])
    end = d[:, None, 0] * (q[None, :, 1] - p[:, None, 1]) - d[:, None, 1] * (q[None, :, 0] - p[:, None, 0])
    parted = (start > 0.0) != (end > 0.0)
    n = len(p)
    apart = np.abs(np.arange(n)[:, None] - np.arange(n)[None, :])
    neighbours = (apart <= 1) | (apart == n - 1)
    return bool(np.any(parted & parted.T & ~neighbours))


def distances_mm(points: np.ndarray, loop: np.ndarray) -> np.ndarray:
    """(n,) float: least distance of each of `points` (n, 2) to the closed polyline `loop` (m, 2)."""
    a = loop[None, :, :]
    d = (np.roll(loop, -1, axis=0) - loop)[None, :, :]
    v = points[:, None, :] - a
    length2 = np.maximum((d * d).sum(axis=2), _TINY**2)
    t = np.clip((v * d).sum(axis=2) / length2, 0.0, 1.0)
    nearest: np.ndarray = np.hypot(v[..., 0] - t * d[..., 0], v[..., 1] - t * d[..., 1]).min(axis=1)
    return nearest


def inside(points: np.ndarray, loop: np.ndarray) -> np.ndarray:
    """(n,) bool: which of `points` (n, 2) lie within the closed polyline `loop` (m, 2); even-odd rule."""
    x, y = points[:, 0, None], points[:, 1, None]
    x0, y0 = loop[None, :, 0], loop[None, :, 1]
    x1, y1 = np.roll(x0, -1), np.roll(y0, -1)
    straddles = (y0 > y) != (y1 > y)
    with np.errstate(divide="ignore", invalid="ignore"):
        crossing = x0 + (y - y0) * (x1 - x0) / (y1 - y0)
    odd: np.ndarray = ((straddles & (crossing > x)).sum(axis=1) % 2) == 1
    return odd


def _tangents(a: Vertex, b: Vertex) -> tuple[np.ndarray, np.ndarray]:
    """Unit directions of travel where the edge leaves `a` and where it reaches `b`."""
    chord = math.atan2(b[1] - a[1], b[0] - a[0])
    half = 2.0 * math.atan(a[2])
    return tuple(np.array([math.cos(t), math.sin(t)]) for t in (chord - half, chord + half))  # type: ignore[return-value]


def _radius(a: Vertex, b: Vertex) -> float:
    return math.dist(a[:2], b[:2]) / (2.0 * math.sin(2.0 * math.atan(abs(a[2]))))


def _right(direction: np.ndarray) -> np.ndarray:
    return np.array([direction[1], -direction[0]])


def _cross(a: np.ndarray, b: np.ndarray) -> float:
    return float(a[0] * b[1] - a[1] * b[0])


def _distinct(points: list[np.ndarray]) -> list[np.ndarray]:
    return [p for i, p in enumerate(points) if float(np.hypot(*(p[:2] - points[i - 1][:2]))) > _TINY]


def _merged(vertices: list[Vertex]) -> tuple[Vertex, ...]:
    """Leave out an arc's end where the next arc starts at once."""
    n = len(vertices)
    return tuple(
        v for i, v in enumerate(vertices) if math.dist(v[:2], vertices[(i + 1) % n][:2]) > _TINY or v[2]
    )
