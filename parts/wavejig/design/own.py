"""The floor of a dish, box or lid that is there already, as a plan. Lengths in mm."""

from __future__ import annotations

from wavejig.design.model import OwnShape
from wavejig.geometry.plane import Contour


def floor_outline(own: OwnShape, half: tuple[float, float], further_mm: float = 0.0) -> Contour:
    """The floor's edge, every point `further_mm` further out (below 0: in); round corners stay none."""
    x, y = half[0] + further_mm, half[1] + further_mm
    if own.shape == "round":
        return Contour(vertices=((x, 0.0, 1.0), (-x, 0.0, 1.0)))  # two half circles, counter-clockwise
    return Contour.rectangle(-x, -y, x, y)
