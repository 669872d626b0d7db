"""The field types of the recipe models: quantities within stated limits, choices, names.

Each type reads the recipe's text, refuses with what is allowed and how to mend it, and describes
itself to the JSON Schema so that an editor can help while the person types.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Annotated, Any, Final

from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from wavejig.recipe import units
from wavejig.recipe.errors import show, spelling_fix
from wavejig.recipe.units import Kind, SheetSize, UnitError, WireSize

AUTO: Final = "auto"


class Reads:
    """Annotates a field with the function that reads it and the JSON Schema that describes it."""

    def __init__(self, read: Callable[[Any], Any], schema: dict[str, Any]) -> None:
        self.read = read
        self.schema = schema

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        return core_schema.no_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(
        self, schema: CoreSchema, handler: GetJsonSchemaHandler
    ) -> dict[str, Any]:
        return dict(self.schema)


def refuse(read: object, allowed: str, fix: str) -> PydanticCustomError:
    """The error a field raises; the reader turns it into a Problem with its line."""
    return PydanticCustomError(
        "recipe", "{allowed}. {fix}", {"read": show(read), "allowed": allowed, "fix": fix}
    )


def _bounded(kind: Kind, low: float, high: float) -> Callable[[Any], float]:
    def read(value: Any) -> float:
        try:
            number = units.parse(value, kind)
        except UnitError as err:
            raise refuse(value, err.allowed, err.fix) from err
        if not low <= number <= high:
            unit = kind.spellings[0][0]
            raise refuse(
                value,
                f"{low:g} to {high:g} {unit}",
                f"That is {number:g} {unit}; check the unit and the number.",
            )
        return number

    return read


def _auto_or(read: Callable[[Any], Any]) -> Callable[[Any], Any]:
    def either(value: Any) -> Any:
        if isinstance(value, str) and value.strip().lower() == AUTO:
            return AUTO
        try:
            return read(value)
        except PydanticCustomError as err:
            context = dict(err.context or {})
            context["allowed"] = f'{context["allowed"]}, or "auto"'
            raise PydanticCustomError("recipe", "{allowed}. {fix}", context) from err

    return either


def _schema(kind: Kind, low: float, high: float, *, auto: bool) -> dict[str, Any]:
    unit = kind.spellings[0][0]
    spelt = "|".join(re.escape(s) for s, _ in kind.spellings)
    number = r"[+-]?\s*(\d+\s+\d+/\d+|\d+/\d+|\d+\.?\d*([eE][+-]?\d+)?|\.\d+)"
    pattern = rf"^\s*({number}\s*({spelt}){'|[Aa][Uu][Tt][Oo]' if auto else ''})\s*$"
    return {
        "type": "string",
        "pattern": pattern,
        "description": f"{kind.name} with unit, {low:g} to {high:g} {unit}{', or auto' if auto else ''}",
        "examples": [kind.example, *(["auto"] if auto else [])],
    }


def quantity(kind: Kind, low: float, high: float) -> Reads:
    """A float in the kind's base unit, read from a string with a unit; low and high are inclusive."""
    return Reads(_bounded(kind, low, high), _schema(kind, low, high, auto=False))


def auto_quantity(kind: Kind, low: float, high: float) -> Reads:
    """Like `quantity`, or the word "auto"."""
    return Reads(_auto_or(_bounded(kind, low, high)), _schema(kind, low, high, auto=True))


def number(low: float, high: float) -> Reads:
    """A plain number without a unit (a factor, a permittivity) within limits."""

    def read(value: Any) -> float:
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise refuse(
                value,
                f"a plain number from {low:g} to {high:g}",
                "Write it without quotes and without a unit.",
            )
        if not units.finite(value) or not low <= value <= high:
            raise refuse(value, f"a plain number from {low:g} to {high:g}", "Check the number.")
        return float(value)

    return Reads(read, {"type": "number", "minimum": low, "maximum": high})


def auto_number(low: float, high: float) -> Reads:
    """Like `number`, or the word "auto"."""

    def read(value: Any) -> Any:
        if isinstance(value, str) and value.strip().lower() == AUTO:
            return AUTO
        allowed = f'a plain number from {low:g} to {high:g}, or "auto"'
        if isinstance(value, bool) or not isinstance(value, int | float):
            raise refuse(value, allowed, "Write it without quotes and without a unit.")
        if not units.finite(value) or not low <= value <= high:
            raise refuse(value, allowed, "Check the number.")
        return float(value)

    schema = {"anyOf": [{"type": "number", "minimum": low, "maximum": high}, {"const": "auto"}]}
    return Reads(read, schema)


def count(low: int, high: int) -> Reads:
    """A whole number within limits."""

    def read(value: Any) -> int:
        if isinstance(value, bool) or not isinstance(value, int) or not low <= value <= high:
            raise refuse(value, f"a whole number from {low} to {high}", "Write it without quotes.")
        return value

    return Reads(read, {"type": "integer", "minimum": low, "maximum": high})


def choice(*options: str) -> Reads:
    """One word out of a list."""

    def read(value: Any) -> str:
        allowed = ", ".join(f'"{o}"' for o in options)
        if not isinstance(value, str):
            raise refuse(value, f"one of {allowed}", "Write it in quotes.")
        if value not in options:
            raise refuse(
                value, f"one of {allowed}", spelling_fix(value, options, "Choose one from the list.")
            )
        return value

    return Reads(read, {"enum": list(options)})


def word(what: str, see: str) -> Reads:
    """A name that is looked up later in a stock table (`see` says which)."""

    def read(value: Any) -> str:
        if not isinstance(value, str) or not re.fullmatch(r"[A-Za-z0-9][A-Za-z0-9 ._+-]{0,39}", value):
            raise refuse(value, f"{what}: a name from `{see}`", f"Run `{see}` and copy one.")
        return value

    return Reads(read, {"type": "string", "description": f"{what}; listed by `{see}`"})


# A folder and file name on every common system: printable ASCII without separators, no leading dot,
# none of the device names that one desktop system reserves (common practice, no source).
_NAME = re.compile(r"[A-Za-z0-9](?:[A-Za-z0-9._-]{0,46}[A-Za-z0-9_-])?")
RESERVED = {"con", "prn", "aux", "nul", *(f"{d}{n}" for d in ("com", "lpt") for n in range(1, 10))}


def _read_name(value: Any) -> str:
    allowed = "1 to 48 letters, digits, '-', '_' or '.', beginning with a letter or digit, not ending in '.'"
    if not isinstance(value, str):
        raise refuse(value, allowed, 'Write it in quotes, like "saltmarsh-2g4".')
    if not _NAME.fullmatch(value):
        plain = re.sub(r"[^A-Za-z0-9_-]+", "-", value).strip("-._")[:48].strip("-._")
        fix = f'"{plain}" would do.' if plain else 'Write something like "saltmarsh-2g4".'
        raise refuse(value, f"{allowed}; it becomes the pack's folder", fix)
    if value.split(".")[0].lower() in RESERVED:
        raise refuse(value, allowed, "Some systems keep this name for a device; choose another.")
    return value


Name = Annotated[
    str,
    Reads(_read_name, {"type": "string", "pattern": f"^{_NAME.pattern}$", "examples": ["saltmarsh-2g4"]}),
]


def _read_wire(value: Any) -> WireSize:
    try:
        size = units.parse_wire(value)
    except UnitError as err:
        raise refuse(value, err.allowed, err.fix) from err
    limits = {
        "diameter": (0.3, 8.0, "mm"),
        "mm2": (0.1, 50.0, "mm²"),
        "AWG": (0, 28, "AWG"),
        "SWG": (1, 30, "SWG"),
    }
    low, high, unit = limits[size.standard]
    if not low <= size.number <= high:
        raise refuse(value, f"{low:g} to {high:g} {unit}", "Check the unit and the number.")
    return size


def _read_sheet(value: Any) -> SheetSize:
    try:
        size = units.parse_sheet(value)
    except UnitError as err:
        raise refuse(value, err.allowed, err.fix) from err
    low, high, unit = (0.1, 6.0, "mm") if size.standard == "thickness" else (4, 36, "gauge")
    if not low <= size.number <= high:
        raise refuse(value, f"{low:g} to {high:g} {unit}", "Check the unit and the number.")
    return size


def _auto_wire(value: Any) -> Any:
    return AUTO if isinstance(value, str) and value.strip().lower() == AUTO else _read_wire(value)


WIRE = Reads(_read_wire, {"type": "string", "examples": ["1.8 mm", "13 AWG", "16 SWG", "2.5 mm2"]})
AUTO_WIRE = Reads(_auto_wire, {"type": "string", "examples": ["auto", "1.5 mm"]})
SHEET = Reads(_read_sheet, {"type": "string", "examples": ["0.8 mm", "1/32 in", "20 gauge"]})
