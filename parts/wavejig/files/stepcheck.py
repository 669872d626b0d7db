"""Read a STEP file back and compare it with the solids that went into it. Lengths in mm."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import cadquery
import numpy as np
from OCP.BRepCheck import BRepCheck_Analyzer
from OCP.IFSelect import IFSelect_RetDone
from OCP.Quantity import Quantity_Color, Quantity_TOC_sRGB
from OCP.STEPCAFControl import STEPCAFControl_Reader
from OCP.TCollection import TCollection_ExtendedString
from OCP.TColStd import TColStd_SequenceOfAsciiString
from OCP.TDataStd import TDataStd_Name
from OCP.TDF import TDF_Label, TDF_LabelSequence
from OCP.TDocStd import TDocStd_Document
from OCP.XCAFDoc import XCAFDoc_ColorGen, XCAFDoc_ColorSurf, XCAFDoc_DocumentTool, XCAFDoc_ShapeTool

from wavejig.files.box import tight_box
from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import Measure, measure, volume_mm3
from wavejig.files.reread import check_names
from wavejig.files.step import Colour, NamedSolid, kernel_settings, step_name

VOLUME_TOLERANCE = 1e-6  # relative; a file keeps some 15 digits, the rest is the kernel's own repair
BOUNDS_TOLERANCE_MM = 1e-4
COLOUR_TOLERANCE = 1e-3
_STRING = re.compile(rb"'(?:[^']|'')*'")
_ENTITY = re.compile(rb"#(\d+)\s*(=?)")
_STATEMENT = re.compile(rb"#\d+\s*=\s*\w*\s*\(.*\)", re.DOTALL)


@dataclass(frozen=True, slots=True, kw_only=True)
class Expected:
    """What a part of a file must be: its name, colour, number of solids, and its figures. Plain data."""

    name: str
    colour: Colour
    solids: int
    figures: Measure


def expectation(solid: NamedSolid, figures: Measure | None = None) -> Expected:
    """What a file made from this solid must hold; figures: the solid's own, if they are known."""
    return Expected(
        name=solid.name,
        colour=solid.colour,
        solids=len(solid.shape.Solids()),
        figures=figures or measure(solid.shape),
    )


def check_step(path: Path, expected: Sequence[NamedSolid | Expected]) -> None:
    """Raise FileCheckError unless the file holds just these solids.

    Compared: mm as the file's unit; each part by name; valid by the kernel's check; number of solids; volume
    within 1e-6 of itself; box within 1e-4 mm; colour. Raises OSError when the file cannot be opened.
    """
    _check_structure(path)
    with kernel_settings():
        parts = _read_parts(path)
    check_names(path, set(parts), {step_name(solid.name) for solid in expected})
    for solid in expected:
        shape, colour = parts[step_name(solid.name)]
        _check_part(path, solid if isinstance(solid, Expected) else expectation(solid), shape, colour)


def _check_structure(path: Path) -> None:
    """Raise unless the text is whole: begin, end, and no entity asked for that is not there.

    The kernel does not survive a file with such gaps, so they are looked for before it gets to see it.
    """
    data = path.read_bytes()
    if not data.startswith(b"ISO-10303-21;"):
        raise FileCheckError(path, "something else", "a file that begins ISO-10303-21;")
    if not data.rstrip().endswith(b"END-ISO-10303-21;"):
        raise FileCheckError(path, "a file cut short", "END-ISO-10303-21; at its end")
    body = _STRING.sub(b"''", data)
    named = set(_ENTITY.findall(body))
    defined = {number for number, equals in named if equals}
    missing = {number for number, _ in named} - defined
    if missing or not defined:
        first = f"#{min(map(int, missing))}" if missing else "all"
        raise FileCheckError(path, f"{first} of the entities missing", "every entity that is referred to")
    statements = [part.strip() for part in body.split(b";")]
    broken = [part for part in statements if part.startswith(b"#") and not _STATEMENT.fullmatch(part)]
    if broken:
        raise FileCheckError(path, f"a broken statement {broken[0][:60]!r}", "#n = NAME(...)")


def _check_part(path: Path, expected: Expected, shape: Any, colour: Colour | None) -> None:
    name, wanted = expected.name, expected.figures
    if not BRepCheck_Analyzer(shape.wrapped).IsValid():
        raise FileCheckError(path, f"{name} with faults", "a solid the kernel finds valid")
    solids = len(shape.Solids())
    if solids != expected.solids:
        raise FileCheckError(path, f"{name} in {solids} solids", f"{expected.solids}")
    volume, bounds = volume_mm3(shape), tight_box(shape)
    if not abs(volume - wanted.volume_mm3) <= VOLUME_TOLERANCE * wanted.volume_mm3:
        raise FileCheckError(
            path,
            f"{name} with a volume of {volume:.6f} mm3",
            f"{wanted.volume_mm3:.6f} within {VOLUME_TOLERANCE:g} of it",
        )
    off = np.abs(np.subtract(bounds, wanted.bounds_mm)).max()
    if not off <= BOUNDS_TOLERANCE_MM:
        raise FileCheckError(
            path,
            f"{name} in the box {np.round(bounds, 4).tolist()} mm",
            f"{np.round(wanted.bounds_mm, 4).tolist()} within {BOUNDS_TOLERANCE_MM:g} mm",
        )
    if colour is None or np.abs(np.subtract(colour, expected.colour)).max() > COLOUR_TOLERANCE:
        raise FileCheckError(path, f"{name} coloured {colour}", f"{expected.colour} (sRGB)")


def _read_parts(path: Path) -> dict[str, tuple[Any, Colour | None]]:
    """Every part by name: its shape in place, as a cadquery Shape, and its colour if it has one."""
    reader = STEPCAFControl_Reader()
    reader.SetNameMode(True)
    reader.SetColorMode(True)
    status = reader.ReadFile(str(path))
    if status != IFSelect_RetDone:
        raise FileCheckError(path, f"a file the kernel cannot read ({status})", "STEP")
    lengths, angles, solid_angles = (TColStd_SequenceOfAsciiString() for _ in range(3))
    reader.ChangeReader().FileUnits(lengths, angles, solid_angles)
    units = {lengths.Value(i).ToCString() for i in range(1, lengths.Length() + 1)}
    if units != {"millimetre"}:
        raise FileCheckError(path, f"length units {sorted(units)}", "millimetre and no other")
    document = TDocStd_Document(TCollection_ExtendedString("BinXCAF"))
    XCAFDoc_DocumentTool.SetLengthUnit_s(document, 0.001)
    if not reader.Transfer(document):
        raise FileCheckError(path, "no shape the kernel can rebuild", "solids")
    parts: dict[str, tuple[Any, Colour | None]] = {}
    for label in _part_labels(document):
        name = _name(label)
        if name in parts:
            raise FileCheckError(path, f"two parts called {name!r}", "a name of its own for each")
        shape = XCAFDoc_ShapeTool.GetShape_s(label)
        parts[name] = cadquery.Shape.cast(shape), _colour(document, label)
    return parts


def _part_labels(document: Any) -> list[Any]:
    """The components of the assembly, or the single part; a deeper tree is not ours and shows as one part."""
    free = TDF_LabelSequence()
    XCAFDoc_DocumentTool.ShapeTool_s(document.Main()).GetFreeShapes(free)
    labels = []
    for i in range(1, free.Length() + 1):
        top = free.Value(i)
        components = TDF_LabelSequence()
        if XCAFDoc_ShapeTool.IsAssembly_s(top):
            XCAFDoc_ShapeTool.GetComponents_s(top, components)
            labels += [components.Value(k) for k in range(1, components.Length() + 1)]
        else:
            labels.append(top)
    return labels


def _name(label: Any) -> str:
    name = TDataStd_Name()
    return name.Get().ToExtString() if label.FindAttribute(TDataStd_Name.GetID_s(), name) else ""


def _colour(document: Any, label: Any) -> Colour | None:
    """Colour of a part, or of what a component stands for."""
    colours = XCAFDoc_DocumentTool.ColorTool_s(document.Main())
    target = TDF_Label()
    if not XCAFDoc_ShapeTool.GetReferredShape_s(label, target):
        target = label
    colour = Quantity_Color()
    for kind in (XCAFDoc_ColorGen, XCAFDoc_ColorSurf):
        if colours.GetColor_s(target, kind, colour):
            red, green, blue = colour.Values(Quantity_TOC_sRGB)
            return red, green, blue
    return None
