"""Random designs that could be ordered: every family, 30 to 900 mm across, wires of 0.8 to 4 mm, tempers, beds.

`random_design(seed)` draws combinations until one can be had at all: its numbers agree, its wire can be
planned without touching itself. Whether the fixture can be had is what the tests find out.
"""

from __future__ import annotations

import math
import random
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from tests.designs import design
from wavejig.design import Design
from wavejig.design.starting import LIGHT_M_PER_S
from wavejig.radiator.feedlegs import PlanError
from wavejig.radiator.model import Radiator
from wavejig.radiator.plan import plan
from wavejig.recipe import RecipeError
from wavejig.shop.wire import wire_findings
from wavejig.stock.metals import metal_names, temper_names

FAMILIES = ("quad", "biquad", "double-biquad", "twin-loop", "path")
# Largest extent over wavelength of the starting values, by family; sets the band for a wanted size.
_EXTENT = {"quad": 0.36, "biquad": 0.71, "double-biquad": 1.42, "twin-loop": 0.72, "path": 1.1}
BEDS = ((120.0, 120.0, 120.0), (180.0, 180.0, 180.0), (220.0, 220.0, 250.0), (300.0, 300.0, 400.0))
_TRIES = 400


@dataclass(frozen=True, slots=True, kw_only=True)
class RandomDesign:
    """A drawn design: the seed it came from, the keys it was resolved from, and its wires."""

    seed: int
    keys: dict[str, Any]
    design: Design
    radiator: Radiator


def random_designs(count: int, first_seed: int = 0) -> Iterator[RandomDesign]:
    """`count` designs, of seeds `first_seed` on; families take turns."""
    for seed in range(first_seed, first_seed + count):
        yield random_design(seed)


def random_design(seed: int) -> RandomDesign:
    """The design of one seed, the same on every machine."""
    draw = random.Random(seed)
    family = FAMILIES[seed % len(FAMILIES)]
    style = ("legs", "tube")[
        seed // len(FAMILIES) % 2
    ]  # or tubes, which fit nearly always, would crowd out legs
    for _ in range(_TRIES):
        keys = _draw_keys(draw, family, style)
        try:
            made = design(**keys)
        except RecipeError:
            continue
        if made.conflicts:
            continue
        try:
            radiator = plan(made)
        except PlanError:
            continue
        if any(f.severity == "error" for f in wire_findings(made, radiator)):
            continue
        return RandomDesign(seed=seed, keys=keys, design=made, radiator=radiator)
    raise AssertionError(f"seed {seed}: no {family} in {_TRIES} draws can be had")


def _draw_keys(draw: random.Random, family: str, style: str) -> dict[str, Any]:
    size = math.exp(draw.uniform(math.log(30.0), math.log(900.0)))
    wavelength = size / _EXTENT[family]
    if wavelength < 26.0:  # the recipe's band ends at 12 GHz
        wavelength, size = 26.0, 26.0 * _EXTENT[family]
    centre_mhz = LIGHT_M_PER_S / (wavelength * 1e-3) / 1e6
    # thick wire for small lobes leaves no straights: draw up to a twelfth of the lobe's side
    thickest = max(0.8, min(4.0, wavelength / 4.0 / 12.0))
    wire = round(draw.uniform(0.8, thickest), 2)
    metal = draw.choice(metal_names("wire"))
    temper = draw.choice(temper_names(metal, "wire"))
    radiator: dict[str, Any] = {"metal": metal, "temper": temper, "insulation": "none"}
    if draw.random() < 0.2:
        radiator["insulation"] = draw.choice(("enamel", "plastic"))
    if draw.random() < 0.3:
        radiator["inside_bend_radius"] = f"{round(wire * draw.uniform(1.0, 3.0), 2)} mm"
    if draw.random() < 0.3:
        radiator["neutral_axis_factor"] = round(draw.uniform(0.42, 0.52), 3)
    if family != "path" and draw.random() < 0.4:
        radiator["lobe_angle"] = f"{draw.randint(70, 110)} deg"
    if family == "path":
        radiator |= _path_keys(draw, size, wire)
    feed: dict[str, Any] = {"style": style}
    if feed["style"] == "legs":
        feed["connector"] = draw.choice(("n-4hole", "sma-4hole-cup", "sma-4hole-short", "tnc-bulkhead"))
        if draw.random() < 0.5:
            feed["leg"] = f"{round(draw.uniform(0.8, 2.0), 2)} mm"
    else:
        feed["tube"] = draw.choice(("tube-2.2", "tube-3.6"))
    bed = draw.choice(BEDS)
    return {
        "family": family,
        "wire": f"{wire} mm",
        "band": [f"{centre_mhz * 0.985:.3f} MHz", f"{centre_mhz * 1.015:.3f} MHz"],
        "radiator": radiator,
        "feed": feed,
        "printer": {"bed": [f"{b:g} mm" for b in bed]},
    }


def _path_keys(draw: random.Random, size_mm: float, wire_mm: float) -> dict[str, Any]:
    """Own corners: lobes of an uneven outline, one (open) or two (closed, back at the pin terminal)."""
    reach = size_mm / 2.0
    gap = max(3.0 * wire_mm, 4.0, 0.03 * size_mm)
    count = draw.randint(3, 5)
    # a fan of corners from the pin side round to the ground side, at uneven distances
    sweep = [math.radians(a) for a in (55.0, -55.0)]
    angles = [sweep[0] + (sweep[1] - sweep[0]) * i / (count - 1) for i in range(count)]
    distances = [reach * draw.uniform(0.72, 1.0) for _ in angles]
    right = [(r * math.cos(a), r * math.sin(a)) for r, a in zip(distances, angles, strict=True)]
    pin, ground = (0.0, gap / 2.0), (0.0, -gap / 2.0)
    closed = draw.random() < 0.6
    left = [(-x, -y) for x, y in right] if closed else []
    points = [pin, *right, ground, *left, *([pin] if closed else [])]
    keys: dict[str, Any] = {"corners": [[f"{x:.2f} mm", f"{y:.2f} mm"] for x, y in points]}
    if closed:
        keys["ground_corner"] = len(right) + 2
    return keys
