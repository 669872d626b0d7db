"""What a build sheet is made from, and a picture in its text."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from wavejig.batch.model import Batch
from wavejig.design.model import Design
from wavejig.fixture.bending.model import BendOrder
from wavejig.reflector.flat import FlatPattern
from wavejig.sheets.flow import Picture
from wavejig.sheets.layout import lay_out
from wavejig.sheets.model import Item, View
from wavejig.shop import Inspection

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction  # the solver is not needed to set its figures


@dataclass(frozen=True, slots=True, kw_only=True)
class BuildSheet:
    """Everything the sheet is made from. prediction, order, batch: None where there is none."""

    inspection: Inspection
    pattern: FlatPattern
    prediction: Prediction | None = None
    order: BendOrder | None = None
    batch: Batch | None = None

    @property
    def design(self) -> Design:
        """The design."""
        return self.inspection.design


def picture_of(items: tuple[Item, ...], box: tuple[float, float, float, float], scale: float) -> Picture:
    view = View(
        title="", items=items, at=(-box[0] * scale, -box[1] * scale), scale=scale, title_at=(0.0, 0.0)
    )
    return Picture(lay_out(view), (box[2] - box[0]) * scale, (box[3] - box[1]) * scale)
