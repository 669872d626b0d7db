"""Design and radiator -> Spacer: which way the block comes out, and what stops it. No CAD kernel."""

from __future__ import annotations

import math

import numpy as np

from wavejig.design.model import Conflict, Design
from wavejig.radiator.model import Radiator
from wavejig.spacer import block
from wavejig.spacer.keepout import Wires, keepouts, loose_hardware, wires
from wavejig.spacer.model import BlockPiece, Spacer
from wavejig.spacer.posts import plan_posts
from wavejig.spacer.profile import Frame

ACROSS_Y = ((0.0, 1.0), (0.0, -1.0))
ACROSS_X = ((1.0, 0.0), (-1.0, 0.0))
# A side shift of more than this is worth telling: soldering by eye is then the better guide.
LOOSE_MM = 1.0
_KEYS = {
    "travel": ("reflector.base", "Make the base wider, give that edge no lip, or use posts."),
    "base": ("reflector.base", "Make the base wider."),
    "width": ("reflector.base", "Make the base wider across the pull, or use posts."),
    "blocked": (
        "spacer.style",
        'Move the connector or hole, use a smaller connector or a tube, or style = "posts".',
    ),
    "carry": ("radiator.side", "Use longer sides, a smaller connector or a tube, or posts."),
    "low": ("radiator.standoff", "Use a larger standoff."),
    "bed": ("printer.bed", "Use a larger printer, or posts."),
}


def plan(design: Design, radiator: Radiator) -> Spacer:
    """The spacer of a design. What cannot be made is in `Spacer.conflicts`; nothing is raised for it.

    A block is tried in halves that come out along +y and -y (the electric field's way, where sheets are
    roomy), then along +x and -x. Raises ValueError when no wire lies in the standoff plane.
    """
    sampled = wires(design, radiator)
    if design.spacer.style == "posts":
        posts, conflicts = plan_posts(design, radiator, sampled)
        notes = (
            ("Fix the wire in each post's channel with a drop of weatherproof adhesive.",) if posts else ()
        )
        return _spacer(design, (), posts, conflicts, notes)
    upright, faults = _halves(design, radiator, sampled, ACROSS_Y)
    if faults:
        sideways, more = _halves(design, radiator, sampled, ACROSS_X)
        if not more:
            upright, faults = sideways, more
    notes = [*_late_bolts(design, upright), *_loose(upright)]
    return _spacer(design, upright, (), faults, tuple(notes))


def _spacer(design: Design, pieces, posts, conflicts, notes) -> Spacer:  # type: ignore[no-untyped-def]
    return Spacer(
        style=design.spacer.style,
        plastic=design.spacer.plastic,
        clearance_mm=design.printer.clearance_mm,
        standoff_mm=design.radiator.standoff_mm,
        pieces=pieces,
        posts=posts,
        conflicts=conflicts,
        notes=notes,
    )


def _halves(
    design: Design, radiator: Radiator, sampled: Wires, directions: tuple[tuple[float, float], ...]
) -> tuple[tuple[BlockPiece, ...], tuple[Conflict, ...]]:
    discs = keepouts(design, radiator)
    pieces: list[BlockPiece] = []
    conflicts: list[Conflict] = []
    for letter, direction in zip("ab", directions, strict=True):
        s = block.side(design, sampled, discs, Frame(direction=direction))
        done, faults = _split(design, s, s.humps, f"spacer-{letter}")
        pieces += done
        conflicts += faults
    return tuple(pieces), tuple(conflicts)


def _split(
    design: Design, s: block.Side, humps: tuple[tuple[int, int], ...], name: str
) -> tuple[list[BlockPiece], list[Conflict]]:
    """One piece for all humps, or one for each half of them where the bed is too small."""
    trial = block.make_piece(design, s, humps, name)
    faults = list(trial.faults)
    if trial.piece is not None and not fits_bed(design, trial.piece):
        if len(humps) > 1:
            half = len(humps) // 2
            pieces: list[BlockPiece] = []
            conflicts: list[Conflict] = []
            for number, part in enumerate((humps[:half], humps[half:]), start=1):
                more, told = _split(design, s, part, f"{name}{number}")
                pieces += more
                conflicts += told
            return pieces, conflicts
        x, y, z = extent_mm(trial.piece)
        p = design.printer
        faults.append(
            (
                "bed",
                f"measures {x:.0f} x {y:.0f} x {z:.0f} mm and the bed holds "
                f"{p.bed_x_mm:g} x {p.bed_y_mm:g} x {p.bed_z_mm:g} mm",
            )
        )
    told = []
    for code, numbers in faults:
        key, remedy = _KEYS[code]
        told.append(Conflict(topic="spacer", key=key, message=f"{name} {numbers}", remedy=remedy))
    return ([] if trial.piece is None else [trial.piece]), told


def extent_mm(piece: BlockPiece) -> tuple[float, float, float]:
    """Size of a piece along x and y as it sits in the assembly, and its height."""
    x0, y0, x1, y1 = piece.layers[0].contour.bounds()
    return x1 - x0, y1 - y0, piece.layers[-1].top_mm


def fits_bed(design: Design, piece: BlockPiece) -> bool:
    """Whether a piece lies on the bed, one way or turned by 90 degrees."""
    x, y, z = extent_mm(piece)
    flat = fits_upright(design, x, y) or fits_upright(design, y, x)
    return flat and z <= design.printer.bed_z_mm


def fits_upright(design: Design, x_mm: float, y_mm: float) -> bool:
    """Whether a part of this plan size lies on the bed without turning it."""
    return x_mm <= design.printer.bed_x_mm and y_mm <= design.printer.bed_y_mm


def _late_bolts(design: Design, pieces: tuple[BlockPiece, ...]) -> list[str]:
    """Bolts that would stand under a piece or in its way: they are fitted after it is out."""
    late = []
    for hole, radius in loose_hardware(design):
        for piece in pieces:
            x0, y0, x1, y1 = piece.layers[0].contour.bounds()
            dx, dy = piece.withdrawal
            way = piece.travel_mm if math.isfinite(piece.available_mm) else 1e6
            x0, x1 = x0 + min(0.0, dx * way), x1 + max(0.0, dx * way)
            y0, y1 = y0 + min(0.0, dy * way), y1 + max(0.0, dy * way)
            if x0 - radius < hole.x_mm < x1 + radius and y0 - radius < hole.y_mm < y1 + radius:
                late.append(f"({hole.x_mm:.1f}, {hole.y_mm:.1f})")
                break
    if not late:
        return []
    return [f"Fit the bolts at {', '.join(late)} mm only after the spacer is out: they stand in its way."]


def _loose(pieces: tuple[BlockPiece, ...]) -> list[str]:
    out = []
    for piece in pieces:
        across = piece.slack_across_mm
        if across > LOOSE_MM:
            free = "freely" if not np.isfinite(across) else f"by {across:.1f} mm"
            out.append(
                f"{piece.name} lets the wire move {free} across the pull: centre it over the connector by eye."
            )
    return out
