"""What the shop's process brings with it unless the recipe says otherwise."""

from __future__ import annotations

import pytest

from tests.designs import design
from wavejig.stock.processes import cutters


@pytest.mark.parametrize("process", [c.name for c in cutters()])
def test_kerf_is_the_process_s_own_unless_written(process: str) -> None:
    row = next(c for c in cutters() if c.name == process)
    usual = design(cutter={"process": process}).cutter
    assert usual.kerf_mm == row.kerf_mm
    assert usual.spacing_mm >= row.kerf_mm + design().reflector.thickness_mm
    assert design(cutter={"process": process, "kerf": "auto"}).cutter == usual
    assert design(cutter={"process": process, "kerf": "0.35 mm"}).cutter.kerf_mm == 0.35
