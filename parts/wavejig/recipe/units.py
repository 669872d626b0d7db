"""Quantities as strings with units: "2.44 GHz", "31 mm", "1 1/2 in", "13 AWG", "20 gauge".

Units are converted by pint, from the few definitions below (its own registry takes longer to load
than a whole `wavejig check`). Results are plain floats in Hz, mm, deg, ohm, dB, W; gauges stay
gauges, since their tables live in `stock`.
"""

from __future__ import annotations

import functools
import math
import re
from dataclasses import dataclass
from typing import TYPE_CHECKING

from wavejig.recipe.errors import nearest, show

if TYPE_CHECKING:
    import pint

# Exact by definition: the inch is 25.4 mm, the mile 63360 of them (international yard and pound agreement,
# 1959); the nautical mile is 1852 m; SI prefixes.
_DEFINITIONS = (
    "metre = [length] = m",
    "second = [time] = s",
    "radian = [] = rad",
    "ohm = [resistance]",
    "watt = [power] = W",
    "decibel = [level] = dB",
    "hertz = 1 / second = Hz",
    "kilohertz = 1e3 * hertz = kHz",
    "megahertz = 1e6 * hertz = MHz",
    "gigahertz = 1e9 * hertz = GHz",
    "millimetre = 1e-3 * metre = mm",
    "micrometre = 1e-6 * metre = um",
    "centimetre = 1e-2 * metre = cm",
    "inch = 25.4e-3 * metre",
    "degree = 0.017453292519943295 * radian = deg",
    "milliwatt = 1e-3 * watt = mW",
    "metre_per_second = metre / second",
    "kilometre_per_hour = metre / second / 3.6",
    "mile_per_hour = 0.44704 * metre / second",
    "knot = 1852 / 3600 * metre / second",
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Kind:
    """A kind of quantity: the unit it is kept in, the spellings a recipe may use, an example."""

    name: str
    base: str
    spellings: tuple[tuple[str, str], ...]  # as written in a recipe -> pint name
    example: str

    def allowed(self) -> str:
        """The spellings, for a message."""
        return ", ".join(dict.fromkeys(s for s, _ in self.spellings))


LENGTH = Kind(
    name="length",
    base="millimetre",
    spellings=(
        ("mm", "millimetre"),
        ("cm", "centimetre"),
        ("m", "metre"),
        ("in", "inch"),
        ('"', "inch"),
        ("um", "micrometre"),
        ("µm", "micrometre"),
    ),
    example="31 mm",
)
FREQUENCY = Kind(
    name="frequency",
    base="hertz",
    spellings=(("Hz", "hertz"), ("kHz", "kilohertz"), ("MHz", "megahertz"), ("GHz", "gigahertz")),
    example="2.44 GHz",
)
ANGLE = Kind(
    name="angle",
    base="degree",
    spellings=(("deg", "degree"), ("°", "degree"), ("rad", "radian")),
    example="90 deg",
)
RESISTANCE = Kind(name="resistance", base="ohm", spellings=(("ohm", "ohm"), ("Ω", "ohm")), example="50 ohm")
LEVEL = Kind(name="level", base="decibel", spellings=(("dB", "decibel"),), example="12 dB")
POWER = Kind(name="power", base="watt", spellings=(("W", "watt"), ("mW", "milliwatt")), example="100 mW")
SPEED = Kind(
    name="speed",
    base="metre_per_second",
    spellings=(
        ("m/s", "metre_per_second"),
        ("km/h", "kilometre_per_hour"),
        ("mph", "mile_per_hour"),
        ("kn", "knot"),
    ),
    example="40 m/s",
)

_NUMBER = re.compile(
    r"(?P<sign>[+-]?)\s*(?:(?P<whole>\d+)\s+(?P<num>\d+)/(?P<den>\d+)|(?P<fnum>\d+)/(?P<fden>\d+)"
    r"|(?P<dec>(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?))\s*(?P<unit>.*)",
    re.DOTALL,
)


class UnitError(ValueError):
    """A quantity that cannot be read: carries what is allowed and how to write it."""

    def __init__(self, allowed: str, fix: str) -> None:
        self.allowed = allowed
        self.fix = fix
        super().__init__(f"allowed: {allowed}. {fix}")


def parse(text: object, kind: Kind) -> float:
    """The quantity `text` in the kind's base unit.

    Raises UnitError for a bare number, a missing, unknown or foreign unit, or anything not finite.
    """
    value, unit = _split(text, kind.example, f"a {kind.name} with its unit ({kind.allowed()})")
    spellings = dict(kind.spellings)
    if unit not in spellings:
        near = nearest(unit, spellings)
        fix = f'Write "{_plain(value)} {near}"?' if near else f'Write it like "{kind.example}".'
        raise UnitError(f"a {kind.name} in {kind.allowed()}", fix)
    result = float(_registry().Quantity(value, spellings[unit]).to(kind.base).magnitude)
    if not math.isfinite(result):
        raise UnitError(f"a finite {kind.name}", f'Write it like "{kind.example}".')
    return result


@dataclass(frozen=True, slots=True, kw_only=True)
class WireSize:
    """A wire as the recipe names it: `standard` is diameter (mm), AWG, SWG or mm2."""

    standard: str
    number: float

    def __str__(self) -> str:
        unit = {"diameter": "mm", "mm2": "mm²"}.get(self.standard, self.standard)
        return f"{_plain(self.number)} {unit}"


@dataclass(frozen=True, slots=True, kw_only=True)
class SheetSize:
    """A sheet as the recipe names it: `standard` is thickness (mm) or gauge."""

    standard: str
    number: float

    def __str__(self) -> str:
        return f"{_plain(self.number)} {'mm' if self.standard == 'thickness' else 'gauge'}"


def parse_wire(text: object) -> WireSize:
    """A wire size: "1.8 mm", "1/16 in", "13 AWG", "16 SWG", "2.5 mm2". Raises UnitError."""
    allowed = 'a diameter ("1.8 mm", "1/16 in"), a gauge ("13 AWG", "16 SWG") or a cross-section ("2.5 mm2")'
    swapped = isinstance(text, str) and re.fullmatch(r"\s*(AWG|SWG)\s*(-?\d+)\s*", text, re.IGNORECASE)
    if swapped:
        text = f"{swapped[2]} {swapped[1]}"
    value, unit = _split(text, "1.8 mm", allowed)
    upper = unit.upper()
    if upper in ("AWG", "SWG"):
        if value != int(value):
            raise UnitError("whole gauge numbers", f'Write "{round(value)} {upper}", or the diameter in mm.')
        return WireSize(standard=upper, number=float(value))
    if unit in ("mm2", "mm²", "mm^2"):
        return WireSize(standard="mm2", number=value)
    if unit in dict(LENGTH.spellings):
        return WireSize(standard="diameter", number=parse(text, LENGTH))
    near = nearest(unit, ["mm", "in", "cm", "AWG", "SWG", "mm2"])
    raise UnitError(allowed, f'Write "{_plain(value)} {near}"?' if near else 'Write it like "1.8 mm".')


def parse_sheet(text: object) -> SheetSize:
    """A sheet thickness: "0.8 mm", "1/32 in", "20 gauge" (or "20 ga"). Raises UnitError."""
    allowed = 'a thickness ("0.8 mm", "1/32 in") or a gauge ("20 gauge")'
    value, unit = _split(text, "0.8 mm", allowed)
    if unit.lower() in ("gauge", "ga"):
        if value != int(value):
            raise UnitError("whole gauge numbers", f'Write "{round(value)} gauge", or the thickness in mm.')
        return SheetSize(standard="gauge", number=float(value))
    if unit in dict(LENGTH.spellings):
        return SheetSize(standard="thickness", number=parse(text, LENGTH))
    near = nearest(unit, ["mm", "in", "cm", "gauge"])
    raise UnitError(allowed, f'Write "{_plain(value)} {near}"?' if near else 'Write it like "0.8 mm".')


def _split(text: object, example: str, allowed: str) -> tuple[float, str]:
    if isinstance(text, bool) or not isinstance(text, str | int | float):
        raise UnitError(allowed, f'Write it in quotes, like "{example}".')
    if isinstance(text, int | float):
        if not math.isfinite(text):
            raise UnitError(allowed, f'Write a number with its unit, like "{example}".')
        unit = example.split()[-1]
        raise UnitError(
            f"{allowed}; a bare number has no unit",
            f'Write "{_plain(float(text))} {unit}" if {unit} is what you mean.',
        )
    match = _NUMBER.fullmatch(text.strip())
    if not match:
        if re.fullmatch(r"\s*[+-]?\d+,\d+.*", text):
            raise UnitError(allowed, f'Use a decimal point: "{text.strip().replace(",", ".", 1)}".')
        raise UnitError(allowed, f'Write a number and its unit, like "{example}".')
    unit = match["unit"].strip()
    if unit.startswith(","):
        raise UnitError(allowed, f'Use a decimal point: "{text.strip().replace(",", ".", 1)}".')
    if len(unit) > 12 or not unit.isprintable():
        raise UnitError(allowed, f'Write it like "{example}"; {show(unit)} is no unit.')
    if match["dec"]:
        value = float(match["dec"])
    else:
        den = float(match["den"] or match["fden"])
        if den == 0:
            raise UnitError(allowed, "The fraction divides by zero.")
        value = float(match["whole"] or 0) + float(match["num"] or match["fnum"]) / den
    if match["sign"] == "-":
        value = -value
    if not math.isfinite(value):
        raise UnitError(allowed, f'Write a finite number, like "{example}".')
    if not unit:
        raise UnitError(
            f"{allowed}; a bare number has no unit",
            f'Write "{text.strip()} {example.split()[-1]}" if {example.split()[-1]} is what you mean.',
        )
    return value, unit


def _plain(value: float) -> str:
    return f"{value:.10g}"


@functools.cache
def _registry() -> pint.UnitRegistry[float]:
    import pint  # loaded at the first quantity, not for --help

    return pint.UnitRegistry(list(_DEFINITIONS), on_redefinition="raise")
