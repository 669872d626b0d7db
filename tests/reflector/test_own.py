"""The dish as a solid and as a surface: volume, sizes and area against closed forms."""

from __future__ import annotations

import itertools
import math
from typing import Any

import cadquery as cq
import pytest
from tests.dishes import BOX, DISHES, ROUND, UPRIGHT, dish_design

from wavejig.reflector.flat import flat_pattern
from wavejig.reflector.model import Tray
from wavejig.reflector.own import floor_room_mm, section, surface_mm2
from wavejig.reflector.solid import tray_solid
from wavejig.reflector.tray import TrayError, plan

SHAPES: tuple[tuple[str, dict[str, Any]], ...] = (
    ("round", {"diameter": "160 mm"}),
    ("rectangular", {"size": ["200 mm", "150 mm"]}),
)
VARIANTS: list[dict[str, Any]] = [
    {
        "shape": shape,
        "slope": f"{slope} deg",
        "radius": f"{radius} mm",
        "rim": f"{rim} mm",
        "depth": "45 mm",
        **size,
    }
    for (shape, size), slope, radius, rim in itertools.product(
        SHAPES,
        (0, 5, 40),
        (0, 10),
        (0, 8),
    )
]


def tray(dish: dict[str, Any], **tables: Any) -> Tray:
    return plan(dish_design(dish, **tables).reflector)


@pytest.mark.parametrize(
    "dish", VARIANTS, ids=lambda d: "-".join(str(d[k]) for k in ("shape", "slope", "radius", "rim"))
)
def test_the_solid_is_whole_and_as_large_as_its_sizes_say(dish: dict[str, Any]) -> None:
    made = tray(dish)
    solid = tray_solid(made)
    assert solid.isValid() and len(solid.Shells()) == 1
    box = solid.BoundingBox()
    slope, t = math.radians(float(dish["slope"].split()[0])), 0.5
    rim = float(dish["rim"].split()[0])
    half = made.half_x_mm + 45.0 * math.tan(slope)
    assert box.zmin == pytest.approx(-t) and box.zmax == pytest.approx(45.0)
    assert box.xmax == pytest.approx(half + max(rim, t / math.cos(slope)), abs=1e-6)
    holes = sum(c.area_mm2 for c in made.circles)
    # thin: volume is thickness times the middle surface, which differs from the inside by T / R at the floor's edge
    expected = t * (surface_mm2(made) - holes)
    rounded = float(dish["radius"].split()[0]) > 0.0 and dish["shape"] == "round"
    assert solid.Volume() == pytest.approx(expected, rel=0.06 if rounded else 0.008)


def test_the_upright_cylinder_s_volume_is_exact() -> None:
    made = tray(UPRIGHT, mounting={"drain": "none"})
    r, t, depth = 75.0, 0.5, 30.0
    # the outside corner is rounded to T: a square less a quarter disc, turned about the axis (Pappus)
    off = (10.0 - 3.0 * math.pi) / (12.0 - 3.0 * math.pi) * t  # of its centroid, from the square's corner
    corner = (1.0 - math.pi / 4.0) * t * t * 2.0 * math.pi * (r + t - off)
    full = math.pi * (r + t) ** 2 * (depth + t) - math.pi * r * r * depth
    holes = t * sum(c.area_mm2 for c in made.circles)
    assert tray_solid(made).Volume() == pytest.approx(full - corner - holes, rel=1e-9)


@pytest.mark.parametrize("dish", [ROUND, UPRIGHT])
def test_the_radius_between_floor_and_wall_is_there(dish: dict[str, Any]) -> None:
    made = tray(dish)
    assert made.own is not None
    tori = [f for f in tray_solid(made).Faces() if f.geomType() == "TORUS"]
    assert len(tori) == (2 if made.own.radius_mm else 1)


def test_walls_lean_as_told() -> None:
    cones = [f for f in tray_solid(tray(ROUND)).Faces() if f.geomType() == "CONE"]
    assert len(cones) == 2
    for face in cones:
        assert abs(face._geomAdaptor().Cone().SemiAngle()) == pytest.approx(math.radians(5.0), abs=1e-9)


def test_the_drawn_section_is_the_solid_s() -> None:
    """Its area against a slice of the box beside its holes, where every slice is alike."""
    made = tray(BOX, mounting={"drain": "none"}, feed={"style": "tube"})
    cut = tray_solid(made).intersect(cq.Solid.makeBox(400.0, 0.02, 200.0, cq.Vector(-200.0, 30.0, -100.0)))
    assert cut.Volume() / 0.02 == pytest.approx(section(made, "x").area_mm2, rel=1e-3)


def test_the_section_of_a_round_dish_turned_about_the_axis_is_its_solid() -> None:
    """Half the section turned about z; the drawn floor edge is sharp outside, the solid's is not."""
    made = tray(UPRIGHT, mounting={"drain": "none"}, feed={"style": "tube"})
    corners = [(max(x, 0.0), z) for x, z, _ in section(made, "x").vertices]
    turned = 0.0
    for (x0, z0), (x1, z1) in zip(corners, [*corners[1:], corners[0]], strict=True):
        turned += math.pi / 3.0 * (z1 - z0) * (x0 * x0 + x0 * x1 + x1 * x1)
    holes = 0.5 * sum(c.area_mm2 for c in made.circles)
    assert tray_solid(made).Volume() == pytest.approx(abs(turned) - holes, rel=3e-3)


@pytest.mark.parametrize("name", DISHES)
def test_the_flat_pattern_is_the_floor(name: str) -> None:
    made = tray(DISHES[name])
    pattern = flat_pattern(made, "lid")
    assert pattern.bends == ()
    assert pattern.size_mm == pytest.approx((2.0 * made.half_x_mm, 2.0 * made.half_y_mm), abs=2e-3)
    floor = (
        math.pi * made.half_x_mm**2
        if made.own and made.own.shape == "round"
        else 4.0 * made.half_x_mm * made.half_y_mm
    )
    assert pattern.outline.area_mm2 == pytest.approx(floor)
    loop = [floor_room_mm(made, x, y) for s in pattern.marks for x, y in s.points]
    assert min(loop) > 1.0  # lettering stays on the floor


def test_surface_of_a_leaning_box() -> None:
    made = tray(BOX)
    a, b, out = 200.0, 150.0, 40.0 * math.tan(math.radians(8.0))
    slant = 40.0 / math.cos(math.radians(8.0))
    walls = 2.0 * slant * ((a + a + 2.0 * out) / 2.0 + (b + b + 2.0 * out) / 2.0)
    rim = (a + 2.0 * out + 20.0) * (b + 2.0 * out + 20.0) - (a + 2.0 * out) * (b + 2.0 * out)
    assert surface_mm2(made) == pytest.approx(a * b + walls + rim)


def test_a_hole_across_the_wall_is_refused() -> None:
    with pytest.raises(TrayError, match="cuts the edge"):
        tray(ROUND, reflector={"holes": [{"x": "60 mm", "y": "60 mm", "diameter": "4 mm"}]})
