"""What a spacer is made of: pieces of stacked layers, posts, and what stands in their way.

Plans (contours, strokes) are in the assembly's x and y, heights above the sheet's radiator-side face:
a piece is described where it sits. Lengths in mm.
"""

from __future__ import annotations

from dataclasses import dataclass

from wavejig.design.model import Conflict, Point2
from wavejig.geometry.plane import Circle, Contour, Stroke


@dataclass(frozen=True, slots=True, kw_only=True)
class Layer:
    """A prism: its outline between two heights. Each layer lies within the one below it."""

    bottom_mm: float
    top_mm: float
    contour: Contour


@dataclass(frozen=True, slots=True, kw_only=True)
class Carry:
    """One stretch of wire that rests on a piece: where it starts and ends, and on which side of its hump.

    lobe: number of the hump on that piece, from 0 along the piece; side: "before" or "after" its peak.
    """

    lobe: int
    side: str
    start: Point2
    end: Point2
    length_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class BlockPiece:
    """One half of the removable block.

    withdrawal: unit vector it is pulled along, in the plane of the sheet; after travel_mm of it nothing
    of the piece is under a wire any more and it lifts straight out. available_mm: how far it can be
    pulled before the lip (infinite where that edge has none). carries: where the wire rests on it.
    slack_mm: how far the wire can move against it before a rim stops it, along the withdrawal and to
    either side. text, marks: what is engraved into the rim's top, marks_depth_mm deep, mark_width_mm wide.
    """

    name: str
    withdrawal: Point2
    travel_mm: float
    available_mm: float
    layers: tuple[Layer, ...]
    carries: tuple[Carry, ...]
    lobes: int
    slack_along_mm: float
    slack_across_mm: float
    text: str
    marks: tuple[Stroke, ...]
    marks_z_mm: float
    marks_depth_mm: float
    mark_width_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class HoldDown:
    """A printed clamp that presses one piece onto the sheet while it is soldered: a C pushed on over the edge.

    name: of its shape, of which several pieces may each have one; withdrawal: unit vector it is pulled off
    along, the piece's own; middle_mm: where it sits across that, u in the piece's frame; profile: its side
    view in v (along the withdrawal) and z, as printed lying on its side, width_mm thick. edge_mm: v of the
    sheet's outermost edge. press_mm: how much narrower its mouth is made than what it grips, so how far it
    springs open; force_n: the push on the piece; strain, strain_limit: greatest in the plastic, and allowed.
    off_mm: how far it is pulled to come free. text, marks: engraved into its side, in v and z.
    """

    name: str
    piece: str
    withdrawal: Point2
    middle_mm: float
    width_mm: float
    profile: Contour
    contact_mm: Point2
    edge_mm: float
    press_mm: float
    force_n: float
    strain: float
    strain_limit: float
    off_mm: float
    text: str
    marks: tuple[Stroke, ...]
    marks_depth_mm: float
    mark_width_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Post:
    """A post that stays: a hexagon with a channel for the wire in its top and a screw hole from below.

    channels: each wire's centreline over the post in plan, as a chain of points; seat_z_mm: what the wire
    rests on; hole: for the screw to form its thread in, hole_depth_mm deep from below.
    """

    name: str
    outline: Contour
    top_mm: float
    seat_z_mm: float
    channels: tuple[tuple[Point2, ...], ...]
    channel_width_mm: float
    hole: Circle
    hole_depth_mm: float
    screw: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Spacer:
    """The standoff's printed parts. conflicts: what cannot be made; notes: what the bench must know."""

    style: str
    plastic: str
    clearance_mm: float
    standoff_mm: float
    pieces: tuple[BlockPiece, ...]
    hold_downs: tuple[HoldDown, ...]
    posts: tuple[Post, ...]
    conflicts: tuple[Conflict, ...]
    notes: tuple[str, ...]
