"""A second build of a pack: unchanged, verified, and after a change: python tests/bench/bench_rebuild.py

Contract: an unchanged recipe in under half the kernel's import. A changed spacer is set against the same recipe
built from nothing.
"""

from __future__ import annotations

import sys
import tempfile
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from tests.bench.measure import RECIPES, Cost, alternate, line, ratios, run

CHANGES = {
    "spacer": '\n[spacer]\nmaterial = "ASA"\n',
    "quantity": None,  # the key stands in the recipe already
}


def bench(*, quick: bool = False) -> dict[str, Any]:
    """Ratios of processor and wall time."""
    text = (RECIPES / "saltmarsh-2g4.toml").read_text(encoding="utf-8")
    assert "[spacer]" not in text and "quantity = 12" in text
    out: dict[str, Any] = {}
    with tempfile.TemporaryDirectory() as folder:
        recipe, packs = Path(folder) / "saltmarsh.toml", Path(folder) / "packs"
        recipe.write_text(text, encoding="utf-8")
        again = ["-m", "wavejig", "build", "--skip-field", str(recipe), "--out", str(packs)]
        run(again)
        jobs = {"kernel": ["-c", "import cadquery"], "unchanged": again}
        jobs["verify"] = ["-m", "wavejig", "build", "--verify", str(packs / "saltmarsh-2g4")]
        costs = alternate(jobs, 3 if quick else 7)
        for name in ("unchanged", "verify"):
            out[name] = ratios(costs[name], costs["kernel"])
            print(line(f"{name} / kernel import", out[name]))
        for name, added in CHANGES.items():
            if quick and name == "quantity":
                continue
            taken: list[Cost] = []
            fresh: list[Cost] = []
            for number in range(1 if quick else 3):
                changed = (
                    text.replace("quantity = 12", f"quantity = {13 + number}")
                    if added is None
                    else text + added
                )
                recipe.write_text(text, encoding="utf-8")
                run(again)
                recipe.write_text(changed, encoding="utf-8")
                taken.append(run(again))
                fresh.append(run([*again, "--from-scratch"]))
            out[name] = ratios(taken, fresh)
            print(line(f"{name} changed / built from nothing", out[name]))
    return out


if __name__ == "__main__":
    bench(quick="--quick" in sys.argv)
