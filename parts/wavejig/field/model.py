"""The electromagnetic model: straight wires, triangles of sheet, ports; in metres, ohms and siemens a metre.

Each wire is one segment of the solution, used as given. Wires whose ends coincide are joined; a wire end
on a triangle's corner is attached to the sheet there; a port sits at one end of a wire, between that wire
and whatever it joins there. An infinite ground at z = 0 is an option. Lossless where no conductivity is
given.
"""

from __future__ import annotations

import json
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
        """Read a model file. Raises ModelError naming file, line and the key that cannot be read."""
        from wavejig.field.modelfile import load

        return load(Path(path))

    @classmethod
    def from_dict(cls, data: object) -> Model:
        """A model from the mapping a model file holds. Raises ModelError naming the key."""
        from wavejig.field.modelfile import from_data

        return from_data(data)

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
