"""Value types of the planned sheet, and the coordinates of its edges.

Vocabulary: *tangent* = line where a flat panel ends and the bend begins; *mould line* = where the outer
faces of base and lip would meet; *setback* = from the tangent to the mould line; *flange* = the straight
part of a lip; *ear* = what a mitred lip gains over a relieved one.

Each edge has coordinates of its own: `d` from the base's centre square to the edge, outward, measured on
the flat blank; `s` along the edge, counter-clockwise seen from the radiator; `w` from the bend's end up
the flange. The blank is the sheet seen from the radiator side, x right, y up, bends towards the viewer.
Lengths in mm, angles in degrees. Imports numpy only.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from wavejig.design.model import Hole, OwnShape
from wavejig.geometry.plane import Circle, Contour

EDGES = ("x+", "y+", "x-", "y-")
"""Counter-clockwise seen from the radiator, so that each edge's right-hand end meets the next one's left."""


class TrayError(ValueError):
    """A tray that cannot be folded or cut as described: what was read, what is allowed, what to do."""


@dataclass(frozen=True, slots=True, kw_only=True)
class CornerPractice:
    """Free choices at corners; all common practice, no source.

    round_mm: radius of free corners, since sharp sheet corners cut hands. mitre_gap_mm: between the inner
    corners of two mitred lips; wider than the kerf of the usual cutters (up to 0.38 mm) and than what a
    bend that is half a degree off closes over 30 mm. relief_mm: least distance a relief reaches past the
    tangents into the base.
    """

    round_mm: float = 2.0
    mitre_gap_mm: float = 0.5
    relief_mm: float = 1.0


@dataclass(frozen=True, slots=True, kw_only=True)
class LipEnd:
    """How far a lip reaches along its edge, to one side of the edge's middle.

    half_mm: through the bend and, without an ear, all the way up. An ear starts `ear_mm` up the flange
    and reaches ear_base_mm + ear_slope * w there.
    """

    half_mm: float
    ear_mm: float | None = None
    ear_base_mm: float = 0.0
    ear_slope: float = 0.0

    def reach_mm(self, w_mm: float) -> float:
        """Reach at height `w_mm` up the flange (below 0: in the bend)."""
        if self.ear_mm is None or w_mm < self.ear_mm:
            return self.half_mm
        return self.ear_base_mm + self.ear_slope * w_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class TrayLip:
    """One folded edge, resolved.

    setback_mm, allowance_mm, deduction_mm: of its bend. k_factor: the neutral depth / thickness that the
    allowance stands for. tangent_mm: d where the bend begins; bend_end_mm: d where it ends; tip_mm: d of
    the cut edge. flange_mm: straight outer length. left, right: its ends at s < 0 and s > 0.
    """

    edge: str
    height_mm: float
    angle_deg: float
    setback_mm: float
    allowance_mm: float
    deduction_mm: float
    k_factor: float
    tangent_mm: float
    flange_mm: float
    left: LipEnd
    right: LipEnd

    @property
    def bend_end_mm(self) -> float:
        """Where the flange begins on the blank."""
        return self.tangent_mm + self.allowance_mm

    @property
    def tip_mm(self) -> float:
        """Where the blank ends."""
        return self.bend_end_mm + self.flange_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class Tray:
    """A planned sheet. `half_x_mm`, `half_y_mm` reach to the outer mould lines."""

    kind: str
    thickness_mm: float
    inside_radius_mm: float
    half_x_mm: float
    half_y_mm: float
    lips: tuple[TrayLip, ...]
    corner_style: str
    holes: tuple[Hole, ...]
    up: str
    practice: CornerPractice
    outline: Contour  # of the blank; of the inside floor for kind "own"
    own: OwnShape | None = None  # kind "own": a dish that is there already, no lips

    def lip(self, edge: str) -> TrayLip | None:
        """The lip at `edge`, or None where the sheet just ends."""
        return next((lip for lip in self.lips if lip.edge == edge), None)

    def half_mm(self, edge: str) -> float:
        """Distance from the centre to the mould line (or cut edge) at `edge`."""
        return self.half_x_mm if edge[0] == "x" else self.half_y_mm

    @property
    def circles(self) -> tuple[Circle, ...]:
        """The holes, as circles on the blank and on the base alike."""
        return tuple(Circle(x_mm=h.x_mm, y_mm=h.y_mm, diameter_mm=h.diameter_mm) for h in self.holes)

    def base_reach_mm(self, edge: str) -> float:
        """Distance from the centre to where the flat base ends at `edge`: the tangent, or the cut edge."""
        lip = self.lip(edge)
        return lip.tangent_mm if lip else self.half_mm(edge)


def outward(edge: str) -> np.ndarray:
    """(2,) unit vector out of the sheet at `edge`; `along` the edge is a quarter turn counter-clockwise."""
    sign = 1.0 if edge[1] == "+" else -1.0
    return np.array([sign, 0.0] if edge[0] == "x" else [0.0, sign])


def along(edge: str) -> np.ndarray:
    """(2,) unit vector along `edge`, counter-clockwise seen from the radiator."""
    n = outward(edge)
    return np.array([-n[1], n[0]])


def place(edge: str, d_mm: float, s_mm: float) -> tuple[float, float]:
    """Blank coordinates of (d, s) at `edge`."""
    x, y = outward(edge) * d_mm + along(edge) * s_mm
    return float(x), float(y)
