"""The response surface on articles it has not seen: python tests/bench/bench_yield.py [RECIPE...]

Fifty random articles a recipe, solved directly at nine frequencies of the band, against the surface: error
of the in-band worst return loss, rms and largest; solves it was fitted with; seconds.
"""

from __future__ import annotations

import sys
import time
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).parents[2]))  # started by its path, also in the workers
from tests.tuning.articles import NEAR, near
from wavejig.tuning.explore import explore
from wavejig.tuning.points import random_articles
from wavejig.tuning.solving import Job, solve_all, workers
from wavejig.tuning.spread import spread
from wavejig.tuning.surface import reflection, worst_return_loss_db
from wavejig.tuning.yields import find_yield

ARTICLES = 50


def main(names: list[str]) -> None:
    print(
        "recipe                dims  solves  form         own error  unseen rms  unseen max   band worst      "
        "pass  s/solve"
    )
    for name in names:
        recipe, article = near(name)
        known = spread(recipe, article)
        target = article.design.target
        values = random_articles(
            known.dimensions, np.random.default_rng(5).random((ARTICLES, len(known.names)))
        )
        f = np.linspace(target.band_low_hz, target.band_high_hz, 9)
        with workers() as executor:
            began = time.monotonic()
            explored = explore(article, known, executor)
            taken = time.monotonic() - began
            truth = reflection(
                np.array(
                    solve_all(
                        executor,
                        [
                            Job(
                                nominal=article,
                                values={n: float(v) for n, v in zip(known.names, row, strict=True)},
                                frequencies_hz=tuple(float(x) for x in f),
                            )
                            for row in values
                        ],
                    )
                ),
                target.reference_ohm,
            )
        worst = worst_return_loss_db(truth)
        miss = worst_return_loss_db(explored.surface.reflection(values, f)) - worst
        found = find_yield(explored, article.design.quantity, target.return_loss_db, articles=4000)
        print(
            f"{name:<20}  {len(known.names):4d}  {explored.solves:6d}  {explored.surface.curve.form:<11}  "
            f"{explored.error_db:7.4f} dB  {np.sqrt(np.mean(miss**2)):7.4f} dB  {abs(miss).max():7.4f} dB  "
            f"{worst.min():5.2f} to {worst.max():5.2f}  {100 * found.passing.value:5.1f} %  "
            f"{taken / explored.solves:5.2f}",
            flush=True,
        )


if __name__ == "__main__":
    main(sys.argv[1:] or list(NEAR))
