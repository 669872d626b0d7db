"""What does not change with frequency: the neighbours of each element and their closed-form interactions."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.elements import Elements, Shapes
from wavejig.field.kernels.sheets import sheet_pairs
from wavejig.field.kernels.tubes import tube_pairs
from wavejig.field.kernels.waves import neighbours
from wavejig.field.quadrature import triangle_rule, unit_rule
from wavejig.field.threads import in_shares
from wavejig.field.unknowns import SEGMENT

Array = NDArray[np.float64]
Index = NDArray[np.int64]

# Neighbours are nearer than REACH times the sum of both sizes; not a round number, so that the equal
# distances of regular meshes do not fall on it and rounding cannot move a pair across.
REACH = 1.5417
THICK = 15.137  # wires thinner than they are apart: beyond this many radii the second order is lost


@dataclass(frozen=True, slots=True, kw_only=True)
class Statics:
    """Neighbours of each element (start (n + 1,), other, pair, flip) and their integrals (pairs, 20)."""

    start: Index
    other: Index
    pair: Index
    flip: NDArray[np.bool_]
    integrals: Array


def make_statics(elements: Elements, sources: Shapes, *, direct: bool) -> Statics:
    """Interactions of neighbours; sources: the elements' own shapes (direct), or their images."""
    own = elements.shapes
    n = len(elements.kind)
    counts = np.zeros(n, dtype=np.int64)
    room = 32 * n
    while True:
        p, q = np.empty(room, dtype=np.int64), np.empty(room, dtype=np.int64)
        total = neighbours(
            direct, own.centre, sources.centre, elements.size_m, elements.radius_m, REACH, THICK, counts, p, q
        )
        if total <= room:
            break
        room = total
    p, q = p[:total], q[:total]
    # wires observe sheet, never the other way
    swap = (elements.kind[q] == SEGMENT) & (elements.kind[p] != SEGMENT)
    p, q = np.where(swap, q, p), np.where(swap, p, q)
    integrals = np.zeros((total, 20))
    wires = elements.kind[q] == SEGMENT
    _sheet(elements, sources, direct, p, q, np.flatnonzero(~wires), integrals)
    _tubes(elements, sources, direct, p, q, np.flatnonzero(wires), integrals)

    # each pair serves both of its elements
    two = p != q
    element = np.concatenate([p, q[two]])
    other = np.concatenate([q, p[two]])
    pair = np.concatenate([np.arange(total), np.arange(total)[two]])
    flip = np.concatenate([np.zeros(total, dtype=np.bool_), np.ones(int(two.sum()), dtype=np.bool_)])
    order = np.lexsort((other, element))
    return Statics(
        start=np.searchsorted(element[order], np.arange(n + 1)),
        other=other[order],
        pair=pair[order],
        flip=flip[order],
        integrals=integrals,
    )


def _sheet(
    elements: Elements, sources: Shapes, direct: bool, p: Index, q: Index, which: Index, integrals: Array
) -> None:
    rules = (
        *triangle_rule(2),
        *triangle_rule(5),
        *triangle_rule(8),
        *unit_rule(4),
        *unit_rule(6),
        *unit_rule(12),
    )
    ps, qs = p[which], q[which]
    out = np.zeros((len(which), 20))

    def work(first: int, last: int) -> None:
        sheet_pairs(
            first,
            last,
            direct,
            ps,
            qs,
            elements.kind,
            elements.size_m,
            elements.radius_m,
            elements.share,
            elements.shapes,
            sources,
            rules,
            out,
        )

    in_shares(work, len(which))
    integrals[which] = out


def _tubes(
    elements: Elements, sources: Shapes, direct: bool, p: Index, q: Index, which: Index, integrals: Array
) -> None:
    ps, qs = p[which], q[which]
    out = np.zeros((len(which), 20))

    def work(first: int, last: int) -> None:
        tube_pairs(
            first,
            last,
            direct,
            ps,
            qs,
            elements.shapes.corners,
            sources.corners,
            elements.radius_m,
            *unit_rule(4),
            *unit_rule(6),
            *unit_rule(10),
            out,
        )

    in_shares(work, len(which))
    integrals[which] = out
