"""What a recipe leaves free, and how far each may go. Lengths in mm, angles in deg.

Ranges are in wavelengths or in the starting value (common practice, no source): wide enough for every
wire lobe before a sheet that practice knows, narrow enough that the solver's mesh stays good. What the
shop cannot make is refused beside them, by its findings.
"""

from __future__ import annotations

from dataclasses import dataclass

from wavejig.design.model import Design
from wavejig.recipe.models import Recipe

SEARCHED = "the range that is searched"
GRID_MM = 0.05  # what a shop can hold
_GRIDS = {
    "lobe_angle": 0.5,
    "base_x": 1.0,
    "base_y": 1.0,
    "lip_height": 0.5,
}  # the eye's and the folder's own


@dataclass(frozen=True, slots=True, kw_only=True)
class Freedom:
    """One dimension left to the tuning: where it starts, its range, the step of a first look, its grid.

    follows: what "auto" gives moves with the other dimensions (the connector or tube needs its room), and the
    tuning adds to that; start, low and high are then at the starting design.
    """

    name: str
    start: float
    low: float
    high: float
    step: float
    grid: float
    why_low: str = SEARCHED
    why_high: str = SEARCHED
    follows: bool = False


def freedoms(recipe: Recipe, design: Design, grid_mm: float = GRID_MM) -> tuple[Freedom, ...]:
    """The dimensions that this recipe leaves "auto", in the order of their weight."""
    wavelength = design.target.wavelength_mm
    values = {name: value.value for name, value in design.values}
    r, family = recipe.radiator, recipe.radiator.family
    out: list[Freedom] = []

    def free(
        name: str, low: float, high: float, step: float, why_low: str = SEARCHED, follows: bool = False
    ) -> None:
        start = values[name]
        grid = max(grid_mm, _GRIDS.get(name, 0.0))
        out.append(
            Freedom(
                name=name,
                start=start,
                low=min(low, start),
                high=max(high, start),
                step=step,
                grid=grid,
                why_low=why_low,
                follows=follows,
            )
        )

    if family == "twin-loop" and r.lobe_diameter == "auto":
        free(
            "lobe_diameter", 0.75 * values["lobe_diameter"], 1.3 * values["lobe_diameter"], 0.008 * wavelength
        )
    if family not in ("twin-loop", "path") and r.side == "auto":
        free("side", 0.75 * values["side"], 1.3 * values["side"], 0.008 * wavelength)
    if family != "path" and r.feed_gap == "auto":
        wire = design.radiator.covered_diameter_mm
        tube = design.feed.style == "tube"
        least = values["feed_gap"] if tube else max(1.6 * wire, wire + 1.0)
        room = "the tube between the terminals" if tube else "room between the terminals"
        free("feed_gap", least, 0.09 * wavelength, 0.008 * wavelength, room, tube)
    if r.standoff == "auto":
        free("standoff", 0.06 * wavelength, 0.22 * wavelength, 0.012 * wavelength)
    if family != "path" and r.lobe_angle == "auto":
        free("lobe_angle", 60.0, 130.0, 5.0)
    if design.feed.style == "legs" and recipe.feed.leg_spacing == "auto" and family != "path":
        least = values["leg_spacing"]
        room = "the connector under it"
        free("leg_spacing", least, least + 0.06 * wavelength, 0.008 * wavelength, room, True)
    out += _tray(recipe, design, values, grid_mm)
    return tuple(out)


def _tray(recipe: Recipe, design: Design, values: dict[str, float], grid_mm: float) -> list[Freedom]:
    wavelength = design.target.wavelength_mm
    ref = recipe.reflector
    out: list[Freedom] = []
    if ref.kind == "own":  # the dish is as it is
        return out
    lips = {lip.edge[0] for lip in design.reflector.lips}
    height = values.get("lip_height", 0.0)
    for axis, name, stock in (
        ("x", "base_x", design.cutter.stock_x_mm),
        ("y", "base_y", design.cutter.stock_y_mm),
    ):
        asked = ref.base[0 if axis == "x" else 1]
        if asked != "auto":
            continue
        start = values[name]
        sheet = max(design.cutter.stock_x_mm, design.cutter.stock_y_mm) if stock < start else stock
        room = sheet - 2.0 * height * (axis in lips) - 2.0
        wanted = 1.25 * start
        out.append(
            Freedom(
                name=name,
                start=start,
                low=min(start, max(0.85 * start, 0.6 * wavelength)),
                high=max(start, min(wanted, room)),
                step=0.06 * wavelength,
                grid=max(grid_mm, _GRIDS[name]),
                why_low="room round the lobes",
                why_high="the stock sheet" if room < wanted else SEARCHED,
            )
        )
    if lips and ref.lip_height == "auto":
        out.append(
            Freedom(
                name="lip_height",
                start=height,
                low=min(height, max(0.06 * wavelength, design.folding.smallest_flange_mm)),
                high=max(height, 0.3 * wavelength),
                step=0.03 * wavelength,
                grid=max(grid_mm, _GRIDS["lip_height"]),
                why_low="the shortest lip",
                why_high=SEARCHED,
            )
        )
    return out
