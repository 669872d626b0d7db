"""Simple wires and sheets in the form a Model takes them: chains of segments, circles, plates. Metres."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

from wavejig.field.model import Insulation, Wire

Array = NDArray[np.float64]


def chain(
    points: ArrayLike | Sequence[Sequence[float]],
    radius_m: float,
    *,
    counts: Sequence[int] | int | None = None,
    longest_m: float | None = None,
    conductivity_s_per_m: float | None = None,
    insulation: Insulation | None = None,
) -> tuple[Wire, ...]:
    """Wires along a polyline (n, 3), each straight in equal segments: `counts` of them, or none longer."""
    p = np.asarray(points, dtype=np.float64)
    steps = np.linalg.norm(np.diff(p, axis=0), axis=1)
    if counts is None:
        if longest_m is None:
            raise ValueError("give counts or longest_m")
        # a length of exactly n times the longest is n segments, whatever the last bit says
        numbers = [max(1, math.ceil(s / longest_m - 1e-9)) for s in steps.tolist()]
    else:
        numbers = [counts] * len(steps) if isinstance(counts, int) else list(counts)
    wires = []
    for start, end, number in zip(p[:-1], p[1:], numbers, strict=True):
        at = [start + (end - start) * (i / number) for i in range(number)] + [end]
        for a, b in itertools.pairwise(at):
            wires.append(
                Wire(
                    start=(float(a[0]), float(a[1]), float(a[2])),
                    end=(float(b[0]), float(b[1]), float(b[2])),
                    radius_m=radius_m,
                    conductivity_s_per_m=conductivity_s_per_m,
                    insulation=insulation,
                )
            )
    return tuple(wires)


def circle(circumference_m: float, sides: int, z_m: float = 0.0) -> Array:
    """(sides + 1, 3): a closed regular polygon of that developed length in a plane of constant z, from +x."""
    radius = circumference_m / sides / (2.0 * math.sin(math.pi / sides))
    angle = np.arange(sides + 1) * (2.0 * math.pi / sides)
    points = np.stack([radius * np.cos(angle), radius * np.sin(angle), np.full(sides + 1, z_m)], axis=1)
    points[-1] = points[0]
    return points


def plate(x_m: ArrayLike, y_m: ArrayLike, z_m: float = 0.0) -> Array:
    """(n, 3, 3) triangles between the grid lines; mirror-symmetric if the lines are (and 0 is one of them)."""
    x, y = np.asarray(x_m, dtype=np.float64), np.asarray(y_m, dtype=np.float64)
    triangles = []
    for i in range(len(x) - 1):
        for j in range(len(y) - 1):
            a, b, c, d = (
                (x[i], y[j], z_m), (x[i + 1], y[j], z_m), (x[i + 1], y[j + 1], z_m), (x[i], y[j + 1], z_m)
            )  # fmt: skip
            if (x[i] + x[i + 1]) * (y[j] + y[j + 1]) > 0.0:
                triangles += [[a, b, c], [a, c, d]]
            else:
                triangles += [[a, b, d], [b, c, d]]
    return np.array(triangles)


def grid_lines(marks_m: Sequence[float], longest_m: float) -> Array:
    """Ascending lines through all marks, equal steps between neighbours, none longer than longest_m."""
    marks = sorted(set(marks_m))
    lines: list[float] = []
    for a, b in itertools.pairwise(marks):
        count = max(1, math.ceil((b - a) / longest_m - 1e-9))
        lines += [a + (b - a) * i / count for i in range(count)]
    return np.array([*lines, marks[-1]])
