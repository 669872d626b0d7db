"""Plane bands about a path: its parallel curves, and the closed ribbon of a given half-width.

Works on paths that lie flat (every arc about +z or -z; z is ignored). Parallel curves of lines and
arcs are lines and arcs, so nothing is approximated.
"""

from __future__ import annotations

import math
from dataclasses import replace

from wavejig.geometry.path import Arc, Path, Segment, tangent_at_end, tangent_at_start
from wavejig.geometry.plane import Contour, Vertex


def parallel(path: Path, offset_mm: float) -> tuple[Vertex, ...]:
    """The curve `offset_mm` to the left of a flat path, as open (x, y, bulge) vertices.

    The last vertex has bulge 0. Raises ValueError where an arc's radius would vanish.
    """
    out: list[Vertex] = []
    for segment in path.segments:
        x, y = _shifted(segment.start, tangent_at_start(segment), offset_mm)
        bulge = 0.0
        if isinstance(segment, Arc):
            left = segment.normal[2] > 0
            if abs(abs(segment.normal[2]) - 1.0) > 1e-6:
                raise ValueError("a ribbon needs a flat path; this arc leaves the plane")
            radius = segment.radius_mm - offset_mm if left else segment.radius_mm + offset_mm
            if radius <= 1e-9:
                raise ValueError(
                    f"offset {offset_mm:g} mm meets the centre of an arc of radius {segment.radius_mm:g} mm"
                )
            # an arc's bulge is unbounded at a whole turn: cut long arcs in two
            if segment.angle_deg > 180.0:
                half = math.tan(math.radians(segment.angle_deg) / 8.0)
                mx, my = _radial(segment, radius)
                out.append((x, y, half if left else -half))
                out.append((mx, my, half if left else -half))
                continue
            bulge = math.tan(math.radians(segment.angle_deg) / 4.0)
            bulge = bulge if left else -bulge
        out.append((x, y, bulge))
    last = path.segments[-1]
    x, y = _shifted(last.end, tangent_at_end(last), offset_mm)
    out.append((x, y, 0.0))
    return tuple(out)


def ribbon(path: Path, half_width_mm: float, *, extend_mm: float = 0.0) -> Contour:
    """The closed band within `half_width_mm` of a flat path, square at its ends.

    extend_mm lengthens both ends. An inner side whose arc radius is below the half-width keeps a tiny
    radius instead (the band then fills the corner's inside, which is what a channel there does).
    """
    right = _safe_parallel(path, -half_width_mm)
    left = _safe_parallel(path, half_width_mm)
    if extend_mm:
        right = _stretch(right, path, -half_width_mm, extend_mm)
        left = _stretch(left, path, half_width_mm, extend_mm)
    back: list[Vertex] = []
    for i in range(len(left) - 1, -1, -1):
        bulge = -left[i - 1][2] if i else 0.0
        back.append((left[i][0], left[i][1], bulge))
    front = [*right[:-1], (right[-1][0], right[-1][1], 0.0)]
    return Contour(vertices=_dedupe((*front, *back)))


def _safe_parallel(path: Path, offset_mm: float) -> tuple[Vertex, ...]:
    widened: list[Segment] = []
    for s in path.segments:
        if isinstance(s, Arc):
            inward = offset_mm if s.normal[2] > 0 else -offset_mm
            if s.radius_mm - inward <= 0.02:
                # corner point where the two offset straights meet, by a vanishing arc about it
                widened.append(replace(s, radius_mm=inward + 0.02))
                continue
        widened.append(s)
    return parallel(Path(segments=tuple(widened)), offset_mm)


def _shifted(
    point: tuple[float, float, float], t: tuple[float, float, float], d: float
) -> tuple[float, float]:
    return (point[0] - t[1] * d, point[1] + t[0] * d)


def _radial(arc: Arc, radius_mm: float) -> tuple[float, float]:
    """The arc's middle point, at another radius about the same centre."""
    dx, dy = arc.middle[0] - arc.centre[0], arc.middle[1] - arc.centre[1]
    scale = radius_mm / arc.radius_mm
    return (arc.centre[0] + dx * scale, arc.centre[1] + dy * scale)


def _stretch(curve: tuple[Vertex, ...], path: Path, offset: float, extend: float) -> tuple[Vertex, ...]:
    t0, t1 = tangent_at_start(path.segments[0]), tangent_at_end(path.segments[-1])
    first = (curve[0][0] - t0[0] * extend, curve[0][1] - t0[1] * extend, 0.0)
    last = (curve[-1][0] + t1[0] * extend, curve[-1][1] + t1[1] * extend, 0.0)
    return (first, *curve[:-1], (curve[-1][0], curve[-1][1], 0.0), last)


def _dedupe(vertices: tuple[Vertex, ...]) -> tuple[Vertex, ...]:
    out: list[Vertex] = []
    for v in vertices:
        if out and math.hypot(v[0] - out[-1][0], v[1] - out[-1][1]) < 1e-9:
            out[-1] = v
        else:
            out.append(v)
    if len(out) > 1 and math.hypot(out[0][0] - out[-1][0], out[0][1] - out[-1][1]) < 1e-9:
        out.pop()
    return tuple(out)
