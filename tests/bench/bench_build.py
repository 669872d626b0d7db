"""Cold build of saltmarsh-2g4 by stage, against the floor: python tests/bench/bench_build.py

The floor is one fresh process that imports the kernel, makes the same solids by direct calls, writes them
as STEP and STL, and reads them back: what no program built on this kernel can go below. Both run in turn,
several times; printed are medians as multiples of the kernel's import.
"""

from __future__ import annotations

import json
import statistics
import subprocess
import sys
import tempfile
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
ROUNDS = 3

STAGED = """
import json, sys, time
from pathlib import Path
t = [time.perf_counter()]
marks = []
def progress(name):
    t.append(time.perf_counter())
    marks.append(name)
from wavejig.pack import build
import_cost = time.perf_counter() - t[0]
build(Path(sys.argv[1]), Path(sys.argv[2]), progress)
t.append(time.perf_counter())
spans = {name: t[i + 2] - t[i + 1] for i, name in enumerate(marks)}
print(json.dumps({"start": t[1] - t[0], **spans}))
"""

# The solids are taken from the pack's own STEP files, so that the floor makes exactly them: reading a
# solid stands for making it by direct calls, which is cheaper still than any boolean that led to it.
FLOOR = """
import json, sys, time
from pathlib import Path
a = time.perf_counter()
import cadquery as cq
b = time.perf_counter()
pack, out = Path(sys.argv[1]), Path(sys.argv[2])
solids = {p: cq.importers.importStep(str(p)).val() for p in sorted(pack.rglob("*.step"))}
c = time.perf_counter()
for path, solid in solids.items():
    target = out / path.name
    cq.exporters.export(cq.Workplane(solid), str(target))
    if path.with_suffix(".stl").exists():
        cq.exporters.export(cq.Workplane(solid), str(target.with_suffix(".stl")), tolerance=0.02, angularTolerance=0.2)
d = time.perf_counter()
for path in solids:
    back = cq.importers.importStep(str(out / path.name)).val()
    assert back.isValid() and abs(back.Volume() - solids[path].Volume()) < 1e-3
e = time.perf_counter()
print(json.dumps({"kernel": b - a, "make": c - b, "write": d - c, "read back": e - d}))
"""


def run(code: str, *arguments: str) -> dict[str, float]:
    """Stage times of one fresh process."""
    done = subprocess.run(
        [sys.executable, "-c", code, *arguments], check=True, capture_output=True, text=True, cwd=ROOT
    )
    result: dict[str, float] = json.loads(done.stdout.strip().splitlines()[-1])
    return result


def main() -> None:
    recipe = str(ROOT / "recipes" / "saltmarsh-2g4.toml")
    builds, floors = [], []
    with tempfile.TemporaryDirectory() as folder:
        run(STAGED, recipe, folder)
        for number in range(ROUNDS):
            builds.append(run(STAGED, recipe, folder))
            target = Path(folder) / f"floor-{number}"
            target.mkdir()
            floors.append(run(FLOOR, str(Path(folder) / "saltmarsh-2g4"), str(target)))
    kernel = statistics.median(f["kernel"] for f in floors)

    def table(title: str, runs: list[dict[str, float]]) -> float:
        total = statistics.median(sum(r.values()) for r in runs)
        print(f"{title}: {total / kernel:.2f} x the kernel's import")
        for stage in runs[0]:
            print(f"  {stage:<24} {statistics.median(r[stage] for r in runs) / kernel:6.2f}")
        return total

    build, floor = table("cold build, by stage", builds), table("floor", floors)
    ratios = [sum(b.values()) / sum(f.values()) for b, f in zip(builds, floors, strict=True)]
    print(f"build / floor: {build / floor:.2f} ({min(ratios):.2f} to {max(ratios):.2f})")
    print(json.dumps({"build": builds, "floor": floors}))


if __name__ == "__main__":
    main()
