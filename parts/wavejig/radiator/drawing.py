"""The radiator's 1:1 view from the radiator side: outlines and centrelines of every piece, in plan.

What leaves the plane (legs, jogs) is drawn as it is seen from above: a bend that dives shortens to the
straight it covers, a wire seen end-on is a circle.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from wavejig.geometry.path import (
    Arc,
    Line,
    Path,
    Point,
    Segment,
    closest_approach_mm,
    tangent_at_end,
    tangent_at_start,
)
from wavejig.geometry.plane import Circle, Contour, Stroke
from wavejig.geometry.ribbon import ribbon
from wavejig.radiator.model import Piece, Radiator

_CHORD_MM = 0.01
_SHORT_MM = 1e-3
_UNDER_MM = 0.05


@dataclass(frozen=True, slots=True, kw_only=True)
class PieceView:
    """One piece seen from above. ends_on: circles where the wire runs straight at the viewer."""

    role: str
    outlines: tuple[Contour, ...]
    ends_on: tuple[Circle, ...]
    centrelines: tuple[Stroke, ...]


def views(radiator: Radiator) -> tuple[PieceView, ...]:
    """Plan views of all pieces, in their order; what lies straight under the main wire is hidden by it."""
    over = radiator.main.path.sample(chord_error_mm=_CHORD_MM)
    over[:, 2] = 0.0
    return tuple(_view(piece, None if piece is radiator.main else over) for piece in radiator.pieces)


def _view(piece: Piece, over: np.ndarray | None) -> PieceView:
    runs = [run for run in _runs(piece.path) if over is None or not _hidden(run, over)]
    ends = tuple(
        Circle(x_mm=s.start[0], y_mm=s.start[1], diameter_mm=piece.diameter_mm)
        for s in piece.path.segments
        if isinstance(s, Line) and _seen_length(s.start, s.end) < _SHORT_MM
    )
    return PieceView(
        role=piece.role,
        outlines=tuple(ribbon(run, piece.diameter_mm / 2.0) for run in runs),
        ends_on=tuple({(c.x_mm, c.y_mm): c for c in ends}.values()),
        centrelines=tuple(_stroke(run) for run in runs),
    )


def _hidden(run: Path, over: np.ndarray) -> bool:
    """Whether half the run or more lies along the line `over`, (n, 3) at z = 0.

    Half, since an arm starts at the corner point that the rounded side above it cuts short.
    """
    points = run.sample(chord_error_mm=_CHORD_MM, step_mm=0.5)
    nudge = np.array([0.0, 0.0, _SHORT_MM])
    near = [closest_approach_mm(np.array([p, p + nudge]), over)[0] < _UNDER_MM for p in points]
    return sum(near) * 2 >= len(near)


def _runs(path: Path) -> list[Path]:
    """The path pressed flat, cut wherever it does not go on smoothly."""
    runs: list[list[Segment]] = []
    for segment in path.segments:
        flat = _flattened(segment)
        if flat is None:
            continue
        if runs and _continues(runs[-1][-1], flat):
            last = runs[-1][-1]
            if isinstance(last, Line) and isinstance(flat, Line):
                runs[-1][-1] = Line(start=last.start, end=flat.end)
            else:
                runs[-1].append(flat)
        else:
            runs.append([flat])
    return [Path(segments=tuple(run)) for run in runs]


def _flattened(segment: Segment) -> Segment | None:
    """The segment in plan at z = 0; None where nothing of it is seen but its end."""
    if isinstance(segment, Arc) and abs(segment.normal[2]) > 1.0 - 1e-9:
        drop = (0.0, 0.0, -segment.start[2])
        return Path(segments=(segment,)).moved(*drop).segments[0]
    if _seen_length(segment.start, segment.end) < _SHORT_MM:
        return None
    # a bend out of the plane is seen edge-on: its ends are its extremes, for turns of up to 90 degrees
    return Line(start=_flat(segment.start), end=_flat(segment.end))


def _continues(before: Segment, after: Segment) -> bool:
    if math.dist(before.end, after.start) > _SHORT_MM:
        return False
    a, b = tangent_at_end(before), tangent_at_start(after)
    return a[0] * b[0] + a[1] * b[1] > 1.0 - 1e-9


def _stroke(run: Path) -> Stroke:
    return Stroke(points=tuple((float(x), float(y)) for x, y, _ in run.sample(chord_error_mm=_CHORD_MM)))


def _flat(p: Point) -> Point:
    return (p[0], p[1], 0.0)


def _seen_length(a: Point, b: Point) -> float:
    return math.hypot(b[0] - a[0], b[1] - a[1])
