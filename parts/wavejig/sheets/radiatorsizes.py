"""The sizes on the radiator's plan. Lengths in mm; reaches on paper."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.geometry.path import Arc
from wavejig.geometry.plane import Circle
from wavejig.radiator.model import Radiator
from wavejig.sheets.common import plus_minus
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.model import DIM_TEXT_MM, AngleDim, DiameterDim, Item, LinearDim, RadiusDim, number

# Of a radius' leader: past the arc, or below the wire, whose own dimension line follows at 16.
_REACH_MM, _BELOW_MM = 8.0, 7.0


def plan_sizes(design: Design, radiator: Radiator, scale: float) -> Iterator[Item]:
    """Sides, overall sizes, the lobe's angle and the corners' radius."""
    r, tol = design.radiator, design.tolerances
    corners = [c.at for c in r.corners]
    side = plus_minus(tol.side_mm)
    arcs = [a for a in radiator.main.path.arcs if abs(a.normal[2]) > 1.0 - 1e-9]
    if r.lobe_diameter_mm is not None:
        big = [a for a in arcs if a.angle_deg > 180.0]
        for arc in big[:1]:
            circle = Circle(x_mm=arc.centre[0], y_mm=arc.centre[1], diameter_mm=2.0 * arc.radius_mm)
            yield DiameterDim(
                circle=circle,
                angle_deg=35.0 if arc.centre[0] > 0 else 145.0,
                after=side,
                before=f"{len(big)}\u00d7 ",
            )
        if len(big) > 1:
            a, b = sorted((b.centre[:2] for b in big[:2]), key=lambda p: p[0])
            yield LinearDim(a=a, b=b, offset_mm=-(big[0].radius_mm * scale + 16.0), after=side)
    else:
        xs, ys = [c[0] for c in corners], [c[1] for c in corners]
        left, right = min(xs), max(xs)
        bottom = min(ys)
        far_left = max((c for c in corners if abs(c[0] - left) < 1e-6), key=lambda c: -c[1])
        far_right = max((c for c in corners if abs(c[0] - right) < 1e-6), key=lambda c: -c[1])
        low = -(far_left[1] - bottom) * scale - 16.0
        yield LinearDim(a=far_left[:2], b=far_right[:2], offset_mm=low, after=side)
        top, under = max(corners, key=lambda c: (c[1], -c[0])), min(corners, key=lambda c: (c[1], c[0]))
        a = (under[0], under[1])
        yield LinearDim(
            a=a, b=(top[0], top[1]), offset_mm=(a[0] - left) * scale + 9.0, angle_deg=90.0, after=side
        )
    if r.side_mm is not None:
        yield from _side_size(design, corners, scale)
    small = [a for a in arcs if a.angle_deg <= 180.0]
    if small:
        yield _radius_size(design, radiator, arcs, small, scale)


def _radius_size(
    design: Design, radiator: Radiator, arcs: list[Arc], small: list[Arc], scale: float
) -> RadiusDim:
    """The corners' radius on one low down near the middle: there is room below it, between two lobes."""
    arc = min(small, key=lambda a: (round(a.centre[1], 3), abs(a.centre[0]), -a.centre[0]))
    inside = arc.radius_mm - design.radiator.wire_diameter_mm / 2.0
    out = np.subtract(arc.middle, arc.centre)
    middle = math.degrees(math.atan2(out[1], out[0]))
    hangs = middle < 0.0
    lean = min(35.0, arc.angle_deg / 2.0 - 5.0)
    alike = sum(1 for a in arcs if abs(a.radius_mm - arc.radius_mm) < 1e-6)
    before = f"{alike}\u00d7 " if alike > 1 else ""
    low, high = radiator.main.path.bounds()
    angle, reach = (middle - lean, _REACH_MM) if hangs else (middle, 0.0)
    if not hangs:  # out below the wire, but above the dimension line there
        foot = low[1] - design.radiator.wire_diameter_mm / 2.0
        reach = (arc.centre[1] + inside - foot) * scale + _BELOW_MM
    # the lines that carry the overall size down stand at the ends; the sheet's note says which side radii are of
    begins = (arc.centre[0] + inside * math.cos(math.radians(angle))) * scale
    begins += _REACH_MM * math.cos(math.radians(angle)) if hangs else 0.0
    ends_mm = begins - low[0] * scale if hangs else high[0] * scale - begins
    wide = width_mm(f"{before}R{number(inside)} inside", DIM_TEXT_MM) + 2.0
    return RadiusDim(
        centre=(arc.centre[0], arc.centre[1]),
        radius_mm=inside,
        angle_deg=angle,
        inside=not hangs,
        reach_mm=reach,
        before=before,
        after=" inside" if wide < ends_mm else "",
    )


def _side_size(design: Design, corners: list[tuple[float, float, float]], scale: float) -> Iterator[Item]:
    """One side of a lobe along itself, and the angle at the corner opposite the feed."""
    r, tol = design.radiator, design.tolerances
    assert r.side_mm is not None
    sides = [
        (np.array(a[:2]), np.array(b[:2]))
        for a, b in itertools.pairwise(corners)
        if abs(math.dist(a[:2], b[:2]) - r.side_mm) < 0.2
    ]
    if not sides:
        return
    # on the upper right, measured outside
    a, b = max(sides, key=lambda s: float((s[0] + s[1]) @ np.array([1.0, 1.2])))
    if a[1] > b[1]:
        a, b = b, a
    angle = math.degrees(math.atan2(b[1] - a[1], b[0] - a[0]))
    yield LinearDim(a=_xy(a), b=_xy(b), offset_mm=-9.0, angle_deg=angle, after=plus_minus(tol.side_mm))
    for before, at, after in zip(corners, corners[1:], corners[2:], strict=False):
        if abs(at[0] - max(c[0] for c in corners)) > 1e-6:
            continue
        u, v = np.subtract(before, at)[:2], np.subtract(after, at)[:2]
        one, two = (math.degrees(math.atan2(w[1], w[0])) for w in (u, v))
        if (two - one) % 360.0 > 180.0:
            one, two = two, one
        yield AngleDim(
            vertex=(at[0], at[1]), from_deg=one, to_deg=two,
            radius_mm=min(16.0, 0.5 * r.side_mm * scale), after=plus_minus(tol.bend_angle_deg),
            outside=r.side_mm * scale < 36.0,
        )  # fmt: skip
        break


def _xy(v: np.ndarray) -> tuple[float, float]:
    return (float(v[0]), float(v[1]))
