"""The pack's paper: drawings/ in DXF and PDF, and build-sheet.pdf. Each file is read back before it counts."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from wavejig.batch.model import Batch
from wavejig.files.manifest import Entry
from wavejig.fixture.bending.model import BendOrder
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets.blank import blank_drawing
from wavejig.sheets.buildsheet import BuildSheet, write_build_sheet
from wavejig.sheets.drillpaper import write_drill_paper
from wavejig.sheets.dxfsheet import check_sheet_dxf, write_sheet_dxf
from wavejig.sheets.fixture import fixture_drawing
from wavejig.sheets.frame import PAPERS_MM
from wavejig.sheets.model import Sheet
from wavejig.sheets.own import own_drawing
from wavejig.sheets.pdf import check_pdf, write_sheet_pdf
from wavejig.sheets.radiator import radiator_drawing
from wavejig.sheets.tray import tray_drawing
from wavejig.shop import Inspection

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction  # the solver is not needed to set its figures

FOLDER = "drawings"


def drawings(inspection: Inspection, pattern: FlatPattern) -> tuple[tuple[str, Sheet], ...]:
    """(part, drawing) of everything that is drawn; a flat reflector has no folded view."""
    i = inspection
    assert i.radiator and i.tray and i.fixture
    out = [
        ("radiator", radiator_drawing(i.design, i.radiator)),
        (
            "reflector",
            blank_drawing(i.design, i.tray, pattern)
            if i.tray.own is None
            else own_drawing(i.design, i.tray, pattern),
        ),
        ("fixture", fixture_drawing(i.design, i.fixture, i.radiator)),
    ]
    if i.tray.lips:
        out.insert(2, ("reflector", tray_drawing(i.design, i.tray)))
    return tuple(out)


def write_sheets(
    inspection: Inspection,
    pattern: FlatPattern,
    root: Path,
    *,
    prediction: Prediction | None = None,
    order: BendOrder | None = None,
    batch: Batch | None = None,
) -> tuple[Entry, ...]:
    """Write drawings and build sheet into a pack's folder and read them back.

    Returns the manifest's entries. Raises FileCheckError, and OSError when a file cannot be written.
    """
    design = inspection.design
    entries: list[Entry] = []
    (root / FOLDER).mkdir(exist_ok=True)
    for part, sheet in drawings(inspection, pattern):
        dxf, pdf = f"{FOLDER}/{sheet.name}.dxf", f"{FOLDER}/{sheet.name}.pdf"
        write_sheet_dxf(sheet, root / dxf, design.name)
        check_sheet_dxf(root / dxf, sheet)
        entries.append(Entry(path=dxf, kind="dxf", part=part, units="mm"))
        write_sheet_pdf(sheet, root / pdf, design.name)
        check_pdf(root / pdf, design.name, sheet.paper_mm)
        entries.append(Entry(path=pdf, kind="pdf", part=part, units="mm"))
    if inspection.tray is not None and inspection.tray.own is not None:
        name = "reflector/drill-template.pdf"
        (root / "reflector").mkdir(exist_ok=True)
        write_drill_paper(design, inspection.tray, pattern, root / name)
        check_pdf(root / name, design.name, PAPERS_MM[design.sheet.paper])
        entries.append(Entry(path=name, kind="pdf", part="reflector", units="mm"))
    path = root / "build-sheet.pdf"
    write_build_sheet(
        BuildSheet(inspection=inspection, pattern=pattern, prediction=prediction, order=order, batch=batch),
        path,
    )
    check_pdf(path, design.name, PAPERS_MM[design.sheet.paper])
    entries.append(Entry(path="build-sheet.pdf", kind="pdf", part="design", units="mm"))
    return tuple(entries)
