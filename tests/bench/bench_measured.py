"""What `measured` recovers of planted deviations: python tests/bench/bench_measured.py [RECIPE...]

Thirty plants a recipe (side, standoff and feed gap alone, together, and with every other dimension off as
well), each solved directly, with 0.5 dB of complex noise (and the angle that goes with it) and a reference
plane 20 mm off. Counted: found within 0.15 mm (side) and 0.3 mm (standoff), 95 % intervals that hold the
truth, and "cannot tell". Two kinds of noise: one of each point's own, and one error over the whole sweep.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))  # started by its path, also in the workers
from tests.tuning.articles import near, plants, thirty
from wavejig.tuning.explore import explore
from wavejig.tuning.found import OFFSET, find
from wavejig.tuning.solving import workers
from wavejig.tuning.spread import spread
from wavejig.tuning.sweepfile import BESIDE

WITHIN = {"side": 0.15, "lobe_diameter": 0.15, "standoff": 0.3, "feed_gap": 0.3, OFFSET: 1.0}


def main(names: list[str]) -> None:
    for name in names:
        recipe, article = near(name)
        with workers() as executor:
            explored = explore(article, spread(recipe, article), executor, wide=True, least_margin=BESIDE)
            planted = plants(recipe, article, executor, thirty())
        print(f"{name}: surface of {explored.solves} solves, {explored.error_db:.4f} dB rms")
        for kind in ("point", "sweep"):
            rng = np.random.default_rng(2)
            found = [find(explored, planted.sweep(i, rng, kind=kind)) for i in range(len(planted.clean))]
            for label in ("right", "open"):
                for key, limit in WITHIN.items():
                    fits = [getattr(f, label) for f in found]
                    if not fits[0].has(key):
                        continue
                    truth = np.full(len(fits), 20.0)
                    if key != OFFSET:
                        truth = planted.deviations[:, planted.names.index(key)]
                    got = [fit.get(key) for fit in fits]
                    error = np.array([d.value for d in got]) - truth
                    held = sum(d.interval[0] <= t <= d.interval[1] for d, t in zip(got, truth, strict=True))
                    print(
                        f"  noise of each {kind:<6} model {label:<6} {key:<16} within {limit:g} mm: "
                        f"{int((abs(error) <= limit).sum()):2d}/30  interval holds: {held:2d}/30  cannot tell: "
                        f"{sum(not d.told for d in got):2d}  rms {np.sqrt(np.mean(error**2)):.3f} mm"
                    )


if __name__ == "__main__":
    main(sys.argv[1:] or ["boatshed-5g8", "saltmarsh-2g4"])
