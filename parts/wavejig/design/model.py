"""The frozen Design: every number of one antenna, resolved. Lengths in mm, angles in deg, band in Hz.

Axes (design conventions): origin at the centre of the base's radiator-side face; +z towards the
radiator; lobes along x; feed gap and electric field along y. The pin terminal is the inner corner at
y > 0, the ground terminal the one at y < 0.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from wavejig.geometry.plane import Circle
from wavejig.stock.connectors import Connector, Tube
from wavejig.stock.metals import Metal

Point2 = tuple[float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Value:
    """One number and where it came from: "recipe", "starting value", "stock" or "tuned"."""

    value: float
    origin: str
    unit: str = "mm"
    source: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class TargetDesign:
    """The band and the wanted match."""

    band_low_hz: float
    band_high_hz: float
    reference_ohm: float
    return_loss_db: float
    wavelength_mm: float  # free space, at the band's middle
    frequency_factor: float = 1.0  # true over predicted frequency, from a measured article


@dataclass(frozen=True, slots=True, kw_only=True)
class Corner:
    """A corner of the main wire's centreline and its finished centreline radius (0 at the ends)."""

    at: tuple[float, float, float]
    radius_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Conflict:
    """Numbers that cannot be had together: found while resolving, told as an error finding.

    topic: "feed", "radiator", "reflector", "spacer"; key: the recipe key to change.
    """

    topic: str
    key: str
    message: str
    remedy: str


@dataclass(frozen=True, slots=True, kw_only=True)
class RadiatorDesign:
    """The wire and the shape of its lobes. Sides and diameters are over the centreline."""

    family: str
    wire_diameter_mm: float
    wire_text: str
    metal: Metal
    insulation_thickness_mm: float  # 0 for bare wire
    insulation_permittivity: float
    inside_radius_mm: float  # finished, inside of the corners
    loaded_inside_radius_mm: float  # while on the mandrel pin
    pin_diameter_mm: float  # the mandrel pin that gives it
    pin_is_dowel: bool  # False: no stock dowel fits, the post is printed
    side_mm: float | None  # None for round lobes and own paths
    lobe_diameter_mm: float | None  # round lobes only
    lobe_angle_deg: float
    feed_gap_mm: float
    standoff_mm: float
    corners: tuple[Corner, ...]  # of the main wire's lobes, from the pin terminal on (see `lobes`)
    ground_corner: int | None  # index of the ground terminal among them; None: it is the last one
    neutral_axis_factor: float
    trim_mm: float
    lap_mm: float  # length of a soldered lap
    springback_measured: bool = False  # from the user's trial bends, not from the stock table

    @property
    def bend_radius_mm(self) -> float:
        """Finished centreline radius of the corners."""
        return self.inside_radius_mm + self.wire_diameter_mm / 2.0

    @property
    def covered_diameter_mm(self) -> float:
        """Diameter over the insulation: what grooves must take."""
        return self.wire_diameter_mm + 2.0 * self.insulation_thickness_mm


@dataclass(frozen=True, slots=True, kw_only=True)
class FeedDesign:
    """How the radio reaches the terminals, and where on the sheet it lands."""

    style: str  # "legs" or "tube"
    terminal_pin: Point2  # x, y of the pin terminal (inner corner, y > 0)
    terminal_ground: Point2
    # legs
    connector: Connector | None
    mounting: str  # "behind" or "in-front": side of the sheet the flange or shoulder sits on
    leg_diameter_mm: float
    leg_is_wire: bool  # legs of the radiator's own wire: one leg is the main wire's end
    pin_leg: Point2  # x, y of the pin leg's axis
    pin_joint: str  # "bore" (leg stands in the solder cup) or "lap" (beside a solid pin)
    pin_leg_bottom_mm: float  # z of the pin leg's lower end
    connector_at: Point2  # centre of the connector
    connector_hole_mm: float
    flange_holes: tuple[Circle, ...]
    ground: str  # "sheet" (soldered hole), "flange" or "lug"
    foot: Point2  # x, y where the ground leg lands
    foot_bottom_mm: float  # z of its lower end
    foot_hole_mm: float  # hole in the sheet for the foot (or the lug's screw); 0 = none
    clear_radius_mm: float  # cut-out, nut, washer or flange: the foot must land outside this, unless on it
    # tube
    tube: Tube | None
    tube_at: Point2
    tube_top_mm: float
    tube_bottom_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Lip:
    """One folded edge. edge: "x-", "x+", "y-" or "y+"; height along the outer face from the mould line."""

    edge: str
    height_mm: float
    angle_deg: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Hole:
    """A round hole in the base. purpose: connector, flange, foot, tube, spacer, mounting, drain, other."""

    x_mm: float
    y_mm: float
    diameter_mm: float
    purpose: str


def own_inset_mm(slope_deg: float, radius_mm: float) -> float:
    """From where floor and wall would meet sharply to where the floor is flat."""
    return radius_mm * math.tan(math.radians(90.0 - slope_deg) / 2.0)


@dataclass(frozen=True, slots=True, kw_only=True)
class OwnShape:
    """A dish, box or lid that is there already, measured inside. Its floor is the reflector's base.

    shape: "round" or "rectangular"; depth_mm: floor to rim, straight up; slope_deg: the wall's lean
    outwards from upright; radius_mm: inside, between floor and wall; rim_mm: flat rim turned outwards.
    """

    shape: str
    depth_mm: float
    slope_deg: float
    radius_mm: float
    rim_mm: float

    def reach_mm(self, height_mm: float) -> float:
        """How much further out the wall's inside stands at a height than the floor's sharp edge."""
        return height_mm * math.tan(math.radians(self.slope_deg))

    @property
    def inset_mm(self) -> float:
        """From the floor's sharp edge to where the floor is flat."""
        return own_inset_mm(self.slope_deg, self.radius_mm)


@dataclass(frozen=True, slots=True, kw_only=True)
class ReflectorDesign:
    """The sheet: base between outer mould lines, lips, holes. Kind "own": base is the inside floor, sharp edge
    to sharp edge (both the diameter when round)."""

    kind: str  # "flat", "tray" or "own"
    metal: Metal
    thickness_mm: float
    base_x_mm: float
    base_y_mm: float
    inside_radius_mm: float
    k_factor: float  # neutral-axis depth / thickness (after a shop's own bend deduction, the one it implies)
    bend_deduction_mm: float | None  # the shop's own figure, if given
    lips: tuple[Lip, ...]
    corner_style: str  # "relief" or "mitre"
    holes: tuple[Hole, ...]
    up: str  # edge that hangs uppermost: "y+" or "x+"
    own: OwnShape | None = None  # kind "own" only


@dataclass(frozen=True, slots=True, kw_only=True)
class SpacerDesign:
    """The printed standoff. posts: x, y where posts stand (style "posts"), else empty."""

    style: str
    plastic: str
    posts: tuple[Point2, ...]
    post_screw: str  # screw of a post, e.g. "M3"
    sets: int | None = None  # of removable blocks; None: by the batch


@dataclass(frozen=True, slots=True, kw_only=True)
class PrinterDesign:
    """The printer and how its plastic fits."""

    bed_x_mm: float
    bed_y_mm: float
    bed_z_mm: float
    nozzle_mm: float
    clearance_mm: float
    hole_allowance_mm: float
    plastic: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FixtureDesign:
    """What the wire is bent on. style: as asked for, "auto", "board" or "stop-block"."""

    style: str


@dataclass(frozen=True, slots=True, kw_only=True)
class CutterDesign:
    """The cutting shop."""

    process: str
    kerf_mm: float
    offset_in_file: bool  # True: our file carries half the kerf; False: the shop compensates
    smallest_hole_mm: float
    stock_x_mm: float
    stock_y_mm: float
    spacing_mm: float = 3.0  # between blanks on the stock sheet
    margin_mm: float = 5.0  # of the stock sheet, kept free
    grain: str = "none"  # "x" or "y": all blanks keep one way to the sheet's rolling direction


@dataclass(frozen=True, slots=True, kw_only=True)
class FoldingDesign:
    """The folding shop."""

    smallest_flange_mm: float
    tooling_radius_mm: float
    longest_bend_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ToleranceDesign:
    """What the processes hold, plus or minus."""

    grade: str
    side_mm: float
    bend_angle_deg: float
    standoff_mm: float
    nest_mm: float


@dataclass(frozen=True, slots=True, kw_only=True)
class StationDesign:
    """Where it will work; None: not given, the sheet assumes something and says so."""

    transmitter_power_w: float | None = None
    cable_loss_db: float | None = None
    wind_speed_m_per_s: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class SheetDesign:
    """Paper ("A4", "Letter") and projection ("first", "third") of drawings and build sheet."""

    paper: str = "A4"
    projection: str = "first"


@dataclass(frozen=True, slots=True, kw_only=True)
class WireStockDesign:
    """Wire as bought. None: a length long enough for the whole batch."""

    length_mm: float | None = None
    leg_length_mm: float | None = None
    tube_length_mm: float | None = None
    cut_loss_mm: float = 0.0
    end_waste_mm: float = 50.0


@dataclass(frozen=True, slots=True, kw_only=True)
class PricesDesign:
    """What the recipe says things cost: (key, price), in `currency`, a label."""

    currency: str = ""
    each: tuple[tuple[str, float], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class Design:
    """One antenna, every number resolved. `values` tells where the main ones came from."""

    name: str
    quantity: int
    target: TargetDesign
    radiator: RadiatorDesign
    feed: FeedDesign
    reflector: ReflectorDesign
    spacer: SpacerDesign
    printer: PrinterDesign
    fixture: FixtureDesign
    cutter: CutterDesign
    folding: FoldingDesign
    tolerances: ToleranceDesign
    polarisation: str
    pole_mm: float | None
    values: tuple[tuple[str, Value], ...]
    conflicts: tuple[Conflict, ...]
    station: StationDesign = StationDesign()
    sheet: SheetDesign = SheetDesign()
    wire_stock: WireStockDesign = WireStockDesign()
    prices: PricesDesign = PricesDesign()
