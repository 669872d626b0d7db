"""Reads model files: what cannot be read is named by file, line and key, before anything is computed from it."""

from __future__ import annotations

import json
import math
import re
from pathlib import Path
from typing import Any

import numpy as np

from wavejig.field.errors import ModelError
from wavejig.field.model import Insulation, Model, Point, Port, Wire
from wavejig.recipe.errors import show
from wavejig.recipe.plainfile import read_plain
from wavejig.recipe.units import finite

MOST_PIECES = 20_000  # wires, and triangles: more are not solved either
# 20,000 wires, every digit written out, are 3.5 MB; an object or list takes a hundred times its brackets
MOST_BYTES = 4_000_000
_MOST_BRACKETS = 10 * MOST_PIECES


def load(path: Path) -> Model:
    """The model in `path`. Raises ModelError, its code "file"."""
    text = _text(path)
    try:
        data = _DECODER.decode(text)
    except RecursionError as err:
        raise ModelError("file", f"{path}: not a readable JSON file (lists in lists, too deep)") from err
    except ValueError as err:
        line = f":{err.lineno}" if isinstance(err, json.JSONDecodeError) else ""
        raise ModelError("file", f"{path}{line}: not a readable JSON file ({err})") from err
    try:
        return from_data(data)
    except ModelError as err:
        if err.code != "file":
            raise
        told = str(err).removeprefix("file: ")
        raise ModelError("file", f"{path}:{line_of(text, told.split(':')[0])}: {told}") from err


def _text(path: Path) -> str:
    try:
        raw = read_plain(path, MOST_BYTES)
        text = raw.decode("utf-8-sig")
    except (OSError, UnicodeDecodeError) as err:
        raise ModelError("file", f"{path}: not a readable JSON file ({err})") from err
    if len(raw) > MOST_BYTES or text.count("[") + text.count("{") > _MOST_BRACKETS:
        raise ModelError(
            "file",
            f"{path}: too large: at most {MOST_BYTES // 1_000_000} MB, {MOST_PIECES} wires and {MOST_PIECES} triangles",
        )
    return text


def _once(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    """An object whose keys differ: of two, readers would keep one or the other."""
    out = dict(pairs)
    if len(out) != len(pairs):
        keys = [k for k, _ in pairs]
        raise ValueError(f"the key {show(next(k for k in keys if keys.count(k) > 1))} stands twice")
    return out


def line_of(text: str, where: str) -> int:
    """Line of a value like "wires[3].start" in a JSON text that was read; of the last part that is there."""
    at = _start(text, 0)
    for key, index in re.findall(r"(\w+)|\[(\d+)\]", where):
        found = _member(text, at, key) if key else _element(text, at, int(index))
        if found is None:
            break
        at = found
    return text.count("\n", 0, at) + 1


_BLANK = re.compile(r"[ \t\r\n,:]*")


def _whole(digits: str) -> float | int:
    return int(digits) if len(digits) < 400 else math.inf  # which is refused where it stands


_DECODER = json.JSONDecoder(object_pairs_hook=_once, parse_int=_whole)


def _start(text: str, at: int) -> int:
    found = _BLANK.match(text, at)
    return found.end() if found else at


def _member(text: str, at: int, key: str) -> int | None:
    if text[at : at + 1] != "{":
        return None
    at = _start(text, at + 1)
    while text[at : at + 1] == '"':
        name, at = _DECODER.raw_decode(text, at)
        at = _start(text, at)
        if name == key:
            return at
        at = _start(text, _DECODER.raw_decode(text, at)[1])
    return None


def _element(text: str, at: int, index: int) -> int | None:
    if text[at : at + 1] != "[":
        return None
    at = _start(text, at + 1)
    while text[at : at + 1] not in ("]", ""):
        if index == 0:
            return at
        index -= 1
        at = _start(text, _DECODER.raw_decode(text, at)[1])
    return None


def from_data(data: object) -> Model:
    """A model from the mapping a model file holds. Raises ModelError, its code "file"."""
    top = _mapping(data, "the file", {"wires", "triangles", "ports", "plane", "sheet_conductivity"})
    wires = tuple(_wire(w, f"wires[{i}]") for i, w in enumerate(_pieces(top, "wires")))
    ports = tuple(_port(p, f"ports[{i}]") for i, p in enumerate(_pieces(top, "ports")))
    triangles = [
        [_point(corner, f"triangles[{i}]") for corner in _list(t, f"triangles[{i}]", 3)]
        for i, t in enumerate(_pieces(top, "triangles"))
    ]
    plane = top.get("plane")
    if plane is not None and not isinstance(plane, str):
        raise ModelError("file", f'plane: need null or "z=0", got {show(plane)}')
    sheet = top.get("sheet_conductivity")
    return Model(
        wires=wires,
        triangles=np.array(triangles) if triangles else np.zeros((0, 3, 3)),
        ports=ports,
        plane=None if plane is None else plane[:40],
        sheet_conductivity_s_per_m=None if sheet is None else _number(sheet, "sheet_conductivity"),
    )


def _pieces(top: dict[str, Any], key: str) -> list[Any]:
    found = _list(top.get(key, []), key)
    if len(found) > MOST_PIECES:
        raise ModelError("file", f"{key}: {len(found)} of them, at most {MOST_PIECES} can be solved")
    return found


def _mapping(data: object, where: str, known: set[str]) -> dict[str, Any]:
    if not isinstance(data, dict):
        raise ModelError("file", f"{where}: got {type(data).__name__}, need an object with {sorted(known)}")
    for key in data:
        if key not in known:
            raise ModelError(
                "file", f"{where}: unknown key {show(key)}; known are {', '.join(sorted(known))}"
            )
    return data


def _list(data: object, where: str, length: int | None = None) -> list[Any]:
    if not isinstance(data, list) or (length is not None and len(data) != length):
        size = "a list" if length is None else f"a list of {length}"
        raise ModelError("file", f"{where}: need {size}, got {show(data)}")
    return data


def _number(data: object, where: str) -> float:
    if isinstance(data, bool) or not isinstance(data, int | float) or not finite(data):
        raise ModelError("file", f"{where}: need a finite number, got {show(data)}")
    return float(data)


def _point(data: object, where: str) -> Point:
    x, y, z = (_number(v, where) for v in _list(data, where, 3))
    return (x, y, z)


def _need(row: dict[str, Any], key: str, where: str) -> Any:
    if key not in row:
        raise ModelError("file", f"{where}: {key!r} is missing")
    return row[key]


def _wire(data: object, where: str) -> Wire:
    row = _mapping(data, where, {"start", "end", "radius", "conductivity", "insulation"})
    sleeve = row.get("insulation")
    insulation = None
    if sleeve is not None:
        inner = _mapping(sleeve, f"{where}.insulation", {"outer_radius", "permittivity"})
        insulation = Insulation(
            outer_radius_m=_number(_need(inner, "outer_radius", where), f"{where}.insulation.outer_radius"),
            permittivity=_number(_need(inner, "permittivity", where), f"{where}.insulation.permittivity"),
        )
    metal = row.get("conductivity")
    return Wire(
        start=_point(_need(row, "start", where), f"{where}.start"),
        end=_point(_need(row, "end", where), f"{where}.end"),
        radius_m=_number(_need(row, "radius", where), f"{where}.radius"),
        conductivity_s_per_m=None if metal is None else _number(metal, f"{where}.conductivity"),
        insulation=insulation,
    )


def _port(data: object, where: str) -> Port:
    row = _mapping(data, where, {"wire", "end", "impedance"})
    for key in ("wire", "end"):
        value = _need(row, key, where)
        if isinstance(value, bool) or not isinstance(value, int) or abs(value) > MOST_PIECES:
            raise ModelError("file", f"{where}.{key}: need a whole number, got {show(value)}")
    return Port(
        wire=row["wire"],
        end=row["end"],
        impedance_ohm=_number(row.get("impedance", 50.0), f"{where}.impedance"),
    )
