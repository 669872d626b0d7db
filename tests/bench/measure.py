"""Costs of fresh processes, taken in turn: what every ratio of the benchmarks is made from.

A busy minute falls on all jobs alike when they take turns, so ratios are formed round by round. Processor time
(of the process and its children) says what work costs; wall time says what waiting costs, and is worth reading
on a quiet machine only.
"""

from __future__ import annotations

import json
import os
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parents[2]
RECIPES = ROOT / "recipes"


@dataclass(frozen=True, slots=True, kw_only=True)
class Cost:
    """One run of a fresh process: seconds on the wall, seconds of processor, most memory held, stdout."""

    wall_s: float
    cpu_s: float
    peak_mib: float
    told: str

    def data(self) -> Any:
        """What its last line of stdout holds as JSON."""
        return json.loads(self.told.strip().splitlines()[-1])


def run(arguments: Sequence[str]) -> Cost:
    """Run this Python with the arguments, from the repository's root. Raises RuntimeError unless it ends well."""
    with tempfile.TemporaryFile() as out, tempfile.TemporaryFile() as err:
        began = time.perf_counter()
        process = subprocess.Popen([sys.executable, *arguments], stdout=out, stderr=err, cwd=ROOT)
        _, status, used = os.wait4(process.pid, 0)
        wall = time.perf_counter() - began
        process.returncode = os.waitstatus_to_exitcode(status)
        out.seek(0)
        err.seek(0)
        told, said = out.read().decode(), err.read().decode()
    if process.returncode != 0:
        raise RuntimeError(f"{arguments[:3]}: exit code {process.returncode}\n{said[-2000:]}")
    return Cost(
        wall_s=wall,
        cpu_s=used.ru_utime + used.ru_stime,
        peak_mib=used.ru_maxrss / 1024.0,
        told=told,
    )


def alternate(jobs: Mapping[str, Sequence[str]], rounds: int) -> dict[str, list[Cost]]:
    """Each job once to warm disk caches and byte code, then `rounds` times, in turn."""
    for arguments in jobs.values():
        run(arguments)
    costs: dict[str, list[Cost]] = {name: [] for name in jobs}
    for _ in range(rounds):
        for name, arguments in jobs.items():
            costs[name].append(run(arguments))
    return costs


def ratio(over: Sequence[float], under: Sequence[float]) -> dict[str, float]:
    """Median, lowest and highest of the ratios, round by round."""
    each = [a / b for a, b in zip(over, under, strict=True)]
    return {"median": statistics.median(each), "low": min(each), "high": max(each)}


def ratios(over: Sequence[Cost], under: Sequence[Cost]) -> dict[str, dict[str, float]]:
    """Ratios of processor and of wall time."""
    return {
        "cpu": ratio([c.cpu_s for c in over], [c.cpu_s for c in under]),
        "wall": ratio([c.wall_s for c in over], [c.wall_s for c in under]),
    }


def line(name: str, found: Mapping[str, Mapping[str, float]]) -> str:
    """One line of a table of ratios."""
    cells = [f"{kind} {r['median']:.2f} ({r['low']:.2f} to {r['high']:.2f})" for kind, r in found.items()]
    return f"{name:<44} {'   '.join(cells)}"
