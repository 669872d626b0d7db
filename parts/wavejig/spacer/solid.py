"""Solids of the spacer's printed parts, as they lie on the bed. Loads the CAD kernel.

Every part is printed the way up it is used: layers that narrow upwards, so nothing needs support.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import cadquery as cq

from wavejig.design.model import Design
from wavejig.geometry.engrave import engrave, prism
from wavejig.geometry.plane import Contour
from wavejig.geometry.region import Region, grooves
from wavejig.radiator.model import Radiator
from wavejig.spacer.bed import fits_upright
from wavejig.spacer.model import BlockPiece, Post, Spacer
from wavejig.spacer.outline import channelled
from wavejig.spacer.profile import Frame


class SpacerSolidError(ValueError):
    """A spacer part the kernel could not make into one closed body."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Printable:
    """A printed part: its solid on the bed (middle over the origin, bottom on z = 0), and the placement
    that puts it where it belongs in the assembly."""

    name: str
    solid: cq.Solid
    placement: cq.Location

    def placed(self) -> cq.Shape:
        """The solid where it belongs in the assembly."""
        return self.solid.moved(self.placement)


def printables(design: Design, radiator: Radiator, spacer: Spacer) -> tuple[Printable, ...]:
    """The printed parts of a spacer, in the order of its pieces and posts.

    `radiator` is the one the spacer was planned for. Raises SpacerSolidError naming the part when the
    kernel gives anything but one body. Whether that is valid is asked once, where it is written.
    """
    del radiator  # the plan holds all that matters; every part's solids are asked for alike
    made = [_on_bed(design, piece.name, _block_solid(piece)) for piece in spacer.pieces]
    made += [_on_bed(design, post.name, _post_solid(post)) for post in spacer.posts]
    return tuple(made)


def hold_downs(design: Design, spacer: Spacer) -> tuple[Printable, ...]:
    """The clamps in the order of `Spacer.hold_downs`, lying on their sides; those of one name are one shape."""
    made: dict[str, cq.Solid] = {}
    out = []
    for h in spacer.hold_downs:
        v0, z0, v1, z1 = h.profile.bounds()
        turn = 0.0 if fits_upright(design, v1 - v0, z1 - z0) else 90.0
        middle = cq.Location(cq.Vector((v0 + v1) / 2.0, (z0 + z1) / 2.0, 0.0))
        lying = middle * cq.Location(cq.Vector(), cq.Vector(0, 0, 1), turn)
        if h.name not in made:
            flat = _prism(h.profile, 0.0, h.width_mm)
            if h.marks:
                cut = grooves(h.marks, h.mark_width_mm)
                flat = engrave(flat, cut, h.width_mm - h.marks_depth_mm, h.width_mm)
            made[h.name] = _checked(h.name, [flat]).moved(lying.inverse)
        frame = Frame(direction=h.withdrawal)
        (across,) = frame.world([(1.0, 0.0)])
        (start,) = frame.world([(h.middle_mm - h.width_mm / 2.0, 0.0)])
        # the side view's v runs along the withdrawal, its z up, so its thickness across: v x z = u
        upright = cq.Plane(origin=(*start, 0.0), xDir=(*h.withdrawal, 0.0), normal=(*across, 0.0))
        out.append(Printable(name=h.name, solid=made[h.name], placement=cq.Location(upright) * lying))
    return tuple(out)


def _block_solid(piece: BlockPiece) -> cq.Solid:
    whole = _one(piece.name, [_prism(layer.contour, layer.bottom_mm, layer.top_mm) for layer in piece.layers])
    if not piece.marks:
        return _checked(piece.name, [whole])
    sunk = engrave(
        whole,
        grooves(piece.marks, piece.mark_width_mm),
        piece.marks_z_mm - piece.marks_depth_mm,
        piece.marks_z_mm,
    )
    return _checked(piece.name, [sunk])


def _post_solid(post: Post) -> cq.Solid:
    bodies = [_prism(post.outline, 0.0, post.seat_z_mm)]
    for region in channelled(post.outline, post.channels, post.channel_width_mm):
        bodies.append(_prism(region, post.seat_z_mm, post.top_mm))
    hole = cq.Solid.makeCylinder(
        post.hole.diameter_mm / 2.0, post.hole_depth_mm, cq.Vector(post.hole.x_mm, post.hole.y_mm, 0.0)
    )
    return _checked(post.name, _one(post.name, bodies).cut(hole).Solids())


def _prism(shape: Contour | Region, bottom_mm: float, top_mm: float) -> cq.Solid:
    region = Region(outer=shape.points(), holes=()) if isinstance(shape, Contour) else shape
    return prism(region, bottom_mm, top_mm)


def _one(name: str, bodies: Sequence[cq.Solid]) -> cq.Solid:
    """All bodies fused at once, coplanar faces made one."""
    solids = bodies[0].fuse(*bodies[1:]).clean().Solids()
    return solids[0] if len(solids) == 1 else _checked(name, solids)


def _checked(name: str, solids: Sequence[cq.Solid]) -> cq.Solid:
    if len(solids) != 1:
        raise SpacerSolidError(
            f"{name}: the kernel made {len(solids)} bodies and needs one closed body; report this design"
        )
    return solids[0]


def _on_bed(design: Design, name: str, solid: cq.Solid) -> Printable:
    """Move a part from its place in the assembly to the middle of the bed, turned if it fits only so."""
    box = solid.BoundingBox()
    middle = cq.Vector((box.xmin + box.xmax) / 2.0, (box.ymin + box.ymax) / 2.0, box.zmin)
    turn = 0.0 if fits_upright(design, box.xlen, box.ylen) else 90.0
    placement = cq.Location(middle) * cq.Location(cq.Vector(), cq.Vector(0, 0, 1), turn)
    return Printable(name=name, solid=solid.moved(placement.inverse), placement=placement)
