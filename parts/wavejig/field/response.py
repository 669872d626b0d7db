"""What a solved model does: impedance and match, far field, gain, losses, power balance."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from wavejig.field.elements import Elements
from wavejig.field.errors import ModelError, Remark
from wavejig.field.farfield import Radiation, radiation, sphere_degree
from wavejig.field.losses import loss_rows
from wavejig.field.model import Model
from wavejig.field.quadrature import sphere_rule

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]


@dataclass(frozen=True, kw_only=True, eq=False)
class Response:
    """The currents of a model at F frequencies for 1 volt at each of P ports, and what follows.

    frequencies_hz (F,); currents_a_per_v (F, unknowns, P), the other ports shorted. Far-field methods drive
    one port (the first, unless told) and close the others with their own reference impedance; give
    voltages (P,) instead to drive all of them.
    """

    frequencies_hz: Array
    model: Model
    elements: Elements
    currents_a_per_v: Complex
    remarks: tuple[Remark, ...]

    @property
    def unknowns(self) -> int:
        """Size of the matrix."""
        return self.elements.unknowns

    @cached_property
    def admittance_s(self) -> Complex:
        """(F, P, P) siemens."""
        return np.asarray(self.elements.ports @ self.currents_a_per_v)

    @cached_property
    def impedance_ohm(self) -> Complex:
        """(F,) for one port, (F, P, P) for several."""
        z: Complex = np.asarray(np.linalg.inv(self.admittance_s), dtype=np.complex128)
        return z[:, 0, 0] if z.shape[1] == 1 else z

    @property
    def reference_ohm(self) -> Array:
        """(P,): the ports' reference impedances."""
        return np.array([p.impedance_ohm for p in self.model.ports])

    def scattering(self, reference_ohm: float | None = None) -> Complex:
        """(F, P, P): S parameters in the ports' own references, or all in the one given."""
        z0 = self.reference_ohm if reference_ohm is None else np.full(len(self.model.ports), reference_ohm)
        root = np.sqrt(z0)
        y = root[:, None] * self.admittance_s * root
        one = np.eye(len(z0))
        return np.asarray(np.linalg.solve(one + y, one - y))

    @property
    def s11(self) -> Complex:
        """(F,): reflection at the first port in its own reference, the others closed with theirs."""
        return self.scattering()[:, 0, 0]

    def directivity_dbi(
        self, directions: ArrayLike, *, port: int = 0, voltages: ArrayLike | None = None
    ) -> Array:
        """(F, n) dBi at unit vectors (n, 3): power per solid angle over its mean; -inf below a ground."""
        with np.errstate(divide="ignore"):
            return 10.0 * np.log10(self.directivity(directions, port=port, voltages=voltages))

    def directivity(
        self, directions: ArrayLike, *, port: int = 0, voltages: ArrayLike | None = None
    ) -> Array:
        """(F, n), as a ratio."""
        drive = self.drive(port, voltages)
        intensity = self.radiation(directions, drive).intensity_w_per_sr
        return np.asarray(4.0 * np.pi * intensity / self._radiated_w(drive)[:, None])

    def gain_dbi(self, directions: ArrayLike, *, port: int = 0, voltages: ArrayLike | None = None) -> Array:
        """(F, n) dBi: as directivity, over the power the antenna takes in (mismatch not counted)."""
        drive = self.drive(port, voltages)
        intensity = self.radiation(directions, drive).intensity_w_per_sr
        taken = self._port_w(drive)
        power = taken.sum(axis=1) if voltages is not None else taken[:, port]
        with np.errstate(divide="ignore"):
            return np.asarray(10.0 * np.log10(4.0 * np.pi * intensity / power[:, None]))

    @property
    def efficiency(self) -> Array:
        """(F,): radiated power over radiated power and loss, the first port driven."""
        drive = self.drive(0, None)
        radiated = self._radiated_w(drive)
        return np.asarray(radiated / (radiated + self._lost_w(drive)))

    @property
    def power_balance(self) -> Array:
        """(F,): power in at the ports over power radiated (far field, integrated) and lost; 1 is right."""
        drive = self.drive(0, None)
        return np.asarray(self._port_w(drive).sum(axis=1) / (self._radiated_w(drive) + self._lost_w(drive)))

    def drive(self, port: int, voltages: ArrayLike | None) -> Complex:
        """(F, P) volts at the ports."""
        count = len(self.model.ports)
        if voltages is not None:
            given = np.asarray(voltages, dtype=np.complex128)
            if given.shape != (count,):
                raise ModelError("voltages", f"got shape {given.shape}, need one for each of {count} ports")
            return np.broadcast_to(given, (len(self.frequencies_hz), count))
        if not 0 <= port < count:
            raise ModelError("port", f"got port {port}, need 0 to {count - 1}")
        source = np.zeros((count, 1))
        source[port] = 1.0
        loaded = np.eye(count) + self.reference_ohm[:, None] * self.admittance_s
        return np.asarray(np.linalg.solve(loaded, np.broadcast_to(source, (*loaded.shape[:2], 1)))[:, :, 0])

    def currents_a(self, drive: Complex) -> Complex:
        """(F, unknowns) amperes for port voltages (F, P)."""
        return np.asarray(np.einsum("fnp,fp->fn", self.currents_a_per_v, drive))

    def radiation(self, directions: ArrayLike, drive: Complex) -> Radiation:
        """Far field at unit vectors (n, 3) for port voltages (F, P)."""
        return radiation(
            self.elements,
            self.currents_a(drive),
            self.frequencies_hz,
            directions,
            self.model.plane is not None,
        )

    def _port_w(self, drive: Complex) -> Array:
        current = np.einsum("fpq,fq->fp", self.admittance_s, drive)
        return np.asarray(0.5 * np.real(drive * np.conj(current)))

    def _radiated_w(self, drive: Complex) -> Array:
        degree = sphere_degree(self.elements, float(self.frequencies_hz.max()))
        directions, weights = sphere_rule(degree)
        if self.model.plane is not None:
            # the far field with its images is the same below: half the whole sphere, no kink at the horizon
            return 0.5 * (self.radiation_with_images(directions, drive).intensity_w_per_sr @ weights)
        return np.asarray(self.radiation(directions, drive).intensity_w_per_sr @ weights)

    def radiation_with_images(self, directions: ArrayLike, drive: Complex) -> Radiation:
        """As radiation over an infinite ground, but not silenced below it."""
        return radiation(
            self.elements, self.currents_a(drive), self.frequencies_hz, directions, True, below=True
        )

    def _lost_w(self, drive: Complex) -> Array:
        lost = np.zeros(len(self.frequencies_hz))
        for i, current in enumerate(self.currents_a(drive)):
            row, column, value = loss_rows(self.model, self.elements, float(self.frequencies_hz[i]))
            lost[i] = 0.5 * np.real(np.sum(np.conj(current[row]) * value * current[column]))
        return lost
