"""What the paper says about a dish, box or lid that is there already: its drawing, its measuring and drilling."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.geometry.plane import Circle
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray, along, outward
from wavejig.reflector.own import section
from wavejig.sheets.blankholes import (
    TABLES_WIDE_MM,
    crowd,
    feed_detail,
    hole_labels,
    placed_labels,
    tables_of,
    window_of,
)
from wavejig.sheets.checks import DISH_OFF_MM
from wavejig.sheets.common import block, sheet_text
from wavejig.sheets.fit import best_scale
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    AngleDim,
    Arrow,
    Chain,
    Item,
    Line,
    LinearDim,
    Ring,
    Shape,
    Sheet,
    Text,
    View,
    number,
    scale_text,
)

_AROUND_MM = 14.0  # paper round the plan for its dimension lines
_SECTION_HIGH_MM = 48.0  # paper for the section, sizes included
SEEN = "seen from the radiator side"


def reflector_words(design: Design) -> str:
    """What the radiator stands before, in a few words; any kind of reflector."""
    r = design.reflector
    return words(design) if r.own is not None else "folded tray" if r.lips else "flat reflector"


def reflector_facts(design: Design) -> tuple[tuple[str, float], ...]:
    """Name and mm of the reflector's main sizes; any kind."""
    r = design.reflector
    if r.own is None:
        return (("reflector base along x", r.base_x_mm), ("reflector base along y", r.base_y_mm))
    deep = ("dish, depth inside", r.own.depth_mm)
    if r.own.shape == "round":
        return (("dish, floor inside, diameter", r.base_x_mm), deep)
    return (("dish, floor inside, along x", r.base_x_mm), ("dish, floor inside, along y", r.base_y_mm), deep)


def words(design: Design) -> str:
    """ "round dish of 160 mm"."""
    r = design.reflector
    own = r.own
    assert own is not None
    if own.shape == "round":
        return f"round dish of {number(r.base_x_mm)} mm"
    return f"rectangular dish of {number(r.base_x_mm)} \u00d7 {number(r.base_y_mm)} mm"


def size_text(design: Design) -> str:
    """The dish's sizes in one line, all inside."""
    r = design.reflector
    own = r.own
    assert own is not None
    floor = f"\u00d8{number(r.base_x_mm)}"
    if own.shape != "round":
        floor = f"{number(r.base_x_mm)} \u00d7 {number(r.base_y_mm)}"
    lean = f", wall leans {number(own.slope_deg)}\u00b0" if own.slope_deg else ", wall upright"
    rim = f", rim {number(own.rim_mm)} mm" if own.rim_mm else ""
    return f"inside: floor {floor} mm, {number(own.depth_mm)} mm deep{lean}{rim}"


def own_drawing(design: Design, tray: Tray, pattern: FlatPattern) -> Sheet:
    """Plan of the floor with its holes, and the section with the sizes that were measured."""
    own = tray.own
    assert own is not None
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    wide, high = pattern.size_mm
    left = x1 - TABLES_WIDE_MM
    split = y0 + _SECTION_HIGH_MM
    scale = best_scale(wide, high, left - x0 - 2.0 * _AROUND_MM, y1 - split - 2.0 * _AROUND_MM, most=2.0)
    middle = ((x0 + left) / 2.0, (split + y1) / 2.0 + 2.0)
    labels = hole_labels(tray)
    crowded = crowd(tray)
    hidden = {id(h) for h in crowded} if scale < 2.0 else set()
    views = [
        View(
            title=f"FLOOR OF THE DISH ({scale_text(scale)}): {SEEN}",
            items=tuple(_plan(tray, pattern, scale, labels, hidden)),
            at=middle,
            scale=scale,
            title_at=(middle[0], split - 2.0),
        )
    ]
    reach = 2.0 * max(abs(x) for x, _, _ in section(tray, "x").vertices)
    zoom = best_scale(reach, own.depth_mm, left - x0 - 60.0, _SECTION_HIGH_MM - 22.0, most=1.0)
    views.append(
        View(
            title=f"SECTION along x ({scale_text(zoom)}): seen from y-, radiator side up",
            items=tuple(_section(tray)),
            at=(middle[0], y0 + 12.0),
            scale=zoom,
            title_at=(middle[0], y0 + 1.0),
        )
    )
    tables = [*tables_of(tray, labels, left, y1)]
    if hidden:
        below = tables[-1].at[1] - tables[-1].height_mm - 3.0
        views.append(feed_detail(tray, crowded, labels, left, below, y0, TABLES_WIDE_MM))
    return Sheet(
        name="own-dish",
        paper_mm=paper,
        views=tuple(views),
        tables=tuple(tables),
        notes=(
            "This part is not made, only drilled. Sizes are the recipe's, measured inside; floor size: where floor and "
            "wall would meet sharply.",
            "Holes: x to the right, y upwards from the datum (crossing of the centre lines = middle of the floor).",
            "Centre-punch, pilot, step drill; clamp the work; deburr both sides. 1:1 templates: "
            "reflector/drill-template.pdf, fixture/drill-template.",
        ),
        notes_at=(x0, y0 - 5.0),
        block=block(
            design,
            title="own dish, drilling",
            part="dish",
            material=sheet_text(design),
            scale=scale,
            note=SEEN,
        ),
    )


def _plan(
    tray: Tray, pattern: FlatPattern, scale: float, labels: tuple[str, ...], hidden: set[int]
) -> Iterator[Item]:
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield Shape(contour=pattern.outline, pen="outline")
    over = 4.0 / scale
    yield Line(a=(x0 - over, 0.0), b=(x1 + over, 0.0), pen="centre")
    yield Line(a=(0.0, y0 - over), b=(0.0, y1 + over), pen="centre")
    for hole in tray.holes:
        small = id(hole) in hidden
        circle = Circle(x_mm=hole.x_mm, y_mm=hole.y_mm, diameter_mm=hole.diameter_mm)
        yield Ring(circle=circle, cross=not small)
    named = [(h, label) for h, label in zip(tray.holes, labels, strict=True) if id(h) not in hidden]
    yield from placed_labels(named, tray.holes, scale)
    if hidden:
        half, cx, cy = window_of([h for h in tray.holes if id(h) in hidden])
        corners = ((-half, -half), (half, -half), (half, half), (-half, half))
        yield Chain(points=tuple((cx + a, cy + b) for a, b in corners), closed=True, pen="thin")
        yield Text(at=(cx + half, cy + half), text="F", height_mm=DIM_TEXT_MM, shift=(0.8, 0.8), bold=True)
    up = outward(tray.up)
    reach = tray.half_mm(tray.up)
    side = along(tray.up) * 0.35 * reach
    tail, tip = up * (0.62 * reach) + side, up * (0.82 * reach) + side
    yield Arrow(tail=_pt(tail), tip=_pt(tip), pen="outline")
    yield Text(at=_pt(tail), text="hangs UP", anchor="centre", shift=(0.0, -3.2))
    yield LinearDim(
        a=(x0, 0.0), b=(x1, 0.0), offset_mm=(y0 * scale) - 12.0, before="" if not _round(tray) else "\u00d8"
    )
    if not _round(tray):
        yield LinearDim(a=(0.0, y0), b=(0.0, y1), offset_mm=-(x0 * scale) + 12.0, angle_deg=90.0)


def _section(tray: Tray) -> Iterator[Item]:
    own = tray.own
    assert own is not None
    yield Shape(contour=section(tray, "x"), pen="thin", filled=True)
    half, t, depth = tray.half_x_mm, tray.thickness_mm, own.depth_mm
    top = half + own.reach_mm(depth)
    yield Line(a=(0.0, -t - 3.0), b=(0.0, depth + 3.0), pen="centre")
    yield LinearDim(a=(top, 0.0), b=(top, depth), offset_mm=-12.0 - own.rim_mm, angle_deg=90.0)
    if own.slope_deg > 0.0:
        yield Line(a=(-half, 0.0), b=(-half, depth), pen="thin")
        yield AngleDim(
            vertex=(-half, 0.0), from_deg=90.0, to_deg=90.0 + own.slope_deg, radius_mm=16.0, outside=True
        )
    if own.rim_mm > 0.0:
        yield LinearDim(a=(top, depth), b=(top + own.rim_mm, depth), offset_mm=6.0)
    # one on either side of the centre line
    said = f"R{number(own.radius_mm)} between floor and wall"
    yield Text(at=(0.0, 0.0), text=said, anchor="right", shift=(-2.0, 2.0))
    yield Text(at=(0.0, 0.0), text=f"{number(t)} mm thick", anchor="left", shift=(2.0, 2.0))


def _round(tray: Tray) -> bool:
    return tray.own is not None and tray.own.shape == "round"


def _pt(v: np.ndarray) -> tuple[float, float]:
    return (float(v[0]), float(v[1]))


def own_measuring(design: Design) -> Iterator[str]:
    """Before anything else: is it the dish that all of this was worked out for?"""
    r = design.reflector
    own = r.own
    assert own is not None
    floor = (
        f"\u00d8{number(r.base_x_mm)} mm, twice across"
        if own.shape == "round"
        else f"{number(r.base_x_mm)} \u00d7 {number(r.base_y_mm)} mm"
    )
    across = r.base_x_mm + 2.0 * own.reach_mm(own.depth_mm)
    what = "" if own.shape == "round" else " along x"
    yield (
        f"Measure the dish inside before anything is bent or drilled: floor {floor}; depth {number(own.depth_mm)} mm "
        f"from a straightedge over the rim, at four places. The floor's edge is rounded: measure across the "
        f"mouth{what} (expected {number(across)} mm) and take off 2 \u00d7 depth \u00d7 tan(lean). Off by more than "
        f"{number(DISH_OFF_MM)} mm: write your figures into [reflector.own] and build the pack again."
    )


def own_drilling(design: Design, fixture: Fixture) -> Iterator[str]:
    """Punching and drilling the dish, in order, with this design's numbers."""
    r = design.reflector
    if fixture.template is not None:
        tiles = len(fixture.template.plate.tiles)
        key = ", its tiles keyed together," if tiles > 1 else ""
        yield (
            f"Lay the printed drill template{key} into the dish, lettering towards you: its edge meets the wall all "
            "round and centres it. Turn UP to the side that will hang uppermost (seams and dents where they do not "
            "matter), and tape it down. Without it: print reflector/drill-template.pdf at 100 %, measure both bars, "
            "cut it out along the floor's edge and tape it in."
        )
    else:
        yield (
            "Print reflector/drill-template.pdf at 100 %, measure both bars, cut it out along the floor's edge and "
            "tape it into the dish, y+ to the side that will hang uppermost."
        )
    if fixture.template is not None and fixture.template.left_out:
        where = "; ".join(
            f"\u00d8{number(h.diameter_mm)} {h.purpose} at ({number(h.x_mm)}, {number(h.y_mm)})"
            for h in fixture.template.left_out
        )
        yield f"Not on the printed template, mark from the paper one: {where} mm."
    yield (
        "Back the floor with hard wood and centre-punch every hole through the template, lightly: thin metal dents. "
        "Take the template out."
    )
    sizes = sorted({(h.diameter_mm, h.purpose) for h in r.holes})
    wanted = ", ".join(f"\u00d8{number(d)} ({purpose})" for d, purpose in sizes)
    yield (
        "Clamp the dish on hard wood, two clamps; never hold it by hand: a drill that grabs spins thin metal, and its "
        "rim cuts. Eye protection, no gloves at a turning drill. Pilot \u00d82 mm, then a step drill or punch to: "
        f"{wanted}."
    )
    yield (
        "Deburr every hole on both sides, brush the chips out, wash the oil off. Scrape lacquer or paint to bright "
        "metal wherever something is soldered or clamped: below 1 \u03a9 from there to the rim."
    )
    yield "Inside is the radiator's side. Gloves for carrying: rims of tins and lids cut."
