"""A thousand blanks: planning them, and writing and reading back their sheets, at two sizes of stock.

Run: python tests/bench/bench_batch.py [COUNT]. Prints CPU seconds; the writing goes into a temporary folder.
"""

from __future__ import annotations

import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

ROOT = Path(__file__).parents[2]
sys.path.insert(0, str(ROOT))

from wavejig.batch.nest import NumberedBlank
from wavejig.batch.plan import plan
from wavejig.files.nestfile import write_nest
from wavejig.pack import inspect_recipe
from wavejig.reflector.flat import flat_pattern

STOCKS = ((600.0, 300.0), (2500.0, 1250.0))


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else 1000
    _, found = inspect_recipe(ROOT / "recipes" / "saltmarsh-2g4.toml")
    assert found.tray and found.radiator and found.spacer and found.fixture
    pattern = flat_pattern(found.tray, found.design.name)
    for stock in STOCKS:
        cutter = replace(found.design.cutter, stock_x_mm=stock[0], stock_y_mm=stock[1])
        design = replace(found.design, quantity=count, cutter=cutter)
        begun = time.process_time()
        made = plan(design, found.radiator, found.tray, pattern, found.spacer, found.fixture)
        planned = time.process_time() - begun
        assert made.nest
        begun = time.process_time()
        blank = NumberedBlank(design, found.tray, pattern)
        with tempfile.TemporaryDirectory() as folder:
            for number, sheet in enumerate(made.nest.sheets, start=1):
                write_nest(
                    blank.shapes(made.nest, sheet),
                    Path(folder) / f"nest-{number}.dxf",
                    "bench",
                    blanks=len(sheet.placements),
                    blank_area_mm2=pattern.area_mm2,
                )
        written = time.process_time() - begun
        print(
            f"{count} blanks on {stock[0]:g} x {stock[1]:g} mm: {len(made.nest.sheets)} sheets (by area at least "
            f"{made.nest.fewest_sheets}), {100.0 * made.nest.utilisation:.1f} % used; "
            f"planned in {planned:.2f} s, written and read back in {written:.1f} s"
        )


if __name__ == "__main__":
    main()
