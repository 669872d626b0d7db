"""The radiator's numbers: mandrel, lobes, feed gap, lap."""

from __future__ import annotations

import math
from collections.abc import Callable

from wavejig.design import lobes as lobe
from wavejig.design import starting
from wavejig.design.feed import least_gap_for_tube_mm
from wavejig.design.ledger import Ledger
from wavejig.design.lobes import LobeError, Lobes
from wavejig.design.mandrel import Mandrel, mandrel_for
from wavejig.design.model import Corner, Point2, RadiatorDesign
from wavejig.design.trial import factor_from_trial, metal_from_trials
from wavejig.recipe.errors import RecipeError, show
from wavejig.recipe.models import Recipe
from wavejig.stock import connectors
from wavejig.stock.metals import Metal

# Thickness of what covers a wire when the recipe does not say: single-coat enamel is some hundredths of a
# millimetre, the plastic of building wire about 0.7 mm. From memory.
USUAL_INSULATION_MM = {"none": 0.0, "enamel": 0.04, "plastic": 0.7}
_GAP_ROUNDS = 8


def resolve_radiator(
    recipe: Recipe, metal: Metal, diameter_mm: float, wavelength_mm: float, ledger: Ledger
) -> tuple[RadiatorDesign, Lobes]:
    """The wire's design, and its lobes before they are lifted to the standoff.

    Raises RecipeError when the sides cannot meet the feed gap at all.
    """
    r = recipe.radiator
    insulation = USUAL_INSULATION_MM[r.insulation]
    if r.insulation_thickness is not None:
        insulation = r.insulation_thickness
    metal = metal_from_trials(recipe, metal, diameter_mm, insulation, ledger)
    mandrel = _mandrel(recipe, metal, diameter_mm, insulation, ledger)
    bend = mandrel.inside_radius_mm + diameter_mm / 2.0
    angle = (
        0.0 if r.family == "path" else ledger.auto("lobe_angle", r.lobe_angle, 90.0, "square lobes", "deg")
    )
    standoff = ledger.auto(
        "standoff", r.standoff, starting.standoff_mm(wavelength_mm), "an eighth of a wavelength"
    )
    side, lobe_diameter = _sizes(recipe, diameter_mm, wavelength_mm, angle, ledger)
    try:
        draw = _drawer(recipe, side, lobe_diameter, angle, bend, diameter_mm)
        if r.family == "path":
            lobes = draw(0.0)
            gap = math.dist(lobes.corners[0].at, ground_at(lobes))
            ledger.value("feed_gap", gap, "recipe", "distance of the terminals in corners")
        else:
            start = starting.feed_gap_mm(wavelength_mm, diameter_mm)
            if recipe.feed.style == "tube" and r.feed_gap == "auto":
                start = _gap_for_tube(recipe, draw, start, diameter_mm, bend)
            gap = ledger.auto("feed_gap", r.feed_gap, start, "a thirtieth of a wavelength, room for the feed")
            lobes = draw(gap)
    except LobeError as err:
        key = "lobe_diameter" if r.family == "twin-loop" else "side"
        ledger.problem(
            f"radiator.{key}",
            show(str(getattr(r, key))),
            "sides that meet at the feed gap with room for the bends",
            f"{str(err)[0].upper()}{str(err)[1:]}.",
        )
        raise RecipeError("recipe", ledger.problems) from err
    lap = ledger.auto(
        "lap", r.lap, starting.grid(max(2.5 * diameter_mm, 3.0)), "2.5 wire diameters, at least 3 mm"
    )
    design = RadiatorDesign(
        family=r.family,
        wire_diameter_mm=diameter_mm,
        wire_text=str(r.wire),
        metal=metal,
        insulation_thickness_mm=insulation,
        insulation_permittivity=r.insulation_permittivity,
        inside_radius_mm=mandrel.inside_radius_mm,
        loaded_inside_radius_mm=mandrel.loaded_inside_radius_mm,
        pin_diameter_mm=mandrel.pin_diameter_mm,
        pin_is_dowel=mandrel.is_dowel,
        side_mm=side,
        lobe_diameter_mm=lobe_diameter,
        lobe_angle_deg=angle,
        feed_gap_mm=gap,
        standoff_mm=standoff,
        corners=tuple(
            Corner(at=(c.at[0], c.at[1], c.at[2] + standoff), radius_mm=c.radius_mm) for c in lobes.corners
        ),
        ground_corner=lobes.ground,
        neutral_axis_factor=factor_from_trial(recipe, metal, diameter_mm, insulation, ledger),
        springback_measured=bool(r.trial),
        trim_mm=r.trim,
        lap_mm=lap,
    )
    return design, lobes


def ground_at(lobes: Lobes) -> tuple[float, float, float]:
    """The ground terminal's corner point."""
    return lobes.corners[-1 if lobes.ground is None else lobes.ground].at


def recess_mm(lobes: Lobes, bend_radius_mm: float) -> float:
    """How far the ground corner's rounded apex stands back from its corner point."""
    if lobes.ground is None:
        return 0.0
    before, at, after = (lobes.corners[lobes.ground + i].at for i in (-1, 0, 1))
    u = [a - b for a, b in zip(before, at, strict=True)]
    v = [a - b for a, b in zip(after, at, strict=True)]
    cosine = sum(a * b for a, b in zip(u, v, strict=True)) / (math.hypot(*u) * math.hypot(*v))
    opening = math.acos(max(-1.0, min(1.0, cosine)))
    return bend_radius_mm * (1.0 / math.sin(opening / 2.0) - 1.0)


def extent(lobes: Lobes, diameter_mm: float) -> Point2:
    """Half sizes of the radiator along x and y; round lobes by their circle, not their corners."""
    if lobes.round_radius_mm:
        far = max(abs(x) for x, _ in lobes.far)
        return (far + diameter_mm / 2.0, lobes.round_radius_mm + diameter_mm / 2.0)
    xs = [abs(c.at[0]) for c in lobes.corners]
    ys = [abs(c.at[1]) for c in lobes.corners]
    return (max(xs) + diameter_mm / 2.0, max(ys) + diameter_mm / 2.0)


def _mandrel(
    recipe: Recipe, metal: Metal, diameter_mm: float, insulation_mm: float, ledger: Ledger
) -> Mandrel:
    asked = recipe.radiator.inside_bend_radius
    try:
        mandrel = mandrel_for(metal, diameter_mm, None if asked == "auto" else asked, insulation_mm)
    except ValueError as err:
        ledger.conflict(
            "radiator", "radiator.inside_bend_radius", str(err), "Use a larger radius, or leave it auto."
        )
        mandrel = mandrel_for(metal, diameter_mm, None, insulation_mm)
    ledger.value(
        "inside_bend_radius",
        mandrel.inside_radius_mm,
        "starting value" if asked == "auto" else "recipe",
        f"on a {mandrel.pin_diameter_mm:.4g} mm pin, after springback",
    )
    return mandrel


def _sizes(
    recipe: Recipe, diameter_mm: float, wavelength_mm: float, angle_deg: float, ledger: Ledger
) -> tuple[float | None, float | None]:
    """Centreline side, or centreline diameter of round lobes; both None for the user's own path."""
    r = recipe.radiator
    over = {"outside": -diameter_mm, "centreline": 0.0, "inside": diameter_mm}[r.measured_over]
    if r.family == "path":
        return None, None
    if r.family == "twin-loop":
        asked = r.lobe_diameter if r.lobe_diameter == "auto" else r.lobe_diameter + over
        start = starting.lobe_diameter_mm(wavelength_mm, angle_deg)
        return None, ledger.auto("lobe_diameter", asked, start, "one wavelength round")
    asked = r.side if r.side == "auto" else r.side + over
    start = starting.side_mm(wavelength_mm, diameter_mm)
    rule = "a quarter wavelength over the outside of the wire"
    return ledger.auto("side", asked, start, rule), None


def _drawer(
    recipe: Recipe,
    side_mm: float | None,
    lobe_diameter_mm: float | None,
    angle_deg: float,
    bend_mm: float,
    diameter_mm: float,
) -> Callable[[float], Lobes]:
    """The family's lobes as a function of the feed gap."""
    r = recipe.radiator
    if r.family == "path":
        assert r.corners is not None
        points = tuple((c[0], c[1], c[2] if len(c) > 2 else 0.0) for c in r.corners)
        ground = None if r.ground_corner is None else r.ground_corner - 1
        return lambda _gap: lobe.own(points, ground, bend_mm)
    size = lobe_diameter_mm if side_mm is None else side_mm
    assert size is not None
    if size <= 0:
        raise LobeError(f"over the centreline it is {size:g} mm")
    return {
        "quad": lambda gap: lobe.quad(size, angle_deg, gap, bend_mm),
        "biquad": lambda gap: lobe.biquad(size, angle_deg, gap, bend_mm),
        "double-biquad": lambda gap: lobe.double_biquad(size, angle_deg, gap, bend_mm, diameter_mm),
        "twin-loop": lambda gap: lobe.twin_loop(size, angle_deg, gap, bend_mm),
    }[r.family]


def _gap_for_tube(
    recipe: Recipe, draw: Callable[[float], Lobes], start_mm: float, diameter_mm: float, bend_mm: float
) -> float:
    """Smallest gap on the grid, from `start_mm` up, that leaves room for the tube.

    A wider gap opens the ground corner, which changes the room it needs: a few rounds settle it.
    """
    tube = connectors.tube(recipe.feed.tube)
    gap = start_mm
    for _ in range(_GAP_ROUNDS):
        lobes = draw(gap)
        need = least_gap_for_tube_mm(tube, diameter_mm, recess_mm(lobes, bend_mm))
        if need <= gap + 1e-9:
            break
        gap = round(math.ceil(need / starting.GRID_MM - 1e-9) * starting.GRID_MM, 6)
    return gap
