"""The far field of known currents: E = -jk eta/(4 pi) exp(-jkr)/r times the current's transverse transform."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from wavejig.field.elements import Elements, Shapes
from wavejig.field.errors import ModelError
from wavejig.field.kernels.waves import far_rows
from wavejig.field.threads import in_shares
from wavejig.field.units import ETA_OHM, wavenumber

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]


@dataclass(frozen=True, slots=True, kw_only=True)
class Radiation:
    """Far field at n directions and F frequencies: field_v (F, n, 3), r E exp(jkr), transverse."""

    directions: Array
    field_v: Complex

    @property
    def intensity_w_per_sr(self) -> Array:
        """(F, n): r^2 |E|^2 / (2 eta)."""
        return np.asarray(np.sum(np.abs(self.field_v) ** 2, axis=2) / (2.0 * ETA_OHM))


def sphere_degree(elements: Elements, frequency_hz: float) -> int:
    """Degree of spherical harmonics that holds the power pattern to well below a part in a million.

    Twice the field's own, kr + 3 (kr)^(1/3) + 6: the usual rule for the harmonics of a source of radius r
    (common practice, no source), checked in the tests by raising it.
    """
    used = elements.shapes.points.reshape(-1, 3)
    middle = 0.5 * (used.min(axis=0) + used.max(axis=0))
    kr = wavenumber(frequency_hz) * float(np.linalg.norm(used - middle, axis=1).max())
    return 2 * math.ceil(kr + 3.0 * math.cbrt(kr) + 6.0)


def point_currents(elements: Elements, currents_a: Complex) -> Complex:
    """(elements, 3 points, 3): current moments in ampere metres at the far points, from unknowns (n,)."""
    owners = np.repeat(np.arange(len(elements.half_start) - 1), np.diff(elements.half_start))
    halves = np.zeros(len(elements.half_start) - 1, dtype=np.complex128)
    np.add.at(halves, owners, elements.half_coefficient * currents_a[elements.half_unknown])
    return np.asarray(np.einsum("nh,nhpc->npc", halves.reshape(-1, 3), elements.shapes.moments))


def radiation(
    elements: Elements,
    currents_a: Complex,
    frequencies_hz: Array,
    directions: ArrayLike,
    grounded: bool,
    *,
    below: bool = False,
) -> Radiation:
    """Far field of currents (F, unknowns) at unit vectors (n, 3); zero below an infinite ground."""
    to = np.array(directions, dtype=np.float64)  # writable, always: the compiled loop knows one kind
    if to.ndim != 2 or to.shape[1] != 3:
        raise ModelError("directions", f"got an array of shape {to.shape}, need unit vectors (n, 3)")
    if not np.allclose(np.linalg.norm(to, axis=1), 1.0, atol=1e-6):
        raise ModelError("directions", "directions must be unit vectors")
    to = np.ascontiguousarray(to)
    field = np.empty((len(frequencies_hz), len(to), 3), dtype=np.complex128)
    for i, frequency in enumerate(frequencies_hz):
        k = wavenumber(float(frequency))
        moments = point_currents(elements, currents_a[i])
        total = _transform(k, to, elements.shapes, moments)
        if grounded:
            mirror = np.array([-1.0, -1.0, 1.0])
            total += _transform(k, to, elements.shapes.mirrored(2), moments * mirror)
        total -= to * np.sum(total * to, axis=1)[:, None]
        field[i] = -1j * k * ETA_OHM / (4.0 * np.pi) * total
    if grounded and not below:
        field[:, to[:, 2] < 0.0] = 0.0
    return Radiation(directions=to, field_v=field)


def _transform(k: float, directions: Array, shapes: Shapes, moments: Complex) -> Complex:
    points = np.ascontiguousarray(shapes.points.reshape(-1, 3).T)
    flat = moments.reshape(-1, 3).T
    real, imag = np.ascontiguousarray(flat.real), np.ascontiguousarray(flat.imag)
    out = np.empty((len(directions), 3), dtype=np.complex128)
    in_shares(
        lambda first, last: far_rows(first, last, k, directions, points, real, imag, out), len(directions)
    )
    return out
