"""A batch of blanks: planning it, and writing and reading back its sheets, at two sizes of stock.

Run: python tests/bench/bench_batch.py [COUNT...] (1, 10, 100 and 1000 blanks). Prints CPU seconds, and the most
memory that the nest took beyond what was loaded before; the writing goes into a temporary folder.
"""

from __future__ import annotations

import resource
import sys
import tempfile
import time
from dataclasses import replace
from pathlib import Path

ROOT = Path(__file__).parents[2]
sys.path.insert(0, str(ROOT))

from wavejig.batch.nest import NumberedBlank
from wavejig.batch.plan import plan
from wavejig.files.nestfile import NestFiles
from wavejig.pack import inspect_recipe
from wavejig.reflector.flat import flat_pattern

STOCKS = ((600.0, 300.0), (2500.0, 1250.0))


def peak_mb() -> float:
    """The most memory this process has held so far, in MB (Linux counts in kB)."""
    return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0


def main() -> None:
    counts = [int(text) for text in sys.argv[1:]] or [1, 10, 100, 1000]
    _, found = inspect_recipe(ROOT / "recipes" / "saltmarsh-2g4.toml")
    assert found.tray and found.radiator and found.spacer and found.fixture
    pattern = flat_pattern(found.tray, found.design.name)
    for count in counts:
        for stock in STOCKS:
            cutter = replace(found.design.cutter, stock_x_mm=stock[0], stock_y_mm=stock[1])
            design = replace(found.design, quantity=count, cutter=cutter)
            before = peak_mb()
            begun = time.process_time()
            made = plan(design, found.radiator, found.tray, pattern, found.spacer, found.fixture)
            planned = time.process_time() - begun
            assert made.nest
            begun = time.process_time()
            blank = NumberedBlank(design, found.tray, pattern)
            with tempfile.TemporaryDirectory() as folder:
                files = NestFiles("bench", blank_area_mm2=pattern.area_mm2)
                for number, sheet in enumerate(made.nest.sheets, start=1):
                    files.write(
                        blank.shapes(made.nest, sheet),
                        Path(folder) / f"nest-{number}.dxf",
                        blanks=len(sheet.placements),
                    )
                size = sum(f.stat().st_size for f in Path(folder).iterdir()) / 1e6
            written = time.process_time() - begun
            print(
                f"{count} blanks on {stock[0]:g} x {stock[1]:g} mm: {len(made.nest.sheets)} sheets (by area at "
                f"least {made.nest.fewest_sheets}), {100.0 * made.nest.utilisation:.1f} % used; planned in "
                f"{planned:.2f} s, written and read back in {written:.1f} s ({size:.1f} MB); peak memory "
                f"{peak_mb() - before:+.0f} to {peak_mb():.0f} MB"
            )


if __name__ == "__main__":
    main()
