"""Plane geometry of sheets and prints: closed contours of lines and arcs, circles, open strokes.

Vocabulary: a *contour* is one closed loop; each vertex carries the bulge of the edge that leaves it
(bulge = tan(included angle / 4), positive counter-clockwise, as in the DXF reference; 0 = straight).
Lengths in mm. Nothing here loads a CAD kernel.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

Vertex = tuple[float, float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Contour:
    """A closed loop; `vertices` are (x_mm, y_mm, bulge to the next vertex). The last joins the first."""

    vertices: tuple[Vertex, ...]

    @staticmethod
    def polygon(points: Iterable[Sequence[float]]) -> Contour:
        """Straight-sided contour through (x_mm, y_mm) points, not repeating the first."""
        return Contour(vertices=tuple((float(x), float(y), 0.0) for x, y in points))

    @staticmethod
    def rectangle(x0_mm: float, y0_mm: float, x1_mm: float, y1_mm: float) -> Contour:
        """Axis-parallel rectangle, counter-clockwise from its lower left corner."""
        return Contour.polygon([(x0_mm, y0_mm), (x1_mm, y0_mm), (x1_mm, y1_mm), (x0_mm, y1_mm)])

    @property
    def area_mm2(self) -> float:
        """Signed area, exact for arcs: positive when the contour runs counter-clockwise.

        Shoelace sum over the chords plus each arc's circular segment, r^2/2 (theta - sin theta).
        """
        total = 0.0
        for (x0, y0, bulge), (x1, y1, _) in self._edges():
            total += (x0 * y1 - x1 * y0) / 2.0
            if bulge:
                theta = 4.0 * math.atan(abs(bulge))
                radius = math.hypot(x1 - x0, y1 - y0) / (2.0 * math.sin(theta / 2.0))
                total += math.copysign(radius**2 * (theta - math.sin(theta)) / 2.0, bulge)
        return total

    @property
    def length_mm(self) -> float:
        """Length of the whole loop, arcs measured along the arc."""
        total = 0.0
        for (x0, y0, bulge), (x1, y1, _) in self._edges():
            chord = math.hypot(x1 - x0, y1 - y0)
            theta = 4.0 * math.atan(abs(bulge))
            total += chord if not bulge else chord * theta / (2.0 * math.sin(theta / 2.0))
        return total

    def points(self, chord_error_mm: float = 0.01) -> np.ndarray:
        """(n, 2) float: the loop as chords no further than `chord_error_mm` from its arcs."""
        out: list[tuple[float, float]] = []
        for (x0, y0, bulge), (x1, y1, _) in self._edges():
            out.append((x0, y0))
            if bulge:
                out.extend(_arc_interior(x0, y0, x1, y1, bulge, chord_error_mm))
        return np.array(out, dtype=float)

    def bounds(self) -> tuple[float, float, float, float]:
        """(x_min, y_min, x_max, y_max) in mm, arcs included (to 1 micrometre)."""
        pts = self.points(0.001)
        return (*pts.min(axis=0).tolist(), *pts.max(axis=0).tolist())

    def moved(self, dx_mm: float, dy_mm: float) -> Contour:
        """The same loop shifted."""
        return Contour(vertices=tuple((x + dx_mm, y + dy_mm, b) for x, y, b in self.vertices))

    def _edges(self) -> Iterable[tuple[Vertex, Vertex]]:
        return zip(self.vertices, (*self.vertices[1:], self.vertices[0]), strict=True)


@dataclass(frozen=True, slots=True, kw_only=True)
class Circle:
    """A round hole or disc."""

    x_mm: float
    y_mm: float
    diameter_mm: float

    @property
    def area_mm2(self) -> float:
        """Area of the disc."""
        return math.pi * self.diameter_mm**2 / 4.0

    def points(self, chord_error_mm: float = 0.01) -> np.ndarray:
        """(n, 2) float: chords within `chord_error_mm` of the circle."""
        radius = self.diameter_mm / 2.0
        step = 2.0 * math.acos(max(0.0, 1.0 - chord_error_mm / max(radius, chord_error_mm)))
        n = max(12, math.ceil(2.0 * math.pi / step))
        t = np.linspace(0.0, 2.0 * math.pi, n, endpoint=False)
        return np.column_stack([self.x_mm + radius * np.cos(t), self.y_mm + radius * np.sin(t)])


@dataclass(frozen=True, slots=True, kw_only=True)
class Stroke:
    """An open (or, if its ends coincide, closed) chain of straight strokes: bend lines, marks, lettering."""

    points: tuple[tuple[float, float], ...]


def _arc_interior(
    x0: float, y0: float, x1: float, y1: float, bulge: float, chord_error_mm: float
) -> list[tuple[float, float]]:
    theta = 4.0 * math.atan(bulge)
    chord = math.hypot(x1 - x0, y1 - y0)
    radius = chord / (2.0 * math.sin(abs(theta) / 2.0))
    # centre lies to the left of the chord for a counter-clockwise arc of less than half a turn
    offset = (1.0 - bulge**2) / (4.0 * bulge)
    cx = (x0 + x1) / 2.0 - (y1 - y0) * offset
    cy = (y0 + y1) / 2.0 + (x1 - x0) * offset
    start = math.atan2(y0 - cy, x0 - cx)
    step = (
        2.0 * math.acos(max(-1.0, 1.0 - chord_error_mm / radius)) if radius > chord_error_mm else math.pi / 4
    )
    n = max(2, math.ceil(abs(theta) / step))
    return [
        (cx + radius * math.cos(start + theta * i / n), cy + radius * math.sin(start + theta * i / n))
        for i in range(1, n)
    ]
