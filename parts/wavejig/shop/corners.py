"""Findings about the corners of a folded tray: notches the cutter cannot cut, lips that would meet when folded.

How large a notch must be for the sheet (as wide as it is thick and 1 mm, as deep as radius and thickness) is no
finding: `reflector/tray.py` plans none smaller and leaves none out.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from itertools import pairwise

from wavejig.design.model import Design
from wavejig.reflector.model import EDGES, Tray, TrayLip
from wavejig.shop.finding import NOTE, WARNING, Finding
from wavejig.stock.errors import StockError
from wavejig.stock.processes import cutter, iso2768_angle_deg

# What a fold holds at best, whatever the general tolerance says; common practice, no source.
LEAST_FOLD_DEG = 1.0


def corner_findings(design: Design, tray: Tray) -> Iterator[Finding]:
    """Notches and lips of a tray that is cut and folded."""
    yield from _notches(design, tray)
    yield from _lips(design, tray)


def tightest_notch_mm(tray: Tray) -> float | None:
    """Least radius of the outline's inside corners, 0 for a sharp one; None when it has no inside corner."""
    found: list[float] = []
    corners = tray.outline.vertices
    if tray.outline.area_mm2 < 0.0:
        corners = tuple((x, y, -b) for x, y, b in corners)[::-1]
    for (x0, y0, bulge), (x1, y1, _) in pairwise((*corners, corners[0])):
        if bulge < 0.0:
            found.append(math.dist((x0, y0), (x1, y1)) * (1.0 + bulge**2) / (4.0 * -bulge))
    for a, b, c in zip(corners[-1:] + corners[:-1], corners, corners[1:] + corners[:1], strict=True):
        turn = (b[0] - a[0]) * (c[1] - b[1]) - (b[1] - a[1]) * (c[0] - b[0])
        if not a[2] and not b[2] and turn < -1e-6:
            found.append(0.0)
    return min(found, default=None)


def _notches(design: Design, tray: Tray) -> Iterator[Finding]:
    tightest = tightest_notch_mm(tray)
    process = cutter(design.cutter.process)
    least = process.inside_corner_radius_mm
    if tightest is None or tightest >= least - 1e-6:
        return
    yield Finding(
        code="notch-too-tight",
        severity=WARNING,
        message=f"the corner notches have an inside radius of {tightest:.2f} mm; the sharpest a {process.name} cuts is "
        f"{least:g} mm, so metal stays where the folds begin, and they bulge or tear there",
        remedy=f'Leave kerf = "auto", {process.kerf_mm:g} mm for a {process.name} (the notch grows with it), '
        "choose a finer process, or drill the notches' corners first.",
        where="cutter.kerf",
        source="inside corner radius from table cutters",
    )


def fold_tolerance_deg(design: Design, leg_mm: float) -> float:
    """What a fold with a lip that long is held to, plus or minus."""
    try:
        general = iso2768_angle_deg(leg_mm, design.tolerances.grade)  # type: ignore[arg-type]
    except StockError:
        general = 0.0
    return max(general, LEAST_FOLD_DEG)


def lip_gaps_mm(tray: Tray) -> Iterator[tuple[TrayLip, TrayLip, float]]:
    """(lip, neighbour, gap) at each folded corner: from the lip's inner face, at its tip, to the neighbour's end."""
    for i, edge in enumerate(EDGES):
        for other, side in ((EDGES[(i + 1) % 4], "left"), (EDGES[i - 1], "right")):
            lip, neighbour = tray.lip(edge), tray.lip(other)
            if lip is None or neighbour is None:
                continue
            b = math.radians(lip.angle_deg)
            inner = tray.half_mm(edge) + lip.height_mm * math.cos(b) - tray.thickness_mm * math.sin(b)
            end = neighbour.left if side == "left" else neighbour.right
            # where the lower of the two ends, the higher has nothing to meet any more
            level = min(neighbour.flange_mm, lip.flange_mm)
            yield lip, neighbour, inner - end.reach_mm(level)


def _lips(design: Design, tray: Tray) -> Iterator[Finding]:
    worst: tuple[float, TrayLip, TrayLip, float, float, float] | None = None
    for lip, neighbour, gap in lip_gaps_mm(tray):
        off = fold_tolerance_deg(design, lip.height_mm)
        level = min(lip.height_mm, neighbour.height_mm)
        b = math.radians(lip.angle_deg)
        closes = level * (math.cos(b) - math.cos(b + math.radians(off)))
        if closes > gap and (worst is None or closes - gap > worst[0]):
            worst = (closes - gap, lip, neighbour, gap, closes, off)
    if worst is None:
        return
    _, lip, neighbour, gap, closes, off = worst
    yield Finding(
        code="lips-may-collide",
        # a little less than half the sheet springs aside or is filed; more does not
        severity=WARNING if closes - gap > tray.thickness_mm / 2.0 else NOTE,
        message=f"{gap:.2f} mm between the folded lips {lip.edge} and {neighbour.edge} at their tips; folded {off:g} "
        f"deg too far, within tolerance, {lip.edge} comes {closes:.2f} mm nearer and meets the other",
        remedy='Write corners = "relief", make the lips lower, or ask for the folds on the low side of their angle.',
        where="reflector.lip_height" if tray.corner_style != "mitre" else "reflector.corners",
        source="geometry of the folded corner; ISO 2768-1 for the angle, at least 1 deg (common practice)",
    )
