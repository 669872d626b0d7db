"""The field solver against LAPACK on the same machine: python tests/bench/bench_field.py [--quick]

One frequency (fill, solve, far field: two cuts of 361 directions and the sphere's integral) as multiples of
LAPACK's zgesv of the same size, at about 600 and 1,200 unknowns, on one and two threads, without mirror
symmetry and with it. Wanted: at most 4 without (aim 2). Then the memory of 4,000 unknowns (at most 2 GiB)
and the first compile with an empty cache (at most 20 s; the next process pays none). Each measurement is a
process of its own, ours and LAPACK's in turn within it; printed are medians and ratios of one run. zgesv
with one right side runs on one thread in the usual libraries; what their threaded zgetrf takes stands beside.
"""

from __future__ import annotations

import json
import os
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
HZ = 2.44e9


def child_speed(size: int, rounds: int) -> dict[str, float]:
    """Median seconds of each stage, ours and LAPACK's in turn."""
    import numpy as np
    from scipy.linalg.lapack import zgesv, zgetrf

    from tests.field.antennas import biquad
    from wavejig.field.matrix import impedance_matrix
    from wavejig.field.response import Response
    from wavejig.field.solver import prepare
    from wavejig.field.symmetry import find_mirrors, solve_by_parity

    model = min(
        (biquad(mesh_mm=m) for m in np.arange(6.0, 14.0, 0.25)),
        key=lambda m: abs(len(m.wires) + 1.5 * len(m.triangles) - 60 - size),
    )
    prepare(model, HZ)
    began = time.perf_counter()
    prepared = prepare(model, HZ, mirrors=False)
    times: dict[str, list[float]] = {"prepare": [time.perf_counter() - began]}
    elements = prepared.elements
    mirrors = find_mirrors(model, elements)
    n = elements.unknowns
    angle = np.radians(np.arange(-180, 181))
    cut = np.stack([np.sin(angle), np.zeros_like(angle), np.cos(angle)], axis=1)
    looks = np.concatenate([cut, cut[:, [1, 0, 2]]])
    draw = np.random.default_rng(1)
    plain = np.asfortranarray(draw.standard_normal((n, n)) + 1j * draw.standard_normal((n, n)))
    right = np.ones((n, 1), dtype=complex)
    drive = elements.ports.T.astype(complex)

    def timed(name: str, work):  # type: ignore[no-untyped-def]
        start = time.perf_counter()
        result = work()
        times.setdefault(name, []).append(time.perf_counter() - start)
        return result

    for _ in range(rounds + 1):
        copy = plain.copy(order="F")
        timed("zgesv", lambda a=copy: zgesv(a, right, overwrite_a=1))
        copy = plain.copy(order="F")
        timed("zgetrf", lambda a=copy: zgetrf(a, overwrite_a=1))
        z = timed("fill", lambda: impedance_matrix(model, elements, prepared.passes, HZ))
        copy = z.copy().T
        half = timed("solve, mirrors", lambda a=copy: solve_by_parity(a, drive, mirrors))
        x = timed("solve", lambda a=z.T: solve_by_parity(a, drive, ()))
        assert np.abs(half - x).max() < 1e-8 * np.abs(x).max()
        response = Response(
            frequencies_hz=np.array([HZ]),
            model=model,
            elements=elements,
            currents_a_per_v=x[None],
            remarks=(),
        )
        timed("far field", lambda r=response: r.directivity_dbi(looks))
    found = {name: statistics.median(v[1:] or v) for name, v in times.items()}
    return {"unknowns": n, "mirrors": len(mirrors), **found}


def child_memory() -> dict[str, float]:
    """Peak resident memory of 4,000 unknowns, and of the process before it."""
    import resource

    from tests.field.antennas import biquad
    from wavejig.field import solve

    solve(biquad(mesh_mm=13.0), [HZ])
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 2**20
    model = biquad(mesh_mm=4.05)
    response = solve(model, [HZ], mirrors=False)
    response.directivity_dbi([(0.0, 0.0, 1.0)])
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 2**20
    return {"unknowns": response.unknowns, "before": before, "peak": peak}


def child_compile() -> dict[str, float]:
    """Processor seconds of a first small solve and of a second, and how often a compile was announced."""
    from tests.field.antennas import biquad
    from wavejig.field import solve

    told: list[str] = []
    model = biquad(mesh_mm=13.0)
    times = []
    for _ in range(2):
        # compiling is one thread's work: its processor time is what it takes on a machine at rest
        began = time.process_time()
        response = solve(model, [HZ], announce=told.append)
        response.directivity_dbi([(0.0, 0.0, 1.0)])
        times.append(time.process_time() - began)
    return {"first": times[0], "second": times[1], "told": len(told)}


def run(job: str, *arguments: object, threads: int = 1, **environment: str) -> dict[str, float]:
    """One job in a fresh process with its own thread limits."""
    limits = {
        name: str(threads)
        for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS", "NUMBA_NUM_THREADS")
    }
    path = os.pathsep.join([str(ROOT), str(ROOT / "parts")])
    done = subprocess.run(
        [sys.executable, __file__, "--child", job, *map(str, arguments)],
        check=True,
        capture_output=True,
        text=True,
        cwd=ROOT,
        env={**os.environ, **limits, "PYTHONPATH": path, **environment},
    )
    result: dict[str, float] = json.loads(done.stdout.strip().splitlines()[-1])
    return result


def main() -> None:
    quick = "--quick" in sys.argv
    print("one frequency as multiples of zgesv (fill + solve + far field = total)")
    for threads in (1, 2):
        for size in (600,) if quick else (600, 1200):
            t = run("speed", size, 5 if quick else 9, threads=threads)
            lapack = t["zgesv"]
            part = {
                k: t[k] / lapack
                for k in ("fill", "solve", "far field", "solve, mirrors", "prepare", "zgetrf")
            }
            total = part["fill"] + part["solve"] + part["far field"]
            mirrored = part["fill"] + part["solve, mirrors"] + part["far field"]
            print(
                f"  {t['unknowns']:5.0f} unknowns, {threads} threads: fill {part['fill']:.2f} + solve "
                f"{part['solve']:.2f} + far {part['far field']:.2f} = {total:.2f};  with {t['mirrors']:.0f} mirrors "
                f"solve {part['solve, mirrors']:.2f}, total {mirrored:.2f}   (once per sweep: {part['prepare']:.2f}; "
                f"zgetrf alone {part['zgetrf']:.2f}; "
                f"zgesv {lapack * 1e3:.0f} ms)",
                flush=True,
            )
    if quick:
        return
    m = run("memory", threads=2)
    print(
        f"memory: {m['unknowns']:.0f} unknowns, peak {m['peak']:.2f} GiB (before: {m['before']:.2f})",
        flush=True,
    )
    with tempfile.TemporaryDirectory() as cache:
        for name in ("first", "next"):
            c = run("compile", threads=2, NUMBA_CACHE_DIR=cache)
            print(
                f"compile, {name} process: {c['first'] - c['second']:.1f} s more than a second solve, told "
                f"{c['told']:.0f} times"
            )


if __name__ == "__main__":
    if "--child" in sys.argv:
        job, *rest = sys.argv[sys.argv.index("--child") + 1 :]
        jobs = {"speed": child_speed, "memory": child_memory, "compile": child_compile}
        print(json.dumps(jobs[job](*map(int, rest))))  # type: ignore[operator]
    else:
        main()
