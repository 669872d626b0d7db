"""The impedance matrix: jk eta/(4 pi) times the sum over element pairs of current and charge interactions.

Mixed-potential integral equation, Galerkin: R. F. Harrington, Field Computation by Moment Methods (1968);
time convention exp(+j omega t).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.elements import Elements, Shapes
from wavejig.field.kernels.waves import BLOCK, add_transpose, fill_rows
from wavejig.field.losses import loss_rows
from wavejig.field.model import Model
from wavejig.field.statics import Statics, make_statics
from wavejig.field.threads import count, in_shares, side_by_side
from wavejig.field.units import ETA_OHM, wavenumber

Array = NDArray[np.float64]
Index = NDArray[np.int64]
Matrix = NDArray[np.complex128]


@dataclass(frozen=True, slots=True, kw_only=True)
class Pass:
    """One set of sources for all observers: the elements themselves (sign 1), or their images (sign -1)."""

    sign: float
    shapes: Shapes
    statics: Statics


def make_passes(model: Model, elements: Elements) -> tuple[Pass, ...]:
    """The direct pass, and the images' if there is an infinite ground."""
    own = elements.shapes
    passes = [Pass(sign=1.0, shapes=own, statics=make_statics(elements, own, direct=True))]
    if model.plane is not None:
        # the image of a current is the mirrored one with its sign turned, charge too
        images = own.mirrored(2)
        passes.append(Pass(sign=-1.0, shapes=images, statics=make_statics(elements, images, direct=False)))
    return tuple(passes)


def impedance_matrix(
    model: Model, elements: Elements, passes: tuple[Pass, ...], frequency_hz: float, *, losses: bool = True
) -> Matrix:
    """(unknowns, unknowns) complex, ohm."""
    size = elements.unknowns
    z = np.zeros((size, size), dtype=np.complex128)
    owners = np.repeat(np.arange(len(elements.kind) * 3), np.diff(elements.half_start)) // 3
    cuts = _even_shares(owners, elements.half_unknown, size)
    for p in passes:
        _add_pass(z, elements, p, wavenumber(frequency_hz), owners, cuts)
    in_shares(lambda first, last: add_transpose(first, last, z), (size + 31) // 32)
    if losses:
        row, column, value = loss_rows(model, elements, frequency_hz)
        np.add.at(z, (row, column), value)
    return z


def _add_pass(z: Matrix, elements: Elements, sources: Pass, k: float, owners: Index, cuts: list[int]) -> None:
    """Add half of what one set of sources does to z: z plus its transpose is the whole."""
    t = sources.statics
    observers = (elements.shapes.points, elements.shapes.moments, elements.weights, elements.charges)
    halves = (elements.half_start, elements.half_unknown, elements.half_coefficient)
    near_by = (t.start, t.other, t.pair, t.flip, t.integrals)
    blocks = _blocks(elements, sources.shapes)
    factor = sources.sign * k * ETA_OHM / (4.0 * np.pi)
    tiny2 = (1e-12 * float(np.max(elements.size_m))) ** 2

    def rows(first: int, last: int) -> None:
        inside = (elements.half_unknown >= first) & (elements.half_unknown < last)
        members = np.unique(owners[inside])
        fill_rows(k, factor, tiny2, members, first, last, observers, blocks, halves, near_by, z)

    side_by_side(rows, cuts)


def _blocks(elements: Elements, shapes: Shapes) -> tuple[Array, Array, Array, Array]:
    """The sources in blocks, element last, the last block padded with elements that carry nothing."""
    n = len(elements.kind)
    count = -(-n // BLOCK)

    def blocked(array: Array) -> Array:
        padded = np.zeros((count * BLOCK, *array.shape[1:]))
        padded[:n] = array
        return np.moveaxis(padded.reshape(count, BLOCK, *array.shape[1:]), 1, -1)

    return (
        np.ascontiguousarray(blocked(shapes.points)).reshape(count, 3, 3 * BLOCK),
        np.ascontiguousarray(blocked(shapes.moments).swapaxes(2, 3)).reshape(count, 3, 9 * BLOCK),
        np.ascontiguousarray(blocked(elements.weights)).reshape(count, 3 * BLOCK),
        np.ascontiguousarray(blocked(elements.charges)),
    )


def _even_shares(owners: Index, unknown: Index, size: int) -> list[int]:
    """Cuts of the rows such that each share is as much work: an element meets only those after it."""
    work = np.zeros(size)
    np.add.at(work, unknown, (owners.max() + 1.0) - owners)
    done = np.concatenate([[0.0], np.cumsum(work)])
    shares = min(count(), max(1, size // 64))
    return [int(np.searchsorted(done, done[-1] * i / shares)) for i in range(shares)] + [size]
