"""Each piece of the block pulled out after soldering, step by step, past all that stays. Lengths in mm.

Not part of `check`: uses shapely. The wire, the legs and the feed's hardware stay; the piece moves along its
stated direction by its travel, then straight up.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import shapely

from wavejig.design.model import Design
from wavejig.geometry.prisms import Prism, clearances_mm, contour_polygon
from wavejig.radiator.model import Radiator
from wavejig.spacer.keepout import HARDWARE_PLAY_MM, hardware_radius_mm, wires
from wavejig.spacer.model import BlockPiece, Spacer
from wavejig.spacer.profile import Frame

STEP_MM = 0.5
LIFTS = 12
MOST_STEPS = 48
SLICES = 24
_NEAR_MM = 6.0
TOUCH_MM = 0.01  # the wire rests on the piece; outlines are smoothed by this


@dataclass(frozen=True, slots=True, kw_only=True)
class Withdrawal:
    """How one piece comes out.

    way: the path in words. least_wire_mm: least air to any wire on the way (about 0: the wire rests on it
    until it is out); least_rim_mm: the same for what stands higher than the wire's underside;
    least_hardware_mm: in plan, to connector, screws and the ground leg's foot; lip_mm: left over before the
    lip when it is pulled out (infinite without one). carries: stretches of wire it holds up;
    standoff_off_mm: how far the wire on it lies from the standoff.
    """

    piece: str
    way: str
    travel_mm: float
    least_wire_mm: float
    least_rim_mm: float
    least_hardware_mm: float
    lip_mm: float
    carries: int
    standoff_off_mm: float

    @property
    def free(self) -> bool:
        """Nothing stands in the way."""
        least = min(self.least_wire_mm, self.least_rim_mm, self.least_hardware_mm, self.lip_mm)
        return least >= -TOUCH_MM


def withdrawals(design: Design, radiator: Radiator, spacer: Spacer) -> tuple[Withdrawal, ...]:
    """Of each piece of a removable block; none for posts, which stay."""
    sampled = wires(design, radiator)
    return tuple(_withdraw(design, p, sampled.points, sampled.radius_mm) for p in spacer.pieces)


def moves_mm(piece: BlockPiece) -> np.ndarray:
    """(k, 3) places of the piece on its way, from where it holds the wire: pulled, then lifted clear."""
    dx, dy = piece.withdrawal
    count = min(max(2, math.ceil(piece.travel_mm / STEP_MM) + 1), MOST_STEPS)
    pulls = np.linspace(0.0, piece.travel_mm, count)
    out = np.column_stack([pulls * dx, pulls * dy, np.zeros(len(pulls))])
    lifts = np.linspace(0.0, piece.layers[-1].top_mm + 2.0, LIFTS + 1)[1:]
    up = np.column_stack(
        [np.full(len(lifts), piece.travel_mm * dx), np.full(len(lifts), piece.travel_mm * dy), lifts]
    )
    return np.vstack([out, up])


def _withdraw(design: Design, piece: BlockPiece, points: np.ndarray, radius_mm: np.ndarray) -> Withdrawal:
    layers = [
        Prism(plan=contour_polygon(s.contour), bottom_mm=s.bottom_mm, top_mm=s.top_mm) for s in piece.layers
    ]
    moves = moves_mm(piece)
    dx, dy = piece.withdrawal
    # wire that the piece passes nowhere near
    x0, y0, x1, y1 = layers[0].plan.bounds
    low = np.array([x0 + min(0.0, dx * piece.travel_mm), y0 + min(0.0, dy * piece.travel_mm)]) - _NEAR_MM
    high = np.array([x1 + max(0.0, dx * piece.travel_mm), y1 + max(0.0, dy * piece.travel_mm)]) + _NEAR_MM
    near = np.all((points[:, :2] >= low) & (points[:, :2] <= high), axis=1)
    points, radius_mm = points[near], radius_mm[near]
    # the piece moves one way: the wire, seen from it, the other
    floor = clearances_mm(points, radius_mm, layers[:1], -moves)
    rims = clearances_mm(points, radius_mm, layers[1:], -moves)
    spots = _hardware(design)
    hardware = math.inf
    for x, y, r in spots:
        way = shapely.LineString([(x, y), (x - dx * piece.travel_mm, y - dy * piece.travel_mm)])
        hardware = min(hardware, float(shapely.distance(way, layers[0].plan)) - r)
    towards = {(0.0, 1.0): "y+", (0.0, -1.0): "y-", (1.0, 0.0): "x+", (-1.0, 0.0): "x-"}[(dx, dy)]
    seat = piece.layers[0].top_mm + design.radiator.covered_diameter_mm / 2.0
    return Withdrawal(
        piece=piece.name,
        way=f"{piece.travel_mm:g} mm towards {towards}, then straight up",
        travel_mm=piece.travel_mm,
        least_wire_mm=float(min(floor.min(), rims.min())),
        least_rim_mm=float(rims.min()),
        least_hardware_mm=hardware,
        lip_mm=piece.available_mm - piece.travel_mm,
        carries=len(piece.carries),
        standoff_off_mm=abs(seat - design.radiator.standoff_mm),
    )


def hold_downs_off_mm(design: Design, radiator: Radiator, spacer: Spacer) -> dict[str, float]:
    """Least air to any wire of each piece's hold-down while it is pulled off straight out; by the piece's name.

    Its side view is cut into slices of even height, each as long as the view is anywhere in that slice.
    """
    sampled = wires(design, radiator)
    out = {}
    for h in spacer.hold_downs:
        frame = Frame(direction=h.withdrawal)
        side = contour_polygon(h.profile)
        v0, z0, v1, z1 = side.bounds
        prisms = []
        levels = np.linspace(z0, z1, SLICES + 1)
        u0, u1 = h.middle_mm - h.width_mm / 2.0, h.middle_mm + h.width_mm / 2.0
        for low, high in pairwise(levels):
            band = side.intersection(shapely.box(v0 - 1.0, low, v1 + 1.0, high))
            for part in getattr(band, "geoms", [band]):
                if isinstance(part, shapely.Polygon):
                    a, _, b, _ = part.bounds
                    plan = shapely.Polygon(frame.world([(u0, a), (u1, a), (u1, b), (u0, b)]))
                    prisms.append(Prism(plan=plan, bottom_mm=low, top_mm=high))
        dx, dy = h.withdrawal
        pulls = np.linspace(0.0, h.off_mm, max(2, math.ceil(h.off_mm / (4.0 * STEP_MM))))
        moves = np.column_stack([-pulls * dx, -pulls * dy, np.zeros(len(pulls))])
        out[h.piece] = float(clearances_mm(sampled.points, sampled.radius_mm, prisms, moves).min())
    return out


def _hardware(design: Design) -> list[tuple[float, float, float]]:
    """x, y and radius of what stands on the sheet about the feed."""
    feed = design.feed
    if feed.style != "legs":
        return []
    out = [(*feed.connector_at, feed.clear_radius_mm)]
    out += [(h.x_mm, h.y_mm, hardware_radius_mm(h.diameter_mm)) for h in feed.flange_holes]
    return [(x, y, r + HARDWARE_PLAY_MM / 2.0) for x, y, r in out]
