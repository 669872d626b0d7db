"""P. Viezbicke, Yagi Antenna Design, NBS Technical Note 688 (1976), Table 1, from memory.

Elements 0.0085 wavelengths thick, reflector 0.2 behind; gain over a half-wave dipole as measured, 0.5 dB.
The driven element's length is not in the table; it hardly moves the gain (0.466 here, and tried below).
"""

from __future__ import annotations

import pytest

from tests.field.antennas import LIGHT_HZ
from wavejig.field import Model, Port, solve
from wavejig.field.shapes import chain

DIPOLE_DBI = 2.15
THICK = 0.0085


def yagi(reflector: float, directors: list[float], spacing: float, driven: float = 0.466) -> Model:
    places = [(-0.2, reflector), (0.0, driven), *((spacing * (i + 1), d) for i, d in enumerate(directors))]
    wires = sum(
        (chain([(x, 0.0, -s / 2.0), (x, 0.0, s / 2.0)], THICK / 2.0, counts=16) for x, s in places), ()
    )
    return Model(wires=wires, ports=(Port(wire=16 + 8, end=0),))


@pytest.mark.parametrize(
    ("directors", "spacing", "gain_dbd"),
    [
        ([0.442], 0.2, 7.1),
        ([0.428, 0.424, 0.428], 0.2, 9.2),
        ([0.428, 0.420, 0.420, 0.428], 0.25, 10.2),
    ],
    ids=["0.4 wavelengths", "0.8 wavelengths", "1.2 wavelengths"],
)
def test_gain(directors: list[float], spacing: float, gain_dbd: float) -> None:
    response = solve(yagi(0.482, directors, spacing), [LIGHT_HZ])
    assert response.directivity_dbi([(1.0, 0.0, 0.0)])[0, 0] - DIPOLE_DBI == pytest.approx(gain_dbd, abs=0.5)
    assert response.power_balance[0] == pytest.approx(1.0, abs=1e-3)


def test_the_driven_length_hardly_matters() -> None:
    gains = [
        solve(yagi(0.482, [0.442], 0.2, driven), [LIGHT_HZ]).directivity_dbi([(1.0, 0.0, 0.0)])[0, 0]
        for driven in (0.45, 0.48)
    ]
    assert gains[0] == pytest.approx(gains[1], abs=0.15)
