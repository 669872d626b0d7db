"""Reads a drawing as somebody with the paper in hand does: printed numbers, and what they point at.

Only ezdxf and arithmetic; nothing of the package. Where a dimension's lines begin tells which feature it
sizes; how large the feature is, is taken from the printed text alone.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from pathlib import Path

import ezdxf

Pt = tuple[float, float]
_NUMBER = re.compile(r"(?:(\d+)× )?([ØR]?)(\d+(?:\.\d+)?)")


@dataclass(frozen=True)
class Printed:
    """One dimension: its printed number, and the points its lines begin at (to recognise, not to measure)."""

    kind: str  # x, y, slanted, diameter, radius, angle
    count: int
    value: float
    a: Pt
    b: Pt
    detail: bool  # belongs to a view at another scale


def printed_dimensions(path: Path) -> list[Printed]:
    """Every dimension of a drawing's file."""
    out = []
    for d in ezdxf.readfile(path).modelspace().query("DIMENSION"):
        # what shows is the text in the dimension's own block
        block = d.get_geometry_block()
        (text,) = [t.plain_text() for t in block.query("TEXT")]
        found = _NUMBER.search(text)
        assert found, text
        kind = {0: "linear", 3: "diameter", 4: "radius", 2: "angle"}[d.dimtype]
        if kind == "linear":
            a, b = d.dxf.defpoint2, d.dxf.defpoint3
            turn = d.dxf.angle % 180.0
            kind = "x" if turn < 1e-6 else "y" if abs(turn - 90.0) < 1e-6 else "slanted"
        elif kind == "angle":
            a, b = d.dxf.defpoint4, d.dxf.defpoint5
        else:
            a, b = d.dxf.defpoint, d.dxf.defpoint4
        detail = abs(d.override().get("dimlfac", 1.0) - 1.0) > 1e-9
        out.append(
            Printed(
                kind=kind,
                count=int(found[1] or 1),
                value=float(found[3]),
                a=(a[0], a[1]),
                b=(b[0], b[1]),
                detail=detail,
            )
        )
    return out


def printed_table(path: Path, head: tuple[str, ...]) -> list[tuple[str, ...]]:
    """The rows below a table's head, put together from single texts by where they stand."""
    texts = [
        (t.dxf.insert[0], t.dxf.insert[1], t.plain_text())
        for t in ezdxf.readfile(path).modelspace().query("TEXT")
    ]
    for x, y, first in texts:
        if first != head[0]:
            continue
        line = sorted((u, w) for u, v, w in texts if abs(v - y) < 1e-6 and u >= x - 1e-6)
        if tuple(w for _, w in line[: len(head)]) != head:
            continue
        columns = [u for u, _ in line[: len(head)]]
        rows = []
        below = sorted(((v, u, w) for u, v, w in texts if v < y - 1e-6 and abs(u - x) < 1e-6), reverse=True)
        step = None
        last = y
        for v, _, _ in below:
            step = step or last - v
            if abs((last - v) - step) > 1e-3:
                break  # the next table
            cells = {round(u, 4): w for u, vv, w in texts if abs(vv - v) < 1e-6}
            rows.append(tuple(cells.get(round(u, 4), "") for u in columns))
            last = v
        return rows
    raise AssertionError(f"no table with head {head}")


def rounded_outline(corners: list[tuple[float, float, float]], chord: float = 0.002) -> list[Pt]:
    """Points of the closed outline through corners (x, y, radius), each rounded by a tangent arc."""
    out: list[Pt] = []
    n = len(corners)
    for i, (x, y, r) in enumerate(corners):
        px, py, _ = corners[i - 1]
        qx, qy, _ = corners[(i + 1) % n]
        a, b = math.atan2(y - py, x - px), math.atan2(qy - y, qx - x)
        turn = (b - a + math.pi) % (2.0 * math.pi) - math.pi
        if r <= 0.0 or abs(turn) < 1e-9:
            out.append((x, y))
            continue
        back = r * math.tan(abs(turn) / 2.0)
        side = math.copysign(1.0, turn)
        sx, sy = x - back * math.cos(a), y - back * math.sin(a)
        cx, cy = sx - side * r * math.sin(a), sy + side * r * math.cos(a)
        steps = max(2, math.ceil(abs(turn) / (2.0 * math.acos(1.0 - min(chord / r, 1.0)))))
        for k in range(steps + 1):
            t = a - side * math.pi / 2.0 + turn * k / steps
            out.append((cx + r * math.cos(t), cy + r * math.sin(t)))
    return out
