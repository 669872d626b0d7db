"""How far each dimension strays from article to article, with where the figure comes from.

A tolerance t, plus or minus, stands for a normal spread with 95 % of the articles within it (t = 1.96
standard deviations), cut off at 2.5 of them; or, if the recipe says so, for an even spread over it.
One number stands for a dimension of the whole article: its sides move together, as they do when one
board bends them all. Sides of the two lobes 0.3 mm apart, one each way, change a 5.8 GHz biquad's reflection
by a ninth of what 0.3 mm on all of them does (solved), so lobes of their own would add next to nothing.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

from wavejig.design.model import Design
from wavejig.recipe.models import Recipe, Tolerances
from wavejig.stock import processes
from wavejig.stock.errors import StockError
from wavejig.tuning.asbuilt import Nominal
from wavejig.tuning.vary import over_mm

NORMAL_SIGMAS = 1.96  # standard deviations in a tolerance: 95 % of a normal distribution lie within
CUT_SIGMAS = 2.5  # beyond them an article is caught in the check nest; common practice, no source
WIRE_SHARE = 0.01  # of the diameter; drawn copper wire, ASTM B3 as remembered (from memory)
RADIUS_SHARE = 0.05  # of a bend's inside radius, springback from lot to lot; common practice, no source
MEASURED_KEYS = ("side", "lobe_diameter", "standoff", "feed_gap")


@dataclass(frozen=True, slots=True, kw_only=True)
class Dimension:
    """One dimension and its spread. unit: "mm", "deg" or "" (a ratio). limit: most that can be drawn."""

    key: str
    title: str
    unit: str
    nominal: float
    plus_minus: float
    distribution: str
    source: str
    limit: float | None = None

    @property
    def sigma(self) -> float:
        """Standard deviation."""
        if self.distribution == "uniform":
            return self.plus_minus / math.sqrt(3.0)
        return self.plus_minus / NORMAL_SIGMAS

    @property
    def reach(self) -> float:
        """Furthest an article strays."""
        return self.plus_minus if self.distribution == "uniform" else CUT_SIGMAS * self.sigma


@dataclass(frozen=True, slots=True, kw_only=True)
class Spread:
    """All dimensions' spreads, and how well the predicted frequency is known.

    frequency: true over predicted frequency, by measurement (1 before any); frequency_sigma: its standard
    error, common to all articles of a batch; frequency_source: in words.
    """

    dimensions: tuple[Dimension, ...]
    frequency: float
    frequency_sigma: float
    frequency_source: str

    @property
    def names(self) -> tuple[str, ...]:
        """Keys of the dimensions, in order."""
        return tuple(d.key for d in self.dimensions)


def spread(recipe: Recipe, article: Nominal, posts: float = 0.0) -> Spread:
    """What the recipe, the stock tables and the fixture say about each dimension of an article.

    posts: share by which plastic posts that stay lower the frequency at most (spacer/effect.py); the field
    model does not hold them, so between nothing and that is taken, evenly. A measured correction holds them.
    """
    tolerances = recipe.tolerances
    found = []
    for key, value in article.values.items():
        if key not in _TITLES:
            continue
        title, unit = _TITLES[key]
        plus_minus, source = _plus_minus(key, value, tolerances, article.design)
        if plus_minus <= 0.0:
            continue
        found.append(
            Dimension(
                key=key,
                title=title,
                unit=unit,
                nominal=value,
                plus_minus=plus_minus,
                distribution=tolerances.distribution,
                source=source,
                limit=90.0 if key == "lip_angle" else None,  # lips that lean inwards cannot be folded
            )
        )
    order = list(_TITLES)
    found.sort(key=lambda d: order.index(d.key))
    measured = recipe.measured
    if measured.frequency is not None:
        sigma, factor = measured.frequency_error, measured.frequency
        source = f"measured{': ' + measured.sweep if measured.sweep else ''}"
    else:
        sigma, factor, source = tolerances.model, 1.0, "the model's own error, nothing measured yet"
    if posts > 0.0 and measured.frequency is None:
        factor *= 1.0 - posts / 2.0
        sigma = math.hypot(sigma, posts / math.sqrt(12.0))
        source += f"; posts that stay lower it by up to {100 * posts:.2g} %"
    return Spread(dimensions=tuple(found), frequency=factor, frequency_sigma=sigma, frequency_source=source)


def readings_of(recipe: Recipe, wire_diameter_mm: float) -> dict[str, float]:
    """Calliper readings of the recipe's [measured] table, sides turned to the centreline."""
    given = {k: getattr(recipe.measured, k) for k in MEASURED_KEYS}
    return centreline_readings(recipe, wire_diameter_mm, {k: v for k, v in given.items() if v is not None})


def centreline_readings(
    recipe: Recipe, wire_diameter_mm: float, readings: dict[str, float]
) -> dict[str, float]:
    """Readings as taken (over what the recipe's measured_over says) as centreline dimensions, mm."""
    over = over_mm(recipe, wire_diameter_mm)
    return {k: v - over if k in ("side", "lobe_diameter") else v for k, v in readings.items()}


def with_reading(dimension: Dimension, value: float, error_mm: float) -> Dimension:
    """The dimension of an article that has been measured with a calliper."""
    return replace(
        dimension, nominal=value, plus_minus=error_mm, distribution="normal", source="calliper reading"
    )


_TITLES = {
    "side": ("side", "mm"),
    "lobe_diameter": ("lobe diameter", "mm"),
    "standoff": ("standoff", "mm"),
    "feed_gap": ("feed gap", "mm"),
    "lobe_angle": ("lobe angle", "deg"),
    "leg_spacing": ("leg spacing", "mm"),
    "wire_diameter": ("wire diameter", "mm"),
    "bend_radius": ("bend radius", "mm"),
    "insulation_permittivity": ("permittivity of insulation", ""),
    "base_x": ("base along x", "mm"),
    "base_y": ("base along y", "mm"),
    "lip_height": ("lip height", "mm"),
    "lip_angle": ("lip angle", "deg"),
}


def _plus_minus(key: str, value: float, t: Tolerances, design: Design) -> tuple[float, str]:
    """Tolerance of one dimension and its source."""
    stated = {
        "side": t.side,
        "lobe_diameter": t.side,
        "standoff": t.standoff,
        "lobe_angle": t.bend_angle,
        "feed_gap": t.feed_gap,
        "leg_spacing": t.leg_spacing,
        "wire_diameter": t.wire,
        "bend_radius": t.bend_radius,
        "base_x": t.base,
        "base_y": t.base,
        "lip_height": t.lip_height,
        "lip_angle": t.lip_angle,
    }
    if key == "insulation_permittivity":
        return t.permittivity * value, "recipe [tolerances] permittivity"
    given = stated[key]
    names = {"lobe_diameter": "side", "lobe_angle": "bend_angle", "wire_diameter": "wire"}
    if given != "auto":
        name = names.get(key, key.removesuffix("_x").removesuffix("_y"))
        return given, f"recipe [tolerances] {name}"
    if key == "feed_gap":
        return _fixture_gap_mm(design)
    if key == "wire_diameter":
        return WIRE_SHARE * value, "1 % of the diameter, ASTM B3 (from memory)"
    if key == "bend_radius":
        return RADIUS_SHARE * value, "5 % of the radius, springback (common practice, no source)"
    if key == "lip_angle":
        return _fold_deg(design), "folding machines (wavejig stock folding)"
    return _general_mm(value, t, design)


def _fixture_gap_mm(design: Design) -> tuple[float, str]:
    """The gap's two ends stand in printed grooves: the print's own error and half the sliding clearance."""
    printed = max(p.tolerance_mm for p in processes.printers())
    play = design.printer.clearance_mm
    return math.hypot(printed, play), "the fixture: print error and the groove's clearance, root sum square"


def _fold_deg(design: Design) -> float:
    shortest = min(lip.height_mm for lip in design.reflector.lips)
    machine = min(f.angle_tolerance_deg for f in processes.foldings())
    try:
        general = processes.iso2768_angle_deg(min(shortest, 400.0), "m")
    except StockError:
        general = 0.0
    return max(machine, general)


def _general_mm(value: float, t: Tolerances, design: Design) -> tuple[float, str]:
    grade = t.grade
    assert grade in ("f", "m", "c")
    size = min(max(value, 0.5), 1000.0)
    return processes.iso2768_linear_mm(size, grade), f"ISO 2768-1 {grade}"  # type: ignore[arg-type]
