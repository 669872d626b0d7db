"""Cold build of saltmarsh-2g4 without a field solve, by stage, against the floor: python tests/bench/bench_build.py

The floor is `floor.py`: the same solids and drawings made, written and read back by direct calls in one process.
PDF and HTML are taken out of the build's time and stated apart. Processor time is that of both of a build's
processes; wall time is what they take side by side. Contract: at most 1.5.
"""

from __future__ import annotations

import statistics
import sys
import tempfile
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from tests.bench.measure import RECIPES, ROOT, Cost, line, ratio, run

STAGED = """
import json, resource, sys, time
from pathlib import Path
began, paper = (time.perf_counter(), 0.0), [0.0, 0.0]
marks = [("our modules", time.perf_counter(), time.process_time())]
def progress(name):
    marks.append((name, time.perf_counter(), time.process_time()))
def apart(module, name):
    plain = getattr(module, name)
    def timed(*a, **k):
        wall, cpu = time.perf_counter(), time.process_time()
        try:
            return plain(*a, **k)
        finally:
            paper[0] += time.perf_counter() - wall
            paper[1] += time.process_time() - cpu
    setattr(module, name, timed)
import wavejig.pack as pack
progress("kernel and libraries")
import wavejig.files.packfiles, wavejig.files.fingerprint
progress("libraries of the paper")
wall, cpu = time.perf_counter(), time.process_time()
import wavejig.sheets.sheetfiles as sheets, wavejig.sheets.report.frompack as report
paper = [time.perf_counter() - wall, time.process_time() - cpu]
for name in ("write_sheet_pdf", "check_pdf", "write_build_sheet", "write_drill_paper"):
    apart(sheets, name)
apart(report, "write_pack_report")
pack.build(Path(sys.argv[1]), Path(sys.argv[2]), progress, predict=False)
progress("")
used = [resource.getrusage(w) for w in (resource.RUSAGE_SELF, resource.RUSAGE_CHILDREN)]
stages = {}
for (name, w0, c0), (_, w1, c1) in zip(marks, marks[1:]):
    was = stages.get(name, (0.0, 0.0))
    stages[name] = (was[0] + w1 - w0, was[1] + c1 - c0)
stages["read back beside"] = (0.0, used[1].ru_utime + used[1].ru_stime)
print(json.dumps({"stages": stages, "paper": paper}))
"""


def bench(*, quick: bool = False) -> dict[str, Any]:
    """Ratios, and stages as parts of the floor (processor time)."""
    recipe = str(RECIPES / "saltmarsh-2g4.toml")
    builds: list[Cost] = []
    floors: list[Cost] = []
    with tempfile.TemporaryDirectory() as folder:
        for number in range(1 if quick else 3):  # no run to warm up: a build's seconds do not feel it
            out = Path(folder) / f"build-{number}"
            builds.append(run(["-c", STAGED, recipe, str(out)]))
            floors.append(
                run([str(ROOT / "tests/bench/floor.py"), recipe, str(out / "saltmarsh-2g4"), f"{out}-floor"])
            )
    told, floor = [b.data() for b in builds], [f.data() for f in floors]
    whole = [sum(f.values()) for f in floor]
    cpu = [b.cpu_s - t["paper"][1] for b, t in zip(builds, told, strict=True)]
    wall = [b.wall_s - t["paper"][0] for b, t in zip(builds, told, strict=True)]
    # the floor's own planning is not on its clock; on the wall, its share of the whole process stands for it
    floor_wall = [f.wall_s * w / f.cpu_s for f, w in zip(floors, whole, strict=True)]
    found = {"cpu": ratio(cpu, whole), "wall": ratio(wall, floor_wall)}
    print(line("build without PDF and HTML / floor", found))
    kernel = {"cpu": ratio(cpu, [f["import the kernel"] for f in floor])}
    print(line("  the same / kernel import", kernel))
    paper = {"cpu": ratio([t["paper"][1] for t in told], whole)}
    print(line("  PDF and HTML, apart / floor", paper))
    tables: dict[str, dict[str, float]] = {"build": {}, "floor": {}}
    for name in told[0]["stages"]:
        tables["build"][name] = _part([t["stages"][name][1] for t in told], whole)
    for name in floor[0]:
        tables["floor"][name] = _part([f[name] for f in floor], whole)
    for title, table in tables.items():
        print(f"  {title}, parts of the floor (processor time)")
        for name, part in table.items():
            print(f"    {name:<28} {part:6.3f}")
    return {"build / floor": found, "build / kernel import": kernel, "paper / floor": paper, "parts": tables}


def _part(of: list[float], whole: list[float]) -> float:
    return statistics.median(a / b for a, b in zip(of, whole, strict=True))


if __name__ == "__main__":
    bench(quick="--quick" in sys.argv)
