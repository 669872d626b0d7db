"""Reading a far field: cuts through the main beam, beamwidths, front-to-back, sidelobes, polarisation."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from wavejig.field.errors import ModelError
from wavejig.field.response import Response

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

STEP_DEG = 1.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Cut:
    """A full circle of the pattern through the main axis; angles (n,) in degrees from it, -180 to 180.

    co_dbi and cross_dbi (n,): the parts of the directivity along the wanted polarisation and square to it
    (Ludwig's third definition: IEEE T-AP 21 (1973) 116-119, from memory), total_dbi their sum.
    """

    angles_deg: Array
    total_dbi: Array
    co_dbi: Array
    cross_dbi: Array

    @property
    def peak_dbi(self) -> float:
        return float(self.total_dbi.max())

    @property
    def peak_angle_deg(self) -> float:
        return float(self.angles_deg[int(np.argmax(self.total_dbi))])

    @property
    def beamwidth_deg(self) -> float | None:
        """Between the half-power points either side of the peak; None if it never falls that far."""
        level = self.peak_dbi - 10.0 * np.log10(2.0)
        left, right = self._crossing(level, -1), self._crossing(level, 1)
        return None if left is None or right is None else left + right

    def _rolled(self) -> Array:
        """The open circle turned so that the peak comes first."""
        return np.roll(self.total_dbi[:-1], -int(np.argmax(self.total_dbi[:-1])))

    def _crossing(self, level: float, way: int) -> float | None:
        values = self._rolled()
        values = values if way > 0 else np.roll(values[::-1], 1)
        below = np.flatnonzero(values < level)
        if not below.size:
            return None
        i = int(below[0])
        high, low = float(values[i - 1]), float(values[i])
        part = 0.0 if not np.isfinite(low) else (high - level) / (high - low)
        return (i - 1 + part) * float(self.angles_deg[1] - self.angles_deg[0])

    @property
    def first_sidelobe_db(self) -> float | None:
        """The nearer-in of the first maxima either side, over the peak (negative dB); the higher if as near.

        None if the cut falls all the way to its back without rising again.
        """
        values = self._rolled()
        half = len(values) // 2
        found = []
        for side in (values, np.roll(values[::-1], 1)):
            for i in range(1, half):
                if side[i] > side[i - 1]:
                    rise = next((j for j in range(i, half) if side[j + 1] < side[j]), None)
                    if rise is not None:
                        found.append((rise, -float(side[rise])))
                    break
        return None if not found else -min(found)[1] - self.peak_dbi


@dataclass(frozen=True, slots=True, kw_only=True)
class Pattern:
    """What the far field looks like at one frequency. Angles from axis; the E-plane holds the field there.

    front_to_back_db: directivity along the axis over that straight behind it. cross_db: the cross-polarised
    part over the whole, along the axis. axial: directivity along the axis, dBi.
    """

    frequency_hz: float
    e_plane: Cut
    h_plane: Cut
    axial_dbi: float
    front_to_back_db: float
    cross_db: float
    efficiency: float


def read_pattern(
    response: Response,
    *,
    at: int = 0,
    axis: ArrayLike = (0.0, 0.0, 1.0),
    polarisation: ArrayLike = (0.0, 1.0, 0.0),
    step_deg: float = STEP_DEG,
) -> Pattern:
    """The pattern at the response's frequency number `at`.

    axis: where the main beam should point; polarisation: the wanted direction of the electric field there.
    """
    front = _unit(axis, "axis")
    wanted = _unit(polarisation, "polarisation")
    wanted = _unit(wanted - front * float(wanted @ front), "polarisation")
    steps = round(360.0 / step_deg)
    angles = np.linspace(-180.0, 180.0, steps + 1)
    third = np.cross(front, wanted)
    e_cut = _cut(response, at, front, wanted, angles, wanted)
    h_cut = _cut(response, at, front, third, angles, wanted)
    forward = e_cut.total_dbi[steps // 2] if steps % 2 == 0 else _at(response, at, front)
    back = _at(response, at, -front)
    cross = _cut(response, at, front, wanted, np.array([0.0]), wanted).cross_dbi[0]
    return Pattern(
        frequency_hz=float(response.frequencies_hz[at]),
        e_plane=e_cut,
        h_plane=h_cut,
        axial_dbi=float(forward),
        front_to_back_db=float(forward - back),
        cross_db=float(cross - forward),
        efficiency=float(response.efficiency[at]),
    )


def _unit(vector: ArrayLike, what: str) -> Array:
    v = np.asarray(vector, dtype=np.float64)
    size = float(np.linalg.norm(v))
    if v.shape != (3,) or not size > 1e-9:
        raise ModelError(what, f"got {np.asarray(vector).tolist()}, need a direction (x, y, z) of its own")
    return v / size


def _at(response: Response, at: int, direction: Array) -> float:
    return float(response.directivity_dbi(direction[None])[at, 0])


def _cut(response: Response, at: int, front: Array, side: Array, angles_deg: Array, wanted: Array) -> Cut:
    angle = np.radians(angles_deg)[:, None]
    directions = np.cos(angle) * front + np.sin(angle) * side
    drive = response.drive(0, None)
    field = response.radiation(directions, drive).field_v[at]
    total = response.directivity(directions)[at]
    third = np.cross(front, wanted)
    co, cross = (np.sum(field * v, axis=1) for v in _ludwig(directions, front, wanted, third))
    power = np.sum(np.abs(field) ** 2, axis=1)
    safe = np.where(power > 0.0, power, 1.0)
    with np.errstate(divide="ignore"):
        return Cut(
            angles_deg=angles_deg,
            total_dbi=10.0 * np.log10(total),
            co_dbi=10.0 * np.log10(total * np.abs(co) ** 2 / safe),
            cross_dbi=10.0 * np.log10(total * np.abs(cross) ** 2 / safe),
        )


def _ludwig(directions: Array, front: Array, wanted: Array, third: Array) -> tuple[Array, Array]:
    """Ludwig's third pair of unit vectors: the axis's pair carried to each direction without twisting."""
    z = directions @ front
    x, y = directions @ wanted, directions @ third
    # turning front onto the direction about their common normal; straight back any turn is as good
    scale = np.where(z > -1.0 + 1e-12, 1.0 / np.maximum(1.0 + z, 1e-12), 0.0)
    co = wanted - (x * scale)[:, None] * (front + directions)
    cross = third - (y * scale)[:, None] * (front + directions)
    return co, cross
