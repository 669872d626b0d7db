"""What the page is made from."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from wavejig.batch.model import Batch
from wavejig.design.model import Design
from wavejig.files.manifest import Entry
from wavejig.files.printable import Printability
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets.report.meshes import Shown
from wavejig.shop import Inspection

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction
    from wavejig.tuning.measured import Measured
    from wavejig.tuning.yields import Yield


@dataclass(frozen=True, slots=True, kw_only=True)
class Report:
    """Everything the page tells.

    prints: (part, pieces for each antenna or set, what was measured on the mesh). files: the pack's other
    files with their sizes in bytes. batch, prediction, yields, measured: None where that was not worked out.
    """

    inspection: Inspection
    pattern: FlatPattern
    pieces: Sequence[Shown]
    prints: Sequence[tuple[str, int, Printability]]
    files: Sequence[tuple[Entry, int]]
    batch: Batch | None = None
    prediction: Prediction | None = None
    yields: Yield | None = None
    measured: Measured | None = None

    @property
    def design(self) -> Design:
        """The design."""
        return self.inspection.design
