"""The bill of materials: what a batch is made of and made with, counted, and priced where the recipe gives prices."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from dataclasses import replace

from wavejig.batch.model import Bill, BillLine, Nest, PrintPlan, WirePlan
from wavejig.design.model import Design
from wavejig.fixture.model import Fixture
from wavejig.spacer.model import Spacer
from wavejig.stock.hardware import screw_through

_WIRE_KEYS = {"wire": "wire", "leg-wire": "leg_wire", "tube": "tube"}
_WIRE_ITEMS = {"wire": "wire", "leg-wire": "wire of the legs", "tube": "semi-rigid tube"}
STAINLESS = "stainless"


def bill(
    design: Design,
    spacer: Spacer,
    fixture: Fixture,
    nest: Nest | None,
    wires: tuple[WirePlan, ...],
    prints: PrintPlan | None,
) -> Bill:
    """All lines: first what goes into the antennas, then what the batch shares."""
    prices = dict(design.prices.each)
    lines = (
        *_metal(design, nest, wires),
        *_feed(design),
        *_fixings(design, spacer),
        *_bench(design, fixture),
        *_plastic(prints),
    )
    return Bill(
        lines=tuple(replace(line, price=prices.get(line.key)) for line in lines if line.count > 0),
        currency=design.prices.currency,
    )


def _metal(design: Design, nest: Nest | None, wires: tuple[WirePlan, ...]) -> Iterator[BillLine]:
    n = design.quantity
    for plan in wires:
        each = sum(length for _, length, _ in plan.pieces) / 1000.0
        bought = (
            f"one length of {plan.needed_mm / 1000.0:.2f} m or more"
            if plan.stock_mm is None
            else f"{plan.lengths} of {plan.stock_mm / 1000.0:g} m"
        )
        yield BillLine(
            key=_WIRE_KEYS[plan.kind],
            item=_WIRE_ITEMS[plan.kind],
            material=plan.material,
            size=f"{plan.diameter_mm:.3f} mm",
            each=round(each, 4),
            count=round(plan.bought_mm / 1000.0, 3),
            unit="m",
            remark=f"{bought}; {100.0 * plan.waste:.1f} % left over",
        )
    r = design.reflector
    if nest is None:
        size = f"{r.base_x_mm:g} x {r.base_y_mm:g} mm floor"
        if r.own is not None and r.own.shape == "round":
            size = f"{r.base_x_mm:g} mm diameter of the floor"
        yield _pieces("own", "dish, box or lid of your own", r.metal.name, size, 1, n)
        return
    w, h = nest.stock_mm
    yield BillLine(
        key="sheet",
        item="stock sheet",
        material=f"{r.metal.temper} {r.metal.name}" if r.metal.foldable else r.metal.name,
        size=f"{w:g} x {h:g} x {r.thickness_mm:g} mm",
        each=None,
        count=len(nest.sheets),
        unit="pcs",
        remark=f"{nest.per_sheet} blanks on a full one; {100.0 * nest.utilisation:.1f} % of the metal used",
    )
    yield BillLine(
        key="blank",
        item="reflector blank, cut" + (" and folded" if r.lips else ""),
        material="",
        size="",
        each=1,
        count=n,
        unit="pcs",
        remark=design.cutter.process,
    )


def _feed(design: Design) -> Iterator[BillLine]:
    feed, n = design.feed, design.quantity
    if feed.connector is None:
        return
    yield _pieces("connector", "panel connector", "", feed.connector.name, 1, n)
    yield BillLine(
        key="plug",
        item="mating plug, to solder with",
        material="",
        size=feed.connector.series,
        each=None,
        count=1,
        unit="pcs",
    )
    holes = len(feed.flange_holes)
    if holes:
        screw = screw_through(feed.connector.hole_diameter_mm) or "to suit"
        for key, item in (("screw", "flange screw"), ("nut", "flange nut"), ("washer", "flange washer")):
            yield _pieces(key, item, "stainless or brass", screw, holes, n * holes)
    if feed.ground == "lug":
        yield _pieces("lug", "tinned solder lug", "tinned", "", 1, n)  # under a screw that is there already


def _fixings(design: Design, spacer: Spacer) -> Iterator[BillLine]:
    n = design.quantity
    for screw, count in sorted(Counter(p.screw for p in spacer.posts).items()):
        yield _pieces("screw", "post screw", STAINLESS, screw, count, n * count)
        yield _pieces("washer", "post washer", STAINLESS, screw, count, n * count)
    holes = Counter(h.diameter_mm for h in design.reflector.holes if h.purpose == "mounting")
    if holes and design.pole_mm:
        hole, count = next(iter(holes.items()))
        size = f"pole {design.pole_mm:g} mm, holes {hole:g} mm"
        yield _pieces("pole_clamp", "pole clamp (U-bolt)", STAINLESS, size, count // 2, n * (count // 2))


def _bench(design: Design, fixture: Fixture) -> Iterator[BillLine]:
    """Pins and screws of the fixture: bought once."""
    for (diameter, turned), count in sorted(fixture_pins(design, fixture).items()):
        yield BillLine(
            key="dowel",
            item="pin, turned to size" if turned else "dowel pin",
            material="steel",
            size=f"{diameter:g} x {fixture.pins.dowel_length_mm:g} mm",
            each=None,
            count=count,
            unit="pcs",
            remark="fixture",
        )
    if fixture.style == "board" and fixture.clamp is not None:
        yield BillLine(
            key="screw",
            item="clamp screw",
            material="steel",
            size=fixture.clamp.screw,
            each=None,
            count=2,
            unit="pcs",
            remark="fixture; it cuts its thread in the board",
        )


def fixture_pins(design: Design, fixture: Fixture) -> Counter[tuple[float, bool]]:
    """How many metal pins the fixture takes at once, by (diameter in mm, turned to size).

    The board has one at each station and one where the cut end stops (thin beside a standing leg); a former disc
    two, moved along with it; the stop block one former, one fence and one stop of each size; a bend block its own.
    """
    pins: Counter[tuple[float, bool]] = Counter()
    metal = [s for s in fixture.stations if s.tool in ("dowel", "turned")]
    if fixture.style == "board":
        pins.update((round(s.tool_diameter_mm, 3), s.tool == "turned") for s in metal)
        allowance = design.printer.hole_allowance_mm
        stops = [h for h in fixture.board.holes if h.purpose == "stop"]
        pins.update((round(h.diameter_mm - allowance, 3), False) for h in stops)
    else:
        pins.update((round(s.tool_diameter_mm, 3), s.tool == "turned") for s in metal[:1])
        stepped = fixture.stop_block
        if stepped is not None:
            pins[(round(stepped.pin_mm, 3), False)] += 1
            pins.update({(round(p.stop_mm, 3), False) for p in stepped.places})
    for disc in fixture.discs:
        pins[(round(disc.dowel_mm, 3), False)] += 2
    for block in fixture.blocks:
        pins[(round(block.dowel_mm, 3), False)] += 1
    return pins


def _plastic(prints: PrintPlan | None) -> Iterator[BillLine]:
    for kind, grams in prints.mass_g if prints else ():
        yield BillLine(
            key="plastic",
            item="printed plastic",
            material=kind,
            size="",
            each=None,
            count=round(grams / 1000.0, 3),
            unit="kg",
            remark="printed solid; sparser infill takes less",
        )


def _pieces(key: str, item: str, material: str, size: str, each: int, count: int) -> BillLine:
    return BillLine(key=key, item=item, material=material, size=size, each=each, count=count, unit="pcs")
