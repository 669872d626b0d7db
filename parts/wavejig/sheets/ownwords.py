"""What the paper says in words about a reflector, and about measuring and drilling a dish that is there already."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.sheets.checks import DISH_OFF_MM
from wavejig.sheets.model import (
    number,
)


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
