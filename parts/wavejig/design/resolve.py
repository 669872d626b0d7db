"""Recipe -> Design: names looked up, `auto` worked out, impossible combinations told."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import TypeVar

from wavejig.design import starting
from wavejig.design.checks import contradictions
from wavejig.design.feed import FeedRequest, place_feed
from wavejig.design.ledger import Ledger
from wavejig.design.lobes import Lobes
from wavejig.design.model import (
    CutterDesign,
    Design,
    FeedDesign,
    FixtureDesign,
    FoldingDesign,
    PricesDesign,
    PrinterDesign,
    RadiatorDesign,
    ReflectorDesign,
    SheetDesign,
    SpacerDesign,
    StationDesign,
    TargetDesign,
    ToleranceDesign,
    WireStockDesign,
)
from wavejig.design.sheet import default_base, inside_radius_mm, resolve_sheet
from wavejig.design.wire import extent, ground_at, recess_mm, resolve_radiator
from wavejig.recipe.errors import RecipeError, show
from wavejig.recipe.models import Recipe
from wavejig.recipe.units import SheetSize, WireSize
from wavejig.stock import connectors, metals, processes, sheet, wire
from wavejig.stock.errors import StockError

T = TypeVar("T")
LONGEST_BEND_MM = 1000.0  # of small folding machines; common practice, no source
# Own paths have no one side: as for two square lobes. A band narrower than this is lost in a print's own
# errors. Common practice, no source.
OWN_PATH_NEST, LEAST_NEST_MM = 1.41, 0.15
POST_SCREW = "M3"  # of spacers that stay; common practice, no source


def resolve(recipe: Recipe) -> Design:
    """Every number of the antenna.

    Raises RecipeError (without lines; the reader adds them) for names the stock tables do not hold and
    for keys that contradict each other. Combinations of good values that cannot be made become
    `Design.conflicts` instead.
    """
    ledger = Ledger()
    ledger.problems += contradictions(recipe)
    stock = _look_up_stock(recipe, ledger)
    if ledger.problems or stock is None:
        raise RecipeError("recipe", ledger.problems)
    low, high = recipe.target.band
    wavelength = starting.wavelength_mm((low + high) / 2.0)
    radiator, lobes = resolve_radiator(recipe, stock.wire_metal, stock.wire_mm, wavelength, ledger)
    feed = _feed(recipe, stock, radiator, lobes, ledger)
    posts = lobes.far if recipe.spacer.style == "posts" else ()
    reflector = _reflector(recipe, stock, lobes, feed, wavelength, ledger)
    return Design(
        name=recipe.name,
        quantity=recipe.quantity,
        target=TargetDesign(
            band_low_hz=low,
            band_high_hz=high,
            reference_ohm=recipe.target.reference_impedance,
            return_loss_db=recipe.target.return_loss,
            wavelength_mm=wavelength,
            frequency_factor=recipe.measured.frequency or 1.0,
        ),
        radiator=radiator,
        feed=feed,
        reflector=reflector,
        spacer=SpacerDesign(
            style=recipe.spacer.style,
            plastic=recipe.spacer.material,
            posts=posts,
            post_screw=POST_SCREW,
            sets=None if recipe.spacer.sets == "auto" else recipe.spacer.sets,
        ),
        printer=_printer(recipe),
        fixture=FixtureDesign(style=recipe.fixture.style),
        cutter=_cutter(recipe, stock),
        folding=_folding(recipe, stock),
        tolerances=ToleranceDesign(
            grade=recipe.tolerances.grade,
            side_mm=recipe.tolerances.side,
            bend_angle_deg=recipe.tolerances.bend_angle,
            standoff_mm=recipe.tolerances.standoff,
            nest_mm=_nest_mm(recipe, radiator, lobes),
        ),
        polarisation=recipe.mounting.polarisation,
        pole_mm=None if recipe.mounting.pole == "none" else recipe.mounting.pole,
        values=tuple(ledger.values),
        conflicts=tuple(ledger.conflicts),
        station=StationDesign(
            transmitter_power_w=recipe.station.transmitter_power,
            cable_loss_db=recipe.station.cable_loss,
            wind_speed_m_per_s=recipe.station.wind_speed,
        ),
        sheet=SheetDesign(paper=recipe.sheet.paper, projection=recipe.sheet.projection),
        wire_stock=_wire_stock(recipe),
        prices=PricesDesign(
            currency=recipe.prices.currency,
            each=tuple(
                (key, price)
                for key, price in recipe.prices.model_dump(exclude={"currency"}).items()
                if price is not None
            ),
        ),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _Stock:
    """What the recipe's names stand for."""

    wire_metal: metals.Metal
    sheet_metal: metals.Metal
    wire_mm: float
    sheet_mm: float
    leg_mm: float
    connector: connectors.Connector
    tube: connectors.Tube
    cutter: processes.Cutter


def _look_up_stock(recipe: Recipe, ledger: Ledger) -> _Stock | None:
    """All names at once; None with the ledger's problems when any is unknown."""
    rad, ref, feed = recipe.radiator, recipe.reflector, recipe.feed

    def find(key: str, read: object, ask: Callable[[], T]) -> T | None:
        try:
            return ask()
        except StockError as err:
            about_temper = "temper" in str(err).split(":")[0]
            told = key.rsplit(".", 1)[0] + ".temper" if about_temper else key
            ledger.problem(told, show(str(read)), "what the stock tables hold", str(err))
            return None

    wire_metal = find("radiator.metal", rad.metal, lambda: metals.wire_metal(rad.metal, rad.temper))
    sheet_metal = find(
        "reflector.material", ref.material, lambda: metals.sheet_metal(ref.material, ref.temper)
    )
    wire_mm = find("radiator.wire", rad.wire, lambda: _wire_mm(rad.wire))
    # a gauge means nothing without a known metal: one fault, told once
    sheet_mm = None
    if sheet_metal is not None:
        sheet_mm = find("reflector.thickness", ref.thickness, lambda: _sheet_mm(ref.thickness, ref.material))
    leg = feed.leg
    leg_mm = wire_mm if leg == "auto" else find("feed.leg", leg, lambda: _wire_mm(leg))
    connector = find("feed.connector", feed.connector, lambda: connectors.connector(feed.connector))
    tube = find("feed.tube", feed.tube, lambda: connectors.tube(feed.tube))
    cutter = find("cutter.process", recipe.cutter.process, lambda: processes.cutter(recipe.cutter.process))
    for key, plastic in (
        ("spacer.material", recipe.spacer.material),
        ("printer.material", recipe.printer.material),
    ):
        find(key, plastic, lambda plastic=plastic: processes.plastic(plastic))  # type: ignore[misc]
    if wire_metal is None or sheet_metal is None or wire_mm is None or sheet_mm is None:
        return None
    if leg_mm is None or connector is None or tube is None or cutter is None:
        return None
    calliper = {f"{key}_mm": v for key, v in feed.calliper.model_dump().items() if v is not None}
    if calliper:
        connector = replace(connector, **calliper, source="measured")
    return _Stock(
        wire_metal=wire_metal,
        sheet_metal=sheet_metal,
        wire_mm=wire_mm,
        sheet_mm=sheet_mm,
        leg_mm=leg_mm,
        connector=connector,
        tube=tube,
        cutter=cutter,
    )


def _feed(
    recipe: Recipe, stock: _Stock, radiator: RadiatorDesign, lobes: Lobes, ledger: Ledger
) -> FeedDesign:
    legs = recipe.feed.style == "legs"
    mounting = recipe.feed.mounting
    if mounting == "auto":
        mounting = "behind" if stock.connector.mounting == "flange" else "in-front"
    feed, conflicts = place_feed(
        FeedRequest(
            style=recipe.feed.style,
            connector=stock.connector if legs else None,
            tube=None if legs else stock.tube,
            mounting=mounting,
            leg_diameter_mm=stock.leg_mm,
            leg_is_wire=math.isclose(stock.leg_mm, stock.wire_mm, abs_tol=0.005),
            leg_spacing_mm=None if recipe.feed.leg_spacing == "auto" else recipe.feed.leg_spacing,
            ground=recipe.feed.ground,
            pin=lobes.corners[0].at[:2],
            ground_terminal=ground_at(lobes)[:2],
            sheet_thickness_mm=stock.sheet_mm,
            sheet_solderable=stock.sheet_metal.solderable,
            standoff_mm=radiator.standoff_mm,
            wire_diameter_mm=stock.wire_mm,
            recess_mm=recess_mm(lobes, radiator.bend_radius_mm),
            lap_mm=radiator.lap_mm,
        )
    )
    ledger.conflicts += conflicts
    if legs:
        origin = "recipe" if recipe.feed.leg_spacing != "auto" else "starting value"
        ledger.value("leg_spacing", math.dist(feed.pin_leg, feed.foot), origin, "clears the connector")
    return feed


def _reflector(
    recipe: Recipe, stock: _Stock, lobes: Lobes, feed: FeedDesign, wavelength_mm: float, ledger: Ledger
) -> ReflectorDesign:
    half = extent(lobes, stock.wire_mm)
    if recipe.reflector.kind == "own":
        base = _own_base(recipe, ledger)
    else:
        start = default_base(wavelength_mm, half)
        rule = "one wavelength, or the radiator and a margin"
        base = (
            ledger.auto("base_x", recipe.reflector.base[0], start[0], rule),
            ledger.auto("base_y", recipe.reflector.base[1], start[1], rule),
        )
    lip_height = 0.0
    if recipe.reflector.lips != "none":
        auto = starting.lip_height_mm(wavelength_mm)
        lip_height = ledger.auto("lip_height", recipe.reflector.lip_height, auto, "a fifth of a wavelength")
    posts = lobes.far if recipe.spacer.style == "posts" else ()
    reflector, conflicts = resolve_sheet(
        recipe, stock.sheet_metal, stock.sheet_mm, base, lip_height, feed, posts, POST_SCREW, half
    )
    ledger.conflicts += conflicts
    return reflector


def _own_base(recipe: Recipe, ledger: Ledger) -> tuple[float, float]:
    """The floor of the user's own dish; its sizes noted under names of their own: nobody varies them."""
    own = recipe.reflector.own
    size = own.size if own.diameter is None else (own.diameter, own.diameter)
    assert size is not None and own.depth is not None  # told as contradictions before
    if own.diameter is not None:
        ledger.value("own_diameter", own.diameter, "recipe")
    else:
        ledger.value("own_x", size[0], "recipe")
        ledger.value("own_y", size[1], "recipe")
    ledger.value("own_depth", own.depth, "recipe")
    return size


def _nest_mm(recipe: Recipe, radiator: RadiatorDesign, lobes: Lobes) -> float:
    """Half-width of the check nest's band: how far the wire's farthest point moves when every side is off by
    its tolerance and the radiator lies as well as it can, about its middle."""
    asked = recipe.tolerances.nest
    if asked != "auto":
        return asked
    side = recipe.tolerances.side
    if radiator.side_mm is not None:
        xs = [c.at[0] for c in lobes.corners]
        moved = (max(xs) - min(xs)) / 2.0 / radiator.side_mm * side
    elif radiator.lobe_diameter_mm is not None:
        moved = max(abs(x) for x, _ in lobes.far) / radiator.lobe_diameter_mm * side
    else:
        moved = OWN_PATH_NEST * side
    return round(max(moved, LEAST_NEST_MM), 3)


def _printer(recipe: Recipe) -> PrinterDesign:
    p = recipe.printer
    return PrinterDesign(
        bed_x_mm=p.bed[0],
        bed_y_mm=p.bed[1],
        bed_z_mm=p.bed[2],
        nozzle_mm=p.nozzle,
        clearance_mm=p.clearance,
        hole_allowance_mm=p.hole_allowance,
        plastic=p.material,
    )


def _cutter(recipe: Recipe, stock: _Stock) -> CutterDesign:
    c = recipe.cutter
    smallest = stock.cutter.smallest_hole_in_mm(stock.sheet_mm)
    kerf = stock.cutter.kerf_mm if c.kerf == "auto" else c.kerf
    return CutterDesign(
        process=c.process,
        kerf_mm=kerf,
        offset_in_file=c.compensated == "in-file",
        smallest_hole_mm=smallest if c.smallest_hole == "auto" else c.smallest_hole,
        stock_x_mm=c.stock_sheet[0],
        stock_y_mm=c.stock_sheet[1],
        spacing_mm=stock.cutter.spacing_in_mm(stock.sheet_mm, kerf) if c.spacing == "auto" else c.spacing,
        margin_mm=stock.cutter.edge_margin_mm if c.margin == "auto" else c.margin,
        grain=_grain(recipe, stock) if c.grain == "auto" else c.grain,
    )


def _grain(recipe: Recipe, stock: _Stock) -> str:
    """Sheet is rolled along its longer side (common practice, no source), and that matters where it is folded."""
    if recipe.reflector.lips == "none" or not stock.sheet_metal.foldable:
        return "none"
    x, y = recipe.cutter.stock_sheet
    return "x" if x >= y else "y"


def _wire_stock(recipe: Recipe) -> WireStockDesign:
    w = recipe.wire_stock
    return WireStockDesign(
        length_mm=None if w.length == "auto" else w.length,
        leg_length_mm=None if w.leg_length == "auto" else w.leg_length,
        tube_length_mm=None if w.tube_length == "auto" else w.tube_length,
        cut_loss_mm=w.cut_loss,
        end_waste_mm=w.end_waste,
    )


def _folding(recipe: Recipe, stock: _Stock) -> FoldingDesign:
    f = recipe.folding
    radius = inside_radius_mm(recipe, stock.sheet_metal, stock.sheet_mm)
    # shortest flange: four thicknesses beyond the bend (common practice, no source)
    flange = 4.0 * stock.sheet_mm + radius if f.smallest_flange == "auto" else f.smallest_flange
    return FoldingDesign(
        smallest_flange_mm=flange,
        tooling_radius_mm=radius if f.tooling_radius == "auto" else f.tooling_radius,
        longest_bend_mm=LONGEST_BEND_MM if f.longest_bend == "auto" else f.longest_bend,
    )


def _wire_mm(size: WireSize) -> float:
    if size.standard == "AWG":
        return wire.awg_diameter_mm(int(size.number))
    if size.standard == "SWG":
        return wire.swg_diameter_mm(int(size.number))
    if size.standard == "mm2":
        return wire.area_diameter_mm(size.number)
    return size.number


def _sheet_mm(size: SheetSize, metal: str) -> float:
    if size.standard == "gauge":
        return sheet.gauge_thickness_mm(int(size.number), metal)
    return size.number
