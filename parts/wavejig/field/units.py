"""Constants of free space: speed of light exact (SI), its impedance from the SI's permeability, CODATA 2018."""

from __future__ import annotations

import math

SPEED_OF_LIGHT_M_PER_S = 299_792_458.0
MU_0_H_PER_M = 1.25663706212e-6
ETA_OHM = MU_0_H_PER_M * SPEED_OF_LIGHT_M_PER_S


def wavenumber(frequency_hz: float) -> float:
    """k = 2 pi f / c, per metre."""
    return 2.0 * math.pi * frequency_hz / SPEED_OF_LIGHT_M_PER_S
