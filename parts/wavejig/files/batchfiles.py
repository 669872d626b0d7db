"""The batch's files of a pack: nests, plates, cut plan and bill, each read back."""

from __future__ import annotations

import csv
from collections.abc import Iterator, Mapping
from pathlib import Path

from wavejig.batch.model import Batch, WirePlan
from wavejig.batch.nest import NumberedBlank
from wavejig.design.model import Design
from wavejig.files.billfile import check_bill, safe_cell, write_bill
from wavejig.files.errors import FileCheckError
from wavejig.files.manifest import Entry
from wavejig.files.mesh import Measure, Mesh
from wavejig.files.nestfile import NestFiles
from wavejig.files.platefile import check_plate, write_plate
from wavejig.reflector.flat import FlatPattern, with_kerf
from wavejig.reflector.model import Tray

CUT_COLUMNS = (
    "stock",
    "material",
    "diameter_mm",
    "stock_length_mm",
    "pattern",
    "times",
    "piece",
    "length_mm",
    "pieces",
    "rest_mm",
)


def write_batch(
    batch: Batch,
    design: Design,
    tray: Tray,
    pattern: FlatPattern,
    meshes: Mapping[str, tuple[Mesh, Measure]],
    root: Path,
) -> Iterator[Entry]:
    """Write reflector/nest-N.dxf, print/plate-N.3mf, radiator/cut-plan.csv, bill-of-materials.csv.

    pattern: the nominal blank; meshes: the printed pieces by name. Yields the manifest's entries. Raises
    FileCheckError, OSError.
    """
    if batch.nest is not None:
        cut = with_kerf(pattern, design.cutter.kerf_mm) if design.cutter.offset_in_file else pattern
        blank = NumberedBlank(design, tray, cut)
        files = NestFiles(f"{design.name} nest", blank_area_mm2=cut.area_mm2)
        for number, sheet in enumerate(batch.nest.sheets, start=1):
            name = f"reflector/nest-{number}.dxf"
            files.write(blank.shapes(batch.nest, sheet), _path(root, name), blanks=len(sheet.placements))
            yield Entry(path=name, kind="dxf", part="reflector", units="mm")
    if batch.prints is not None:
        for number, plate in enumerate(batch.prints.plates, start=1):
            name = f"print/plate-{number}.3mf"
            path = _path(root, name)
            write_plate(plate, {k: m for k, (m, _) in meshes.items()}, path, f"{design.name} plate {number}")
            check_plate(path, plate, batch.prints, {k: figures for k, (_, figures) in meshes.items()})
            yield Entry(path=name, kind="3mf", part="print", units="mm")
    path = _path(root, "radiator/cut-plan.csv")
    write_cut_plan(batch.wires, path)
    check_cut_plan(path, batch.wires)
    yield Entry(path="radiator/cut-plan.csv", kind="csv", part="radiator", units="mm")
    path = root / "bill-of-materials.csv"
    write_bill(batch.bill, path)
    check_bill(path, batch.bill)
    yield Entry(path="bill-of-materials.csv", kind="csv", part="batch", units="")


def write_cut_plan(wires: tuple[WirePlan, ...], path: Path) -> None:
    """One row for each kind of piece in each way of cutting a length. Raises OSError."""
    with path.open("w", newline="", encoding="utf-8") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow(CUT_COLUMNS)
        for plan in wires:
            lengths = {role: length for role, length, _ in plan.pieces}
            stock = f"{plan.needed_mm if plan.stock_mm is None else plan.stock_mm:.1f}"
            head = (plan.kind, safe_cell(plan.material), f"{plan.diameter_mm:.3f}", stock)
            for number, pattern in enumerate(plan.patterns, start=1):
                for role, count in pattern.pieces:
                    row = (
                        number,
                        pattern.times,
                        role,
                        f"{lengths[role]:.1f}",
                        count,
                        f"{pattern.rest_mm:.1f}",
                    )
                    writer.writerow((*head, *row))


def check_cut_plan(path: Path, wires: tuple[WirePlan, ...]) -> None:
    """Raise FileCheckError unless the rows give every piece of the batch and no length is cut beyond itself."""
    with path.open(newline="", encoding="utf-8") as stream:
        rows = list(csv.DictReader(stream))
    for plan in wires:
        mine = [r for r in rows if r["stock"] == plan.kind]
        for role, _, wanted in plan.pieces:
            found = sum(int(r["times"]) * int(r["pieces"]) for r in mine if r["piece"] == role)
            if found != wanted:
                raise FileCheckError(path, f"{found} of {role}", f"{wanted}")
        for number in {r["pattern"] for r in mine}:
            cut = [r for r in mine if r["pattern"] == number]
            taken = sum(int(r["pieces"]) * (float(r["length_mm"]) + plan.cut_loss_mm) for r in cut)
            # lengths are printed to 0.1 mm
            room = float(cut[0]["stock_length_mm"]) + 0.05 * (1 + sum(int(r["pieces"]) for r in cut))
            if taken + plan.end_waste_mm > room:
                raise FileCheckError(
                    path, f"{taken:.1f} mm cut from one length", f"{room - plan.end_waste_mm:.1f}"
                )


def _path(root: Path, name: str) -> Path:
    path = root / name
    path.parent.mkdir(exist_ok=True)
    return path
