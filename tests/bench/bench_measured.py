"""What `measured` recovers of planted deviations: python tests/bench/bench_measured.py [RECIPE...]

Thirty plants a recipe (side, standoff and feed gap alone, together, and with every other dimension off as
well), each drawn from the spread and solved directly, with 0.5 dB of complex noise (and the angle that goes
with it) and a reference plane 20 mm off. Two kinds of noise: one of each point's own, and one error over
the whole sweep. Counted: found within 0.15 mm (side) and 0.3 mm (standoff), 95 % intervals that hold the
truth, and "cannot tell"; from the sweep alone, and with the side read with a calliper to 0.1 mm as well.

Then twenty slips: side, standoff, feed gap or two of them out by several tolerances, all else by the spread.
"""

from __future__ import annotations

import sys
from collections.abc import Sequence
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))  # started by its path, also in the workers
from tests.tuning.articles import Plants, near, plants, thirty, twenty
from wavejig.tuning.explore import Explored, explore
from wavejig.tuning.found import Fit, find
from wavejig.tuning.solving import workers
from wavejig.tuning.spread import NORMAL_SIGMAS, spread
from wavejig.tuning.sweepfile import BESIDE

WITHIN = {"side": 0.15, "lobe_diameter": 0.15, "standoff": 0.3, "feed_gap": 0.3}
READ_MM = 0.1


def main(names: list[str]) -> None:
    for name in names:
        recipe, article = near(name)
        with workers() as executor:
            explored = explore(article, spread(recipe, article), executor, wide=True, least_margin=BESIDE)
            spread_out = plants(recipe, article, executor, thirty(explored.spread.names[0]))
            slipped = plants(recipe, article, executor, twenty(explored.spread.names[0]), slips=True)
        show(name, explored, spread_out, slipped)


def show(name: str, explored: Explored, spread_out: Plants, slipped: Plants) -> None:
    """A table for one recipe."""
    print(f"{name}: surface of {explored.solves} solves, {explored.error_db:.4f} dB rms")
    print(
        "  plants  noise of  read  model  dimension        within     holds   cannot tell   rms      interval"
    )
    for kind in ("point", "sweep"):
        for what, planted, read in (
            ("spread", spread_out, False),
            ("spread", spread_out, True),
            ("slips", slipped, False),
            ("slips", slipped, True),
        ):
            rng = np.random.default_rng(2)
            found = []
            for i in range(len(planted.clean)):
                sweep = planted.sweep(i, rng, kind=kind)
                readings = reading(explored, planted, i, rng) if read else {}
                found.append(find(explored, sweep, readings, READ_MM / NORMAL_SIGMAS))
            for label in ("right", "open"):
                row = f"  {what:<6}  {kind:<8}  {'side' if read else '-':<4}  {label:<5}"
                tell(row, planted, [getattr(f, label) for f in found])


def reading(explored: Explored, planted: Plants, i: int, rng: np.random.Generator) -> dict[str, float]:
    """The size of a lobe as a calliper would have it, within READ_MM in 95 of 100."""
    key = explored.spread.names[0]
    true = explored.surface.axes.centre[0] + planted.deviations[i, planted.names.index(key)]
    return {key: float(true + READ_MM / NORMAL_SIGMAS * rng.standard_normal())}


def tell(row: str, planted: Plants, fits: Sequence[Fit]) -> None:
    """A line for each dimension."""
    n = len(fits)
    for key, limit in WITHIN.items():
        if not fits[0].has(key):
            continue
        truth = planted.deviations[:, planted.names.index(key)]
        got = [fit.get(key) for fit in fits]
        error = np.array([d.value for d in got]) - truth
        held = sum(d.interval[0] <= t <= d.interval[1] for d, t in zip(got, truth, strict=True))
        half = float(np.mean([d.interval[1] - d.interval[0] for d in got])) / 2.0
        print(
            f"{row}  {key:<13}  {int((abs(error) <= limit).sum()):2d}/{n}  {held:5d}/{n}  "
            f"{sum(not d.told for d in got):8d}/{n}  {np.sqrt(np.mean(error**2)):7.3f} mm  +-{half:.2f} of "
            f"{got[0].before:.2f} mm",
            flush=True,
        )


if __name__ == "__main__":
    main(sys.argv[1:] or ["boatshed-5g8", "saltmarsh-2g4", "creek-915-round"])
