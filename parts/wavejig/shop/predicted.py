"""Findings on the predicted match: does the antenna do what its recipe asks for?"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from wavejig.field.figures import megahertz
from wavejig.shop.finding import NOTE, WARNING, Finding

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction

PREDICTED = "the field solver's prediction; without a measured article good to about 1 % in frequency"
LEAST_BALANCE = 0.01  # power in against power out: a sound mesh is well within


def prediction_findings(p: Prediction) -> Iterator[Finding]:
    """What the prediction misses, and what makes it less sure."""
    if not p.meets_target:
        yield Finding(
            code="prediction-misses",
            severity=WARNING,
            where="target.return_loss",
            message=f"the predicted return loss is {p.worst.return_loss_db:.1f} dB at "
            f"{megahertz(p.worst.frequency_hz)}; the recipe wants {p.wanted_db:g} dB over the whole band",
            remedy='Leave side, standoff and feed_gap "auto" and run `wavejig tune`, or ask for less.',
            source=PREDICTED,
        )
    off = max(abs(b - 1.0) for b in p.power_balance)
    if off > LEAST_BALANCE:
        yield Finding(
            code="prediction-unbalanced",
            severity=WARNING,
            where="field",
            message=f"power in and power out of the model differ by {100 * off:.1f} %; the prediction is in doubt",
            remedy="Look for wires that nearly touch each other or the sheet; do not rely on this prediction.",
            source="conservation of energy",
        )
    for remark in p.remarks:
        yield Finding(
            code="prediction-less-sure",
            severity=NOTE,
            where="field",
            message=f"{remark.code}: {remark.message}",
            remedy="The prediction deserves less trust here; measure the first article.",
            source=PREDICTED,
        )
