"""Reflector designs to plan from, with every number open to the test."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import pytest

from wavejig.design.model import Lip, ReflectorDesign
from wavejig.stock.metals import sheet_metal


@pytest.fixture(scope="session")
def sheet() -> Callable[..., ReflectorDesign]:
    """Make a reflector: `lips` = edges as one string, "x-x+y-y+"; other numbers by name."""

    def make(
        lips: str = "x-x+y-y+", height_mm: float = 15.0, angle_deg: float = 90.0, **changes: Any
    ) -> ReflectorDesign:
        edges = [lips[i : i + 2] for i in range(0, len(lips), 2)]
        numbers: dict[str, Any] = {
            "kind": "tray" if edges else "flat",
            "metal": sheet_metal("brass"),
            "thickness_mm": 0.8,
            "base_x_mm": 130.0,
            "base_y_mm": 110.0,
            "inside_radius_mm": 1.0,
            "k_factor": 0.4,
            "bend_deduction_mm": None,
            "lips": tuple(Lip(edge=e, height_mm=height_mm, angle_deg=angle_deg) for e in edges),
            "corner_style": "relief",
            "holes": (),
            "up": "y+",
        }
        return ReflectorDesign(**(numbers | changes))

    return make
