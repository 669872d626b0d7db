"""What the radiator is made of: pieces of wire with their bend tables, and the joints between them."""

from __future__ import annotations

from dataclasses import dataclass

from wavejig.geometry.path import Path, Point


@dataclass(frozen=True, slots=True, kw_only=True)
class Bend:
    """One row of a bend table (design conventions, section 5). Lengths along the cut stock, mm; deg."""

    number: int
    from_start_mm: float  # cut end to the bend's first tangent, along the developed stock
    feed_mm: float
    rotation_deg: float
    angle_deg: float
    loaded_angle_deg: float
    inside_radius_mm: float
    loaded_inside_radius_mm: float
    in_plane: bool  # the bend turns about +z or -z: it is done on the fixture's board


@dataclass(frozen=True, slots=True, kw_only=True)
class Piece:
    """One piece of wire or tube. role: main, pin-leg, ground-leg, tube or inner (the tube's conductor)."""

    role: str
    path: Path
    diameter_mm: float
    bends: tuple[Bend, ...]
    developed_length_mm: float
    trim_mm: float  # added at the far end, cut off after bending

    @property
    def cut_length_mm(self) -> float:
        """Length to cut from the spool."""
        return self.developed_length_mm + self.trim_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class Joint:
    """Two pieces (or two ends of one) soldered together. kind: lap, butt, hook or bore."""

    kind: str
    between: tuple[str, str]
    at: Point
    length_mm: float
    note: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Radiator:
    """All pieces, main wire first, and the joints. Coordinates as in the Design."""

    pieces: tuple[Piece, ...]
    joints: tuple[Joint, ...]

    @property
    def main(self) -> Piece:
        """The main wire."""
        return self.pieces[0]
