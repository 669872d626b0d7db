"""The page of a pack that has just been written."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from wavejig.batch.model import Batch
from wavejig.files.glb import ColouredMesh
from wavejig.files.manifest import Entry
from wavejig.files.printable import Printability
from wavejig.reflector.flat import FlatPattern, flat_pattern
from wavejig.sheets.report.meshes import Shown
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.page import write_report, write_sweeps
from wavejig.shop import Inspection

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction
    from wavejig.tuning.measured import Measured
    from wavejig.tuning.yields import Yield


def write_pack_report(
    inspection: Inspection,
    pattern: FlatPattern,
    root: Path,
    *,
    pictured: Iterable[tuple[ColouredMesh, str]],
    prints: Sequence[tuple[str, int, Printability]],
    entries: Sequence[Entry],
    batch: Batch | None = None,
    prediction: Prediction | None = None,
    yields: Yield | None = None,
) -> tuple[Entry, ...]:
    """Write report.html into a pack's folder, beside the files of `entries`; the manifest's entries.

    Raises FileCheckError, and OSError when it cannot be written.
    """
    shown = [Shown(piece=piece, group=group) for piece, group in pictured]
    report = Report(
        inspection=inspection,
        pattern=pattern,
        pieces=tuple(sorted(shown, key=lambda s: s.group != "antenna")),
        prints=tuple(prints),
        files=tuple((e, (root / e.path).stat().st_size) for e in entries),
        batch=batch,
        prediction=prediction,
        yields=yields,
    )
    return write_report(report, root)


def write_sweeps_report(
    inspection: Inspection, path: Path, prediction: Prediction, measured: Measured
) -> None:
    """What sweeps say, as a page of its own at `path`: they are no part of the recipe that a pack follows from.

    Raises FileCheckError, and OSError when it cannot be written.
    """
    assert inspection.tray is not None
    report = Report(
        inspection=inspection,
        pattern=flat_pattern(inspection.tray, inspection.design.name),
        pieces=(),
        prints=(),
        files=(),
        prediction=prediction,
        yields=measured.predicted,
        measured=measured,
    )
    write_sweeps(report, path)
