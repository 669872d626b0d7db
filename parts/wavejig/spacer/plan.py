"""Design and radiator -> Spacer: which way the block comes out, and what stops it. No CAD kernel."""

from __future__ import annotations

import math
from dataclasses import replace
from types import MappingProxyType

from wavejig.design.model import Conflict, Design, Point2
from wavejig.radiator.model import Radiator
from wavejig.spacer import block
from wavejig.spacer.bed import fits_upright
from wavejig.spacer.holddown import plan_hold_downs
from wavejig.spacer.keepout import Wires, keepouts, loose_hardware, wires
from wavejig.spacer.model import BlockPiece, HoldDown, Post, Spacer
from wavejig.spacer.posts import plan_posts
from wavejig.spacer.profile import Frame
from wavejig.spacer.side import Hump, Side, look

ACROSS_Y = ((0.0, 1.0), (0.0, -1.0))
ACROSS_X = ((1.0, 0.0), (-1.0, 0.0))
# A side shift of more than this is worth telling: the eye places the wire better. Common practice.
LOOSE_MM = 1.0
_LOBES = MappingProxyType({"quad": 1, "biquad": 2, "double-biquad": 4, "twin-loop": 2, "path": 1})
_REMEDIES = MappingProxyType(
    {
        "travel": ("reflector.base", "Make the base wider, leave that edge without a lip, or use posts."),
        "base": ("reflector.base", "Make the base wider."),
        "width": ("reflector.base", "Make the base wider that way, or use posts."),
        "blocked": ("spacer.style", "Move what stands there, use a smaller connector or a tube, or posts."),
        "carry": ("radiator.side", "Use longer sides, a smaller connector or a tube, or posts."),
        "lobes": ("spacer.style", "Give the y edges more room, or use posts."),
        "low": ("radiator.standoff", "Use a larger standoff."),
        "bed": ("printer.bed", "Use a larger printer, or posts."),
    }
)


def plan(design: Design, radiator: Radiator) -> Spacer:
    """The spacer of a design. What cannot be made is in `Spacer.conflicts`; nothing is raised for it.

    A block is tried in halves that come out along +y and -y (the electric field's way, where sheets are
    roomy), then along +x and -x. Raises ValueError when no wire lies in the standoff plane.
    """
    sampled = wires(design, radiator)
    pieces: tuple[BlockPiece, ...] = ()
    posts: tuple[Post, ...] = ()
    hold_downs: tuple[HoldDown, ...] = ()
    notes: tuple[str, ...] = ()
    if design.spacer.style == "posts":
        posts, conflicts = plan_posts(design, radiator, sampled)
        if posts:
            notes = ("Fix the wire in each post's channel with a drop of weatherproof adhesive.",)
    else:
        pieces, conflicts = _halves(design, radiator, sampled, ACROSS_Y)
        if conflicts:
            other, still = _halves(design, radiator, sampled, ACROSS_X)
            if not still:
                pieces, conflicts = other, still
        notes = (*_late_bolts(design, pieces), *_loose(pieces))
        if not conflicts:
            hold_downs, soft = plan_hold_downs(design, sampled, keepouts(design, radiator), pieces)
            notes += soft
    if design.reflector.own is not None:  # it is there: nobody makes its base wider
        conflicts = tuple(
            replace(c, key="reflector.own", remedy="Take a larger dish, or use posts.")
            if c.key == "reflector.base"
            else c
            for c in conflicts
        )
    return Spacer(
        style=design.spacer.style,
        plastic=design.spacer.plastic,
        clearance_mm=design.printer.clearance_mm,
        standoff_mm=design.radiator.standoff_mm,
        pieces=pieces,
        hold_downs=hold_downs,
        posts=posts,
        conflicts=conflicts,
        notes=notes,
    )


def _halves(
    design: Design, radiator: Radiator, sampled: Wires, directions: tuple[Point2, Point2]
) -> tuple[tuple[BlockPiece, ...], tuple[Conflict, ...]]:
    """Both halves of a block that come out along these directions."""
    discs = keepouts(design, radiator)
    wanted = _LOBES[design.radiator.family]
    pieces: list[BlockPiece] = []
    conflicts: list[Conflict] = []
    held = 0
    for letter, direction in zip("ab", directions, strict=True):
        s = look(design, sampled, discs, Frame(direction=direction))
        made, told = _split(design, s, s.humps, f"spacer-{letter}")
        pieces += made
        conflicts += told
        held = held + len(s.humps) if directions is ACROSS_X else max(held, len(s.humps))
    if held < wanted:
        conflicts.append(_conflict("lobes", "the block", f"carries {held} of {wanted} lobes"))
    return tuple(pieces), tuple(conflicts)


def _conflict(code: str, who: str, numbers: str) -> Conflict:
    key, remedy = _REMEDIES[code]
    return Conflict(topic="spacer", key=key, message=f"{who} {numbers}", remedy=remedy)


def _split(
    design: Design, s: Side, humps: tuple[Hump, ...], name: str
) -> tuple[list[BlockPiece], list[Conflict]]:
    """One piece for all humps, or one for each half of them where the bed is too small."""
    trial = block.make_piece(design, s, humps, name)
    conflicts = [_conflict(code, name, numbers) for code, numbers in trial.faults]
    if trial.piece is None:
        return [], conflicts
    if fits_bed(design, trial.piece):
        return [trial.piece], conflicts
    if len(humps) > 1 and trial.piece.layers[-1].top_mm <= design.printer.bed_z_mm:
        half = len(humps) // 2
        left, told = _split(design, s, humps[:half], f"{name}1")
        right, also = _split(design, s, humps[half:], f"{name}2")
        return [*left, *right], [*told, *also]
    x, y, z = extent_mm(trial.piece)
    p = design.printer
    bed = f"{p.bed_x_mm:g} x {p.bed_y_mm:g} x {p.bed_z_mm:g} mm"
    conflicts.append(
        _conflict("bed", name, f"measures {x:.0f} x {y:.0f} x {z:.0f} mm and the printer holds {bed}")
    )
    return [trial.piece], conflicts


def extent_mm(piece: BlockPiece) -> tuple[float, float, float]:
    """Size of a piece along x and y as it sits in the assembly, and its height."""
    x0, y0, x1, y1 = piece.layers[0].contour.bounds()
    return x1 - x0, y1 - y0, piece.layers[-1].top_mm


def fits_bed(design: Design, piece: BlockPiece) -> bool:
    """Whether a piece lies on the bed, one way or turned by 90 degrees."""
    x, y, z = extent_mm(piece)
    flat = fits_upright(design, x, y) or fits_upright(design, y, x)
    return flat and z <= design.printer.bed_z_mm


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
            free = "freely" if math.isinf(across) else f"by {across:.1f} mm"
            out.append(f"{piece.name} lets the wire move {free} across its pull: centre the wire by eye.")
    return out
