"""Elements as arrays for the compiled loops: geometry, three far points each, and who makes which unknown.

At the three points of an element stand the current moments of its halves (weight included), so that beyond
its neighbours an element is three points. Segments: Gauss-Legendre; triangles: the three-point rule of
degree 2; fan triangles: the same points, moments chosen so that the current's total and first moment are
exact in spite of its 1/r.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from wavejig.field.model import Model
from wavejig.field.quadrature import triangle_rule, unit_rule
from wavejig.field.unknowns import FAN, SEGMENT, TRIANGLE, Unknowns, wire_ends

Array = NDArray[np.float64]
Index = NDArray[np.int64]


class Shapes(NamedTuple):
    """Geometry of n elements, as they are or mirrored; metres. A named tuple, so that compiled loops take it.

    corners (n, 3, 3): segments use the first two; normal (n, 3); along, outward (n, 3, 3): unit vectors of
    the sides from corner i to i + 1; area (n,); centre (n, 3); points (n, 3, 3): far points; moments
    (n, 3, 3, 3): half, point, component.
    """

    corners: Array
    normal: Array
    along: Array
    outward: Array
    area: Array
    centre: Array
    points: Array
    moments: Array

    def mirrored(self, axis: int) -> Shapes:
        """The shapes seen in a mirror through the origin square to the axis, currents mirrored with them."""

        def flip(array: Array) -> Array:
            copy = array.copy()
            copy[..., axis] *= -1.0
            return np.ascontiguousarray(copy)

        return Shapes(
            corners=flip(self.corners),
            normal=flip(self.normal),
            along=flip(self.along),
            outward=flip(self.outward),
            area=self.area,
            centre=flip(self.centre),
            points=flip(self.points),
            moments=flip(self.moments),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Elements:
    """Elements in an order that keeps neighbours together, and the unknowns of their halves.

    kind, source (n,); radius_m (n,): 0 for sheet, the equivalent radius for insulated wire, for fans that of
    the wire that stands there; size_m (n,):
    distance of the farthest corner from the centre; share (n,); weights (n, 3) of the far points, charges
    (n, 3) of the halves; half_start (3n + 1,), half_unknown, half_coefficient: the unknowns of each half.
    ports (ports, unknowns).
    """

    kind: Index
    source: Index
    radius_m: Array
    size_m: Array
    share: Array
    weights: Array
    charges: Array
    shapes: Shapes
    half_start: Index
    half_unknown: Index
    half_coefficient: Array
    ports: Array

    @property
    def unknowns(self) -> int:
        return int(self.ports.shape[1])


def effective_radii(model: Model) -> Array:
    """Wire radii for the kernel (wires,), metres: insulated wire by its equivalent radius.

    a (b/a)^(1 - 1/er): J. H. Richmond, E. H. Newman, Radio Science 11 (1976) 13-20, from memory, re-derived;
    the inductance that goes with it is in losses.py.
    """
    radii = np.array([w.radius_m for w in model.wires])
    for i, w in enumerate(model.wires):
        if w.insulation is not None:
            radii[i] *= (w.insulation.outer_radius_m / w.radius_m) ** (1.0 - 1.0 / w.insulation.permittivity)
    return radii


def make_elements(model: Model, unknowns: Unknowns) -> Elements:
    """Elements of a model, sorted along its longest side, unknowns renumbered in the same order."""
    kind = unknowns.kind
    n = len(kind)
    corners = np.zeros((n, 3, 3))
    wires = kind == SEGMENT
    ends = wire_ends(model)
    corners[wires, :2] = ends
    sheet = ~wires
    turned = (unknowns.turn[sheet][:, None] + np.arange(3)) % 3
    corners[sheet] = model.triangles[unknowns.source[sheet][:, None], turned]
    centre = np.where(wires[:, None], corners[:, :2].mean(axis=1), corners.mean(axis=1))

    used = np.concatenate([ends.reshape(-1, 3), model.triangles.reshape(-1, 3)])
    axis = int(np.argmax(np.ptp(used, axis=0)))
    order = np.argsort(centre[:, axis], kind="stable")
    half = 3 * np.argsort(order, kind="stable")[unknowns.half // 3] + unknowns.half % 3
    by_half = np.argsort(half, kind="stable")
    seen, first = np.unique(unknowns.unknown[by_half], return_index=True)
    renumber = np.empty(unknowns.count, dtype=np.int64)
    renumber[seen[np.argsort(first, kind="stable")]] = np.arange(len(seen))
    start = np.searchsorted(half[by_half], np.arange(3 * n + 1))
    ports = np.zeros_like(unknowns.ports)
    ports[:, renumber] = unknowns.ports

    radius = unknowns.foot_m.copy()
    radius[wires] = effective_radii(model)
    kind, share, corners, centre, radius = (
        kind[order],
        unknowns.share[order],
        corners[order],
        centre[order],
        radius[order],
    )
    size = np.linalg.norm(corners - centre[:, None], axis=2)
    size = np.where(kind == SEGMENT, size[:, 0], size.max(axis=1))
    shapes, weights = _shapes(kind, share, corners, centre)
    charges = np.zeros((n, 3))
    charges[kind == SEGMENT] = (-1.0, 1.0, 0.0)
    charges[kind == TRIANGLE] = 1.0
    charges[kind == FAN, 0] = -share[kind == FAN]
    return Elements(
        kind=kind,
        source=unknowns.source[order],
        radius_m=radius,
        size_m=size,
        share=share,
        weights=weights,
        charges=charges,
        shapes=shapes,
        half_start=start,
        half_unknown=renumber[unknowns.unknown[by_half]],
        half_coefficient=unknowns.coefficient[by_half],
        ports=ports,
    )


def _shapes(kind: Index, share: Array, corners: Array, centre: Array) -> tuple[Shapes, Array]:
    n = len(kind)
    points = np.zeros((n, 3, 3))
    moments = np.zeros((n, 3, 3, 3))
    weights = np.zeros((n, 3))
    normal = np.zeros((n, 3))
    along = np.zeros((n, 3, 3))
    outward = np.zeros((n, 3, 3))
    area = np.zeros(n)

    wires = kind == SEGMENT
    nodes, w = unit_rule(3)
    step = corners[wires, 1] - corners[wires, 0]
    points[wires] = corners[wires, 0][:, None] + nodes[:, None] * step[:, None]
    weights[wires] = w
    moments[wires, 0] = ((1.0 - nodes) * w)[:, None] * step[:, None]
    moments[wires, 1] = (nodes * w)[:, None] * step[:, None]

    sheet = ~wires
    v = corners[sheet]
    sides = np.roll(v, -1, axis=1) - v
    cross = np.cross(sides[:, 0], sides[:, 1])
    double = np.linalg.norm(cross, axis=1)
    normal[sheet] = cross / double[:, None]
    area[sheet] = double / 2.0
    along[sheet] = sides / np.linalg.norm(sides, axis=2)[:, :, None]
    outward[sheet] = np.cross(along[sheet], normal[sheet][:, None])
    bary, _ = triangle_rule(2)
    points[sheet] = np.einsum("ij,njk->nik", bary, v)
    weights[sheet] = 1.0 / 3.0
    plain = kind == TRIANGLE
    moments[plain] = (points[plain][:, None] - corners[plain][:, :, None]) / 6.0

    fans = kind == FAN
    if fans.any():
        moments[fans, 0] = _fan_moments(bary, corners[fans], share[fans])
    return (
        Shapes(
            corners=corners,
            normal=normal,
            along=along,
            outward=outward,
            area=area,
            centre=centre,
            points=points,
            moments=moments,
        ),
        weights,
    )


def _fan_moments(bary: Array, v: Array, share: Array) -> Array:
    """Integral of the fan current times each point's linear cardinal function, (fans, 3 points, 3).

    From the axis on, as the charges have it: what the foot covers has an inductance to be left
    out, but its moment carries the current from the wire to the sheet and radiates.
    """
    nodes, w = unit_rule(4)
    u, t = (g.ravel() for g in np.meshgrid(nodes, nodes, indexing="ij"))
    weight = (w[:, None] * w[None, :]).ravel() * (1.0 - u**2)
    # barycentric coordinates of (u, t), and in terms of the three points
    at = np.stack([1.0 - u, u * (1.0 - t), u * t], axis=1)
    cardinal = at @ np.linalg.inv(bary)
    e = np.einsum("gc,fck->fgk", np.stack([-np.ones_like(t), 1.0 - t, t], axis=1), v)
    return np.asarray(np.einsum("g,gp,fgk,f->fpk", weight, cardinal, e, share))
