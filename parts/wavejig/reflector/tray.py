"""Plan the folded sheet: where each bend begins, how far each lip reaches, the outline of the blank.

Lengths in mm, angles in degrees. Imports numpy only.
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from wavejig.design.model import CutterDesign, Hole, Lip, ReflectorDesign
from wavejig.forming.sheet import (
    bend_deduction_mm,
    k_from_deduction,
    minimum_corner_relief,
    outside_setback_mm,
)
from wavejig.geometry.plane import Contour
from wavejig.reflector.corners import blank_outline, lip_end
from wavejig.reflector.model import EDGES, CornerPractice, LipEnd, Tray, TrayError, TrayLip, outward
from wavejig.reflector.outline import crosses_itself, distances_mm, inside
from wavejig.reflector.own import own_tray

__all__ = [
    "CornerPractice",
    "LipEnd",
    "Tray",
    "TrayError",
    "TrayLip",
    "corner_practice",
    "hole_edge_to_bend_mm",
    "plan",
]

_STEEPEST_DEG = 90.0


def plan(reflector: ReflectorDesign, practice: CornerPractice | None = None) -> Tray:
    """Work out bends, lips, corners and the blank of a reflector.

    A shop's own bend deduction is used as it stands; otherwise the deduction follows from the K-factor.
    Where two lips meet, both stop short of each other's bend: the notch reaches past both tangents by at
    least the sheet's thickness and 1 mm, and at least R + T from the mould lines, with a round inner
    corner. Mitred lips, above the bends, grow back towards each other until their inner corners meet, less
    the gap. Lips of up to 90 deg lean outward or stand, so once the corners clear, no height can collide.
    A dish of the user's own comes back with its floor for an outline: nothing of it is cut or folded.
    Raises TrayError with the numbers.
    """
    practice = practice or CornerPractice()
    if reflector.own is not None:
        tray = own_tray(reflector, practice)
        _check_holes(tray)
        return tray
    _check_sheet(reflector)
    _check_lips(reflector)
    lips = {lip.edge: lip for lip in reflector.lips}
    half = {e: (reflector.base_x_mm if e[0] == "x" else reflector.base_y_mm) / 2.0 for e in EDGES}
    setback = {e: _setback_mm(reflector, lip) for e, lip in lips.items()}
    inset = {e: _inset_mm(reflector, s, practice) for e, s in setback.items()}
    for e, needed in inset.items():
        if half[e] <= 2.0 * needed:
            raise TrayError(
                f"base along {e[0]}: got {2.0 * half[e]:g} mm, need more than {4.0 * needed:.2f} mm: a bend "
                f"and its corner relief take {needed:.2f} mm at each edge, and as much flat must be left "
                "between; make the base larger or the inside bend radius smaller"
            )
    planned = []
    for i, e in enumerate(EDGES):
        if e not in lips:
            continue
        try:
            allowance, deduction, k_factor = _bend(reflector, lips[e], setback[e])
        except ValueError as err:
            raise TrayError(f"lip {e}: {err}") from err
        flange = lips[e].height_mm - setback[e]
        if flange <= 0.0:
            raise TrayError(
                f"lip {e}: height {lips[e].height_mm:g} mm ends inside its own bend; need more than the "
                f"setback of {setback[e]:.2f} mm; make the lip higher or the inside bend radius smaller"
            )
        left, right = (
            lip_end(
                neighbour_half_mm=half[n],
                inset_mm=inset.get(n, 0.0),
                setback_mm=setback[e],
                flange_mm=flange,
                inside_radius_mm=reflector.inside_radius_mm,
                angle_deg=lips[e].angle_deg,
                mitred=n in lips and reflector.corner_style == "mitre",
                practice=practice,
            )
            for n in (EDGES[i - 1], EDGES[(i + 1) % 4])
        )
        planned.append(
            TrayLip(
                edge=e,
                height_mm=lips[e].height_mm,
                angle_deg=lips[e].angle_deg,
                setback_mm=setback[e],
                allowance_mm=allowance,
                deduction_mm=deduction,
                k_factor=k_factor,
                tangent_mm=half[e] - setback[e],
                flange_mm=flange,
                left=left,
                right=right,
            )
        )
    tray = Tray(
        kind=reflector.kind,
        thickness_mm=reflector.thickness_mm,
        inside_radius_mm=reflector.inside_radius_mm,
        half_x_mm=half["x+"],
        half_y_mm=half["y+"],
        lips=tuple(planned),
        corner_style=reflector.corner_style,
        holes=reflector.holes,
        up=reflector.up,
        practice=practice,
        outline=Contour(vertices=()),
    )
    tray = replace(tray, outline=blank_outline(tray))
    if crosses_itself(tray.outline):
        raise TrayError("the blank's outline crosses itself; ask for relieved corners or a larger base")
    _check_holes(tray)
    return tray


def corner_practice(cutter: CutterDesign) -> CornerPractice:
    """Corners this cutter can cut: mitre gap at least two kerfs, notches round enough for its cut.

    The notch's radius is half its reach, so one and a half kerfs of reach leave it 0.75 kerf. Common
    practice, no source.
    """
    usual = CornerPractice()
    return CornerPractice(
        mitre_gap_mm=max(usual.mitre_gap_mm, 2.0 * cutter.kerf_mm),
        relief_mm=max(usual.relief_mm, 1.5 * cutter.kerf_mm),
    )


def hole_edge_to_bend_mm(tray: Tray) -> tuple[tuple[Hole, str, float], ...]:
    """(hole, edge, distance) for every hole and lip: from the hole's rim to where the bend begins.

    Add the lip's setback for the distance to the outer mould line.
    """
    return tuple((hole, lip.edge, _rim_to_bend_mm(hole, lip)) for hole in tray.holes for lip in tray.lips)


def _rim_to_bend_mm(hole: Hole, lip: TrayLip) -> float:
    return lip.tangent_mm - float(outward(lip.edge) @ (hole.x_mm, hole.y_mm)) - hole.diameter_mm / 2.0


def _setback_mm(reflector: ReflectorDesign, lip: Lip) -> float:
    return outside_setback_mm(lip.angle_deg, reflector.inside_radius_mm, reflector.thickness_mm)


def _inset_mm(reflector: ReflectorDesign, setback_mm: float, practice: CornerPractice) -> float:
    """How far from this edge's mould line a corner notch reaches into the base."""
    least = minimum_corner_relief(reflector.inside_radius_mm, reflector.thickness_mm)
    return max(setback_mm + max(least.width_mm, practice.relief_mm), least.depth_mm)


def _bend(reflector: ReflectorDesign, lip: Lip, setback_mm: float) -> tuple[float, float, float]:
    """Allowance, deduction (both mm) and the K-factor they stand for."""
    r, t = reflector.inside_radius_mm, reflector.thickness_mm
    deduction = reflector.bend_deduction_mm
    if deduction is None:
        deduction = bend_deduction_mm(lip.angle_deg, r, t, reflector.k_factor)
        return 2.0 * setback_mm - deduction, deduction, reflector.k_factor
    k_factor = k_from_deduction(deduction, lip.angle_deg, r, t)  # refuses what no bend can have
    return 2.0 * setback_mm - deduction, deduction, k_factor


def _check_sheet(reflector: ReflectorDesign) -> None:
    for what, value, least in (
        ("sheet thickness", reflector.thickness_mm, 0.0),
        ("base along x", reflector.base_x_mm, 0.0),
        ("base along y", reflector.base_y_mm, 0.0),
    ):
        if not least < value < math.inf:
            raise TrayError(f"{what}: got {value:g} mm, need more than {least:g}")
    if not 0.0 <= reflector.inside_radius_mm < math.inf:
        raise TrayError(f"inside bend radius: got {reflector.inside_radius_mm:g} mm, need 0 or more")
    if reflector.kind not in ("flat", "tray"):
        raise TrayError(f"reflector kind: got {reflector.kind!r}, need 'flat' or 'tray'")
    if reflector.corner_style not in ("relief", "mitre"):
        raise TrayError(f"corners: got {reflector.corner_style!r}, need 'relief' or 'mitre'")
    if reflector.up not in EDGES:
        raise TrayError(f"upper edge: got {reflector.up!r}, need one of {', '.join(EDGES)}")


def _check_lips(reflector: ReflectorDesign) -> None:
    lips = reflector.lips
    if (reflector.kind == "tray") != bool(lips):
        raise TrayError(
            f"a {reflector.kind} reflector with {len(lips)} lips: a tray has some, a flat sheet none"
        )
    edges = [lip.edge for lip in lips]
    if len(set(edges)) != len(edges) or not set(edges) <= set(EDGES):
        raise TrayError(f"lips at {', '.join(edges)}: need each at most once, from {', '.join(EDGES)}")
    for lip in lips:
        if not 0.0 < lip.angle_deg <= _STEEPEST_DEG:
            raise TrayError(
                f"lip {lip.edge}: angle {lip.angle_deg:g} deg; need more than 0 and at most "
                f"{_STEEPEST_DEG:g}, beyond which lips lean over the base and into each other"
            )
        if not 0.0 < lip.height_mm < math.inf:
            raise TrayError(f"lip {lip.edge}: height {lip.height_mm:g} mm, need more than 0")
    kinds = sorted({(lip.angle_deg, lip.height_mm) for lip in lips})
    if reflector.corner_style == "mitre" and len(kinds) > 1:
        found = "; ".join(f"{h:g} mm at {a:g} deg" for a, h in kinds)
        raise TrayError(
            f"mitred corners need lips of one height and angle, got {found}; use relieved corners"
        )
    angles = sorted({lip.angle_deg for lip in lips})
    if reflector.bend_deduction_mm is not None and len(angles) > 1:
        raise TrayError(
            f"one bend deduction ({reflector.bend_deduction_mm:g} mm) cannot serve folds of different angles "
            f"({', '.join(f'{a:g}' for a in angles)} deg); give a K-factor instead"
        )


def _check_holes(tray: Tray) -> None:
    """Every hole lies in the flat base, off the bends, off the cut edge and off the other holes."""
    loop = tray.outline.points()
    for i, hole in enumerate(tray.holes):
        name = f"{hole.purpose} hole of {hole.diameter_mm:g} mm at {hole.x_mm:g}, {hole.y_mm:g} mm"
        if not 0.0 < hole.diameter_mm < math.inf:
            raise TrayError(f"{name}: need a diameter above 0")
        for lip in tray.lips:
            room = _rim_to_bend_mm(hole, lip)
            if room < 0.0:
                raise TrayError(f"{name}: reaches {-room:.2f} mm into the bend at {lip.edge}; move it inward")
        centre = np.array([[hole.x_mm, hole.y_mm]])
        edge = float(distances_mm(centre, loop)[0])
        if not inside(centre, loop)[0] or edge <= hole.diameter_mm / 2.0:
            raise TrayError(f"{name}: cuts the edge of the sheet; move it inward or make it smaller")
        for other in tray.holes[:i]:
            apart = math.dist((hole.x_mm, hole.y_mm), (other.x_mm, other.y_mm))
            if apart <= (hole.diameter_mm + other.diameter_mm) / 2.0:
                raise TrayError(
                    f"{name}: overlaps the {other.purpose} hole of {other.diameter_mm:g} mm at "
                    f"{other.x_mm:g}, {other.y_mm:g} mm; move one of them"
                )
