"""Triangles of a dish, box or lid that is there already: floor graded to the landings, wall and rim.

The floor's cells are those of the flat sheet (`mesh_sheet`); for a round dish the square of cells is mapped
onto the disc, x = u sqrt(1 - v^2 / 2), y = v sqrt(1 - u^2 / 2) on the unit square and disc (the elliptical grid
mapping; Nowell's, from memory), so that the middle stays square and the edge is the circle. The wall stands
on the floor's edge nodes all round, joined at a box's corners. The wall's foot is where floor and wall would
meet sharply. Lengths in mm.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from wavejig.field.mesh_plan import MeshPlan
from wavejig.field.mesh_sheet import Grid
from wavejig.reflector.model import Tray
from wavejig.reflector.own import floor_room_mm, profile

Array = NDArray[np.float64]
Point2 = tuple[float, float]


class _DiscGrid(Grid):
    """The square grid mapped onto a disc of `radius` mm."""

    def __init__(self, radius: float, count: int) -> None:
        super().__init__((radius, radius), (count, count))
        self.radius = radius

    def node(self, i: int, j: int) -> Point2:
        x, y = to_disc(super().node(i, j), self.half[0])
        scale = self.radius / self.half[0]
        return x * scale, y * scale


def own_triangles(
    tray: Tray,
    landings: Sequence[Point2],
    largest_mm: float,
    smallest_mm: float,
    plan: MeshPlan | None = None,
) -> Array:
    """(n, 3, 3) mm, counter-clockwise seen from inside; arguments as for `mesh_sheet.sheet_triangles`.

    A round dish is a many-sided one of the same floor area. Raises ValueError for a landing off the floor.
    """
    own = tray.own
    assert own is not None
    for x, y in landings:
        if floor_room_mm(tray, x, y) <= 0.0:
            raise ValueError(f"a wire lands at ({x:.2f}, {y:.2f}) mm, off the dish's floor")
    kept = MeshPlan() if plan is None else plan
    half = (tray.half_x_mm, tray.half_y_mm)
    out = profile(own)[-1][0]  # cells widen on the way out
    counts = kept.choose("base", lambda: tuple(_cells(h, h + out, largest_mm) for h in half))
    grid: Grid
    if own.shape == "round":
        grid = _DiscGrid(half[0], counts[0])
        places = [to_square(p, half[0]) for p in landings]
    else:
        grid = Grid(half, (counts[0], counts[1]))
        places = list(landings)
    cells = set(kept.choose("cells", lambda: frozenset(grid.refined(places, smallest_mm))))
    if isinstance(grid, _DiscGrid):
        grid.radius = half[0] * _equal_area(grid, cells)
    pulled = kept.choose("landings", lambda: grid.nearest(cells, landings))
    floor = grid.triangles(cells, dict(zip(pulled, landings, strict=True)))
    return np.concatenate([floor, *_wall(tray, grid, _edge(grid, cells), largest_mm, kept)])


def _cells(foot_mm: float, rim_mm: float, largest_mm: float) -> int:
    """Cells along one axis for half sizes at the floor and at the very rim, where they may be a tenth larger."""
    return 2 * max(1, math.ceil(max(foot_mm, rim_mm / 1.1) / largest_mm - 1e-9))


def to_disc(at: Point2, radius: float) -> Point2:
    """A point of the square |x|, |y| <= radius mapped onto the disc of that radius."""
    u, v = at[0] / radius, at[1] / radius
    return radius * u * math.sqrt(1.0 - v * v / 2.0), radius * v * math.sqrt(1.0 - u * u / 2.0)


def to_square(at: Point2, radius: float) -> Point2:
    """The inverse of `to_disc` (squares of both equations added and subtracted)."""
    x, y = at[0] / radius, at[1] / radius
    # u^2 + v^2 and u^2 - v^2 follow from x^2 - y^2 = u^2 - v^2 and x^2 + y^2 = u^2 + v^2 - u^2 v^2
    d, s = x * x - y * y, x * x + y * y
    both = 2.0 - math.sqrt(max(4.0 + d * d - 4.0 * s, 0.0))
    u, v = math.sqrt(max((both + d) / 2.0, 0.0)), math.sqrt(max((both - d) / 2.0, 0.0))
    return math.copysign(u, x) * radius, math.copysign(v, y) * radius


def _edge(grid: Grid, cells: set[tuple[int, int, int]]) -> list[tuple[int, int]]:
    """The floor's edge nodes, once round counter-clockwise."""
    last = grid.last
    found = {p for ring in grid.rings(cells) for p in ring if p[0] in (0, last[0]) or p[1] in (0, last[1])}
    middle = (last[0] / 2.0, last[1] / 2.0)
    return sorted(found, key=lambda p: math.atan2(p[1] - middle[1], p[0] - middle[0]))


def _equal_area(grid: Grid, cells: set[tuple[int, int, int]]) -> float:
    """Factor on the radius that gives the many-sided floor the circle's area."""
    angles = [math.atan2(y, x) for x, y in (grid.node(*p) for p in _edge(grid, cells))]
    steps = np.diff([*angles, angles[0] + 2.0 * math.pi])
    return math.sqrt(2.0 * math.pi / float(np.sin(steps).sum()))


def _wall(
    tray: Tray, grid: Grid, edge: list[tuple[int, int]], largest_mm: float, plan: MeshPlan
) -> list[Array]:
    """Wall and rim in rows over the floor's edge."""
    own = tray.own
    assert own is not None
    feet = np.array([grid.node(*p) for p in edge])
    half = np.array([tray.half_x_mm, tray.half_y_mm])
    stops = profile(own)
    levels = [stops[0]]
    for n, (a, b) in enumerate(itertools.pairwise(stops)):
        length = math.dist(a, b)
        rows = plan.choose(("wall", n), lambda length=length: max(1, math.ceil(length / largest_mm - 1e-9)))  # type: ignore[misc]
        levels += [
            (a[0] + (b[0] - a[0]) * k / rows, a[1] + (b[1] - a[1]) * k / rows) for k in range(1, rows + 1)
        ]
    near = np.min(np.abs(feet) / half, axis=1)  # 1 at a box's corner, 0 on an axis
    rings = [np.column_stack([feet * (1.0 + d / half), np.full(len(feet), z)]) for d, z in levels]
    out = []
    for low, high in itertools.pairwise(rings):
        for k in range(len(feet)):
            m = (k + 1) % len(feet)
            p, q, r, s = low[k], low[m], high[m], high[k]
            # the shorter diagonal, from the foot nearer to a corner; mirror images get mirrored ones
            if near[m] >= near[k]:
                out += [[p, s, q], [q, s, r]]
            else:
                out += [[p, r, q], [p, s, r]]
    return [np.array(out)]
