"""Quantities as strings with units: "2.44 GHz", "31 mm", "1 1/2 in", "13 AWG", "20 gauge".

Two dozen spellings are a table of factors here: a units library takes as long to load as half of the rest
of `wavejig check`. Results are plain floats in Hz, mm, deg, ohm, dB, W, m/s; gauges stay gauges, since their
tables live in `stock`.

Factors are exact by definition: the inch is 25.4 mm, the mile 63360 of them (international yard and pound
agreement, 1959); the nautical mile is 1852 m; SI prefixes.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from wavejig.recipe.errors import nearest, show


@dataclass(frozen=True, slots=True, kw_only=True)
class Kind:
    """A kind of quantity: the spellings a recipe may use, the first of them the unit it is kept in; an example."""

    name: str
    spellings: tuple[tuple[str, float], ...]  # as written in a recipe, and how many of the unit it is kept in
    example: str

    def allowed(self) -> str:
        """The spellings, for a message."""
        return ", ".join(dict.fromkeys(s for s, _ in self.spellings))


LENGTH = Kind(
    name="length",
    spellings=(
        ("mm", 1.0),
        ("cm", 10.0),
        ("m", 1000.0),
        ("in", 25.4),
        ('"', 25.4),
        ("um", 1e-3),
        ("µm", 1e-3),
    ),
    example="31 mm",
)
FREQUENCY = Kind(
    name="frequency",
    spellings=(("Hz", 1.0), ("kHz", 1e3), ("MHz", 1e6), ("GHz", 1e9)),
    example="2.44 GHz",
)
ANGLE = Kind(name="angle", spellings=(("deg", 1.0), ("°", 1.0), ("rad", math.degrees(1.0))), example="90 deg")
RESISTANCE = Kind(name="resistance", spellings=(("ohm", 1.0), ("Ω", 1.0)), example="50 ohm")
LEVEL = Kind(name="level", spellings=(("dB", 1.0),), example="12 dB")
POWER = Kind(name="power", spellings=(("W", 1.0), ("mW", 1e-3)), example="100 mW")
SPEED = Kind(
    name="speed",
    spellings=(("m/s", 1.0), ("km/h", 1.0 / 3.6), ("mph", 0.44704), ("kn", 1852.0 / 3600.0)),
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
    result = value * spellings[unit]
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
        if not finite(text):
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


def finite(value: float) -> bool:
    """Whether a number is one that arithmetic can be done with: not infinite, none of hundreds of digits."""
    try:
        return math.isfinite(value)
    except OverflowError:  # an integer beyond every float
        return False


def _plain(value: float) -> str:
    return f"{value:.10g}"
