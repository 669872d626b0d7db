"""Cold `wavejig check` of every recipe against importing the CAD kernel: python tests/bench/bench_check.py

Contract: at most 0.35 of the import. Also `--help`, and where a check's time goes.
"""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from tests.bench.measure import RECIPES, alternate, line, ratios, run

KERNEL = ["-c", "import cadquery"]
PHASES = """
import json, sys, time
from pathlib import Path
t, told = [time.process_time()], {}
def mark(name):
    t.append(time.process_time())
    told[name] = t[-1] - t[-2]
import numpy
mark("numpy")
import pydantic, pydantic.functional_validators
from pydantic import BaseModel
mark("pydantic")
import wavejig.recipe
mark("recipe models")
import wavejig.design, wavejig.shop, wavejig.pack
mark("our other modules")
from wavejig.recipe import read_recipe
recipe = read_recipe(Path(sys.argv[1])).recipe
mark("reading")
from wavejig.tuning.settle import kept
design = kept(recipe).design
mark("resolving")
from wavejig.shop import inspect
inspect(design)
mark("planning and judging")
print(json.dumps(told))
"""


def bench(*, quick: bool = False) -> dict[str, Any]:
    """Ratios by recipe, and the phases of one check as parts of the kernel's import (processor time)."""
    recipes = sorted(RECIPES.glob("*.toml"))
    recipes = recipes[-2:] if quick else recipes
    jobs = {"kernel": KERNEL, "--help": ["-m", "wavejig", "--help"]}
    jobs |= {path.stem: ["-m", "wavejig", "check", str(path)] for path in recipes}
    costs = alternate(jobs, 3 if quick else 7)
    out: dict[str, Any] = {}
    for name in list(jobs)[1:]:
        out[name] = ratios(costs[name], costs["kernel"])
        print(
            line(f"check {name} / kernel import" if name != "--help" else "--help / kernel import", out[name])
        )
    worst = max(out[path.stem]["cpu"]["median"] for path in recipes)
    kernel = min(c.cpu_s for c in costs["kernel"])
    runs = [run(["-c", PHASES, str(RECIPES / "saltmarsh-2g4.toml")]).data() for _ in range(3 if quick else 7)]
    phases = {name: min(r[name] for r in runs) / kernel for name in runs[0]}
    print("  where it goes, saltmarsh-2g4: " + ", ".join(f"{k} {v:.3f}" for k, v in phases.items()))
    print(f"  worst recipe: {worst:.2f} of the kernel's import; contract 0.35")
    return {"ratios": out, "phases of saltmarsh-2g4 / kernel import": phases}


if __name__ == "__main__":
    bench(quick="--quick" in sys.argv)
