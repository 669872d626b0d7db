"""The blank: cut outline, holes, bend lines and marks, as seen from the radiator side.

x right, y up; every bend turns towards the viewer ("up"). Lengths in mm, angles in degrees. Imports no
CAD kernel.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from wavejig.geometry.plane import Circle, Contour, Stroke
from wavejig.reflector.marks import place_marks
from wavejig.reflector.model import Tray, TrayError, TrayLip, place
from wavejig.reflector.outline import OutlineError, grown


@dataclass(frozen=True, slots=True, kw_only=True)
class FlatBend:
    """One bend on the blank.

    line: its middle, from cut edge to cut edge. zone_mm: where the bend begins and ends, as distances from
    the base's centre square to `edge`. direction: always "up", towards the radiator side.
    """

    edge: str
    line: tuple[tuple[float, float], tuple[float, float]]
    angle_deg: float
    direction: str
    inside_radius_mm: float
    zone_mm: tuple[float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class FlatPattern:
    """What the cutter and the folder need. size_mm: over all, x and y. area_mm2: outline less holes.

    unplaced: marks that found no room clear of holes, edges and bends.
    """

    outline: Contour
    holes: tuple[Circle, ...]
    bends: tuple[FlatBend, ...]
    marks: tuple[Stroke, ...]
    area_mm2: float
    size_mm: tuple[float, float]
    unplaced: tuple[str, ...]


def flat_pattern(tray: Tray, name: str = "") -> FlatPattern:
    """The blank of a tray; `name` is lettered on it. Nominal contours: no kerf."""
    marks, unplaced = place_marks(tray, name)
    return _measured(
        FlatPattern(
            outline=tray.outline,
            holes=tray.circles,
            bends=tuple(_bend(tray, lip) for lip in tray.lips),
            marks=marks,
            area_mm2=0.0,
            size_mm=(0.0, 0.0),
            unplaced=unplaced,
        )
    )


def with_kerf(pattern: FlatPattern, kerf_mm: float) -> FlatPattern:
    """The path of the cut's middle: outline half a kerf outside, holes half a kerf inside; exact.

    Only for shops that do not compensate themselves. Raises TrayError where the cut is too wide for a hole,
    a round inner corner or the gap of a mitre, and says which.
    """
    if not kerf_mm >= 0.0:
        raise TrayError(f"kerf: got {kerf_mm:g} mm, need 0 or more")
    for hole in pattern.holes:
        if hole.diameter_mm <= kerf_mm:
            raise TrayError(
                f"kerf of {kerf_mm:g} mm: cannot cut the hole of {hole.diameter_mm:g} mm at "
                f"{hole.x_mm:g}, {hole.y_mm:g} mm; drill it, or use a thinner cut"
            )
    try:
        outline = grown(pattern.outline, kerf_mm / 2.0)
    except OutlineError as err:
        raise TrayError(f"kerf of {kerf_mm:g} mm: {err}") from err
    holes = tuple(replace(hole, diameter_mm=hole.diameter_mm - kerf_mm) for hole in pattern.holes)
    return _measured(replace(pattern, outline=outline, holes=holes))


def _measured(pattern: FlatPattern) -> FlatPattern:
    x0, y0, x1, y1 = pattern.outline.bounds()
    area = pattern.outline.area_mm2 - sum(hole.area_mm2 for hole in pattern.holes)
    return replace(pattern, area_mm2=area, size_mm=(x1 - x0, y1 - y0))


def _bend(tray: Tray, lip: TrayLip) -> FlatBend:
    middle = (lip.tangent_mm + lip.bend_end_mm) / 2.0
    return FlatBend(
        edge=lip.edge,
        line=(place(lip.edge, middle, -lip.left.half_mm), place(lip.edge, middle, lip.right.half_mm)),
        angle_deg=lip.angle_deg,
        direction="up",
        inside_radius_mm=tray.inside_radius_mm,
        zone_mm=(lip.tangent_mm, lip.bend_end_mm),
    )
