"""Which currents are solved for: nodes, junctions, edges and attachments of a model.

A *half* is a current shape on one element: on a wire segment rising from 0 at one end to 1 at the other
(along the wire's direction), on a triangle the flow of 1 ampere out through one side from the opposite
corner, on a fan triangle the outward flow from an attached corner. An *unknown* ties halves together so
that no current is lost: at a joint of n wires and sheet fans n - 1 unknowns, across a side of n triangles
n - 1, and at the infinite ground each wire end or side by itself (its image carries the current on).
Sources: S. M. Rao, D. R. Wilton, A. W. Glisson, IEEE T-AP 30 (1982) 409-418; Hwu, Wilton and Rao 1988
(see kernels/sheets.py); E. H. Newman, D. M. Pozar, IEEE T-AP 26 (1978) 784-789, for the idea of one
attachment function for wire and plate.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.errors import ModelError
from wavejig.field.gap import spread_gap
from wavejig.field.model import Model

Array = NDArray[np.float64]
Index = NDArray[np.int64]

SEGMENT, TRIANGLE, FAN = 0, 1, 2
FAN_LATEST = 0.9  # of the way across a fan triangle: where its current begins at the latest
MERGE = 1e-6  # of the model's size: how close ends are one point; never above MERGE_OF_SHORTEST of an edge
MERGE_OF_SHORTEST = 1e-2


@dataclass(frozen=True, slots=True, kw_only=True)
class Nodes:
    """Distinct points; wire_ends (wires, 2) and corners (triangles, 3) are rows of points. span_m: their extent."""

    points: Array
    wire_ends: Index
    corners: Index
    tolerance_m: float
    span_m: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Unknowns:
    """Elements and how their halves make unknowns.

    kind (n,): segment, triangle or fan; source (n,): the model's wire or triangle; turn (n,): which corner
    comes first (fans: the attached one); share (n,): the fan triangle's part of the attachment's current;
    foot_m (n,): fans: radius of the wire that stands there, else 0.
    half, unknown, coefficient: triplets; halves are 3 * element + 0, 1 or 2. ports (ports, unknowns).
    """

    kind: Index
    source: Index
    turn: Index
    share: Array
    foot_m: Array
    half: Index
    unknown: Index
    coefficient: Array
    ports: Array

    @property
    def count(self) -> int:
        return int(self.ports.shape[1])


def wire_ends(model: Model) -> Array:
    """(wires, 2, 3) metres."""
    return np.array([(w.start, w.end) for w in model.wires], dtype=np.float64).reshape(-1, 2, 3)


def merge_points(model: Model) -> Nodes:
    """Find coinciding points, by distance."""
    from scipy.spatial import cKDTree

    ends = wire_ends(model)
    points = np.concatenate([ends.reshape(-1, 3), model.triangles.reshape(-1, 3)])
    span = float(np.max(np.ptp(points, axis=0))) if points.size else 1.0
    lengths = np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1)
    sides = np.linalg.norm(model.triangles - np.roll(model.triangles, -1, axis=1), axis=2).ravel()
    shortest = min([float(v.min()) for v in (lengths, sides) if v.size] or [1.0])
    tolerance = min(MERGE * span, MERGE_OF_SHORTEST * shortest)
    label = np.arange(len(points))
    if len(points):
        pairs = cKDTree(points).query_pairs(tolerance, output_type="ndarray")
        while len(pairs):
            low = np.minimum(label[pairs[:, 0]], label[pairs[:, 1]])
            before = label.copy()
            np.minimum.at(label, pairs[:, 0], low)
            np.minimum.at(label, pairs[:, 1], low)
            label = label[label]
            if np.array_equal(before, label):
                break
    first, index = np.unique(label, return_inverse=True)
    index = index.reshape(-1)
    split = 2 * len(model.wires)
    return Nodes(
        points=points[first],
        wire_ends=index[:split].reshape(-1, 2),
        corners=index[split:].reshape(-1, 3),
        tolerance_m=tolerance,
        span_m=span,
    )


def find_unknowns(model: Model, nodes: Nodes) -> Unknowns:
    """Number the unknowns of a model that examine() has let pass. Raises ModelError for ports on nothing."""
    return _Finder(model, nodes).run()


class _Finder:
    """Gathers elements and triplets."""

    def __init__(self, model: Model, nodes: Nodes) -> None:
        self.model = model
        self.nodes = nodes
        self.wires = len(model.wires)
        self.triangles = len(model.triangles)
        self.fans: list[tuple[int, int, float, float]] = []
        self.triplets: list[tuple[int, int, float]] = []
        self.count = 0
        grounded = model.plane is not None
        self.on_ground = (np.abs(nodes.points[:, 2]) <= nodes.tolerance_m) & grounded

    def run(self) -> Unknowns:
        edges = self._edges()
        self._junctions()
        own = np.array(self.triplets, dtype=np.float64).reshape(-1, 3)
        half = np.concatenate([edges[0], own[:, 0].astype(np.int64)])
        unknown = np.concatenate([edges[1], own[:, 1].astype(np.int64)])
        coefficient = np.concatenate([edges[2], own[:, 2]])
        fan_triangle = np.array([f[0] for f in self.fans], dtype=np.int64)
        plain = self.wires + self.triangles
        return Unknowns(
            kind=np.repeat([SEGMENT, TRIANGLE, FAN], [self.wires, self.triangles, len(self.fans)]),
            source=np.concatenate([np.arange(self.wires), np.arange(self.triangles), fan_triangle]),
            turn=np.concatenate(
                [np.zeros(plain, dtype=np.int64), np.array([f[1] for f in self.fans], dtype=np.int64)]
            ),
            share=np.concatenate([np.zeros(plain), np.array([f[2] for f in self.fans])]),
            foot_m=np.concatenate([np.zeros(plain), np.array([f[3] for f in self.fans])]),
            half=half,
            unknown=unknown,
            coefficient=coefficient,
            ports=self._ports(half, unknown, coefficient),
        )

    def _edges(self) -> tuple[Index, Index, Array]:
        """Unknowns across sides: side i lies opposite corner i."""
        c = self.nodes.corners
        if not len(c):
            nothing = np.zeros(0, dtype=np.int64)
            return nothing, nothing, np.zeros(0)
        a = c[:, [1, 2, 0]].ravel()
        b = c[:, [2, 0, 1]].ravel()
        halves = (3 * (self.wires + np.arange(len(c)))[:, None] + np.arange(3)).ravel()
        low, high = np.minimum(a, b), np.maximum(a, b)
        order = np.lexsort((halves, high, low))
        low, high, halves = low[order], high[order], halves[order]
        fresh = np.concatenate([[True], (low[1:] != low[:-1]) | (high[1:] != high[:-1])])
        edge = np.cumsum(fresh) - 1
        first = np.flatnonzero(fresh)
        ground = (self.on_ground[low] & self.on_ground[high])[first]
        # every half but the first of its side gets an unknown, paired with that first one
        alone = ~fresh
        with_ground = fresh & ground[edge]
        number = np.cumsum(alone | with_ground) - 1
        self.count = int(number[-1]) + 1 if len(number) else 0
        grounded = ground[edge]
        tied = alone & ~grounded
        single = (alone | with_ground) & grounded
        half = np.concatenate([halves[tied], halves[first[edge]][tied], halves[single]])
        unknown = np.concatenate([number[tied], number[tied], number[single]])
        coefficient = np.concatenate([-np.ones(tied.sum()), np.ones(tied.sum()), np.ones(single.sum())])
        return half, unknown, coefficient

    def _junctions(self) -> None:
        ends = self.nodes.wire_ends
        at: dict[int, list[tuple[int, int]]] = {}
        for wire, pair in enumerate(ends.tolist()):
            for end, node in enumerate(pair):
                at.setdefault(node, []).append((wire, end))
        attached = np.isin(self.nodes.corners, np.array(list(at), dtype=np.int64))
        touching: dict[int, list[tuple[int, int]]] = {}
        for triangle, corner in np.argwhere(attached).tolist():
            touching.setdefault(int(self.nodes.corners[triangle, corner]), []).append((triangle, corner))
        for node, members in at.items():
            # each branch: halves with the coefficient that sends 1 ampere into the node
            branches = [[(3 * wire + end, 1.0 if end == 1 else -1.0)] for wire, end in members]
            for group in self._fan_groups(node, touching.get(node, [])):
                branches.append(self._fan(group, max(self.model.wires[w].radius_m for w, _ in members)))
            if self.on_ground[node]:
                for branch in branches:
                    self._add(branch, 1.0)
                    self.count += 1
                continue
            # the rest are paired with the branch that most mirrors leave in place, so that a mirror sends each
            # pair to one pair
            stays = [
                self._in_planes(node, members[i]) if i < len(members) else 2 for i in range(len(branches))
            ]
            branches.insert(0, branches.pop(stays.index(max(stays))))
            for branch in branches[1:]:
                self._add(branches[0], 1.0)
                self._add(branch, -1.0)
                self.count += 1

    def _in_planes(self, node: int, member: tuple[int, int]) -> int:
        """How many of the planes x = 0 and y = 0 hold a wire that meets a node."""
        wire, end = member
        ends = self.nodes.points[[node, int(self.nodes.wire_ends[wire, 1 - end])], :2]
        return int(np.count_nonzero(np.all(np.abs(ends) <= self.nodes.tolerance_m, axis=0)))

    def _add(self, branch: list[tuple[int, float]], sign: float) -> None:
        self.triplets += [(half, self.count, sign * value) for half, value in branch]

    def _fan_groups(self, node: int, members: list[tuple[int, int]]) -> list[list[tuple[int, int]]]:
        """The triangles round a node, in groups joined by their sides."""
        groups: list[tuple[set[int], list[tuple[int, int]]]] = []
        for triangle, corner in members:
            rim = {int(v) for v in self.nodes.corners[triangle]} - {node}
            joined = [g for g in groups if g[0] & rim]
            merged = (
                rim.union(*(g[0] for g in joined)),
                [*(member for g in joined for member in g[1]), (triangle, corner)],
            )
            groups = [g for g in groups if not g[0] & rim] + [merged]
        return [sorted(g[1]) for g in groups]

    def _fan(self, group: list[tuple[int, int]], foot_m: float) -> list[tuple[int, float]]:
        angles = []
        for triangle, corner in group:
            p = self.model.triangles[triangle]
            u = p[(corner + 1) % 3] - p[corner]
            v = p[(corner + 2) % 3] - p[corner]
            angles.append(np.arctan2(np.linalg.norm(np.cross(u, v)), u @ v))
        total = sum(angles)
        branch = []
        for (triangle, corner), angle in zip(group, angles, strict=True):
            element = self.wires + self.triangles + len(self.fans)
            self.fans.append((triangle, corner, float(angle / total), foot_m))
            branch.append((3 * element, -1.0))
        return branch

    def _ports(self, half: Index, unknown: Index, coefficient: Array) -> Array:
        """Volts of each port along each unknown's current, for 1 volt: its gap is spread, see gap.py."""
        table = np.zeros((len(self.model.ports), self.count))
        for row, port in enumerate(self.model.ports):
            if not np.any(half == 3 * port.wire + port.end):
                raise ModelError(
                    "port on nothing",
                    f"port {row} sits at end {port.end} of wire {port.wire}, which joins nothing there; "
                    "join another wire or the sheet to that end",
                )
            for shape, volts in spread_gap(
                self.model, self.nodes.wire_ends, self.nodes.corners, self.on_ground, port
            ):
                mine = half == shape
                np.add.at(table[row], unknown[mine], coefficient[mine] * volts)
        return table
