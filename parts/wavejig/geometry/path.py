"""3D wire paths of straights and circular arcs, tangent to tangent, and their bend tables.

A *path* is walked from its start; every arc meets its neighbours tangentially. A *corner* is the
intersection point of the two straights beside an arc. Bends are described as bending tables do
(design conventions): feed, rotation of the bend plane, angle.

Lengths in mm, angles in degrees. Imports numpy only.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

Point = tuple[float, float, float]
_TINY_MM = 1e-9


class PathError(ValueError):
    """A path that cannot be: its corners leave no room for the bends, or a straight has no length."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """A straight from `start` to `end`."""

    start: Point
    end: Point

    @property
    def length_mm(self) -> float:
        """Length of the straight."""
        return math.dist(self.start, self.end)


@dataclass(frozen=True, slots=True, kw_only=True)
class Arc:
    """A circular arc from `start` through `middle` to `end`; up to a whole turn less a little."""

    start: Point
    middle: Point
    end: Point
    centre: Point
    normal: Point  # unit vector; the arc turns right-handed about it
    radius_mm: float
    angle_deg: float

    @property
    def length_mm(self) -> float:
        """Length along the arc."""
        return math.radians(self.angle_deg) * self.radius_mm


Segment = Line | Arc


@dataclass(frozen=True, slots=True, kw_only=True)
class PathBend:
    """One bend of a path: straight before it, turn of the bend plane, angle, centreline radius."""

    feed_mm: float
    rotation_deg: float
    angle_deg: float
    radius_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Path:
    """A chain of straights and arcs, each starting where the last one ends."""

    segments: tuple[Segment, ...]

    @property
    def length_mm(self) -> float:
        """Length of the centreline itself (not the developed length of the stock)."""
        return sum(s.length_mm for s in self.segments)

    @property
    def start(self) -> Point:
        """First point."""
        return self.segments[0].start

    @property
    def end(self) -> Point:
        """Last point."""
        return self.segments[-1].end

    @property
    def lines(self) -> tuple[Line, ...]:
        """The straights, in order."""
        return tuple(s for s in self.segments if isinstance(s, Line))

    @property
    def arcs(self) -> tuple[Arc, ...]:
        """The arcs, in order."""
        return tuple(s for s in self.segments if isinstance(s, Arc))

    def start_direction(self) -> Point:
        """Unit direction of travel at the start."""
        return tangent_at_start(self.segments[0])

    def bends(self) -> tuple[PathBend, ...]:
        """The bend table of the path: one row per arc, in walking order."""
        out: list[PathBend] = []
        feed = 0.0
        previous: np.ndarray | None = None
        for segment in self.segments:
            if isinstance(segment, Line):
                feed += segment.length_mm
                continue
            normal = np.array(segment.normal)
            rotation = 0.0
            if previous is not None:
                travel = np.array(tangent_at_start(segment))
                rotation = _signed_angle_deg(previous, normal, travel)
            out.append(
                PathBend(
                    feed_mm=feed,
                    rotation_deg=rotation,
                    angle_deg=segment.angle_deg,
                    radius_mm=segment.radius_mm,
                )
            )
            feed = 0.0
            previous = normal
        return tuple(out)

    def tail_mm(self) -> float:
        """Straight left after the last arc."""
        last = self.segments[-1]
        return last.length_mm if isinstance(last, Line) else 0.0

    def bounds(self) -> tuple[Point, Point]:
        """Lowest and highest x, y, z of the centreline (arcs to 1 micrometre)."""
        pts = self.sample(chord_error_mm=0.001)
        return tuple(pts.min(axis=0).tolist()), tuple(pts.max(axis=0).tolist())

    def sample(self, *, chord_error_mm: float = 0.05, step_mm: float = math.inf) -> np.ndarray:
        """(n, 3) float: points along the path; chords within `chord_error_mm`, no longer than `step_mm`."""
        chunks: list[np.ndarray] = [np.array([self.start])]
        for segment in self.segments:
            if isinstance(segment, Line):
                n = max(1, math.ceil(segment.length_mm / step_mm))
                t = np.linspace(0.0, 1.0, n + 1)[1:, None]
                chunks.append(np.array(segment.start) * (1 - t) + np.array(segment.end) * t)
            else:
                radius = segment.radius_mm
                widest = 2.0 * math.acos(max(0.0, 1.0 - min(chord_error_mm / radius, 1.0)))
                n = max(2, math.ceil(math.radians(segment.angle_deg) / max(widest, 1e-4)))
                n = max(n, math.ceil(segment.length_mm / step_mm))
                angles = np.linspace(0.0, math.radians(segment.angle_deg), n + 1)[1:]
                chunks.append(_arc_points(segment, angles))
        return np.concatenate(chunks)

    def moved(self, dx_mm: float, dy_mm: float, dz_mm: float) -> Path:
        """The same path, shifted."""
        shift = (dx_mm, dy_mm, dz_mm)
        out: list[Segment] = []
        for s in self.segments:
            if isinstance(s, Line):
                out.append(Line(start=_add(s.start, shift), end=_add(s.end, shift)))
            else:
                out.append(
                    Arc(
                        start=_add(s.start, shift),
                        middle=_add(s.middle, shift),
                        end=_add(s.end, shift),
                        centre=_add(s.centre, shift),
                        normal=s.normal,
                        radius_mm=s.radius_mm,
                        angle_deg=s.angle_deg,
                    )
                )
        return Path(segments=tuple(out))

    def reversed(self) -> Path:
        """The same path walked from its other end."""
        out: list[Segment] = []
        for s in reversed(self.segments):
            if isinstance(s, Line):
                out.append(Line(start=s.end, end=s.start))
            else:
                out.append(
                    Arc(
                        start=s.end,
                        middle=s.middle,
                        end=s.start,
                        centre=s.centre,
                        normal=(-s.normal[0], -s.normal[1], -s.normal[2]),
                        radius_mm=s.radius_mm,
                        angle_deg=s.angle_deg,
                    )
                )
        return Path(segments=tuple(out))


def round_corners(corners: Sequence[Point], radii_mm: Sequence[float]) -> Path:
    """The path through `corners` with each inner one rounded by an arc.

    corners: n points, n >= 2; radii_mm: n - 2 centreline radii, one per inner corner (0 is refused
    unless the corner is straight). Corners in line with their neighbours become plain straights; arcs
    that follow each other with no straight between, about the same centre, become one arc.
    Raises PathError naming the corner (counted from 1) whose bend does not fit.
    """
    pts = [np.array(c, dtype=float) for c in corners]
    if len(pts) < 2 or len(radii_mm) != len(pts) - 2:
        raise PathError(f"{len(pts)} corners need {max(len(pts) - 2, 0)} bend radii, got {len(radii_mm)}")
    legs = [b - a for a, b in itertools.pairwise(pts)]
    lengths = [float(np.linalg.norm(v)) for v in legs]
    for i, length in enumerate(lengths):
        if length < _TINY_MM:
            raise PathError(f"corners {i + 1} and {i + 2} are the same point; move or remove one")
    units = [v / n for v, n in zip(legs, lengths, strict=True)]

    setbacks = [0.0] * len(pts)
    turns = [0.0] * len(pts)
    for i in range(1, len(pts) - 1):
        turn = _angle_between_rad(units[i - 1], units[i])
        if turn > math.radians(179.0):
            raise PathError(f"corner {i + 1} turns straight back on itself; no bend can do that")
        if turn > 1e-9:
            if radii_mm[i - 1] <= 0:
                raise PathError(f"corner {i + 1} has bend radius {radii_mm[i - 1]:g} mm; it must be above 0")
            turns[i] = turn
            setbacks[i] = radii_mm[i - 1] * math.tan(turn / 2.0)

    segments: list[Segment] = []
    cursor = pts[0]
    for i in range(len(pts) - 1):
        straight = lengths[i] - setbacks[i] - setbacks[i + 1]
        if straight < -1e-7:
            raise PathError(
                f"the straight from corner {i + 1} to {i + 2} is {lengths[i]:.3f} mm long but its bends take "
                f"{setbacks[i] + setbacks[i + 1]:.3f} mm; use a smaller bend radius or a longer side"
            )
        tangent_end = pts[i + 1] - units[i] * setbacks[i + 1]
        if straight > _TINY_MM * 100:
            _append_line(segments, cursor, tangent_end)
            cursor = tangent_end
        if i + 1 < len(pts) - 1 and turns[i + 1] > 0:
            arc = _corner_arc(pts[i + 1], units[i], units[i + 1], radii_mm[i], turns[i + 1])
            _append_arc(segments, arc)
            cursor = np.array(arc.end)
    if not segments:
        raise PathError("the path has no length")
    return Path(segments=tuple(segments))


def path_from_bends(
    bends: Sequence[PathBend], tail_mm: float, *, start: Point, direction: Point, normal: Point
) -> Path:
    """The centreline that a bend table describes.

    start, direction: where the walk begins and which way; normal: unit normal of the first bend's
    plane (the arc turns right-handed about it). The inverse of `Path.bends`.
    """
    position = np.array(start, dtype=float)
    heading = _unit(np.array(direction, dtype=float))
    axis = np.array(normal, dtype=float)
    axis = _unit(axis - heading * float(axis @ heading))
    segments: list[Segment] = []
    for bend in bends:
        if bend.feed_mm > _TINY_MM:
            end = position + heading * bend.feed_mm
            segments.append(Line(start=_point(position), end=_point(end)))
            position = end
        axis = _rotate(axis, heading, math.radians(bend.rotation_deg))
        arc = _make_arc(position, heading, axis, bend.radius_mm, math.radians(bend.angle_deg))
        segments.append(arc)
        position = np.array(arc.end)
        heading = _rotate(heading, axis, math.radians(bend.angle_deg))
    if tail_mm > _TINY_MM:
        segments.append(Line(start=_point(position), end=_point(position + heading * tail_mm)))
    return Path(segments=tuple(segments))


def tangent_at_start(segment: Segment) -> Point:
    """Unit direction of travel where `segment` starts."""
    if isinstance(segment, Line):
        return _point(_unit(np.array(segment.end) - np.array(segment.start)))
    radial = np.array(segment.start) - np.array(segment.centre)
    return _point(_unit(np.cross(np.array(segment.normal), radial)))


def tangent_at_end(segment: Segment) -> Point:
    """Unit direction of travel where `segment` ends."""
    if isinstance(segment, Line):
        return tangent_at_start(segment)
    radial = np.array(segment.end) - np.array(segment.centre)
    return _point(_unit(np.cross(np.array(segment.normal), radial)))


def closest_approach_mm(a: np.ndarray, b: np.ndarray) -> tuple[float, Point, Point]:
    """Least distance between two chains of chords, and where it is on each.

    a: (n, 3), b: (m, 3) points of the chains, mm. Exact for the chords (Lumelsky 1985, "On fast
    computation of distance between line segments", from memory), all pairs at once.
    """
    p1, d1 = a[:-1], np.diff(a, axis=0)
    p2, d2 = b[:-1], np.diff(b, axis=0)
    r = p1[:, None] - p2[None]
    aa = np.einsum("ij,ij->i", d1, d1)[:, None]
    ee = np.einsum("ij,ij->i", d2, d2)[None]
    bb = d1 @ d2.T
    cc = np.einsum("ik,ijk->ij", d1, r)
    ff = np.einsum("jk,ijk->ij", d2, r)
    denom = aa * ee - bb * bb
    s = np.where(denom > 1e-12, (bb * ff - cc * ee) / np.where(denom > 1e-12, denom, 1.0), 0.0)
    s = np.clip(s, 0.0, 1.0)
    t = np.clip((bb * s + ff) / np.maximum(ee, 1e-30), 0.0, 1.0)
    s = np.clip((bb * t - cc) / np.maximum(aa, 1e-30), 0.0, 1.0)
    q1 = p1[:, None] + s[..., None] * d1[:, None]
    q2 = p2[None] + t[..., None] * d2[None]
    dist = np.linalg.norm(q1 - q2, axis=2)
    i, j = np.unravel_index(int(np.argmin(dist)), dist.shape)
    return float(dist[i, j]), _point(q1[i, j]), _point(q2[i, j])


def _corner_arc(
    corner: np.ndarray, before: np.ndarray, after: np.ndarray, radius_mm: float, turn_rad: float
) -> Arc:
    setback = radius_mm * math.tan(turn_rad / 2.0)
    return _make_arc(corner - before * setback, before, _unit(np.cross(before, after)), radius_mm, turn_rad)


def _make_arc(
    start: np.ndarray, heading: np.ndarray, normal: np.ndarray, radius_mm: float, turn_rad: float
) -> Arc:
    centre = start + np.cross(normal, heading) * radius_mm
    radial = start - centre
    return Arc(
        start=_point(start),
        middle=_point(centre + _rotate(radial, normal, turn_rad / 2.0)),
        end=_point(centre + _rotate(radial, normal, turn_rad)),
        centre=_point(centre),
        normal=_point(normal),
        radius_mm=radius_mm,
        angle_deg=math.degrees(turn_rad),
    )


def _append_line(segments: list[Segment], start: np.ndarray, end: np.ndarray) -> None:
    last = segments[-1] if segments else None
    if isinstance(last, Line):
        a = np.array(tangent_at_start(last))
        if float(a @ _unit(end - start)) > 1.0 - 1e-12:
            segments[-1] = Line(start=last.start, end=_point(end))
            return
    segments.append(Line(start=_point(start), end=_point(end)))


def _append_arc(segments: list[Segment], arc: Arc) -> None:
    last = segments[-1] if segments else None
    if (
        isinstance(last, Arc)
        and math.dist(last.centre, arc.centre) < 1e-6
        and abs(last.radius_mm - arc.radius_mm) < 1e-6
        and float(np.dot(last.normal, arc.normal)) > 1.0 - 1e-9
        and last.angle_deg + arc.angle_deg < 355.0
    ):
        start = np.array(last.start)
        segments[-1] = _make_arc(
            start,
            np.array(tangent_at_start(last)),
            np.array(last.normal),
            last.radius_mm,
            math.radians(last.angle_deg + arc.angle_deg),
        )
        return
    segments.append(arc)


def _arc_points(arc: Arc, angles_rad: np.ndarray) -> np.ndarray:
    centre, normal = np.array(arc.centre), np.array(arc.normal)
    u = np.array(arc.start) - centre
    v = np.cross(normal, u)
    points: np.ndarray = centre + np.cos(angles_rad)[:, None] * u + np.sin(angles_rad)[:, None] * v
    return points


def _rotate(v: np.ndarray, axis: np.ndarray, angle_rad: float) -> np.ndarray:
    """Rodrigues' rotation of v about the unit vector axis."""
    c, s = math.cos(angle_rad), math.sin(angle_rad)
    turned: np.ndarray = v * c + np.cross(axis, v) * s + axis * float(axis @ v) * (1.0 - c)
    return turned


def _signed_angle_deg(a: np.ndarray, b: np.ndarray, axis: np.ndarray) -> float:
    """Angle from a to b about axis, in (-180, 180]; exact 180 for opposite vectors."""
    angle = math.degrees(math.atan2(float(np.cross(a, b) @ axis), float(a @ b)))
    if angle <= -180.0 + 1e-9:
        angle += 360.0
    return 0.0 if abs(angle) < 1e-9 else angle


def _angle_between_rad(a: np.ndarray, b: np.ndarray) -> float:
    return math.atan2(float(np.linalg.norm(np.cross(a, b))), float(a @ b))


def _unit(v: np.ndarray) -> np.ndarray:
    unit: np.ndarray = v / float(np.linalg.norm(v))
    return unit


def _add(a: Point, b: Point) -> Point:
    return (a[0] + b[0], a[1] + b[1], a[2] + b[2])


def _point(v: np.ndarray) -> Point:
    return (float(v[0]), float(v[1]), float(v[2]))
