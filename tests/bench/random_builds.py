"""Builds random legal recipes and says how each ended: `python -m tests.bench.random_builds --seeds 0-499`.

Every recipe either builds (each file of the pack read back), or is refused by a finding, or by the recipe reader;
anything else is a fault, and is told with its trace. A seed runs in a process of its own, so that a kernel that
crashes or never ends is only that seed's fault. Results are rows of JSON, one a seed; seeds that have one are
passed over, so that a run can be broken off and gone on with. `--inspect` judges only, without the CAD kernel.
"""

from __future__ import annotations

import argparse
import json
import os
import subprocess
import sys
import tempfile
import time
import traceback
from collections import Counter
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path
from typing import Any

ROOT = Path(__file__).parents[2]
TIMEOUT_S = 900


def run_seed(seed: int, *, inspect_only: bool, folder: Path) -> dict[str, Any]:
    """One recipe, in this process."""
    from tests.random_recipes import FAMILIES, random_recipe
    from wavejig.pack import CannotBeMadeError, build, inspect_recipe
    from wavejig.recipe import RecipeError

    path = folder / f"random-{seed}.toml"
    path.write_text(random_recipe(seed), encoding="utf-8")
    row: dict[str, Any] = {"seed": seed, "family": FAMILIES[seed % len(FAMILIES)]}
    began = time.process_time()
    try:
        if inspect_only:
            _, inspection = inspect_recipe(path)
            if not inspection.can_be_made:
                raise CannotBeMadeError(inspection)
            row |= {"outcome": "can be made"}
        else:
            built = build(path, folder / "out", predict=False)
            row |= {"outcome": "built", "files": built.files}
    except RecipeError as err:
        row |= {"outcome": "recipe", "why": str(err).replace(str(folder), "")}
    except CannotBeMadeError as err:
        errors = [f for f in err.inspection.findings if f.severity == "error"]
        row |= {"outcome": "finding", "codes": sorted({f.code for f in errors}), "why": errors[0].message}
    except Exception as err:
        row |= {
            "outcome": "fault",
            "why": f"{type(err).__name__}: {err}"[:500],
            "trace": traceback.format_exc(),
        }
    return row | {"seconds": round(time.process_time() - began, 2)}


def _in_a_process(seed: int, inspect_only: bool) -> dict[str, Any]:
    began = time.monotonic()
    command = [
        sys.executable,
        "-m",
        "tests.bench.random_builds",
        "--one",
        str(seed),
        *(["--inspect"] * inspect_only),
    ]
    lost: dict[str, Any] = {"seed": seed, "outcome": "fault"}
    try:
        done = subprocess.run(
            command, cwd=ROOT, capture_output=True, text=True, timeout=TIMEOUT_S, check=False,
            env={**os.environ, "OMP_NUM_THREADS": "1"},
        )  # fmt: skip
    except subprocess.TimeoutExpired:
        return lost | {"why": f"not done after {TIMEOUT_S} s", "seconds": TIMEOUT_S}
    try:
        row: dict[str, Any] = json.loads(done.stdout.splitlines()[-1])
    except (IndexError, ValueError):
        return lost | {
            "why": f"the process ended with {done.returncode}",
            "trace": done.stderr[-3000:],
            "seconds": round(time.monotonic() - began, 2),
        }
    return row


def table(rows: list[dict[str, Any]]) -> str:
    """How they ended, by family; which findings refused; what went wrong."""
    outcomes = sorted({r["outcome"] for r in rows})
    families = sorted({r.get("family", "?") for r in rows})
    lines = ["| family | " + " | ".join(outcomes) + " |", "|---|" + "---|" * len(outcomes)]
    for family in families:
        of = Counter(r["outcome"] for r in rows if r.get("family", "?") == family)
        lines.append(f"| {family} | " + " | ".join(str(of[o]) for o in outcomes) + " |")
    total = Counter(r["outcome"] for r in rows)
    lines.append("| all | " + " | ".join(str(total[o]) for o in outcomes) + " |")
    codes = Counter(code for r in rows for code in r.get("codes", ()))
    lines += ["", "findings: " + ", ".join(f"{code} {n}" for code, n in codes.most_common())]
    lines += [f"seed {r['seed']}: {r['why']}" for r in rows if r["outcome"] == "fault"]
    return "\n".join(lines)


def main() -> int:
    """Run what is not done yet, print the table; 1 where there is a fault."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--seeds", default="0-499", help="first-last")
    parser.add_argument(
        "--results", type=Path, default=Path("random-builds.jsonl"), help="rows of JSON, added to"
    )
    parser.add_argument("--inspect", action="store_true", help="judge only, no CAD kernel")
    parser.add_argument("--judged", type=Path, help="results of --inspect: build only those that can be made")
    parser.add_argument("--workers", type=int, default=os.cpu_count() or 1)
    parser.add_argument("--one", type=int, help=argparse.SUPPRESS)
    args = parser.parse_args()
    with tempfile.TemporaryDirectory() as name:
        os.environ.setdefault("WAVEJIG_CACHE", name)
        if args.one is not None:
            print(json.dumps(run_seed(args.one, inspect_only=args.inspect, folder=Path(name))))
            return 0
        first, last = (int(n) for n in args.seeds.split("-"))
        rows = (
            [json.loads(line) for line in args.results.read_text().splitlines()]
            if args.results.exists()
            else []
        )
        done = {r["seed"] for r in rows}
        wanted = [s for s in range(first, last + 1) if s not in done]
        if args.judged:
            makeable = {r["seed"] for r in _read(args.judged) if r["outcome"] == "can be made"}
            wanted = [s for s in wanted if s in makeable]
        if args.inspect:
            found = (run_seed(s, inspect_only=True, folder=Path(name)) for s in wanted)
            rows += _kept(found, args.results)
        else:
            with ThreadPoolExecutor(args.workers) as pool:
                rows += _kept(pool.map(lambda s: _in_a_process(s, args.inspect), wanted), args.results)
    rows = [r for r in rows if first <= r["seed"] <= last]
    print(table(rows))
    return 1 if any(r["outcome"] == "fault" for r in rows) else 0


def _read(results: Path) -> list[dict[str, Any]]:
    return [json.loads(line) for line in results.read_text().splitlines()] if results.exists() else []


def _kept(found: Any, results: Path) -> list[dict[str, Any]]:
    rows = []
    with results.open("a", encoding="utf-8") as stream:
        for row in found:
            stream.write(json.dumps(row) + "\n")
            stream.flush()
            rows.append(row)
    return rows


if __name__ == "__main__":
    sys.exit(main())
