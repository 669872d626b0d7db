"""Lines and arcs that lie on each other: what makes a cutter run a path twice. Lengths in mm."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from shapely import STRtree, box

from wavejig.geometry.plane import Circle, Contour, Stroke

Point = tuple[float, float]
# Doubles come from the same numbers twice; a micrometre is far below any kerf and far above rounding.
TOLERANCE_MM = 1e-3


@dataclass(frozen=True, slots=True, kw_only=True)
class Piece:
    """One straight or arc of an entity. For an arc: centre, radius, start angle and turn (> 0), in rad."""

    owner: str
    start: Point
    end: Point
    middle: Point
    centre: Point | None = None
    radius_mm: float = 0.0
    start_rad: float = 0.0
    turn_rad: float = 0.0

    def bounds(self) -> tuple[float, float, float, float]:
        """Box that holds the piece, a tolerance wider; for an arc the box of its whole circle."""
        if self.centre is None:
            (x0, y0), (x1, y1) = self.start, self.end
            low, high = (min(x0, x1), min(y0, y1)), (max(x0, x1), max(y0, y1))
        else:
            low = (self.centre[0] - self.radius_mm, self.centre[1] - self.radius_mm)
            high = (self.centre[0] + self.radius_mm, self.centre[1] + self.radius_mm)
        return low[0] - TOLERANCE_MM, low[1] - TOLERANCE_MM, high[0] + TOLERANCE_MM, high[1] + TOLERANCE_MM


def pieces_of(entity: Contour | Circle | Stroke, owner: str) -> Iterator[Piece]:
    """The straights and arcs an entity is made of."""
    if isinstance(entity, Circle):
        point = (entity.x_mm + entity.diameter_mm / 2.0, entity.y_mm)
        opposite = (entity.x_mm - entity.diameter_mm / 2.0, entity.y_mm)
        yield Piece(
            owner=owner,
            start=point,
            end=point,
            middle=opposite,
            centre=(entity.x_mm, entity.y_mm),
            radius_mm=entity.diameter_mm / 2.0,
            turn_rad=2.0 * math.pi,
        )
    elif isinstance(entity, Contour):
        for a, b in pairwise((*entity.vertices, entity.vertices[0])):
            yield _edge(owner, a[:2], b[:2], a[2])
    else:
        for p, q in pairwise(entity.points):
            yield _edge(owner, p, q, 0.0)


def overlapping(pieces: Iterable[Piece]) -> tuple[Piece, Piece] | None:
    """The first two pieces that share more than a point, in the order given; None when none do."""
    listed = list(pieces)
    boxes = [box(*piece.bounds()) for piece in listed]
    left, right = STRtree(boxes).query(boxes)
    pairs = np.column_stack([left, right])[left < right]
    for i, j in pairs[np.lexsort((pairs[:, 1], pairs[:, 0]))].tolist():
        if _share_ground(listed[i], listed[j]):
            return listed[i], listed[j]
    return None


def _edge(owner: str, p: Point, q: Point, bulge: float) -> Piece:
    """Straight, or arc by its bulge (tan of a quarter of its angle, + counter-clockwise; DXF reference)."""
    mid = ((p[0] + q[0]) / 2.0, (p[1] + q[1]) / 2.0)
    if not bulge:
        return Piece(owner=owner, start=p, end=q, middle=mid)
    dx, dy = q[0] - p[0], q[1] - p[1]
    # the middle of the arc lies bulge half-chords to the right of the chord, the centre on the same line
    middle = (mid[0] + dy * bulge / 2.0, mid[1] - dx * bulge / 2.0)
    offset = (1.0 - bulge**2) / (4.0 * bulge)
    centre = (mid[0] - dy * offset, mid[1] + dx * offset)
    first = p if bulge > 0.0 else q
    return Piece(
        owner=owner,
        start=p,
        end=q,
        middle=middle,
        centre=centre,
        radius_mm=math.dist(centre, p),
        start_rad=math.atan2(first[1] - centre[1], first[0] - centre[0]),
        turn_rad=4.0 * math.atan(abs(bulge)),
    )


def _share_ground(a: Piece, b: Piece) -> bool:
    if a.centre is not None and b.centre is not None:
        return _arcs_share(a, b)
    return a.centre is None and b.centre is None and _straights_share(a, b)


def _straights_share(a: Piece, b: Piece) -> bool:
    """Whether the shorter lies along the longer's line and the two run side by side for a while."""
    if math.dist(a.start, a.end) < math.dist(b.start, b.end):
        a, b = b, a
    length = math.dist(a.start, a.end)
    ux, uy = (a.end[0] - a.start[0]) / length, (a.end[1] - a.start[1]) / length
    along = []
    for x, y in (b.start, b.end):
        dx, dy = x - a.start[0], y - a.start[1]
        if abs(ux * dy - uy * dx) > TOLERANCE_MM:
            return False
        along.append(ux * dx + uy * dy)
    return min(length, max(along)) - max(0.0, min(along)) > TOLERANCE_MM


def _arcs_share(a: Piece, b: Piece) -> bool:
    """Whether two arcs have the same ends and middle, or lie on one circle and their angles overlap."""
    if math.dist(a.middle, b.middle) < TOLERANCE_MM:
        # flat arcs: their centres are too far out to compare
        same = math.dist(a.start, b.start) < TOLERANCE_MM and math.dist(a.end, b.end) < TOLERANCE_MM
        turned = math.dist(a.start, b.end) < TOLERANCE_MM and math.dist(a.end, b.start) < TOLERANCE_MM
        if same or turned:
            return True
    assert a.centre is not None and b.centre is not None
    if math.dist(a.centre, b.centre) + abs(a.radius_mm - b.radius_mm) > TOLERANCE_MM:
        return False
    for turns in (-1, 0, 1):
        start = b.start_rad + 2.0 * math.pi * turns
        shared = min(a.start_rad + a.turn_rad, start + b.turn_rad) - max(a.start_rad, start)
        if shared * a.radius_mm > TOLERANCE_MM:
            return True
    return False
