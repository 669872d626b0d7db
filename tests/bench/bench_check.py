"""Cold `wavejig check` against importing the CAD kernel, in alternation: python tests/bench/bench_check.py

Prints the ratio of medians with the spread of single ratios; the contract is at most 0.5 (0.35 wanted).
"""

from __future__ import annotations

import json
import statistics
import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
ROUNDS = 7


def seconds(arguments: list[str]) -> float:
    """Wall time of one fresh process."""
    began = time.perf_counter()
    subprocess.run([sys.executable, *arguments], check=True, capture_output=True, cwd=ROOT)
    return time.perf_counter() - began


def main() -> None:
    recipe = str(ROOT / "recipes" / "saltmarsh-2g4.toml")
    jobs = {
        "kernel": ["-c", "import cadquery"],
        "check": ["-m", "wavejig", "check", recipe],
        "help": ["-m", "wavejig", "--help"],
    }
    for job in jobs.values():  # fill the disk cache and write byte code
        seconds(job)
    times: dict[str, list[float]] = {name: [] for name in jobs}
    for _ in range(ROUNDS):  # in turn, so that a noisy minute falls on all alike
        for name, job in jobs.items():
            times[name].append(seconds(job))
    out = {}
    for name in ("check", "help"):
        ratios = [a / b for a, b in zip(times[name], times["kernel"], strict=True)]
        out[name] = {
            "ratio": statistics.median(times[name]) / statistics.median(times["kernel"]),
            "low": min(ratios),
            "high": max(ratios),
        }
        print(
            f"{name:<6} / import of the kernel: {out[name]['ratio']:.2f} ({min(ratios):.2f} to {max(ratios):.2f})"
        )
    print(json.dumps(out))


if __name__ == "__main__":
    main()
