"""The recipe's keys. One model per table; every field has a default, but for the four a recipe needs.

The same models read recipes, make the JSON Schema (`wavejig new --schema`) and document the keys: the
description of each field is what an editor shows while the person types.
"""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field

from wavejig.recipe.fields import (
    AUTO,
    AUTO_WIRE,
    SHEET,
    WIRE,
    Name,
    Reads,
    auto_number,
    auto_quantity,
    choice,
    count,
    number,
    quantity,
    refuse,
    word,
)
from wavejig.recipe.units import (
    ANGLE,
    FREQUENCY,
    LENGTH,
    LEVEL,
    POWER,
    RESISTANCE,
    SPEED,
    SheetSize,
    WireSize,
)

FAMILIES = ("quad", "biquad", "double-biquad", "twin-loop", "path")
# The plainest corner list would already be refused above a few hundred corners: nobody bends those.
_MOST_CORNERS = 120
_MOST_HOLES = 200
_MOST_TRIALS = 20


class _Table(BaseModel):
    """A recipe table: unknown keys are errors, values do not change after reading."""

    model_config = ConfigDict(extra="forbid", frozen=True, validate_default=False)


def _band(value: Any) -> Any:
    if not isinstance(value, list) or len(value) != 2:
        raise refuse(value, "two frequencies, lower and upper", 'Write band = ["2.400 GHz", "2.4835 GHz"].')
    return value


def _corner(value: Any) -> Any:
    if not isinstance(value, list) or len(value) not in (2, 3):
        raise refuse(value, "a corner [x, y] or [x, y, z]", 'Write it like ["21 mm", "23 mm"].')
    return value


def _corners(value: Any) -> Any:
    if not isinstance(value, list) or not 3 <= len(value) <= _MOST_CORNERS:
        raise refuse(value, f"3 to {_MOST_CORNERS} corners", 'Write corners = [["0 mm", "2 mm"], ...].')
    return value


def _pair(value: Any) -> Any:
    if isinstance(value, str):  # one word or size for both directions
        return [value, value]
    if not isinstance(value, list) or len(value) != 2:
        raise refuse(value, "two sizes, along x and along y", 'Write base = ["123 mm", "123 mm"], or "auto".')
    return value


def _own_pair(value: Any) -> Any:
    if isinstance(value, str):
        return [value, value]
    if not isinstance(value, list) or len(value) != 2:
        raise refuse(value, "two sizes, along x and along y", 'Write size = ["200 mm", "150 mm"].')
    return value


def _triple(value: Any) -> Any:
    if not isinstance(value, list) or len(value) != 3:
        raise refuse(value, "three sizes, x, y and height", 'Write bed = ["220 mm", "220 mm", "250 mm"].')
    return value


def _holes(value: Any) -> Any:
    if isinstance(value, list) and len(value) > _MOST_HOLES:
        raise refuse(f"{len(value)} holes", f"at most {_MOST_HOLES} extra holes", "Remove some.")
    return value


def _trials(value: Any) -> Any:
    if isinstance(value, list) and len(value) > _MOST_TRIALS:
        raise refuse(f"{len(value)} trials", f"at most {_MOST_TRIALS} trial bends", "Keep the best ones.")
    return value


def _pole(value: Any) -> Any:
    return value if value == "none" else quantity(LENGTH, 10.0, 120.0).read(value)


def _sweep(value: Any) -> Any:
    if not isinstance(value, str) or len(value) > 200 or not value.isprintable():
        raise refuse(value, "the sweep's file name", "Write it in quotes, on one line.")
    return value


Auto = Literal["auto"]
Size = Annotated[float, quantity(LENGTH, 0.01, 3000.0)]
AutoSize = Annotated[float | Auto, auto_quantity(LENGTH, 0.01, 3000.0)]
Tolerance = Annotated[float | Auto, auto_quantity(LENGTH, 0.001, 10.0)]
Place = Annotated[float, quantity(LENGTH, -3000.0, 3000.0)]
Corner = Annotated[tuple[Place, ...], BeforeValidator(_corner)]
Frequency = Annotated[float, quantity(FREQUENCY, 100e6, 12e9)]


class Target(_Table):
    """What the antenna must do."""

    band: Annotated[tuple[Frequency, Frequency], BeforeValidator(_band)] = Field(
        description="lower and upper edge of the band"
    )
    reference_impedance: Annotated[float, quantity(RESISTANCE, 10.0, 600.0)] = Field(
        50.0, description="impedance of the radio and cable"
    )
    return_loss: Annotated[float, quantity(LEVEL, 3.0, 40.0)] = Field(
        12.0, description="least return loss wanted over the whole band"
    )


class Trial(_Table):
    """One trial bend: held against a former, let go, measured."""

    former: Size = Field(description="diameter of the pin or disc it was bent round")
    bent_to: Annotated[float, quantity(ANGLE, 20.0, 350.0)] = Field(description="angle while held")
    relaxed_to: Annotated[float, quantity(ANGLE, 1.0, 350.0)] = Field(description="angle once let go")


class TrialLength(_Table):
    """A wire of known cut length bent into equal bends, and what it measures then."""

    cut: Size = Field(description="length before bending")
    outside: Size = Field(
        description="all straights together, each over the outside of the wire, corner to corner"
    )
    bends: Annotated[int, count(1, 50)] = Field(1, description="how many bends it has, all alike")
    angle: Annotated[float, quantity(ANGLE, 20.0, 150.0)] = Field(90.0, description="of each, once let go")
    former: Size = Field(description="diameter of the pin they were bent round")


class Radiator(_Table):
    """The bent wire."""

    family: Annotated[str, choice(*FAMILIES)] = Field(description="kind of radiator")
    wire: Annotated[WireSize, WIRE] = Field(description="the wire: diameter, AWG, SWG or mm2")
    metal: Annotated[str, word("metal of the wire", "wavejig stock metals")] = Field(
        "copper", description="wire metal"
    )
    temper: Annotated[str, word("temper", "wavejig stock metals")] | None = Field(
        None, description="temper of the wire; the metal's usual one when left out"
    )
    insulation: Annotated[str, choice("none", "enamel", "plastic")] = Field(
        "none", description="what covers the wire"
    )
    insulation_thickness: Annotated[float, quantity(LENGTH, 0.005, 5.0)] | None = Field(
        None, description="thickness of the insulation on one side"
    )
    insulation_permittivity: Annotated[float, number(1.0, 10.0)] = Field(
        3.0, description="relative permittivity of the insulation"
    )
    inside_bend_radius: Annotated[float | Auto, auto_quantity(LENGTH, 0.1, 100.0)] = Field(
        AUTO, description="finished inside radius of the corners; auto fits a stock dowel"
    )
    side: AutoSize = Field(AUTO, description="side of a lobe, corner to corner (not for round lobes)")
    lobe_diameter: AutoSize = Field(AUTO, description="diameter of a round lobe (twin-loop only)")
    measured_over: Annotated[str, choice("outside", "centreline", "inside")] = Field(
        "outside", description="where on the wire a side or diameter given here is measured"
    )
    standoff: AutoSize = Field(AUTO, description="wire centreline to the reflector's face")
    feed_gap: AutoSize = Field(AUTO, description="between the two terminals, centreline to centreline")
    lobe_angle: Annotated[float | Auto, auto_quantity(ANGLE, 30.0, 150.0)] = Field(
        AUTO, description="between the two sides at the corner opposite the feed"
    )
    corners: (
        Annotated[
            tuple[Corner, ...],
            BeforeValidator(_corners),
        ]
        | None
    ) = Field(
        None,
        description="family path only: centreline corners [x, y] (or [x, y, z], z from the standoff plane), "
        "from the pin terminal to the ground terminal, or round and back to the pin terminal",
    )
    ground_corner: Annotated[int, count(2, _MOST_CORNERS)] | None = Field(
        None, description="family path, closed: which corner (counted from 1) is the ground terminal"
    )
    neutral_axis_factor: Annotated[float, number(0.3, 0.7)] = Field(
        0.5, description="depth of the unstretched line from the bend's inside / wire diameter"
    )
    trim: Annotated[float, quantity(LENGTH, 0.0, 200.0)] = Field(
        5.0, description="length added at the far end, cut off after bending"
    )
    lap: AutoSize = Field(AUTO, description="length of a soldered lap joint")
    trial: Annotated[tuple[Trial, ...], BeforeValidator(_trials)] = Field(
        (), description="trial bends of this wire; they replace the stock table's springback"
    )
    trial_length: TrialLength | None = Field(
        None, description="a wire of known length, bent and measured; replaces neutral_axis_factor"
    )


class Calliper(_Table):
    """The connector in hand, measured; each replaces the stock table's usual figure."""

    flange: Size | None = Field(None, description="side of the square flange")
    flange_thickness: Size | None = Field(None, description="thickness of flange or shoulder")
    hole_pitch: Size | None = Field(None, description="between flange holes, centre to centre")
    hole_diameter: Size | None = Field(None, description="flange hole")
    rear_cutout: Size | None = Field(None, description="panel hole when mounted behind the sheet")
    front_cutout: Size | None = Field(None, description="panel hole when mounted in front of the sheet")
    nut: Size | None = Field(None, description="largest diameter of the nut on the radiator side")
    washer: Size | None = Field(None, description="diameter of the washer on the radiator side")
    pin_diameter: Size | None = Field(None, description="outside of the pin or solder cup")
    pin_bore: Annotated[float, quantity(LENGTH, 0.0, 20.0)] | None = Field(
        None, description='bore of the solder cup; "0 mm" for a solid pin'
    )
    pin_length: Size | None = Field(None, description="flange face to the pin's tip")
    dielectric_diameter: Size | None = Field(None, description="diameter of the insulator round the pin")
    dielectric_length: Annotated[float, quantity(LENGTH, 0.0, 50.0)] | None = Field(
        None, description="flange face to the insulator's end"
    )


class Feed(_Table):
    """How the radio reaches the two inner corners."""

    style: Annotated[str, choice("legs", "tube")] = Field(
        "legs", description="two legs from a panel connector, or a tube"
    )
    connector: Annotated[str, word("connector", "wavejig stock connectors")] = Field(
        "n-4hole", description="panel connector of the legs"
    )
    mounting: Annotated[str, choice("auto", "behind", "in-front")] = Field(
        "auto", description="side of the sheet the connector's flange or nut sits on, seen from the radiator"
    )
    leg: Annotated[WireSize | Auto, AUTO_WIRE] = Field(
        AUTO, description="wire of the legs; auto: the radiator's own wire"
    )
    leg_spacing: AutoSize = Field(
        AUTO, description="between the legs, centre to centre; auto: the feed gap, wider only if it must"
    )
    ground: Annotated[str, choice("auto", "sheet", "flange", "lug")] = Field(
        "auto", description="where the ground leg lands: a soldered hole, the flange, or a lug under a screw"
    )
    tube: Annotated[str, word("tube", "wavejig stock tubes")] = Field(
        "tube-3.6", description="semi-rigid tube"
    )
    calliper: Calliper = Field(Calliper(), description="the connector in hand, measured")


class Hole(_Table):
    """One more hole in the reflector's base."""

    x: Place = Field(description="from the base's centre")
    y: Place = Field(description="from the base's centre")
    diameter: Annotated[float, quantity(LENGTH, 0.5, 200.0)] = Field(description="hole diameter")
    purpose: Annotated[str, choice("mounting", "drain", "other")] = Field(
        "other", description="what it is for"
    )


class Own(_Table):
    """A metal dish, box or lid somebody already has; measured inside, on the radiator's side."""

    shape: Annotated[str, choice("round", "rectangular")] = Field("round", description="outline of the floor")
    diameter: Size | None = Field(
        None, description="round: across the floor, where floor and wall would meet sharply"
    )
    size: Annotated[tuple[Size, Size], BeforeValidator(_own_pair)] | None = Field(
        None, description="rectangular: floor along x and y, where floor and walls would meet sharply"
    )
    depth: Size | None = Field(None, description="floor to rim, straight up")
    slope: Annotated[float, quantity(ANGLE, 0.0, 60.0)] = Field(
        0.0, description="how far the wall leans outwards; 0 stands up"
    )
    radius: Annotated[float, quantity(LENGTH, 0.0, 30.0)] = Field(
        2.0, description="inside radius between floor and wall"
    )
    rim: Annotated[float, quantity(LENGTH, 0.0, 100.0)] = Field(
        0.0, description="width of a flat rim turned outwards at the top"
    )


class Reflector(_Table):
    """The sheet behind the radiator."""

    kind: Annotated[str, choice("auto", "own")] = Field(
        "auto", description="auto: cut and folded from sheet; own: a dish, box or lid as in [reflector.own]"
    )
    material: Annotated[str, word("sheet metal", "wavejig stock metals")] = Field(
        "brass", description="sheet metal, or laminate (copper-clad, stays flat)"
    )
    temper: Annotated[str, word("temper", "wavejig stock metals")] | None = Field(
        None, description="temper of the sheet; the metal's usual one when left out"
    )
    thickness: Annotated[SheetSize, SHEET] = Field(
        SheetSize(standard="thickness", number=0.8),
        description="sheet thickness or gauge",
    )
    base: Annotated[tuple[AutoSize, AutoSize], BeforeValidator(_pair)] = Field(
        (AUTO, AUTO), description="size along x and y, between outer mould lines"
    )
    lips: Annotated[str, choice("none", "two", "four")] = Field("none", description="folded edges")
    lip_edges: Annotated[str, choice("x", "y")] = Field(
        "y", description="with two lips: the edges across x or across y"
    )
    lip_height: AutoSize = Field(AUTO, description="along the lip's outer face, from the outer mould line")
    lip_angle: Annotated[float, quantity(ANGLE, 5.0, 90.0)] = Field(
        90.0, description="0 is flat, 90 stands up"
    )
    corners: Annotated[str, choice("relief", "mitre")] = Field(
        "relief", description="with four lips: open notches, or lips that meet along the corner"
    )
    inside_bend_radius: Annotated[float | Auto, auto_quantity(LENGTH, 0.0, 30.0)] = Field(
        AUTO, description="inside radius of the folds; auto: the folding tool's"
    )
    k_factor: Annotated[float | Auto, auto_number(0.2, 0.6)] = Field(
        AUTO, description="neutral-axis depth / thickness; auto: DIN 6935"
    )
    bend_deduction: Annotated[float | Auto, auto_quantity(LENGTH, 0.0, 60.0)] = Field(
        AUTO, description="the shop's own figure for these folds; wins over k_factor"
    )
    holes: Annotated[tuple[Hole, ...], BeforeValidator(_holes)] = Field((), description="extra holes")
    own: Own = Field(Own(), description="the dish, box or lid of kind own, measured")


class Mounting(_Table):
    """How it hangs outdoors."""

    polarisation: Annotated[str, choice("vertical", "horizontal")] = Field(
        "vertical", description="of the radio link; decides the up mark, drain edge and bracket holes"
    )
    pole: Annotated[
        float | Literal["none"], Reads(_pole, {"type": "string", "examples": ["none", "40 mm"]})
    ] = Field("none", description='pole diameter for the clamp holes, or "none"')
    drain: Annotated[str, choice("auto", "none")] = Field(
        "auto", description="drain holes along the low edge of a tray"
    )


class Spacer(_Table):
    """The printed block that holds the standoff."""

    style: Annotated[str, choice("block", "posts")] = Field(
        "block", description="block: removable while soldering; posts: stay in"
    )
    material: Annotated[str, word("printed plastic", "wavejig stock plastics")] = Field(
        "PETG", description="printed plastic"
    )
    sets: Annotated[
        int | Auto,
        Reads(_sets, {"anyOf": [{"type": "integer", "minimum": 1, "maximum": 500}, {"const": "auto"}]}),
    ] = Field(
        AUTO,
        description="removable blocks to print, in sets; auto: two, one to solder on while the other cools, or one "
        "for a single antenna. Posts stay in: there is a set for each antenna",
    )


def _sets(value: Any) -> Any:
    if isinstance(value, str) and value.strip().lower() == AUTO:
        return AUTO
    if isinstance(value, bool) or not isinstance(value, int) or not 1 <= value <= 500:
        raise refuse(value, 'a whole number from 1 to 500, or "auto"', "Write the number without quotes.")
    return value


class Printer(_Table):
    """The printer, and how its plastic fits."""

    bed: Annotated[tuple[Size, Size, Size], BeforeValidator(_triple)] = Field(
        (220.0, 220.0, 250.0), description="bed along x and y, and height"
    )
    nozzle: Annotated[float, quantity(LENGTH, 0.1, 2.0)] = Field(0.4, description="nozzle width")
    clearance: Annotated[float, quantity(LENGTH, 0.0, 2.0)] = Field(
        0.25, description="sliding fit, on each side"
    )
    hole_allowance: Annotated[float, quantity(LENGTH, 0.0, 1.0)] = Field(
        0.15, description="added to hole diameters, since printed holes come out small"
    )
    material: Annotated[str, word("printed plastic", "wavejig stock plastics")] = Field(
        "PETG", description="plastic of the fixture"
    )


class Fixture(_Table):
    """What the wire is bent on."""

    style: Annotated[str, choice("auto", "board", "stop-block")] = Field(
        "auto",
        description="board: all pins at once; stop-block: one corner at a time against stepped stops; "
        "auto: the board, or the stop block where the board would need more than four tiles",
    )


class Cutter(_Table):
    """The shop that cuts the sheet."""

    process: Annotated[str, word("cutting process", "wavejig stock cutters")] = Field(
        "fibre-laser", description="how the blank is cut"
    )
    kerf: Annotated[float | Auto, auto_quantity(LENGTH, 0.0, 3.0)] = Field(
        AUTO,
        description="width the cut takes away; auto: by process (a laser's beam, a router's bit, 0 for a shear)",
    )
    compensated: Annotated[str, choice("by-shop", "in-file")] = Field(
        "by-shop", description="who offsets the path by half the kerf; most shops do it themselves"
    )
    smallest_hole: AutoSize = Field(AUTO, description="smallest hole the shop cuts; auto: the thickness")
    stock_sheet: Annotated[tuple[Size, Size], BeforeValidator(_pair)] = Field(
        (600.0, 300.0), description="sheet the blanks are cut from, along x and y"
    )
    spacing: Annotated[float | Auto, auto_quantity(LENGTH, 0.1, 100.0)] = Field(
        AUTO, description="between blanks on a stock sheet; auto: by process, and no less than the thickness"
    )
    margin: Annotated[float | Auto, auto_quantity(LENGTH, 0.0, 200.0)] = Field(
        AUTO, description="edge of the stock sheet kept free; auto: by process"
    )
    grain: Annotated[str, choice("auto", "x", "y", "none")] = Field(
        "auto",
        description="rolling direction of the stock sheet, along its x or y: all blanks keep theirs; none: it does "
        "not matter, blanks may be turned; auto: along the longer side where the sheet is folded, else none",
    )


_Stock = Annotated[float | Auto, auto_quantity(LENGTH, 50.0, 2e6)]


class WireStock(_Table):
    """The wire as it is bought: the cut plan divides the batch over such lengths."""

    length: _Stock = Field(
        AUTO, description="of one spool or bar of the radiator's wire; auto: one spool is long enough for all"
    )
    leg_length: _Stock = Field(AUTO, description="the same for legs of another wire")
    tube_length: _Stock = Field(AUTO, description="the same for semi-rigid tube")
    cut_loss: Annotated[float, quantity(LENGTH, 0.0, 20.0)] = Field(
        0.0, description="lost at each cut: 0 with side cutters, the blade's width with a saw"
    )
    end_waste: Annotated[float, quantity(LENGTH, 0.0, 1000.0)] = Field(
        50.0, description="of each spool or bar: what cannot be held or straightened at its end"
    )


class Folding(_Table):
    """The shop that folds the sheet."""

    smallest_flange: AutoSize = Field(
        AUTO, description="shortest lip it can fold; auto: 4 x thickness + radius"
    )
    tooling_radius: AutoSize = Field(AUTO, description="inside radius its tool gives; auto: by metal")
    longest_bend: AutoSize = Field(AUTO, description="longest bend its tool makes; auto: 1000 mm")


class Tolerances(_Table):
    """What the process holds; defaults from ISO 2768-1 and common practice."""

    grade: Annotated[str, choice("f", "m", "c")] = Field(
        "m", description="ISO 2768-1 class for cut and folded sheet"
    )
    side: Annotated[float, quantity(LENGTH, 0.01, 10.0)] = Field(
        0.3, description="plus or minus, sides of the radiator"
    )
    bend_angle: Annotated[float, quantity(ANGLE, 0.1, 10.0)] = Field(
        1.0, description="plus or minus, bends of the wire"
    )
    standoff: Annotated[float, quantity(LENGTH, 0.01, 10.0)] = Field(
        0.3, description="plus or minus, standoff"
    )
    nest: Annotated[float | Auto, auto_quantity(LENGTH, 0.05, 10.0)] = Field(
        AUTO,
        description="half-width of the check nest's band beyond the wire; auto: it takes sides within their "
        "tolerance and no others",
    )
    distribution: Annotated[str, choice("normal", "uniform")] = Field(
        "normal",
        description="how articles spread within a tolerance: normal (95 % within it) or uniform",
    )
    feed_gap: Tolerance = Field(AUTO, description="plus or minus, feed gap; auto: the fixture's stack-up")
    wire: Tolerance = Field(AUTO, description="plus or minus, wire diameter; auto: 1 %")
    bend_radius: Tolerance = Field(AUTO, description="plus or minus, inside radius of bends; auto: 5 %")
    base: Tolerance = Field(AUTO, description="plus or minus, base of the reflector; auto: ISO 2768-1")
    lip_height: Tolerance = Field(AUTO, description="plus or minus, height of lips; auto: ISO 2768-1")
    lip_angle: Annotated[float | Auto, auto_quantity(ANGLE, 0.05, 10.0)] = Field(
        AUTO, description="plus or minus, angle of lips; auto: the folding machine's"
    )
    leg_spacing: Tolerance = Field(AUTO, description="plus or minus, between the legs; auto: ISO 2768-1")
    permittivity: Annotated[float, number(0.0, 0.5)] = Field(
        0.1, description="plus or minus, share of the permittivity of insulation left on the wire"
    )
    model: Annotated[float, number(0.0, 0.1)] = Field(
        0.01,
        description="standard error of the predicted frequency, as a share; [measured] replaces it",
    )


class Measured(_Table):
    """What the first article showed; `wavejig measured RECIPE SWEEP --write` fills it in."""

    frequency: Annotated[float, number(0.9, 1.1)] | None = Field(
        None, description="true frequency over predicted frequency, from a measured sweep"
    )
    frequency_error: Annotated[float, number(0.0, 0.1)] = Field(
        0.002, description="standard error of that, as a share"
    )
    sweep: Annotated[str, Reads(_sweep, {"type": "string"})] = Field(
        "", description="the sweep it came from, for the reader"
    )
    side: Size | None = Field(None, description="calliper reading, over what measured_over says")
    lobe_diameter: Size | None = Field(None, description="calliper reading, over what measured_over says")
    standoff: Size | None = Field(None, description="calliper reading, wire centreline to sheet")
    feed_gap: Size | None = Field(None, description="calliper reading, centreline to centreline")
    reading_error: Annotated[float, quantity(LENGTH, 0.01, 2.0)] = Field(
        0.1, description="plus or minus, calliper readings"
    )


class Station(_Table):
    """Where the antenna will work; for the cautions and the mounting on the build sheet only."""

    transmitter_power: Annotated[float, quantity(POWER, 1e-6, 1000.0)] | None = Field(
        None, description="largest power the transmitter puts out; the sheet assumes 100 mW when left out"
    )
    cable_loss: Annotated[float, quantity(LEVEL, 0.0, 40.0)] | None = Field(
        None, description="loss between transmitter and antenna; the sheet assumes 0 dB when left out"
    )
    wind_speed: Annotated[float, quantity(SPEED, 5.0, 100.0)] | None = Field(
        None, description="gust the mount must stand; the sheet assumes 40 m/s when left out"
    )


class Sheet(_Table):
    """The paper of the build sheet and drawings, and what the page tells besides."""

    paper: Annotated[str, choice("A4", "Letter")] = Field("A4", description="paper the sheets are printed on")
    projection: Annotated[str, choice("first", "third")] = Field(
        "first", description="where drawings put side views: first-angle (ISO) or third-angle projection"
    )
    expected_yield: Annotated[str, choice("no", "yes")] = Field(
        "no",
        description="yes: report.html tells how many of the batch will pass, as `wavejig yield` does; its solves are "
        "kept, but the first build takes them on",
    )


def _currency(value: Any) -> Any:
    if not isinstance(value, str) or len(value) > 12 or not value.isprintable():
        raise refuse(value, "a label of up to 12 characters", 'Write it like currency = "EUR".')
    return value


_Price = Annotated[float, number(0.0, 1e6)]


class Prices(_Table):
    """What things cost, each optional; the bill of materials multiplies and adds up, nothing more."""

    currency: Annotated[str, Reads(_currency, {"type": "string", "maxLength": 12})] = Field(
        "", description="a label; nothing is converted"
    )
    wire: _Price | None = Field(None, description="radiator wire, a metre")
    leg_wire: _Price | None = Field(None, description="wire of the legs if it is another, a metre")
    tube: _Price | None = Field(None, description="semi-rigid tube, a metre")
    sheet: _Price | None = Field(None, description="one stock sheet")
    blank: _Price | None = Field(None, description="cutting and folding one blank")
    connector: _Price | None = Field(None, description="one panel connector")
    plug: _Price | None = Field(None, description="the mating plug to solder with")
    screw: _Price | None = Field(None, description="one screw, of any size on the bill")
    nut: _Price | None = Field(None, description="one nut")
    washer: _Price | None = Field(None, description="one washer")
    lug: _Price | None = Field(None, description="one solder lug")
    pole_clamp: _Price | None = Field(None, description="one pole clamp")
    dowel: _Price | None = Field(None, description="one dowel pin")
    plastic: _Price | None = Field(None, description="printed plastic, a kilogram")


class Recipe(_Table):
    """A whole recipe."""

    name: Name = Field(description="names the pack's folder and is engraved on its parts")
    quantity: Annotated[int, count(1, 10_000)] = Field(1, description="how many antennas")
    target: Target
    radiator: Radiator
    feed: Feed = Field(Feed())
    reflector: Reflector = Field(Reflector())
    mounting: Mounting = Field(Mounting())
    spacer: Spacer = Field(Spacer())
    printer: Printer = Field(Printer())
    fixture: Fixture = Field(Fixture())
    cutter: Cutter = Field(Cutter())
    folding: Folding = Field(Folding())
    tolerances: Tolerances = Field(Tolerances())
    measured: Measured = Field(Measured())
    station: Station = Field(Station())
    sheet: Sheet = Field(Sheet())
    wire_stock: WireStock = Field(WireStock())
    prices: Prices = Field(Prices())
