"""The reflector's numbers: size, folds, and every hole the feed, the spacer and the mounting need."""

from __future__ import annotations

import math

from wavejig.design import starting
from wavejig.design.model import Conflict, FeedDesign, Hole, Lip, OwnShape, Point2, ReflectorDesign
from wavejig.forming.sheet import din6935_k_factor, k_from_deduction, outside_setback_mm
from wavejig.recipe.models import Recipe
from wavejig.stock.hardware import clearance_hole_mm
from wavejig.stock.metals import Metal

# Figures of the mounting; common practice, no source.
DRAIN_HOLE_MM = 5.0  # water bridges smaller holes
CLAMP_BOLT = "M6"
CLAMP_PLAY_MM = 1.0  # pole to clamp bolt
WALL_ROOM_MM = 1.0  # a drilled hole's rim to the bend of a dish's wall
PLUG_ROOM_MM = 15.0  # between the connector's axis and the pole, for the plug's nut


def inside_radius_mm(recipe: Recipe, metal: Metal, thickness_mm: float) -> float:
    """Inside radius of the folds: the recipe's, else the tool's, else what the metal stands (not below T)."""
    if recipe.reflector.kind == "own":
        return recipe.reflector.own.radius
    asked = recipe.reflector.inside_bend_radius
    if asked != "auto":
        return asked
    tool = recipe.folding.tooling_radius
    if tool != "auto":
        return tool
    return round(max(thickness_mm, metal.min_inside_radius_factor * thickness_mm), 3)


def lips(recipe: Recipe, height_mm: float) -> tuple[Lip, ...]:
    """The folded edges the recipe asks for."""
    r = recipe.reflector
    edges = {"none": (), "two": (f"{r.lip_edges}-", f"{r.lip_edges}+"), "four": ("x-", "x+", "y-", "y+")}[
        r.lips
    ]
    return tuple(Lip(edge=e, height_mm=height_mm, angle_deg=r.lip_angle) for e in edges)


def up_edge(recipe: Recipe) -> str:
    """Edge that hangs uppermost: the electric field runs along y, so vertical polarisation puts y up."""
    return "y+" if recipe.mounting.polarisation == "vertical" else "x+"


def resolve_sheet(
    recipe: Recipe,
    metal: Metal,
    thickness_mm: float,
    base: Point2,
    lip_height_mm: float,
    feed: FeedDesign,
    posts: tuple[Point2, ...],
    post_screw: str,
    lobe_extent: Point2,
) -> tuple[ReflectorDesign, tuple[Conflict, ...]]:
    """The reflector's design. lobe_extent: half sizes of the radiator along x and y."""
    r = recipe.reflector
    conflicts: list[Conflict] = []
    own = own_shape(recipe)
    folded = lips(recipe, lip_height_mm)
    radius = inside_radius_mm(recipe, metal, thickness_mm)
    k, deduction = 0.5, None
    if folded:
        k = din6935_k_factor(radius, thickness_mm) if r.k_factor == "auto" else r.k_factor
        if r.bend_deduction != "auto":
            deduction = r.bend_deduction
            try:
                k = k_from_deduction(deduction, r.lip_angle, radius, thickness_mm)
            except ValueError as err:
                conflicts.append(
                    Conflict(
                        topic="reflector",
                        key="reflector.bend_deduction",
                        message=str(err),
                        remedy="Check the shop's figure, its angle and its inside radius.",
                    )
                )
    setback = outside_setback_mm(r.lip_angle, radius, thickness_mm) if folded else 0.0
    if own is not None:
        setback = own.inset_mm
    holes = [*_feed_holes(feed)]
    holes += [
        Hole(x_mm=x, y_mm=y, diameter_mm=clearance_hole_mm(post_screw), purpose="spacer") for x, y in posts
    ]
    up = up_edge(recipe)
    if recipe.mounting.pole != "none":
        holes += _clamp_holes(recipe.mounting.pole, up, base, lobe_extent, setback, feed.connector_at)
    low = up[0] + "-"
    if recipe.mounting.drain == "auto" and any(lip.edge == low for lip in folded):
        holes += _drain_holes(up, base, setback, radius, thickness_mm)
    if recipe.mounting.drain == "auto" and own is not None:
        holes += _own_drains(own, up, base)
    holes += [Hole(x_mm=h.x, y_mm=h.y, diameter_mm=h.diameter, purpose=h.purpose) for h in r.holes]
    for hole in holes:
        if _edge_room_mm(hole, base, own) < 0.0:
            across = (
                f"{base[0]:g} mm round" if own and own.shape == "round" else f"{base[0]:g} x {base[1]:g} mm"
            )
            key = "reflector.own" if own else "reflector.base"
            conflicts.append(
                Conflict(
                    topic="reflector",
                    key="reflector.holes" if hole.purpose == "other" else key,
                    message=f"the {hole.purpose} hole of {hole.diameter_mm:g} mm at "
                    f"({hole.x_mm:.2f}, {hole.y_mm:.2f}) mm "
                    f"lies across the edge of the {across} base",
                    remedy="Move the hole inwards or take a larger dish."
                    if own
                    else "Move the hole inwards or make the base larger.",
                )
            )
    design = ReflectorDesign(
        kind="own" if own else "tray" if folded else "flat",
        metal=metal,
        thickness_mm=thickness_mm,
        base_x_mm=base[0],
        base_y_mm=base[1],
        inside_radius_mm=radius,
        k_factor=k,
        bend_deduction_mm=deduction,
        lips=folded,
        corner_style=r.corners,
        holes=tuple(holes),
        up=up,
        own=own,
    )
    return design, tuple(conflicts)


def own_shape(recipe: Recipe) -> OwnShape | None:
    """The dish of kind "own"; None for sheet that is cut and folded."""
    if recipe.reflector.kind != "own":
        return None
    own = recipe.reflector.own
    assert own.depth is not None  # told as a contradiction before
    return OwnShape(
        shape=own.shape, depth_mm=own.depth, slope_deg=own.slope, radius_mm=own.radius, rim_mm=own.rim
    )


def _edge_room_mm(hole: Hole, base: Point2, own: OwnShape | None) -> float:
    """From a hole's rim to the edge of the base (below 0: across it)."""
    half = hole.diameter_mm / 2.0
    if own is not None and own.shape == "round":
        return base[0] / 2.0 - math.hypot(hole.x_mm, hole.y_mm) - half
    return min(base[0] / 2.0 - abs(hole.x_mm), base[1] / 2.0 - abs(hole.y_mm)) - half


def _own_drains(own: OwnShape, up: str, base: Point2) -> list[Hole]:
    """A dish's drains: at the low end of its floor, where wall and floor make a gutter."""
    along = 1 if up[0] == "y" else 0
    low = -(base[along] / 2.0 - own.inset_mm - DRAIN_HOLE_MM / 2.0 - WALL_ROOM_MM)
    sides = (0.0,) if own.shape == "round" else (-base[1 - along] / 4.0, base[1 - along] / 4.0)
    out = []
    for side in sides:
        place = [0.0, 0.0]
        place[along], place[1 - along] = low, side
        out.append(Hole(x_mm=place[0], y_mm=place[1], diameter_mm=DRAIN_HOLE_MM, purpose="drain"))
    return out


def default_base(wavelength_mm: float, lobe_extent: Point2) -> Point2:
    """Starting size of the base for a radiator of these half sizes."""
    return (
        starting.base_mm(wavelength_mm, 2.0 * lobe_extent[0]),
        starting.base_mm(wavelength_mm, 2.0 * lobe_extent[1]),
    )


def _feed_holes(feed: FeedDesign) -> list[Hole]:
    holes: list[Hole] = []
    if feed.style == "tube":
        assert feed.tube is not None
        diameter = round(feed.tube.outer_diameter_mm + 0.2, 2)
        return [Hole(x_mm=feed.tube_at[0], y_mm=feed.tube_at[1], diameter_mm=diameter, purpose="tube")]
    x, y = feed.connector_at
    holes.append(Hole(x_mm=x, y_mm=y, diameter_mm=feed.connector_hole_mm, purpose="connector"))
    holes += [
        Hole(x_mm=h.x_mm, y_mm=h.y_mm, diameter_mm=h.diameter_mm, purpose="flange") for h in feed.flange_holes
    ]
    if feed.foot_hole_mm:
        holes.append(
            Hole(x_mm=feed.foot[0], y_mm=feed.foot[1], diameter_mm=feed.foot_hole_mm, purpose="foot")
        )
    return holes


def _clamp_holes(
    pole_mm: float, up: str, base: Point2, extent: Point2, setback_mm: float, connector: Point2
) -> list[Hole]:
    """Two U-bolts about a pole that runs along `up`, beside the connector so that its plug has room."""
    hole = clearance_hole_mm(CLAMP_BOLT, "medium")
    bolt = pole_mm / 2.0 + 3.0 + CLAMP_PLAY_MM
    aside = pole_mm / 2.0 + PLUG_ROOM_MM
    along = 1 if up[0] == "y" else 0  # axis the pole runs along
    inner = base[along] / 2.0 - setback_mm
    reach = (extent[along] + inner) / 2.0  # between the lobes' edge and the fold, clear of the wire
    out = []
    for level in (-reach, reach):
        for side in (-bolt, bolt):
            place = [0.0, 0.0]
            place[along] = level
            place[1 - along] = connector[1 - along] + aside + side
            out.append(Hole(x_mm=place[0], y_mm=place[1], diameter_mm=hole, purpose="mounting"))
    return out


def _drain_holes(
    up: str, base: Point2, setback_mm: float, radius_mm: float, thickness_mm: float
) -> list[Hole]:
    along = 1 if up[0] == "y" else 0
    # as near the low fold as the fold lets a hole be (2 T + R from the outer mould line, with a margin)
    edge = base[along] / 2.0 - max(setback_mm, 2.0 * thickness_mm + radius_mm) - DRAIN_HOLE_MM / 2.0 - 1.0
    out = []
    for side in (-base[1 - along] / 4.0, base[1 - along] / 4.0):
        place = [0.0, 0.0]
        place[along] = -edge
        place[1 - along] = side
        out.append(Hole(x_mm=place[0], y_mm=place[1], diameter_mm=DRAIN_HOLE_MM, purpose="drain"))
    return out
