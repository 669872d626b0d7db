"""Recipe -> Design: names looked up, `auto` worked out, impossible combinations told."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import TypeVar

from wavejig.design import lobes as lobe
from wavejig.design import starting
from wavejig.design.feed import FeedRequest, least_gap_for_tube_mm, place_feed
from wavejig.design.lobes import LobeError, Lobes
from wavejig.design.mandrel import Mandrel, mandrel_for
from wavejig.design.model import (
    Conflict,
    Corner,
    CutterDesign,
    Design,
    FoldingDesign,
    Point2,
    PrinterDesign,
    RadiatorDesign,
    SpacerDesign,
    TargetDesign,
    ToleranceDesign,
    Value,
)
from wavejig.design.sheet import default_base, inside_radius_mm, resolve_sheet
from wavejig.recipe.errors import Problem, RecipeError, show
from wavejig.recipe.models import Recipe
from wavejig.recipe.units import SheetSize, WireSize
from wavejig.stock import connectors, metals, processes, sheet, wire
from wavejig.stock.errors import StockError

T = TypeVar("T")
POST_SCREW = "M3"


def resolve(recipe: Recipe) -> Design:
    """Every number of the antenna.

    Raises RecipeError (without lines; the reader adds them) for names the stock tables do not hold and
    for keys that contradict each other. Combinations of good values that cannot be made become
    `Design.conflicts` instead.
    """
    return _Resolver(recipe).design()


class _Resolver:
    """One walk over a recipe; gathers all problems before it gives up."""

    def __init__(self, recipe: Recipe) -> None:
        self.recipe = recipe
        self.problems: list[Problem] = []
        self.conflicts: list[Conflict] = []
        self.values: list[tuple[str, Value]] = []

    def design(self) -> Design:
        r = self.recipe
        self._contradictions()
        wire_metal = self._look_up(
            "radiator.metal", r.radiator.metal, lambda: metals.wire_metal(r.radiator.metal, r.radiator.temper)
        )
        sheet_metal = self._look_up(
            "reflector.material",
            r.reflector.material,
            lambda: metals.sheet_metal(r.reflector.material, r.reflector.temper),
        )
        diameter = self._look_up("radiator.wire", r.radiator.wire, lambda: _wire_mm(r.radiator.wire))
        thickness = self._look_up(
            "reflector.thickness",
            r.reflector.thickness,
            lambda: _sheet_mm(r.reflector.thickness, r.reflector.material),
        )
        leg = diameter
        if r.feed.leg != "auto":
            size = r.feed.leg
            leg = self._look_up("feed.leg", size, lambda: _wire_mm(size))
        connector = self._look_up(
            "feed.connector", r.feed.connector, lambda: connectors.connector(r.feed.connector)
        )
        tube = self._look_up("feed.tube", r.feed.tube, lambda: connectors.tube(r.feed.tube))
        self._look_up("spacer.material", r.spacer.material, lambda: processes.plastic(r.spacer.material))
        self._look_up("printer.material", r.printer.material, lambda: processes.plastic(r.printer.material))
        cutter = self._look_up("cutter.process", r.cutter.process, lambda: processes.cutter(r.cutter.process))
        if self.problems:
            raise RecipeError("recipe", self.problems)
        assert wire_metal and sheet_metal and diameter and thickness and leg and connector and tube and cutter

        low, high = r.target.band
        wavelength = starting.wavelength_mm((low + high) / 2.0)
        mandrel = self._mandrel(wire_metal, diameter)
        radiator, lobes = self._radiator(wire_metal, diameter, mandrel, wavelength)

        legs = r.feed.style == "legs"
        calliper = {
            f"{key}_mm": value for key, value in r.feed.calliper.model_dump().items() if value is not None
        }
        measured = connectors.connector(r.feed.connector) if not calliper else _measured(connector, calliper)
        mounting = r.feed.mounting
        if mounting == "auto":
            mounting = "behind" if connector.mounting == "flange" else "in-front"
        pin = _xy(lobes.corners[0].at)
        ground = _xy(lobes.corners[-1 if lobes.ground is None else lobes.ground].at)
        feed, conflicts = place_feed(
            FeedRequest(
                style=r.feed.style,
                connector=measured if legs else None,
                tube=None if legs else tube,
                mounting=mounting,
                leg_diameter_mm=leg,
                leg_is_wire=math.isclose(leg, diameter, abs_tol=0.005),
                leg_spacing_mm=None if r.feed.leg_spacing == "auto" else r.feed.leg_spacing,
                ground=r.feed.ground,
                pin=pin,
                ground_terminal=ground,
                sheet_thickness_mm=thickness,
                sheet_solderable=sheet_metal.solderable,
                standoff_mm=radiator.standoff_mm,
                wire_diameter_mm=diameter,
                recess_mm=_recess_mm(lobes, radiator.bend_radius_mm),
                ground_is_end=lobes.ground is None,
                lap_mm=radiator.lap_mm,
            )
        )
        self.conflicts += conflicts
        if legs:
            origin = "recipe" if r.feed.leg_spacing != "auto" else "starting value"
            self._value("leg_spacing", math.dist(feed.pin_leg, feed.foot), origin, "clears the connector")

        extent = _extent(lobes, diameter)
        auto_base = default_base(wavelength, extent)
        base: Point2 = tuple(  # type: ignore[assignment]
            self._auto(f"base_{axis}", asked, start, "one wavelength, or the radiator and a margin")
            for axis, asked, start in zip("xy", r.reflector.base, auto_base, strict=True)
        )
        lip_height = 0.0
        if r.reflector.lips != "none":
            lip_height = self._auto(
                "lip_height",
                r.reflector.lip_height,
                starting.lip_height_mm(wavelength),
                "a fifth of a wavelength",
            )
        posts = lobes.far if r.spacer.style == "posts" else ()
        reflector, conflicts = resolve_sheet(
            r, sheet_metal, thickness, base, lip_height, feed, posts, POST_SCREW, extent
        )
        self.conflicts += conflicts
        smallest_flange = r.folding.smallest_flange
        radius = inside_radius_mm(r, sheet_metal, thickness)
        return Design(
            name=r.name,
            quantity=r.quantity,
            target=TargetDesign(
                band_low_hz=low,
                band_high_hz=high,
                reference_ohm=r.target.reference_impedance,
                return_loss_db=r.target.return_loss,
                wavelength_mm=wavelength,
            ),
            radiator=radiator,
            feed=feed,
            reflector=reflector,
            spacer=SpacerDesign(
                style=r.spacer.style, plastic=r.spacer.material, posts=posts, post_screw=POST_SCREW
            ),
            printer=PrinterDesign(
                bed_x_mm=r.printer.bed[0],
                bed_y_mm=r.printer.bed[1],
                bed_z_mm=r.printer.bed[2],
                nozzle_mm=r.printer.nozzle,
                clearance_mm=r.printer.clearance,
                hole_allowance_mm=r.printer.hole_allowance,
                plastic=r.printer.material,
            ),
            cutter=CutterDesign(
                process=r.cutter.process,
                kerf_mm=r.cutter.kerf,
                offset_in_file=r.cutter.compensated == "in-file",
                smallest_hole_mm=(
                    cutter.smallest_hole_in_mm(thickness)
                    if r.cutter.smallest_hole == "auto"
                    else r.cutter.smallest_hole
                ),
                stock_x_mm=r.cutter.stock_sheet[0],
                stock_y_mm=r.cutter.stock_sheet[1],
            ),
            folding=FoldingDesign(
                smallest_flange_mm=4.0 * thickness + radius if smallest_flange == "auto" else smallest_flange,
                tooling_radius_mm=radius if r.folding.tooling_radius == "auto" else r.folding.tooling_radius,
            ),
            tolerances=ToleranceDesign(
                grade=r.tolerances.grade,
                side_mm=r.tolerances.side,
                bend_angle_deg=r.tolerances.bend_angle,
                standoff_mm=r.tolerances.standoff,
                nest_mm=r.tolerances.nest,
            ),
            polarisation=r.mounting.polarisation,
            pole_mm=None if r.mounting.pole == "none" else r.mounting.pole,
            values=tuple(self.values),
            conflicts=tuple(self.conflicts),
        )

    # -- the radiator -------------------------------------------------------------------------------

    def _mandrel(self, metal: metals.Metal, diameter: float) -> Mandrel:
        asked = self.recipe.radiator.inside_bend_radius
        try:
            mandrel = mandrel_for(metal, diameter, None if asked == "auto" else asked)
        except ValueError as err:
            self.conflicts.append(
                Conflict(
                    topic="radiator",
                    key="radiator.inside_bend_radius",
                    message=str(err),
                    remedy="Use a larger radius, or leave it auto.",
                )
            )
            mandrel = mandrel_for(metal, diameter, None)
        self._value(
            "inside_bend_radius",
            mandrel.inside_radius_mm,
            "starting value" if asked == "auto" else "recipe",
            f"on a {mandrel.pin_diameter_mm:.4g} mm pin, after springback",
        )
        return mandrel

    def _radiator(
        self, metal: metals.Metal, diameter: float, mandrel: Mandrel, wavelength: float
    ) -> tuple[RadiatorDesign, Lobes]:
        r = self.recipe.radiator
        angle = self._auto("lobe_angle", r.lobe_angle, 90.0, "square lobes", unit="deg")
        bend = mandrel.inside_radius_mm + diameter / 2.0
        standoff = self._auto(
            "standoff", r.standoff, starting.standoff_mm(wavelength), "an eighth of a wavelength"
        )
        gap_start = starting.feed_gap_mm(wavelength, diameter)
        if self.recipe.feed.style == "tube":
            single = r.family == "quad"
            recess = bend * (1.0 / math.cos(math.radians(angle) / 2.0) - 1.0)
            tube = connectors.tube(self.recipe.feed.tube)
            need = least_gap_for_tube_mm(tube, diameter, recess, single)
            gap_start = max(gap_start, starting.grid(need + starting.GRID_MM / 2.0 - 1e-9))
        over = {"outside": -diameter, "centreline": 0.0, "inside": diameter}[r.measured_over]
        side = lobe_diameter = None
        lobes: Lobes | None = None
        gap = 0.0
        try:
            if r.family == "path":
                lobes = self._own(bend, standoff)
                first = lobes.corners[0].at
                last = lobes.corners[-1 if lobes.ground is None else lobes.ground].at
                gap = math.dist(first, last)
                self._value("feed_gap", gap, "recipe", "distance of the terminals in corners")
            else:
                gap = self._auto(
                    "feed_gap", r.feed_gap, gap_start, "a thirtieth of a wavelength, room for the feed"
                )
                if r.family == "twin-loop":
                    lobe_diameter = self._auto(
                        "lobe_diameter",
                        r.lobe_diameter if r.lobe_diameter == "auto" else r.lobe_diameter + over,
                        starting.lobe_diameter_mm(wavelength, angle),
                        "one wavelength round",
                    )
                    lobes = lobe.twin_loop(lobe_diameter, angle, gap, bend)
                else:
                    side = self._auto(
                        "side",
                        r.side if r.side == "auto" else r.side + over,
                        starting.side_mm(wavelength, diameter),
                        "a quarter wavelength over the outside of the wire",
                    )
                    if side <= 0:
                        raise LobeError(f"a side of {side:g} mm over the centreline")
                    lobes = {
                        "quad": lambda: lobe.quad(side, angle, gap, bend),
                        "biquad": lambda: lobe.biquad(side, angle, gap, bend),
                        "double-biquad": lambda: lobe.double_biquad(side, angle, gap, bend, diameter),
                    }[r.family]()
        except LobeError as err:
            key = "lobe_diameter" if r.family == "twin-loop" else "side"
            self.problems.append(
                Problem(
                    key=f"radiator.{key}",
                    read=show(str(getattr(r, key))),
                    allowed="sides that meet at the feed gap with room for the bends",
                    fix=f"{str(err)[0].upper()}{str(err)[1:]}.",
                )
            )
            raise RecipeError("recipe", self.problems) from err
        assert lobes is not None
        insulation = 0.0
        if r.insulation != "none":
            # single-coat enamel is some hundredths of a millimetre, plastic covers about 0.7 mm: from memory
            usual = 0.04 if r.insulation == "enamel" else 0.7
            insulation = usual if r.insulation_thickness is None else r.insulation_thickness
        lap = self._auto(
            "lap", r.lap, starting.grid(max(2.5 * diameter, 3.0)), "2.5 wire diameters, at least 3 mm"
        )
        corners = tuple(
            Corner(at=(c.at[0], c.at[1], c.at[2] + standoff), radius_mm=c.radius_mm) for c in lobes.corners
        )
        design = RadiatorDesign(
            family=r.family,
            wire_diameter_mm=diameter,
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
            corners=corners,
            ground_corner=lobes.ground,
            neutral_axis_factor=r.neutral_axis_factor,
            trim_mm=r.trim,
            lap_mm=lap,
        )
        return design, lobes

    def _own(self, bend: float, standoff: float) -> Lobes:
        r = self.recipe.radiator
        assert r.corners is not None
        points = tuple((c[0], c[1], c[2] if len(c) > 2 else 0.0) for c in r.corners)
        ground = None if r.ground_corner is None else r.ground_corner - 1
        return lobe.own(points, ground, bend)

    # -- checks across keys -------------------------------------------------------------------------

    def _contradictions(self) -> None:
        r = self.recipe
        low, high = r.target.band
        if low >= high:
            self._problem(
                "target.band",
                f"{low / 1e6:g} to {high / 1e6:g} MHz",
                "the lower frequency first",
                "Swap them.",
            )
        elif high / low > 2.0:
            self._problem(
                "target.band",
                f"{low / 1e6:g} to {high / 1e6:g} MHz",
                "bands of up to an octave",
                "One loop antenna covers some percent of its frequency; check the units.",
            )
        own = r.radiator.family == "path"
        if own and r.radiator.corners is None:
            self._problem(
                "radiator.corners",
                "nothing",
                "family path needs corners",
                'Write corners = [["0 mm", "2 mm"], ...] from the pin terminal on.',
            )
        for key, families in (
            ("corners", ("path",)),
            ("ground_corner", ("path",)),
            ("side", ("quad", "biquad", "double-biquad")),
            ("lobe_diameter", ("twin-loop",)),
            ("lobe_angle", ("quad", "biquad", "double-biquad", "twin-loop")),
            ("feed_gap", ("quad", "biquad", "double-biquad", "twin-loop")),
        ):
            value = getattr(r.radiator, key)
            if value not in (None, "auto") and r.radiator.family not in families:
                self._problem(
                    f"radiator.{key}",
                    show(value) if not isinstance(value, tuple) else "a list",
                    f"only for {', '.join(families)}",
                    f"Remove it, or change family from {r.radiator.family}.",
                )
        if own and r.radiator.corners is not None:
            self._own_path(r.radiator.corners, r.radiator.ground_corner)
        if r.radiator.insulation == "none" and r.radiator.insulation_thickness is not None:
            self._problem(
                "radiator.insulation_thickness",
                f"{r.radiator.insulation_thickness:g} mm",
                'only with insulation = "enamel" or "plastic"',
                "Say what the insulation is, or remove the thickness.",
            )
        if r.reflector.k_factor != "auto" and r.reflector.bend_deduction != "auto":
            self._problem(
                "reflector.k_factor",
                f"{r.reflector.k_factor:g}",
                "one of k_factor and bend_deduction",
                "Both say the same; keep the shop's own figure.",
            )

    def _own_path(self, corners: tuple[tuple[float, ...], ...], ground: int | None) -> None:
        first, last = corners[0], corners[-1]
        closed = math.dist((*first, 0.0)[:3], (*last, 0.0)[:3]) < 1e-6
        if closed and ground is None:
            self._problem(
                "radiator.ground_corner",
                "nothing",
                f"2 to {len(corners) - 1} for a path that returns to its first corner",
                "Say which corner is the ground terminal.",
            )
        if ground is not None and (not closed or not 2 <= ground <= len(corners) - 1):
            self._problem(
                "radiator.ground_corner",
                str(ground),
                f"2 to {len(corners) - 1}, for a path whose last corner is its first again",
                "Without it the last corner is the ground terminal.",
            )

    # -- small helpers ------------------------------------------------------------------------------

    def _look_up(self, key: str, read: object, find: Callable[[], T]) -> T | None:
        try:
            return find()
        except StockError as err:
            temper = key.replace("metal", "temper").replace("material", "temper")
            is_temper = "temper" in str(err).split(":")[0]
            self._problem(
                temper if is_temper else key, show(str(read)), "what the stock tables hold", str(err)
            )
            return None

    def _problem(self, key: str, read: str, allowed: str, fix: str) -> None:
        self.problems.append(Problem(key=key, read=read, allowed=allowed, fix=fix))

    def _auto(self, key: str, asked: float | str, start: float, rule: str, unit: str = "mm") -> float:
        if isinstance(asked, str):
            self._value(key, start, "starting value", f"{rule} (common practice, no source)", unit)
            return start
        self._value(key, asked, "recipe", "", unit)
        return asked

    def _value(self, key: str, value: float, origin: str, source: str, unit: str = "mm") -> None:
        self.values.append((key, Value(value=value, origin=origin, unit=unit, source=source)))


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


def _measured(connector: connectors.Connector, calliper: dict[str, float]) -> connectors.Connector:
    from dataclasses import replace

    return replace(connector, **calliper, source="measured")  # type: ignore[arg-type]


def _recess_mm(lobes: Lobes, bend_radius_mm: float) -> float:
    """How far the ground corner's rounded apex stands back from its corner point."""
    if lobes.ground is None:
        return 0.0
    before, at, after = (lobes.corners[lobes.ground + i].at for i in (-1, 0, 1))
    u = [a - b for a, b in zip(before, at, strict=True)]
    v = [a - b for a, b in zip(after, at, strict=True)]
    cosine = sum(a * b for a, b in zip(u, v, strict=True)) / (math.hypot(*u) * math.hypot(*v))
    opening = math.acos(max(-1.0, min(1.0, cosine)))
    return bend_radius_mm * (1.0 / math.sin(opening / 2.0) - 1.0)


def _extent(lobes: Lobes, diameter_mm: float) -> Point2:
    """Half sizes of the radiator along x and y; round lobes by their circle, not their corners."""
    xs = [abs(c.at[0]) for c in lobes.corners]
    ys = [abs(c.at[1]) for c in lobes.corners]
    far = max(abs(x) for x, _ in lobes.far)
    round_radius = max((c.radius_mm for c in lobes.corners[1:-1]), default=0.0)
    if len(lobes.corners) == 9 and round_radius > far / 4.0:  # round lobes reach to `far`, not to the corners
        return (far + diameter_mm / 2.0, round_radius + diameter_mm / 2.0)
    return (max(xs) + diameter_mm / 2.0, max(ys) + diameter_mm / 2.0)


def _xy(p: tuple[float, float, float]) -> Point2:
    return (p[0], p[1])
