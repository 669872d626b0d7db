"""The electromagnetic model: straight wires, triangles of sheet, ports; in metres, ohms and siemens a metre.

Each wire is one segment of the solution, used as given. Wires whose ends coincide are joined; a wire end
on a triangle's corner is attached to the sheet there; a port sits at one end of a wire, between that wire
and whatever it joins there. An infinite ground at z = 0 is an option. Lossless where no conductivity is
given.
"""

from __future__ import annotations

import json
import math
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from wavejig.field.errors import ModelError

if TYPE_CHECKING:
    from wavejig.design.model import Design

Array = NDArray[np.float64]
Point = tuple[float, float, float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Insulation:
    """A sleeve round a wire: its outer radius and relative permittivity (lossless)."""

    outer_radius_m: float
    permittivity: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Wire:
    """One straight round segment; conductivity None is a perfect conductor."""

    start: Point
    end: Point
    radius_m: float
    conductivity_s_per_m: float | None = None
    insulation: Insulation | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Port:
    """A voltage gap at one end (0 start, 1 end) of a wire; its current is positive into the wire there."""

    wire: int
    end: int
    impedance_ohm: float = 50.0


def _no_triangles() -> Array:
    return np.zeros((0, 3, 3))


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Model:
    """Wires, triangles (n, 3, 3) in metres, ports, and plane None or "z=0" (an infinite perfect ground)."""

    wires: tuple[Wire, ...] = ()
    triangles: Array = field(default_factory=_no_triangles)
    ports: tuple[Port, ...] = ()
    plane: str | None = None
    sheet_conductivity_s_per_m: float | None = None

    def __post_init__(self) -> None:
        triangles = np.array(self.triangles, dtype=np.float64)
        if triangles.size == 0:
            triangles = _no_triangles()
        if triangles.ndim != 3 or triangles.shape[1:] != (3, 3):
            raise ModelError(
                "triangles", f"got an array of shape {triangles.shape}, need (n, 3, 3): corners by x, y, z"
            )
        triangles.setflags(write=False)
        object.__setattr__(self, "triangles", triangles)
        object.__setattr__(self, "wires", tuple(self.wires))
        object.__setattr__(self, "ports", tuple(self.ports))

    @classmethod
    def from_design(cls, design: Design) -> Model:
        """The model of an antenna as made: the same centreline and the same tray as the parts."""
        from wavejig.field.from_design import model_from_design

        return model_from_design(design)

    @classmethod
    def load(cls, path: Path | str) -> Model:
        """Read a model file. Raises ModelError naming the key that cannot be read."""
        try:
            data = json.loads(Path(path).read_text(encoding="utf-8"))
        except (OSError, UnicodeDecodeError, json.JSONDecodeError) as err:
            raise ModelError("file", f"{path}: not a readable JSON file ({err})") from err
        return cls.from_dict(data)

    @classmethod
    def from_dict(cls, data: object) -> Model:
        """A model from the mapping a model file holds."""
        top = _mapping(data, "the file", {"wires", "triangles", "ports", "plane", "sheet_conductivity"})
        wires = tuple(_wire(w, f"wires[{i}]") for i, w in enumerate(_list(top.get("wires", []), "wires")))
        ports = tuple(_port(p, f"ports[{i}]") for i, p in enumerate(_list(top.get("ports", []), "ports")))
        triangles = [
            [_point(corner, f"triangles[{i}]") for corner in _list(t, f"triangles[{i}]", 3)]
            for i, t in enumerate(_list(top.get("triangles", []), "triangles"))
        ]
        plane = top.get("plane")
        sheet = top.get("sheet_conductivity")
        return cls(
            wires=wires,
            triangles=np.array(triangles) if triangles else _no_triangles(),
            ports=ports,
            plane=None if plane is None else str(plane),
            sheet_conductivity_s_per_m=None if sheet is None else _number(sheet, "sheet_conductivity"),
        )

    def to_dict(self) -> dict[str, Any]:
        """The mapping a model file holds; optional keys only where they say something."""
        wires = []
        for w in self.wires:
            row: dict[str, Any] = {"start": list(w.start), "end": list(w.end), "radius": w.radius_m}
            if w.conductivity_s_per_m is not None:
                row["conductivity"] = w.conductivity_s_per_m
            if w.insulation is not None:
                row["insulation"] = {
                    "outer_radius": w.insulation.outer_radius_m,
                    "permittivity": w.insulation.permittivity,
                }
            wires.append(row)
        data: dict[str, Any] = {
            "wires": wires,
            "triangles": self.triangles.tolist(),
            "ports": [{"wire": p.wire, "end": p.end, "impedance": p.impedance_ohm} for p in self.ports],
            "plane": self.plane,
        }
        if self.sheet_conductivity_s_per_m is not None:
            data["sheet_conductivity"] = self.sheet_conductivity_s_per_m
        return data

    def save(self, path: Path | str) -> None:
        """Write the model file: numbers in full, so that loading gives the same model."""
        Path(path).write_text(json.dumps(self.to_dict(), allow_nan=False) + "\n", encoding="utf-8")


def _mapping(data: object, where: str, known: set[str]) -> dict[str, Any]:
    if not isinstance(data, dict):
        raise ModelError("file", f"{where}: got {type(data).__name__}, need an object with {sorted(known)}")
    for key in data:
        if key not in known:
            raise ModelError("file", f"{where}: unknown key {key!r}; known are {', '.join(sorted(known))}")
    return data


def _list(data: object, where: str, length: int | None = None) -> list[Any]:
    if not isinstance(data, list) or (length is not None and len(data) != length):
        size = "a list" if length is None else f"a list of {length}"
        raise ModelError("file", f"{where}: need {size}, got {str(data)[:60]}")
    return data


def _number(data: object, where: str) -> float:
    if isinstance(data, bool) or not isinstance(data, int | float) or not math.isfinite(data):
        raise ModelError("file", f"{where}: need a finite number, got {str(data)[:60]}")
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
        if isinstance(value, bool) or not isinstance(value, int):
            raise ModelError("file", f"{where}.{key}: need a whole number, got {value!r}")
    return Port(
        wire=row["wire"],
        end=row["end"],
        impedance_ohm=_number(row.get("impedance", 50.0), f"{where}.impedance"),
    )
