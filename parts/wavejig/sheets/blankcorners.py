"""Corners of the blank: radii, ears, and the corner drawn larger where lips are mitred. Lengths in mm."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from wavejig.geometry.plane import Contour
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray, TrayLip
from wavejig.sheets.fit import best_scale
from wavejig.sheets.model import (
    Chain,
    Item,
    Line,
    LinearDim,
    RadiusDim,
    View,
    scale_text,
)

SEEN = "seen from the radiator side"


def ear_sizes(lip: TrayLip) -> Iterator[Item]:
    """How far a mitred lip's ears reach, on the two edges whose sides are free."""
    assert lip.left.ear_mm is not None
    start = lip.bend_end_mm + lip.left.ear_mm
    foot, tip = lip.left.reach_mm(lip.left.ear_mm), lip.left.reach_mm(lip.flange_mm)
    same = abs(foot - tip) < 1e-6
    if lip.edge == "y+":
        y = lip.tip_mm
        yield LinearDim(a=(-tip, y), b=(tip, y), offset_mm=18.0)
        if not same:
            yield LinearDim(a=(-foot, start), b=(foot, start), offset_mm=-6.0)
    if lip.edge == "x+":
        x = lip.tip_mm
        yield LinearDim(a=(x, -tip), b=(x, tip), offset_mm=-18.0, angle_deg=90.0)
        if not same:
            yield LinearDim(a=(start, -foot), b=(start, foot), offset_mm=6.0, angle_deg=90.0)


def corner_sizes(
    outline: Contour, window: tuple[float, float, float, float] | None, *, within: bool
) -> Iterator[Item]:
    """Radii of the outline's arcs in the corner at x+, y+ (all four are alike).

    window: x0, y0, x1, y1 of the corner's detail; only the arcs within it, or only those without.
    """
    done: set[tuple[float, bool]] = set()
    arcs = sorted(_arcs(outline), key=lambda a: -(a[0][0] + 2.0 * a[0][1]))
    for centre, radius, middle_deg, hollow in arcs:
        x = centre[0] + radius * math.cos(math.radians(middle_deg))
        y = centre[1] + radius * math.sin(math.radians(middle_deg))
        key = (round(radius, 6), hollow)
        if x <= 0.0 or y <= 0.0 or key in done:
            continue
        if window and (window[0] <= x <= window[2] and window[1] <= y <= window[3]) != within:
            continue
        done.add(key)
        count = sum(1 for _, r, _, h in arcs if (round(r, 6), h) == key)
        yield RadiusDim(
            centre=centre,
            radius_mm=radius,
            angle_deg=middle_deg,
            inside=hollow,
            reach_mm=9.0 if not hollow else 14.0,
            before=f"{count}\u00d7 " if count > 1 else "",
        )


def corner_window(tray: Tray) -> tuple[float, float, float, float] | None:
    """The stretch of sheet round the corner at x+, y+ that is drawn larger when lips are mitred."""
    a, b = tray.lip("x+"), tray.lip("y+")
    if a is None or b is None or a.right.ear_mm is None or b.left.ear_mm is None:
        return None
    past = a.right.ear_mm + 0.6
    x = a.bend_end_mm + a.right.ear_mm
    y = b.bend_end_mm + b.left.ear_mm
    return (b.left.half_mm - past, a.right.half_mm - past, x + past, y + past)


def corner_detail(
    tray: Tray, pattern: FlatPattern, left: float, top: float, bottom: float, wide: float
) -> View:
    """The mitred corner at x+, y+, with where its ears begin (from the bend lines) and its radii."""
    window = corner_window(tray)
    assert window is not None
    a, b = tray.lip("x+"), tray.lip("y+")
    assert a is not None and b is not None and a.right.ear_mm is not None and b.left.ear_mm is not None
    x0, y0, x1, y1 = window
    cx, cy = (x0 + x1) / 2.0, (y0 + y1) / 2.0
    scale = best_scale(x1 - x0, y1 - y0, wide - 18.0, top - bottom - 26.0, most=5.0)
    items: list[Item] = []
    for run in clipped(pattern.outline, window):
        items.append(Chain(points=tuple((x - cx, y - cy) for x, y in run), pen="outline"))
    bend_x, bend_y = (a.tangent_mm + a.bend_end_mm) / 2.0, (b.tangent_mm + b.bend_end_mm) / 2.0
    items.append(Line(a=(bend_x - cx, y0 - cy), b=(bend_x - cx, a.right.half_mm - cy), pen="bend"))
    items.append(Line(a=(x0 - cx, bend_y - cy), b=(b.left.half_mm - cx, bend_y - cy), pen="bend"))
    ear_x, ear_y = a.bend_end_mm + a.right.ear_mm, b.bend_end_mm + b.left.ear_mm
    items.append(LinearDim(a=(bend_x - cx, y0 - cy), b=(ear_x - cx, a.right.half_mm - cy), offset_mm=-5.0))
    items.append(
        LinearDim(
            a=(x0 - cx, bend_y - cy), b=(b.left.half_mm - cx, ear_y - cy), offset_mm=5.0, angle_deg=90.0
        )
    )
    for count, dim in enumerate(corner_sizes(pattern.outline, window, within=True)):
        assert isinstance(dim, RadiusDim)
        centre = (dim.centre[0] - cx, dim.centre[1] - cy)
        items.append(replace(dim, centre=centre, reach_mm=(5.0, 11.5, 18.0)[count % 3]))
    at = (left + wide / 2.0 + 2.5, (top + bottom) / 2.0 + 4.0)
    return View(
        title=f"K ({scale_text(scale)})",
        items=tuple(items),
        at=at,
        scale=scale,
        title_at=(left + wide / 2.0, bottom + 0.8),
    )


def clipped(
    outline: Contour, window: tuple[float, float, float, float]
) -> Iterator[tuple[tuple[float, float], ...]]:
    """The stretches of an outline inside a window, as chains; cut to the window's edge within 0.05 mm."""
    x0, y0, x1, y1 = window
    loop = outline.points(0.005)
    dense: list[np.ndarray] = []
    for p, q in zip(loop, np.roll(loop, -1, axis=0), strict=True):
        n = max(1, math.ceil(float(np.hypot(*(q - p))) / 0.05))
        dense.extend(p + (q - p) * k / n for k in range(n))
    keep = [bool(x0 <= p[0] <= x1 and y0 <= p[1] <= y1) for p in dense]
    if all(keep) or not any(keep):
        return
    start = next(i for i in range(len(keep)) if keep[i] and not keep[i - 1])
    run: list[tuple[float, float]] = []
    for i in range(len(dense) + 1):
        k = (start + i) % len(dense)
        if i < len(dense) and keep[k]:
            run.append((float(dense[k][0]), float(dense[k][1])))
        elif run:
            if len(run) > 1:
                yield tuple(run)
            run = []


def _arcs(outline: Contour) -> Iterator[tuple[tuple[float, float], float, float, bool]]:
    """Centre, radius, direction of the arc's middle from the centre, and whether it is a hollow corner."""
    vertices = outline.vertices
    for (x0, y0, bulge), (x1, y1, _) in zip(vertices, (*vertices[1:], vertices[0]), strict=True):
        if not bulge:
            continue
        theta = 4.0 * math.atan(abs(bulge))
        radius = math.hypot(x1 - x0, y1 - y0) / (2.0 * math.sin(theta / 2.0))
        offset = (1.0 - bulge**2) / (4.0 * bulge)
        centre = ((x0 + x1) / 2.0 - (y1 - y0) * offset, (y0 + y1) / 2.0 + (x1 - x0) * offset)
        chord = math.degrees(math.atan2(y1 - y0, x1 - x0))
        yield centre, radius, chord - math.copysign(90.0, bulge), bulge < 0.0
