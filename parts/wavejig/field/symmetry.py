"""Mirror symmetry: solve for even and odd currents apart where a model equals its own mirror image.

The planes tried are x = 0 and y = 0 (and both). The mirror maps each half onto one of the mirror image's
halves, so each unknown onto a combination of unknowns; it is used only where every unknown goes to exactly
one unknown with sign plus or minus one. Then the matrix commutes with that exchange and falls into an even
and an odd block of half the size: an eighth of the work for one block, and blocks nothing drives are left
out.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from wavejig.field.elements import Elements
from wavejig.field.model import Model

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Index = NDArray[np.int64]

CLOSE = 1e-9  # of the model's size: how exactly a model must equal its mirror image


@dataclass(frozen=True, slots=True, kw_only=True)
class Mirror:
    """The image of each unknown (n,): its partner's number, and the sign the current takes."""

    partner: Index
    sign: Array


def find_mirrors(model: Model, elements: Elements) -> tuple[Mirror, ...]:
    """The mirrors x = 0 and y = 0 that the model has, materials included."""
    found = []
    for axis in (0, 1):
        mirror = _find(model, elements, axis)
        if mirror is not None:
            found.append(mirror)
    return tuple(found)


def _find(model: Model, elements: Elements, axis: int) -> Mirror | None:
    from scipy.spatial import cKDTree

    shapes = elements.shapes
    image = shapes.mirrored(axis)
    span = float(np.max(np.ptp(shapes.points.reshape(-1, 3), axis=0)))
    distance, other = cKDTree(shapes.centre).query(image.centre, k=min(8, len(shapes.centre)))
    distance, other = np.atleast_2d(distance.T).T, np.atleast_2d(other.T).T
    materials = _materials(model, elements)
    partner_element = np.full(len(elements.kind), -1)
    for column in range(other.shape[1]):
        candidate = other[:, column]
        fits = (
            (distance[:, column] < CLOSE * span)
            & (elements.kind[candidate] == elements.kind)
            & (np.abs(elements.size_m[candidate] - elements.size_m) < CLOSE * span)
            & np.all(np.abs(materials[candidate] - materials) <= 1e-12 * np.abs(materials), axis=1)
            & (partner_element < 0)
        )
        fits &= _same_corners(shapes.corners, image.corners, candidate, elements.kind, CLOSE * span)
        partner_element[fits] = candidate[fits]
    if (partner_element < 0).any():
        return None
    return _unknown_map(elements, shapes.corners, image.corners, partner_element, CLOSE * span)


def _materials(model: Model, elements: Elements) -> Array:
    """(elements, 4): radius, conductivity and sleeve of wires; zeros for sheet."""
    rows = np.zeros((len(elements.kind), 4))
    wires = np.array(
        [
            (
                w.radius_m,
                w.conductivity_s_per_m or 0.0,
                w.insulation.outer_radius_m if w.insulation else 0.0,
                w.insulation.permittivity if w.insulation else 0.0,
            )
            for w in model.wires
        ]
    ).reshape(-1, 4)
    mine = elements.kind == 0
    rows[mine] = wires[elements.source[mine]]
    return rows


def _corner_map(corners: Array, image: Array, candidate: Index, tolerance: float) -> Index:
    """(n, 3): which corner of the candidate each mirrored corner falls on, -1 if none."""
    gaps = np.linalg.norm(image[:, :, None] - corners[candidate][:, None], axis=3)
    best = np.argmin(gaps, axis=2)
    return np.where(np.take_along_axis(gaps, best[:, :, None], axis=2)[:, :, 0] < tolerance, best, -1)


def _same_corners(
    corners: Array, image: Array, candidate: Index, kind: Index, tolerance: float
) -> NDArray[np.bool_]:
    mapped = _corner_map(corners, image, candidate, tolerance)
    needed = np.where((kind == 0)[:, None], np.array([True, True, False]), True)
    good = np.all((mapped >= 0) | ~needed, axis=1)
    # a fan's attached corner must fall on an attached corner
    return np.asarray(good & ((kind != 2) | (mapped[:, 0] == 0)))


def _unknown_map(
    elements: Elements, corners: Array, image: Array, partner: Index, tolerance: float
) -> Mirror | None:
    """Carry halves over to unknowns; None unless each unknown goes to one unknown."""
    from scipy.sparse import csr_matrix

    n = len(elements.kind)
    mapped = _corner_map(corners, image, partner, tolerance)
    half = np.repeat(np.arange(3 * n), np.diff(elements.half_start))
    build = csr_matrix(
        (elements.half_coefficient, (half, elements.half_unknown)), shape=(3 * n, elements.unknowns)
    )
    element = np.arange(3 * n) // 3
    local = np.arange(3 * n) % 3
    target_local = np.where(elements.kind[element] == 2, local, mapped.ravel())
    # a mirrored wire that runs the other way has the opposite direction: its halves change sign
    turned = (elements.kind[element] == 0) & (mapped[element, 0] == 1)
    target = 3 * partner[element] + np.maximum(target_local, 0)
    moved = (
        csr_matrix((np.where(turned, -1.0, 1.0), (target, np.arange(3 * n))), shape=(3 * n, 3 * n)) @ build
    )
    overlap = (build.T @ moved).tocsr()
    norm = np.asarray(build.multiply(build).sum(axis=0)).ravel()
    overlap.data[np.abs(overlap.data) < 0.5] = 0.0
    partner_unknown = np.zeros(elements.unknowns, dtype=np.int64)
    sign = np.zeros(elements.unknowns)
    columns = overlap.tocsc()
    best = np.asarray(np.abs(columns).argmax(axis=0)).ravel()
    partner_unknown[:] = best
    sign[:] = np.asarray(columns[best, np.arange(elements.unknowns)]).ravel() / norm[best]
    exact = csr_matrix((sign, (partner_unknown, np.arange(elements.unknowns))), shape=overlap.shape)
    if not np.all(np.abs(np.abs(sign) - 1.0) < 1e-12):
        return None
    if np.abs(moved - build @ exact).max() > 1e-12 or not np.array_equal(
        partner_unknown[partner_unknown], np.arange(elements.unknowns)
    ):
        return None
    return Mirror(partner=partner_unknown, sign=sign)


def solve_by_parity(z: Complex, drive: Complex, mirrors: tuple[Mirror, ...]) -> Complex:
    """Solve z x = drive (n, p), z commuting with each mirror: even and odd parts apart, mirror by mirror.

    z, best in Fortran order, may be used up. A singular matrix gives not-a-numbers.
    """
    from scipy.linalg.lapack import zgesv

    if not mirrors:
        # one call for factors and solution: with few right sides the usual libraries run it on one thread, so
        # the last bits do not depend on how many there are, nor the time on who else uses them
        _, _, found, info = zgesv(z, drive, overwrite_a=1)
        return np.asarray(found) if info == 0 else np.full_like(drive, np.nan)
    mirror, rest = mirrors[0], mirrors[1:]
    out = np.zeros_like(drive)
    index = np.arange(len(drive))
    for parity in (1.0, -1.0):
        # one unknown stands for each pair; one that is its own image belongs to one parity only
        first = index[
            (index < mirror.partner) | ((index == mirror.partner) & (np.abs(mirror.sign - parity) < 0.5))
        ]
        second = mirror.partner[first]
        sign = parity * mirror.sign[first]
        right = 0.5 * (drive[first] + sign[:, None] * drive[second])
        if not np.abs(right).max(initial=0.0) > 0.0:
            continue
        twin = np.where(first == second, 0.0, sign)
        block = np.asfortranarray(z[np.ix_(first, first)] + z[np.ix_(first, second)] * twin)
        half = solve_by_parity(block, right, tuple(_within(m, mirror, parity, first) for m in rest))
        out[first] += half
        out[second] += twin[:, None] * half
    return out


def _within(other: Mirror, mirror: Mirror, parity: float, kept: Index) -> Mirror:
    """Another mirror as it acts on the unknowns kept for one parity of this one."""
    size = len(mirror.partner)
    place = np.full(size, -1)
    place[kept] = np.arange(len(kept))
    weight = np.zeros(size)
    weight[kept] = 1.0
    # an unknown that was left out is its partner, with the parity's sign
    twins = kept[mirror.partner[kept] != kept]
    gone = mirror.partner[twins]
    place[gone] = place[twins]
    weight[gone] = parity * mirror.sign[twins]
    target = other.partner[kept]
    return Mirror(partner=place[target], sign=other.sign[kept] * weight[target])
