"""All benchmarks by one command: python tests/bench [--quick] [--only NAME...] [--json FILE]

Every figure is a ratio of two costs of the same run, taken in turn, with its spread. Nothing here passes or
fails: what makes the figures (modules loaded, meshes made, files read) is guarded by tests.
"""

from __future__ import annotations

import argparse
import json
import platform
import sys
from importlib import import_module
from importlib.metadata import version
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

BENCHES = ("check", "build", "rebuild", "scale", "solver")
LIBRARIES = ("cadquery", "cadquery-ocp", "numpy", "scipy", "numba", "ezdxf", "trimesh", "pydantic")


def main() -> None:
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument(
        "--quick", action="store_true", help="fewer rounds and sizes: minutes instead of an hour"
    )
    parser.add_argument(
        "--only", nargs="+", choices=BENCHES, default=BENCHES, metavar="NAME", help=", ".join(BENCHES)
    )
    parser.add_argument("--json", type=Path, metavar="FILE", help="write the figures there")
    args = parser.parse_args()
    found: dict[str, Any] = {}
    for name in BENCHES:
        if name not in args.only:
            continue
        print(f"== {name}", flush=True)
        found[name] = import_module(f"tests.bench.bench_{name}").bench(quick=args.quick)
        if args.json is not None:  # after each, so that a run broken off has not been for nothing
            told = {"quick": args.quick, "python": platform.python_version(), "machine": platform.machine()}
            told |= {"versions": {library: version(library) for library in LIBRARIES}, "found": found}
            args.json.write_text(json.dumps(told, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()
