"""Corners of folded trays and what a nozzle can draw, against numbers worked out beside the code."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import pytest

from tests.designs import design
from wavejig.reflector.model import Tray
from wavejig.shop import Inspection, inspect
from wavejig.shop.corners import fold_tolerance_deg, lip_gaps_mm, tightest_notch_mm
from wavejig.shop.printing import span_findings

ROOMY = {"stock_sheet": ["1000 mm", "600 mm"]}


def made(**tables: Any) -> Inspection:
    return inspect(design(**tables))


def tray_of(**reflector: Any) -> Tray:
    tray = made(reflector={"lips": "four", **reflector}).tray
    assert tray is not None
    return tray


def found(inspection: Inspection, code: str) -> list[str]:
    return [f.severity for f in inspection.findings if f.code == code]


def test_the_gap_of_mitred_lips_is_the_diagonal_one_along_an_edge() -> None:
    """0.5 mm between the inner corners, across the diagonal, is 0.5 / sqrt 2 along either edge."""
    gaps = [gap for _, _, gap in lip_gaps_mm(tray_of(corners="mitre"))]
    assert gaps == pytest.approx([0.5 / math.sqrt(2.0)] * 8, abs=1e-6)


def test_relieved_lips_stand_a_notch_apart() -> None:
    """Each ends where its neighbour's notch begins: the notch's reach less the neighbour's thickness."""
    tray = tray_of(corners="relief")
    reach = max(tray.lips[0].setback_mm + 1.0, tray.inside_radius_mm + tray.thickness_mm)
    assert [g for *_, g in lip_gaps_mm(tray)] == pytest.approx([reach - tray.thickness_mm] * 8)


@pytest.mark.parametrize(("height", "severity"), [(18, None), (25, "note"), (40, "note"), (60, "warning")])
def test_mitred_lips_meet_when_folded_a_degree_too_far(height: int, severity: str | None) -> None:
    """The tip of a lip h high comes h sin 1 deg nearer: 0.31, 0.44, 0.70 and 1.05 mm into a gap of 0.35 mm."""
    lips = {"lips": "four", "corners": "mitre", "lip_height": f"{height} mm"}
    got = found(made(reflector=lips, cutter=ROOMY), "lips-may-collide")
    assert got == ([severity] if severity else [])


@pytest.mark.parametrize(("grade", "leg", "degrees"), [("m", 25.0, 1.0), ("c", 25.0, 1.0), ("c", 8.0, 1.5)])
def test_a_fold_is_held_to_the_general_tolerance_or_a_degree(grade: str, leg: float, degrees: float) -> None:
    """ISO 2768-1: to 50 mm half a degree in grade m and 1 in c, to 10 mm 1.5 in c; no fold is held better than 1."""
    assert fold_tolerance_deg(made(tolerances={"grade": grade}).design, leg) == degrees


def test_one_pair_of_lips_cannot_meet() -> None:
    tray = made(reflector={"lips": "two", "lip_height": "60 mm"}, cutter=ROOMY).tray
    assert tray is not None
    assert not list(lip_gaps_mm(tray))


def test_the_notch_is_measured_on_the_outline() -> None:
    tray = tray_of(corners="relief")
    assert tightest_notch_mm(tray) == pytest.approx(0.5)
    flat = made().tray
    assert flat is not None
    assert tightest_notch_mm(flat) is None  # its corners are all outside ones
    sharp = (
        (0.0, 0.0, 0.0),
        (10.0, 0.0, 0.0),
        (10.0, 4.0, 0.0),
        (4.0, 4.0, 0.0),
        (4.0, 10.0, 0.0),
        (0.0, 10.0, 0.0),
    )
    assert tightest_notch_mm(replace(tray, outline=replace(tray.outline, vertices=sharp))) == 0.0
    # run round the other way it is the same corner; with it cut off there is none
    assert tightest_notch_mm(replace(tray, outline=replace(tray.outline, vertices=sharp[::-1]))) == 0.0
    plain = (*sharp[:2], (10.0, 10.0, 0.0), sharp[-1])
    assert tightest_notch_mm(replace(tray, outline=replace(tray.outline, vertices=plain))) is None


@pytest.mark.parametrize(("bridge", "severity"), [(0.0, None), (5.0, None), (5.1, "note"), (10.0, "note")])
def test_spans(bridge: float, severity: str | None) -> None:
    got = [(f.code, f.severity) for f in span_findings("spacer-a", bridge, 10.0)]
    assert got == ([("span-long", severity)] if severity else [])


@pytest.mark.parametrize(("nozzle", "caught"), [("0.6 mm", False), ("0.65 mm", True)])
def test_a_guide_s_wall_counts_in_a_dish_s_template(nozzle: str, caught: bool) -> None:
    """1.2 mm round the guides: two lines of 0.6 mm, not of 0.65."""
    own = {"kind": "own", "material": "tinplate", "thickness": "0.5 mm",
           "own": {"shape": "round", "diameter": "160 mm", "depth": "45 mm"}}  # fmt: skip
    inspection = made(reflector=own, printer={"nozzle": nozzle})
    walls = [f.message for f in inspection.findings if f.code == "wall-below-nozzle"]
    assert bool(walls) is caught
    assert all(m.startswith("drill-template, round a hole: 1.20 mm") for m in walls)
