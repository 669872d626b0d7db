"""STEP (ISO 10303-21, AP214): named, coloured solids in mm; one part, or an assembly of several.

The kernel keeps state across the files of one process: settings (the unit among them), which are set for the
call and put back, and a counter of assembly links, whose numbers are rewritten from 1 in each file. Its own
colour writer goes by memory address, so colours are attached here, part by part. The header carries no clock
and no folder. So the same solids give the same bytes.
"""

from __future__ import annotations

import io
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from OCP.APIHeaderSection import APIHeaderSection_MakeHeader
from OCP.BRepBuilderAPI import BRepBuilderAPI_Copy, BRepBuilderAPI_Transform
from OCP.BRepCheck import BRepCheck_Analyzer
from OCP.IFSelect import IFSelect_RetDone
from OCP.Interface import Interface_Static
from OCP.Message import Message
from OCP.Quantity import Quantity_Color, Quantity_TOC_sRGB
from OCP.STEPCAFControl import STEPCAFControl_Writer
from OCP.STEPConstruct import STEPConstruct, STEPConstruct_Styles
from OCP.STEPControl import STEPControl_AsIs, STEPControl_Controller
from OCP.StepRepr import StepRepr_HArray1OfRepresentationItem, StepRepr_NextAssemblyUsageOccurrence
from OCP.StepVisual import StepVisual_MechanicalDesignGeometricPresentationRepresentation
from OCP.TCollection import TCollection_ExtendedString, TCollection_HAsciiString
from OCP.TDataStd import TDataStd_Name
from OCP.TDocStd import TDocStd_Document
from OCP.TopAbs import TopAbs_SOLID
from OCP.TopExp import TopExp_Explorer
from OCP.TopLoc import TopLoc_Location
from OCP.XCAFDoc import XCAFDoc_DocumentTool

from wavejig.files.names import ascii_name, clean_unique_names

Colour = tuple[float, float, float]
# The kernel's own settings while we write and read; whatever they were before comes back after.
_SETTINGS = {
    "write.step.unit": "MM",
    "xstep.cascade.unit": "MM",
    "write.step.schema": "AP214IS",
    # Every curve of ours lies exactly on its plane, cylinder or torus: readers find its course in the surface's
    # own parameters by themselves, and a second course for each would be more than half of the file.
    "write.surfacecurve.mode": "Off",
    "write.precision.mode": "Average",
    "read.step.codepage": "UTF8",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class NamedSolid:
    """A cadquery Shape of one or more closed solids, its name, and its colour as sRGB from 0 to 1."""

    name: str
    shape: Any
    colour: Colour


def write_step(solids: Sequence[NamedSolid], path: Path, title: str, *, proven: bool = False) -> None:
    """Write one solid as a part, or several as an assembly called `title`, in mm.

    proven: these solids have been written to files of their own before, so their validity is known.
    Raises ValueError when there is no solid, two share a name, one is not a valid closed solid or a colour is
    off its scale; OSError when the file cannot be written; RuntimeError when the kernel cannot translate it.
    """
    names = clean_unique_names((step_name(solid.name) for solid in solids), path.name)
    for solid in solids:
        _require_solid(path.name, solid, proven=proven)
    with kernel_settings():
        document, placed = _document(names, [solid.shape.wrapped for solid in solids], title)
        writer = STEPCAFControl_Writer()
        writer.SetNameMode(True)
        writer.SetColorMode(False)
        if not writer.Transfer(document, STEPControl_AsIs):
            raise RuntimeError(f"{path.name}: the kernel could not translate {', '.join(names)} to STEP.")
        session, model = writer.ChangeWriter().WS(), writer.ChangeWriter().Model()
        for name, solid, shape in zip(names, solids, placed, strict=True):
            _paint(session, model, name, shape, solid.colour)
        if len(solids) > 1:
            _number_links(model)
        _fixed_header(model, title)
        buffer = io.BytesIO()
        status = writer.WriteStream(buffer)
    data = buffer.getvalue()
    if status != IFSelect_RetDone or not data.rstrip().endswith(b"END-ISO-10303-21;"):
        raise RuntimeError(f"{path.name}: the kernel gave up writing STEP ({status}).")
    path.write_bytes(data)


@contextmanager
def kernel_settings() -> Iterator[None]:
    """Our settings of the kernel's STEP translator, and its silence, during a `with`; then as before."""
    STEPControl_Controller.Init_s()
    before = {key: Interface_Static.CVal_s(key) for key in _SETTINGS}
    messenger = Message.DefaultMessenger_s()
    printers = list(messenger.Printers())
    try:
        for printer in printers:  # what the kernel has to say it says on stdout, among our results
            messenger.RemovePrinter(printer)
        for key, value in _SETTINGS.items():
            Interface_Static.SetCVal_s(key, value)
        yield
    finally:
        for key, value in before.items():
            Interface_Static.SetCVal_s(key, value)
        for printer in printers:
            messenger.AddPrinter(printer)


def step_name(name: str) -> str:
    """A name in the printable ASCII that every reader of STEP agrees on, without its escape sign.

    ISO 10303-21 can write other letters as directives, but the kernel breaks long lines inside them.
    """
    return ascii_name(name).replace("\\", "_")


def _document(names: Sequence[str], shapes: Sequence[Any], title: str) -> tuple[Any, list[Any]]:
    """A kernel document in no application's list, with a label for each shape; and the shapes in it."""
    document = TDocStd_Document(TCollection_ExtendedString("BinXCAF"))
    XCAFDoc_DocumentTool.SetLengthUnit_s(document, 0.001)
    tool = XCAFDoc_DocumentTool.ShapeTool_s(document.Main())
    assembly = None
    if len(shapes) > 1:
        assembly = tool.NewShape()
        _set_name(assembly, title)
    placed = [
        shape
        if shape.Location().IsIdentity() and not any(shape.IsPartner(other) for other in shapes[:number])
        else _placed_copy(shape)
        for number, shape in enumerate(shapes)
    ]
    for name, shape in zip(names, placed, strict=True):
        label = tool.AddShape(shape, False)
        _set_name(label, name)
        if assembly is not None:
            _set_name(tool.AddComponent(assembly, label, TopLoc_Location()), name)
    tool.UpdateAssemblies()
    return document, placed


def _paint(session: Any, model: Any, name: str, shape: Any, colour: Colour) -> None:
    """Give every solid of a translated shape its colour, as a presentation of its own in the model."""
    styles = STEPConstruct_Styles(session)
    tint = STEPConstruct_Styles.EncodeColor_s(Quantity_Color(*colour, Quantity_TOC_sRGB))
    painted = []
    explorer = TopExp_Explorer(shape, TopAbs_SOLID)
    while explorer.More():
        item = STEPConstruct.FindEntity_s(session.TransferWriter().FinderProcess(), explorer.Current())
        if item is None:
            raise RuntimeError(f"{name}: the kernel left one of its solids out of the STEP model.")
        painted.append(styles.AddStyle(item, styles.MakeColorPSA(item, tint, tint, None, 0.0), None))
        explorer.Next()
    items = StepRepr_HArray1OfRepresentationItem(1, len(painted))
    for number, item in enumerate(painted, start=1):
        items.SetValue(number, item)
    presentation = StepVisual_MechanicalDesignGeometricPresentationRepresentation()
    presentation.Init(TCollection_HAsciiString(""), items, styles.FindContext(shape))
    model.AddWithRefs(presentation)


def _placed_copy(shape: Any) -> Any:
    """A copy of the shape with its placement worked into its geometry.

    Two solids that share a body would otherwise share one name, and a colour would have no solid of its own.
    """
    place, bare = shape.Location(), shape.Located(TopLoc_Location())
    if place.IsIdentity():
        return BRepBuilderAPI_Copy(bare, True, False).Shape()
    return BRepBuilderAPI_Transform(bare, place.Transformation(), True).Shape()


def _set_name(label: Any, name: str) -> None:
    TDataStd_Name.Set_s(label, TCollection_ExtendedString(step_name(name)))


def _number_links(model: Any) -> None:
    """Number the assembly links from 1; the kernel counts them through the life of the process."""
    number = 0
    for i in range(1, model.NbEntities() + 1):
        entity = model.Entity(i)
        if isinstance(entity, StepRepr_NextAssemblyUsageOccurrence):
            number += 1
            entity.SetId(TCollection_HAsciiString(str(number)))


def _fixed_header(model: Any, title: str) -> None:
    """Header without clock, folder or person. ISO 10303-21 asks for the fields; they may be empty."""
    header = APIHeaderSection_MakeHeader(model)
    header.SetName(TCollection_HAsciiString(step_name(title)))
    header.SetTimeStamp(TCollection_HAsciiString("1980-01-01T00:00:00"))
    header.SetAuthorValue(1, TCollection_HAsciiString(""))
    header.SetOrganizationValue(1, TCollection_HAsciiString(""))
    header.SetOriginatingSystem(TCollection_HAsciiString("wavejig"))
    header.SetAuthorisation(TCollection_HAsciiString(""))
    header.SetDescriptionValue(1, TCollection_HAsciiString("Lengths in mm"))


def _require_solid(file: str, solid: NamedSolid, *, proven: bool) -> None:
    if not all(0.0 <= value <= 1.0 for value in solid.colour):
        raise ValueError(f"{file}: {solid.name}: got colour {solid.colour}, need three numbers from 0 to 1.")
    if not TopExp_Explorer(solid.shape.wrapped, TopAbs_SOLID).More():
        raise ValueError(
            f"{file}: {solid.name}: got a {solid.shape.ShapeType()}, need at least one closed solid."
        )
    if not proven and not BRepCheck_Analyzer(solid.shape.wrapped).IsValid():
        raise ValueError(f"{file}: {solid.name}: got a solid the kernel finds faults in, need a valid one.")
