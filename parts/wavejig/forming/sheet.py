"""Folding of sheet: bend allowance, deduction, K-factor, handbook lengths, springback, smallest features.

Vocabulary: *bend angle* = how far the flange turns from flat (90 stands up); *opening angle* = 180 minus
it, the angle left between the legs; *mould line* = where the outer faces of both legs would meet.
Throughout: R inside radius in mm, T thickness in mm, K (`k_factor`) = depth of the neutral line from the
inside / T. DIN 6935 writes its factor k for half the thickness, so K = k/2.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal, get_args

HandbookClass = Literal["soft", "half-hard", "hard"]
"""soft: soft copper and brass. half-hard: half-hard copper and brass, soft steel, aluminium.
hard: bronze, hard copper, cold-rolled and spring steel."""

# Machinery's Handbook, "allowances for bends in sheet metal": 90 deg bend length = this x T + 1.57 R.
# From memory.
_HANDBOOK_T: tuple[tuple[HandbookClass, float], ...] = (("soft", 0.55), ("half-hard", 0.64), ("hard", 0.71))


@dataclass(frozen=True, slots=True, kw_only=True)
class CornerRelief:
    """Smallest notch where two bends meet: along the bend line, and from the flange edge into the base."""

    width_mm: float
    depth_mm: float


def bend_allowance_mm(
    angle_deg: float, inside_radius_mm: float, thickness_mm: float, k_factor: float
) -> float:
    """Length in mm of flat sheet that the bend takes up: the neutral line's arc, angle x (R + K T).

    angle_deg: bend angle, 0 to 180. Raises ValueError for an angle, R, T or K (0 to 1) out of range.
    """
    _check_bend(angle_deg, inside_radius_mm, thickness_mm)
    _check_k(k_factor)
    return math.radians(angle_deg) * (inside_radius_mm + k_factor * thickness_mm)


def outside_setback_mm(angle_deg: float, inside_radius_mm: float, thickness_mm: float) -> float:
    """Distance in mm from the bend's tangent to the outer mould line, (R + T) tan(angle/2).

    Raises ValueError at 180 deg and beyond: the mould lines of a closed hem never meet.
    """
    _check_bend(angle_deg, inside_radius_mm, thickness_mm)
    if angle_deg >= 180.0:
        raise ValueError(f"bend angle: got {angle_deg:g} deg, need less than 180 for a setback")
    return (inside_radius_mm + thickness_mm) * math.tan(math.radians(angle_deg) / 2.0)


def bend_deduction_mm(
    angle_deg: float, inside_radius_mm: float, thickness_mm: float, k_factor: float
) -> float:
    """What one bend takes off the sum of both outside lengths, in mm: 2 setbacks less the allowance."""
    setback_mm = outside_setback_mm(angle_deg, inside_radius_mm, thickness_mm)
    return 2.0 * setback_mm - bend_allowance_mm(angle_deg, inside_radius_mm, thickness_mm, k_factor)


def k_from_deduction(
    deduction_mm: float, angle_deg: float, inside_radius_mm: float, thickness_mm: float
) -> float:
    """K-factor behind a bend deduction measured by the shop; the inverse of `bend_deduction_mm`.

    Raises ValueError when the deduction puts the neutral line outside the sheet, and says which
    deductions this bend can have.
    """
    if not angle_deg > 0.0:
        raise ValueError(f"bend angle: got {angle_deg:g} deg, need above 0 to find K from a deduction")
    most = bend_deduction_mm(angle_deg, inside_radius_mm, thickness_mm, 0.0)
    least = bend_deduction_mm(angle_deg, inside_radius_mm, thickness_mm, 1.0)
    k = (most - deduction_mm) / (most - least)
    if not -1e-9 <= k <= 1.0 + 1e-9:
        raise ValueError(
            f"bend deduction: got {deduction_mm:g} mm, need {least:.3f} to {most:.3f} mm for "
            f"{angle_deg:g} deg, inside radius {inside_radius_mm:g} mm, sheet {thickness_mm:g} mm. "
            "Measure it as both outside lengths added, less the flat length."
        )
    return min(max(k, 0.0), 1.0)


def din6935_k_factor(inside_radius_mm: float, thickness_mm: float) -> float:
    """K (depth of the neutral line / T) after DIN 6935: half of 0.65 + 0.5 log10(R/T), at most 0.5.

    The standard's factor is 1 from R/T = 5 upwards. It is stated for R/T of 0.65 and more; for sharper
    bends we hold the value at 0.65 (K = 0.278) rather than let the logarithm run to nothing: our own
    choice. Source: DIN 6935, from memory. Raises ValueError for R below 0 or T not above 0.
    """
    _check_bend(0.0, inside_radius_mm, thickness_mm)
    ratio = max(inside_radius_mm / thickness_mm, 0.65)
    return 0.5 if ratio > 5.0 else (0.65 + 0.5 * math.log10(ratio)) / 2.0


def din6935_allowance_mm(opening_angle_deg: float, inside_radius_mm: float, thickness_mm: float) -> float:
    """DIN 6935's v in mm: flat length = leg + leg + v.

    opening_angle_deg: between the legs, 0 to 180. Up to 90 the legs are measured to the tangent of the
    bend, from 90 to 165 to the outer mould line; above 165 v is taken as 0. So below 90 it is not the
    mould-line deduction. Source: DIN 6935, from memory. Raises ValueError for values out of range.
    """
    if not 0.0 <= opening_angle_deg <= 180.0:
        raise ValueError(f"opening angle: got {opening_angle_deg:g} deg, need 0 to 180")
    if opening_angle_deg > 165.0:
        return 0.0
    bend_deg = 180.0 - opening_angle_deg
    k_factor = din6935_k_factor(inside_radius_mm, thickness_mm)
    arc_mm = bend_allowance_mm(bend_deg, inside_radius_mm, thickness_mm, k_factor)
    if opening_angle_deg <= 90.0:
        return arc_mm - 2.0 * (inside_radius_mm + thickness_mm)
    return arc_mm - 2.0 * outside_setback_mm(bend_deg, inside_radius_mm, thickness_mm)


def handbook_bend_length_mm(
    material_class: HandbookClass, angle_deg: float, inside_radius_mm: float, thickness_mm: float
) -> float:
    """Bend allowance in mm by the handbook's coefficients: (c T + 1.57 R) x angle/90.

    A cross-check, not a replacement for a K-factor. Source: Machinery's Handbook, from memory.
    Raises ValueError for an unknown class or values out of range.
    """
    _check_bend(angle_deg, inside_radius_mm, thickness_mm)
    for name, coefficient in _HANDBOOK_T:
        if name == material_class:
            return (coefficient * thickness_mm + 1.57 * inside_radius_mm) * angle_deg / 90.0
    raise ValueError(
        f"material class: got {material_class!r}, need one of {', '.join(get_args(HandbookClass))}"
    )


def aviation_bend_allowance_mm(angle_deg: float, inside_radius_mm: float, thickness_mm: float) -> float:
    """Bend allowance in mm by the aircraft trade's formula, (0.01743 R + 0.0078 T) per degree.

    A cross-check for aluminium. Source: FAA-H-8083-31 family, sheet metal chapter.
    """
    _check_bend(angle_deg, inside_radius_mm, thickness_mm)
    return (0.01743 * inside_radius_mm + 0.0078 * thickness_mm) * angle_deg


def gardiner_ratio(
    inside_radius_mm: float, yield_mpa: float, youngs_modulus_gpa: float, thickness_mm: float
) -> float:
    """Sheet springback, loaded inside radius / relaxed one: 4x^3 - 3x + 1, x = R Y/(E T).

    1 = no springback; 0 = springs back flat, from x = 0.5 (never left the elastic range).
    Source: F. J. Gardiner, Trans. ASME 79 (1957) 1-9, from memory, re-derived for an ideal plastic sheet.
    Raises ValueError for values out of range.
    """
    _check_bend(0.0, inside_radius_mm, thickness_mm)
    if not (yield_mpa > 0.0 and youngs_modulus_gpa > 0.0):
        raise ValueError(
            f"sheet: got yield {yield_mpa:g} MPa and modulus {youngs_modulus_gpa:g} GPa, need both above 0"
        )
    x = inside_radius_mm * yield_mpa / (youngs_modulus_gpa * 1000.0 * thickness_mm)
    return 0.0 if x >= 0.5 else 4.0 * x**3 - 3.0 * x + 1.0


def minimum_flange_mm(thickness_mm: float, factor: float = 4.0) -> float:
    """Shortest flange in mm a brake can hold, `factor` x T (4: common practice, no source)."""
    return factor * thickness_mm


def minimum_hole_mm(thickness_mm: float) -> float:
    """Smallest hole in mm to cut in the sheet: its thickness (common practice, no source)."""
    return thickness_mm


def minimum_hole_edge_to_bend_mm(inside_radius_mm: float, thickness_mm: float) -> float:
    """Least distance in mm from a hole's edge to the outer face of the flange, 2T + R.

    Nearer, the bend pulls the hole out of round. Common practice, no source.
    """
    return 2.0 * thickness_mm + inside_radius_mm


def minimum_corner_relief(inside_radius_mm: float, thickness_mm: float) -> CornerRelief:
    """Smallest corner relief: width T but at least 1 mm, depth R + T (common practice, no source)."""
    return CornerRelief(width_mm=max(thickness_mm, 1.0), depth_mm=inside_radius_mm + thickness_mm)


def _check_bend(angle_deg: float, inside_radius_mm: float, thickness_mm: float) -> None:
    if not 0.0 <= angle_deg <= 180.0:
        raise ValueError(f"bend angle: got {angle_deg:g} deg, need 0 (flat) to 180")
    if not 0.0 <= inside_radius_mm < math.inf:
        raise ValueError(f"inside radius: got {inside_radius_mm:g} mm, need 0 or more")
    if not 0.0 < thickness_mm < math.inf:
        raise ValueError(f"sheet thickness: got {thickness_mm:g} mm, need above 0")


def _check_k(k_factor: float) -> None:
    if not 0.0 <= k_factor <= 1.0:
        raise ValueError(
            f"K-factor: got {k_factor:g}, need 0 to 1 (neutral line's depth / thickness; usual 0.3 to 0.5)"
        )
