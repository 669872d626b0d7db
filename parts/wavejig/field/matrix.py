"""The impedance matrix: jk eta/(4 pi) times the sum over element pairs of current and charge interactions.

Mixed-potential integral equation, Galerkin: R. F. Harrington, Field Computation by Moment Methods (1968);
time convention exp(+j omega t).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.elements import Elements, Shapes
from wavejig.field.kernels.waves import fill_rows
from wavejig.field.losses import loss_rows
from wavejig.field.model import Model
from wavejig.field.statics import Statics, make_statics
from wavejig.field.threads import count, in_shares
from wavejig.field.units import ETA_OHM, wavenumber

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
    k = wavenumber(frequency_hz)
    z = np.zeros((size, size), dtype=np.complex128)
    own = elements.shapes
    span = float(np.max(elements.size_m))
    owners = np.repeat(np.arange(len(elements.kind) * 3), np.diff(elements.half_start)) // 3

    for p in passes:
        s = p.shapes
        by_point = np.ascontiguousarray(np.transpose(s.points, (1, 2, 0)))
        by_half = np.ascontiguousarray(np.transpose(s.moments, (1, 2, 3, 0)))
        weights = np.ascontiguousarray(elements.weights.T)
        charges = np.ascontiguousarray(elements.charges.T)
        near = p.statics

        def rows(first: int, last: int) -> None:
            inside = (elements.half_unknown >= first) & (elements.half_unknown < last)
            members = np.unique(owners[inside])
            fill_rows(
                k,
                p.sign * k * ETA_OHM / (4.0 * np.pi),
                (1e-12 * span) ** 2,
                members,
                first,
                last,
                own.points,
                own.moments,
                elements.weights,
                elements.charges,
                by_point,
                by_half,
                weights,
                charges,
                elements.half_start,
                elements.half_unknown,
                elements.half_coefficient,
                near.start,
                near.other,
                near.pair,
                near.flip,
                near.integrals,
                z,
            )

        in_shares(rows, size)
    if losses:
        row, column, value = loss_rows(model, elements, frequency_hz)
        np.add.at(z, (row, column), value)
    return z
