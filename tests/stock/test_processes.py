"""Machines and tolerances: consistent rows and refusals."""

from __future__ import annotations

import math
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from wavejig.stock import processes
from wavejig.stock.errors import StockError
from wavejig.stock.processes import iso2768_angle_deg, iso2768_linear_mm


@pytest.mark.parametrize("name", ["bed-120", "bed-180", "bed-220", "bed-300"])
def test_bed_names_are_their_sizes(name: str) -> None:
    printer = processes.printer(name)
    assert f"bed-{printer.bed_x_mm:g}" == f"bed-{printer.bed_y_mm:g}" == name
    assert printer.height_mm >= printer.bed_x_mm
    assert printer.layer_mm < printer.nozzle_mm


def test_cutters_know_their_limits() -> None:
    assert not processes.cutter("guillotine").cuts_holes
    assert not processes.cutter("co2-laser").takes_copper
    assert processes.cutter("waterjet").takes_copper
    laser = processes.cutter("fibre-laser")
    assert laser.smallest_hole_in_mm(0.2) == laser.smallest_hole_mm
    assert laser.smallest_hole_in_mm(2.0) == laser.smallest_hole_factor * 2.0
    for cutter in processes.cutters():
        # the beam, jet or bit is round: no hole or corner can be finer than half the cut, or the cut itself
        assert cutter.inside_corner_radius_mm >= cutter.kerf_mm / 2
        assert cutter.smallest_hole_mm >= cutter.kerf_mm or not cutter.cuts_holes


def test_plastics_soften_far_below_solder() -> None:
    """Soft solder melts at 183 C and more (63/37 tin-lead eutectic)."""
    for plastic in processes.plastics():
        assert plastic.glass_transition_c < 183
        assert 1 < plastic.permittivity_low < plastic.permittivity_high
        assert 0 < plastic.loss_tangent < 0.05
    assert [plastic.name for plastic in processes.plastics() if plastic.outdoors] == ["ASA"]


def test_folding_and_radii() -> None:
    assert all(way.min_flange_factor >= 4 for way in processes.foldings())
    assert list(processes.brake_radii_mm()) == sorted(set(processes.brake_radii_mm()))
    assert processes.folding("press-brake").tooling_radius_mm in processes.brake_radii_mm()


@given(st.floats(0.5, 1000), st.floats(0.5, 1000))
def test_tolerances_grow_with_size_and_grade(one_mm: float, other_mm: float) -> None:
    small, large = sorted((one_mm, other_mm))
    for grade in ("f", "m", "c"):
        assert iso2768_linear_mm(small, grade) <= iso2768_linear_mm(large, grade)
        if large <= 400:
            assert iso2768_angle_deg(small, grade) >= iso2768_angle_deg(large, grade)
    assert iso2768_linear_mm(small, "f") <= iso2768_linear_mm(small, "m") <= iso2768_linear_mm(small, "c")


@pytest.mark.parametrize("size_mm", [0.49, 0.0, -3.0, 1000.1, math.nan, math.inf])
def test_linear_tolerance_off_the_table(size_mm: float) -> None:
    with pytest.raises(StockError, match=r"need from 0.5 up to 1000 mm"):
        iso2768_linear_mm(size_mm, "m")


@pytest.mark.parametrize("leg_mm", [0.0, -3.0, 400.1, math.nan])
def test_angular_tolerance_off_the_table(leg_mm: float) -> None:
    with pytest.raises(StockError, match=r"need above 0 up to 400 mm"):
        iso2768_angle_deg(leg_mm, "m")


def test_refusals() -> None:
    wrong: Any = "x"
    with pytest.raises(StockError, match=r'tolerance grade: got "x", need one of f, m, c'):
        iso2768_linear_mm(10, wrong)
    with pytest.raises(StockError, match=r'fit of printed parts: got "x", need one of press, slide, loose'):
        processes.print_clearance_mm(wrong)
    for find, near in (
        (processes.printer, "bed-220"),
        (processes.cutter, "waterjet"),
        (processes.folding, "folder"),
        (processes.plastic, "PETG"),
    ):
        with pytest.raises(StockError, match=f'Nearest: "{near}"'):
            find(near[:-1])
