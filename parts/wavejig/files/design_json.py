"""design.json: every number of the design for other programs, keys as in the contract."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

from wavejig.design.model import Design, OwnShape
from wavejig.files.errors import FileCheckError
from wavejig.files.making_json import Made, fixture_data, prints_data, spacer_data
from wavejig.fixture.model import Fixture
from wavejig.geometry.path import Arc, Segment
from wavejig.radiator.model import Joint, Piece, Radiator
from wavejig.radiator.stock import bought_length_mm, part_of
from wavejig.reflector.flat import FlatPattern
from wavejig.shop.finding import Finding
from wavejig.spacer.model import Spacer

_DIGITS = 9  # beyond any shop, short of binary dust


def design_data(
    design: Design,
    radiator: Radiator,
    pattern: FlatPattern,
    fixture: Fixture,
    spacer: Spacer,
    findings: tuple[Finding, ...],
    made: Made,
) -> dict[str, Any]:
    """The document as plain data."""
    r, target, feed = design.radiator, design.target, design.feed
    main = radiator.main
    return {
        "name": design.name,
        "quantity": design.quantity,
        "units": {"length": "mm", "angle": "deg", "frequency": "Hz"},
        "target": {
            "band": [target.band_low_hz, target.band_high_hz],
            "reference_impedance": target.reference_ohm,
            "return_loss_db": target.return_loss_db,
        },
        "radiator": {
            "family": r.family,
            "wire": r.wire_text,
            "metal": r.metal.name,
            "temper": r.metal.temper,
            "insulation_thickness": _n(r.insulation_thickness_mm),
            "insulation_permittivity": _n(r.insulation_permittivity),
            "standoff": _n(r.standoff_mm),
            "feed_gap": _n(r.feed_gap_mm),
            "pin_diameter": _n(r.pin_diameter_mm),
            "neutral_axis_factor": _n(r.neutral_axis_factor),
            **_piece(radiator, main),
            "pieces": [
                {
                    "role": p.role,
                    "part_of": part_of(p),
                    **_piece(radiator, p),
                    "bared": _n(bought_length_mm(radiator, p) - p.cut_length_mm),
                    "neutral_axis_factor": _n(r.neutral_axis_factor),
                }
                for p in radiator.pieces[1:]
            ],
            "joints": [_joint(j) for j in radiator.joints],
        },
        "feed": {
            "style": feed.style,
            "mounting": feed.mounting,
            "connector": feed.connector.name if feed.connector else None,
            "connector_at": _point(feed.connector_at),
            "tube": feed.tube.name if feed.tube else None,
            "tube_at": _point(feed.tube_at) if feed.tube else None,
            "ground": feed.ground,
            "foot": _point(feed.foot),
            "terminals": {"pin": _point(feed.terminal_pin), "ground": _point(feed.terminal_ground)},
        },
        "reflector": _reflector(design, pattern),
        "fixture": fixture_data(fixture, made),
        "spacer": spacer_data(spacer, made),
        "prints": prints_data(made),
        "values": {
            key: {"value": _n(v.value), "from": v.origin, "unit": v.unit, "source": v.source}
            for key, v in design.values
        },
        "findings": [finding_data(f) for f in findings],
    }


def write_design_json(data: dict[str, Any], path: Path) -> None:
    """Write the document; keys in their order, no NaN."""
    text = json.dumps(data, indent=1, ensure_ascii=False, allow_nan=False)
    path.write_text(text + "\n", encoding="utf-8", newline="\n")


def check_design_json(path: Path, data: dict[str, Any]) -> None:
    """Raise FileCheckError unless the file reads back as `data`, and the bends make the centreline's length."""
    back = json.loads(path.read_text(encoding="utf-8"))
    if back != json.loads(json.dumps(data)):
        raise FileCheckError(path, "other data", "what was written")
    wire = back["radiator"]
    n = wire["neutral_axis_factor"]
    for piece in (wire, *wire["pieces"]):
        d = piece["wire_diameter"]
        length = sum(
            math.dist(s["start"], s["end"])
            if s["kind"] == "line"
            else math.radians(s["angle"]) * (s["radius"] - d / 2.0 + n * d)
            for s in piece["centreline"]
        )
        to_cut = piece["developed_length"] + piece["trim"] + piece.get("bared", 0.0)
        if abs(to_cut - piece["cut_length"]) > 1e-5:
            raise FileCheckError(path, f"cut length {piece['cut_length']}", f"{to_cut:.6f}")
        if abs(length - piece["developed_length"]) > 1e-5:
            raise FileCheckError(path, f"developed length {piece['developed_length']}", f"{length:.6f}")


def finding_data(f: Finding) -> dict[str, str]:
    """A finding as plain data."""
    return {
        "code": f.code,
        "severity": f.severity,
        "message": f.message,
        "where": f.where,
        "remedy": f.remedy,
        "source": f.source,
    }


def _piece(radiator: Radiator, piece: Piece) -> dict[str, Any]:
    return {
        "wire_diameter": _n(piece.diameter_mm),
        "developed_length": _n(piece.developed_length_mm),
        # of what is cut: a tube's wall and, beyond it, the conductor bared of it (itself part of the tube)
        "cut_length": _n(bought_length_mm(radiator, piece)),
        "trim": _n(piece.trim_mm),
        "centreline": [_segment(s) for s in piece.path.segments],
        "bends": [
            {
                "number": b.number,
                "from_start": _n(b.from_start_mm),
                "feed": _n(b.feed_mm),
                "rotation": _n(b.rotation_deg),
                "angle": _n(b.angle_deg),
                "loaded_angle": _n(b.loaded_angle_deg),
                "inside_radius": _n(b.inside_radius_mm),
                "loaded_inside_radius": _n(b.loaded_inside_radius_mm),
            }
            for b in piece.bends
        ],
    }


def _segment(s: Segment) -> dict[str, Any]:
    if isinstance(s, Arc):
        return {
            "kind": "arc",
            "start": _point(s.start),
            "middle": _point(s.middle),
            "end": _point(s.end),
            "radius": _n(s.radius_mm),
            "angle": _n(s.angle_deg),
        }
    return {"kind": "line", "start": _point(s.start), "end": _point(s.end)}


def _joint(j: Joint) -> dict[str, Any]:
    return {
        "kind": j.kind,
        "between": list(j.between),
        "at": _point(j.at),
        "length": _n(j.length_mm),
        "note": j.note,
    }


def _reflector(design: Design, pattern: FlatPattern) -> dict[str, Any]:
    r = design.reflector
    return {
        "kind": r.kind,
        "material": r.metal.name,
        "temper": r.metal.temper,
        "base": [_n(r.base_x_mm), _n(r.base_y_mm)],
        "thickness": _n(r.thickness_mm),
        "inside_radius": _n(r.inside_radius_mm),
        "k_factor": _n(r.k_factor),
        "bend_deduction": None if r.bend_deduction_mm is None else _n(r.bend_deduction_mm),
        "lips": [{"edge": p.edge, "height": _n(p.height_mm), "angle": _n(p.angle_deg)} for p in r.lips],
        "corner_style": r.corner_style,
        **({} if r.own is None else {"own": _own(r.own)}),
        "flat_size": [_n(v) for v in pattern.size_mm],
        "flat_area_mm2": _n(pattern.area_mm2),
        "holes": [
            {"x": _n(h.x_mm), "y": _n(h.y_mm), "diameter": _n(h.diameter_mm), "purpose": h.purpose}
            for h in r.holes
        ],
        "up": r.up,
    }


def _own(own: OwnShape) -> dict[str, Any]:
    """The dish; base is then its floor inside, and flat_size that floor's size."""
    return {
        "shape": own.shape,
        "depth": _n(own.depth_mm),
        "slope": _n(own.slope_deg),
        "radius": _n(own.radius_mm),
        "rim": _n(own.rim_mm),
    }


def _n(value: float) -> float:
    return round(float(value), _DIGITS) + 0.0


def _point(p: tuple[float, ...]) -> list[float]:
    return [_n(v) for v in p]
