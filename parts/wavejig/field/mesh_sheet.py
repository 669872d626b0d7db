"""Triangles of the folded sheet: a graded grid of the base, vertices where wires land, and its lips.

The base is covered by square-like cells that are halved towards the landing points (a quadtree with at
most one halving between neighbours), so that currents crowding into a leg are resolved where they crowd
and nowhere else. The radiator-side faces carry the sheet; a fold's small radius is its inner mould line.
Lengths in mm here; the caller turns to metres.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from wavejig.field.mesh_plan import MeshPlan
from wavejig.reflector.model import Tray, TrayLip, along, outward

Array = NDArray[np.float64]
Point2 = tuple[float, float]
Cell = tuple[int, int, int]  # level, column, row on that level's grid

_GROWTH = 0.45  # cells may grow by this share of their distance from a landing point
_DEEPEST = 8


def sheet_triangles(
    tray: Tray,
    landings: Sequence[Point2],
    largest_mm: float,
    smallest_mm: float,
    plan: MeshPlan | None = None,
) -> Array:
    """(n, 3, 3) mm, counter-clockwise seen from the radiator side.

    landings: x, y on the base that must be vertices; largest_mm: longest cell side anywhere;
    smallest_mm: cell side at the landings; plan: cuts neighbours of one design alike. Holes are left
    closed: they are far smaller than a wavelength.
    Raises ValueError for a landing off the base.
    """
    half = (_inner_half(tray, "x"), _inner_half(tray, "y"))
    for x, y in landings:
        if abs(x) >= half[0] or abs(y) >= half[1]:
            raise ValueError(f"a wire lands at ({x:.2f}, {y:.2f}) mm, off the sheet's base")
    kept = MeshPlan() if plan is None else plan
    # even counts, so that the axes of symmetry are grid lines
    counts = kept.choose("base", lambda: tuple(max(2, 2 * math.ceil(h / largest_mm - 1e-9)) for h in half))
    grid = Grid(half, (counts[0], counts[1]))
    cells = set(kept.choose("cells", lambda: frozenset(grid.refined(landings, smallest_mm))))
    pulled = kept.choose("landings", lambda: grid.nearest(cells, landings))
    parts = [grid.triangles(cells, dict(zip(pulled, landings, strict=True)))]
    for lip in tray.lips:
        nodes = grid.edge_nodes(cells, lip.edge)
        parts.append(_lip(tray, lip, nodes, half, largest_mm, kept))
    return np.concatenate(parts)


def _inner_half(tray: Tray, axis: str) -> float:
    """Half size of the base's radiator-side face: to the inner mould line of a lip, or to the cut edge."""
    edge = f"{axis}+"
    lip = tray.lip(edge)
    outer = tray.half_mm(edge)
    if lip is None:
        return outer
    return outer - tray.thickness_mm * math.tan(math.radians(lip.angle_deg) / 2.0)


class Grid:
    """Cells over the rectangle |x| <= half[0], |y| <= half[1]; level n halves level 0 n times."""

    def __init__(self, half: Point2, counts: tuple[int, int]) -> None:
        self.half = half
        self.counts = counts
        self.size = (2.0 * half[0] / counts[0], 2.0 * half[1] / counts[1])

    def refined(self, landings: Sequence[Point2], smallest_mm: float) -> set[Cell]:
        """Leaves of the quadtree, fine at the landings, no neighbour more than one level apart."""
        leaves: set[Cell] = set()
        queue: list[Cell] = [(0, i, j) for i in range(self.counts[0]) for j in range(self.counts[1])]
        points = np.array(landings, dtype=float).reshape(-1, 2)
        while queue:
            cell = queue.pop()
            x0, y0, x1, y1 = self.box(cell)
            size = max(x1 - x0, y1 - y0)
            wanted = math.inf
            if len(points):
                dx = np.maximum(np.maximum(x0 - points[:, 0], points[:, 0] - x1), 0.0)
                dy = np.maximum(np.maximum(y0 - points[:, 1], points[:, 1] - y1), 0.0)
                wanted = smallest_mm + _GROWTH * float(np.hypot(dx, dy).min())
            if size > 1.5 * wanted and cell[0] < _DEEPEST:
                queue += self.children(cell)
            else:
                leaves.add(cell)
        return self._balanced(leaves)

    def _balanced(self, leaves: set[Cell]) -> set[Cell]:
        changed = True
        while changed:
            changed = False
            for cell in sorted(leaves, reverse=True):
                level, i, j = cell
                for di, dj in ((1, 0), (-1, 0), (0, 1), (0, -1)):
                    coarse = (level - 2, (i + di) >> 2, (j + dj) >> 2)
                    if level >= 2 and coarse in leaves:
                        leaves.remove(coarse)
                        leaves.update(self.children(coarse))
                        changed = True
        return leaves

    @property
    def last(self) -> tuple[int, int]:
        """Indices of the upper right corner's node."""
        return self.counts[0] * 2**_DEEPEST, self.counts[1] * 2**_DEEPEST

    @staticmethod
    def children(cell: Cell) -> list[Cell]:
        level, i, j = cell
        return [(level + 1, 2 * i + a, 2 * j + b) for a in (0, 1) for b in (0, 1)]

    def box(self, cell: Cell) -> tuple[float, float, float, float]:
        level, i, j = cell
        w, h = self.size[0] / 2**level, self.size[1] / 2**level
        return (
            -self.half[0] + i * w,
            -self.half[1] + j * h,
            -self.half[0] + (i + 1) * w,
            -self.half[1] + (j + 1) * h,
        )

    def node(self, i: int, j: int) -> tuple[float, float]:
        """Place of a node by its indices on the deepest level's lattice."""
        scale = 2**_DEEPEST
        return (-self.half[0] + self.size[0] * i / scale, -self.half[1] + self.size[1] * j / scale)

    def rings(self, leaves: set[Cell]) -> list[list[tuple[int, int]]]:
        """Each leaf's boundary nodes, counter-clockwise, hanging nodes of finer neighbours included."""
        corners: set[tuple[int, int]] = set()
        for level, i, j in leaves:
            step = 2 ** (_DEEPEST - level)
            corners.update(((i + a) * step, (j + b) * step) for a in (0, 1) for b in (0, 1))
        out = []
        for level, i, j in sorted(leaves):
            step = 2 ** (_DEEPEST - level)
            x0, y0, x1, y1, half = i * step, j * step, (i + 1) * step, (j + 1) * step, step // 2
            ring = [
                (x0, y0),
                (x0 + half, y0),
                (x1, y0),
                (x1, y0 + half),
                (x1, y1),
                (x0 + half, y1),
                (x0, y1),
                (x0, y0 + half),
            ]
            out.append([p for n, p in enumerate(ring) if n % 2 == 0 or (half and p in corners)])
        return out

    def nearest(self, leaves: set[Cell], landings: Sequence[Point2]) -> tuple[tuple[int, int], ...]:
        """The inner node nearest to each landing, no node twice."""
        scale = 2**_DEEPEST
        inner = {
            p
            for ring in self.rings(leaves)
            for p in ring
            if 0 < p[0] < self.counts[0] * scale and 0 < p[1] < self.counts[1] * scale
        }
        taken: list[tuple[int, int]] = []
        for landing in landings:
            free = (p for p in inner if p not in taken)
            taken.append(min(free, key=lambda p: (round(math.dist(self.node(*p), landing), 9), p)))
        return tuple(taken)

    def triangles(self, leaves: set[Cell], pulled: dict[tuple[int, int], Point2]) -> Array:
        """Triangles of all leaves, the nodes of `pulled` moved to where wires land."""
        rings = self.rings(leaves)
        place = {p: self.node(*p) for ring in rings for p in ring} | pulled
        out: list[list[Point2]] = []
        for ring in rings:
            corners = [place[p] for p in ring]
            if len(corners) == 4:
                # the diagonal from the corner nearer to the middle: mirror images get mirrored diagonals
                a, b, c, d = corners
                if (a[0] + c[0]) * (a[1] + c[1]) + 1e-9 >= 0.0:
                    out += [[a, b, c], [a, c, d]]
                else:
                    out += [[a, b, d], [b, c, d]]
            else:
                centre = (
                    sum(p[0] for p in corners) / len(corners),
                    sum(p[1] for p in corners) / len(corners),
                )
                out += [[centre, p, q] for p, q in zip(corners, [*corners[1:], corners[0]], strict=True)]
        flat = np.array(out)
        return np.concatenate([flat, np.zeros((*flat.shape[:2], 1))], axis=2)

    def edge_nodes(self, leaves: set[Cell], edge: str) -> Array:
        """Positions s along an edge (counter-clockwise) of the base's nodes on it, rising."""
        scale = 2**_DEEPEST
        axis = 0 if edge[0] == "x" else 1
        side = 0 if edge[1] == "-" else self.counts[axis] * scale
        found = {p for ring in self.rings(leaves) for p in ring if p[axis] == side}
        direction = along(edge)
        return np.array(sorted(float(np.dot(direction, self.node(*p))) for p in found))


def _lip(tray: Tray, lip: TrayLip, nodes: Array, half: Point2, largest_mm: float, plan: MeshPlan) -> Array:
    """A lip as columns over the base's edge nodes; its ends stop short of the corners as the real one does.

    The columns lean in proportion, to end where the lip ends at their height: their feet stay on the base's
    nodes, so that the fold is one sheet.
    """
    angle = math.radians(lip.angle_deg)
    inner = tray.thickness_mm * math.tan(angle / 2.0)
    height = lip.height_mm - inner
    distance = half[0] if lip.edge[0] == "x" else half[1]
    n, u = outward(lip.edge), along(lip.edge)
    rows = plan.choose(("lip", lip.edge), lambda: max(1, math.ceil(height / largest_mm - 1e-9)))
    foot_reach = (-lip.left.half_mm, lip.right.half_mm)
    # the feet that the lip really stands on, its own ends pulled to the nearest nodes
    inside = [s for s in nodes if foot_reach[0] - 1e-6 <= s <= foot_reach[1] + 1e-6]
    ends = [min(nodes, key=lambda s: abs(s - r)) for r in foot_reach]
    feet = np.array(sorted({*inside, *ends}))

    def at(s_foot: float, k: int) -> list[float]:
        w = height * k / rows
        flange = max(w - (lip.setback_mm - inner), 0.0)
        end, reach = (
            (feet[0], -lip.left.reach_mm(flange)) if s_foot < 0.0 else (feet[-1], lip.right.reach_mm(flange))
        )
        s = s_foot * reach / end if k else s_foot
        place = n * (distance + w * math.cos(angle)) + u * s
        return [float(place[0]), float(place[1]), w * math.sin(angle)]

    out = []
    for a, b in itertools.pairwise(feet):
        for k in range(rows):
            p, q, r, s = at(a, k), at(b, k), at(b, k + 1), at(a, k + 1)
            # counter-clockwise seen from the radiator side: up, then along the edge
            out += [[p, r, q], [p, s, r]] if a + b <= 1e-9 else [[p, s, q], [q, s, r]]
    return np.array(out)
