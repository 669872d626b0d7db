"""Time and memory over 1, 10, 100, 1,000 recipes and pieces: python tests/bench/bench_scale.py

A fixed cost and one in proportion: printed are cost and memory of n over those of one, which should never exceed
n. Recipes are checked up to a hundred at a time; ten are built side by side (not with --quick).
"""

from __future__ import annotations

import os
import sys
import tempfile
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from tests.bench.measure import RECIPES, Cost, run


def bench(*, quick: bool = False) -> dict[str, Any]:
    """Processor time, wall time and memory, over those of one recipe or piece."""
    text = (RECIPES / "saltmarsh-2g4.toml").read_text(encoding="utf-8")
    assert 'name = "saltmarsh-2g4"' in text and "quantity = 12" in text
    out: dict[str, Any] = {}
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        files = []
        for number in range(100):
            files.append(folder / f"r{number}.toml")
            files[-1].write_text(text.replace("saltmarsh-2g4", f"saltmarsh-{number}"), encoding="utf-8")
        checks = {n: run(["-m", "wavejig", "check", *map(str, files[:n])]) for n in (1, 10, 100)}
        out["recipes checked"] = _table("recipes checked", checks)
        pieces = {}
        for n in (1, 1000) if quick else (1, 10, 100, 1000):
            recipe = folder / f"q{n}.toml"
            recipe.write_text(text.replace("quantity = 12", f"quantity = {n}"), encoding="utf-8")
            pieces[n] = run(_build(folder / f"pieces-{n}", recipe))
        out["pieces built"] = _table("pieces built", pieces)
        if not quick:
            recipes = {n: run(_build(folder / f"recipes-{n}", *files[:n])) for n in (1, 10)}
            out["recipes built"] = _table("recipes built", recipes)
    return out


def _build(out: Path, *recipes: Path) -> list[str]:
    return ["-m", "wavejig", "build", "--skip-field", "--out", str(out), *map(str, recipes)]


def _table(title: str, costs: dict[int, Cost]) -> dict[str, dict[str, float]]:
    one = costs[1]
    table = {
        str(n): {
            "cpu": c.cpu_s / one.cpu_s,
            "wall": c.wall_s / one.wall_s,
            "memory": c.peak_mib / one.peak_mib,
        }
        for n, c in costs.items()
    }
    print(f"{title}, over one ({os.cpu_count()} cores; memory of the largest process)")
    for n, row in table.items():
        print(f"  {n:>5}   " + "   ".join(f"{kind} {value:.2f}" for kind, value in row.items()))
    return table


if __name__ == "__main__":
    bench(quick="--quick" in sys.argv)
