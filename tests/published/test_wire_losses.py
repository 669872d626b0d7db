"""Skin effect and insulated wire: values of the check table.

Surface resistance of copper (58 MS/m, IEC 60028) at 2.45 GHz: 12.91 milliohm, computed from the closed form.
Insulated wire: J. H. Richmond, E. H. Newman, Dielectric coated wire antennas, Radio Science 11 (1976)
13-20, from memory, re-derived from the quasi-static shell: a 0.8 mm, b 1.6 mm, er 2.3.
"""

from __future__ import annotations

import math

import pytest

from wavejig.field import Insulation, Model, Wire
from wavejig.field.elements import effective_radii
from wavejig.field.losses import sleeve_inductance_h_per_m, surface_resistance_ohm

SLEEVE = Insulation(outer_radius_m=1.6e-3, permittivity=2.3)


def test_copper_at_2450_mhz() -> None:
    assert surface_resistance_ohm(2.45e9, 58e6) == pytest.approx(12.91e-3, rel=1e-3)


def test_skin_depth_behind_it() -> None:
    """1.3351 micrometre: Rs is one over conductivity times depth."""
    assert 1.0 / (58e6 * surface_resistance_ohm(2.45e9, 58e6)) == pytest.approx(1.3351e-6, rel=1e-3)


def test_sleeve_inductance() -> None:
    assert sleeve_inductance_h_per_m(0.8e-3, SLEEVE) == pytest.approx(0.07836e-6, abs=0.5e-11)


def test_equivalent_radius() -> None:
    wire = Wire(start=(0, 0, 0), end=(0, 0, 0.1), radius_m=0.8e-3, insulation=SLEEVE)
    assert effective_radii(Model(wires=(wire,)))[0] == pytest.approx(1.1837e-3, abs=0.5e-7)


def test_the_pair_gives_the_shell_its_capacitance_and_keeps_its_inductance() -> None:
    """Out to any D: ln(D/b) + ln(b/a)/er for the charge; ln(D/a) for the current, split over kernel and sleeve."""
    a, b, far = 0.8e-3, 1.6e-3, 0.05
    wire = Wire(start=(0, 0, 0), end=(0, 0, 0.1), radius_m=a, insulation=SLEEVE)
    kernel = math.log(far / effective_radii(Model(wires=(wire,)))[0])
    assert kernel == pytest.approx(math.log(far / b) + math.log(b / a) / 2.3, rel=1e-12)
    sleeve = sleeve_inductance_h_per_m(a, SLEEVE) / 2e-7
    assert kernel + sleeve == pytest.approx(math.log(far / a), rel=1e-9)
