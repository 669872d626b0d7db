"""The folded tray's drawing: plan and one section for each pair of lips, sizes over the outer mould lines."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.geometry.plane import Circle, Contour
from wavejig.reflector.mapping import fold
from wavejig.reflector.model import Tray, TrayLip, outward
from wavejig.sheets.common import block, general_deg, general_mm, plus_minus, sheet_text
from wavejig.sheets.fit import best_scale
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    AngleDim,
    Arrow,
    Item,
    Line,
    LinearDim,
    RadiusDim,
    Ring,
    Shape,
    Sheet,
    Text,
    View,
    scale_text,
)

_PER_BEND = 24


def tray_drawing(design: Design, tray: Tray) -> Sheet:
    """The folded tray on one sheet; only for trays with lips."""
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    sections = [s for s in ("x", "y") if tray.lip(s + "+") or tray.lip(s + "-")]
    outer = {a: 2.0 * max(_reach(tray, a + "+"), _reach(tray, a + "-")) for a in "xy"}
    plan_wide = (x1 - x0) * 0.488
    scale = best_scale(outer["x"], outer["y"], plan_wide - 34.0, y1 - y0 - 40.0, most=1.0)
    middle = (x0 + plan_wide / 2.0, (y0 + y1) / 2.0 + 4.0)
    views = [
        View(
            title="TRAY, FOLDED: seen from the radiator side",
            items=tuple(_plan(tray, sections, scale)),
            at=middle,
            scale=scale,
            title_at=(middle[0], y0 + 1.0),
        )
    ]
    right = (x0 + plan_wide, x1)
    high = (y1 - y0) / len(sections)
    for i, axis in enumerate(sections):
        centre = (right[0] + right[1]) / 2.0
        top = y1 - i * high
        tall = (
            max((lip.height_mm for lip in tray.lips if lip.edge[0] == axis), default=0.0) + tray.thickness_mm
        )
        zoom = best_scale(outer[axis], tall, right[1] - right[0] - 40.0, high - 34.0, most=2.0)
        mark, side = ("A", "x+") if axis == "y" else ("B", "y-")
        views.append(
            View(
                title=f"SECTION {mark}-{mark} ({scale_text(zoom)}): seen from {side}, radiator side up",
                items=tuple(_section(design, tray, axis)),
                at=(centre, top - high / 2.0 - tall * zoom / 2.0 + 4.0),
                scale=zoom,
                title_at=(centre, top - high + 1.0),
            )
        )
    style = ""
    if len(sections) == 2:
        style = f"; corners {'mitred' if tray.corner_style == 'mitre' else 'open'}: see the blank"
    return Sheet(
        name="tray",
        paper_mm=paper,
        views=tuple(views),
        tables=(),
        notes=(
            "Base sizes and lip heights are over the outer mould lines (where the outer faces would "
            "meet sharp).",
            "All lips fold towards the radiator. Check the first one against this sheet before folding "
            "the rest.",
            f"Reflector {sheet_text(design)}{style}. Holes: see the blank.",
        ),
        notes_at=(x0, y0 - 5.0),
        block=block(
            design,
            title="reflector, folded",
            part="tray",
            material=sheet_text(design),
            scale=scale,
            note="radiator side = inside of the tray",
        ),
    )


def _reach(tray: Tray, edge: str) -> float:
    """How far the folded sheet reaches out at an edge."""
    lip = tray.lip(edge)
    half = tray.half_mm(edge)
    if lip is None:
        return half
    return max(half, half + lip.height_mm * math.cos(math.radians(lip.angle_deg)))


def _plan(tray: Tray, sections: list[str], scale: float) -> Iterator[Item]:
    reach = {e: _reach(tray, e) for e in ("x+", "x-", "y+", "y-")}
    base = Contour.rectangle(-tray.half_x_mm, -tray.half_y_mm, tray.half_x_mm, tray.half_y_mm)
    if not tray.lips or any(tray.lip(e) is None for e in reach):
        yield Shape(contour=base, pen="thin")
    for lip in tray.lips:
        n = outward(lip.edge)
        # inner face where the bend begins, then the tip's inner and outer edge, as seen from above
        tip_in, tip_out = _tip(tray, lip)
        for d, pen in ((lip.tangent_mm, "thin"), (tip_in, "outline"), (tip_out, "outline")):
            half = lip.left.reach_mm(lip.flange_mm if pen == "outline" else -1.0)
            other = lip.right.reach_mm(lip.flange_mm if pen == "outline" else -1.0)
            u = np.array([-n[1], n[0]])
            a, b = n * d - u * half, n * d + u * other
            yield Line(a=(float(a[0]), float(a[1])), b=(float(b[0]), float(b[1])), pen=pen)  # type: ignore[arg-type]
        u = np.array([-n[1], n[0]])
        for s in (-lip.left.reach_mm(lip.flange_mm), lip.right.reach_mm(lip.flange_mm)):
            a, b = n * min(tip_in, lip.tangent_mm) + u * s, n * tip_out + u * s
            yield Line(a=(float(a[0]), float(a[1])), b=(float(b[0]), float(b[1])), pen="outline")
    for hole in tray.holes:
        yield Ring(circle=Circle(x_mm=hole.x_mm, y_mm=hole.y_mm, diameter_mm=hole.diameter_mm))
    over = 3.0 / scale
    yield Line(a=(-reach["x-"] - over, 0.0), b=(reach["x+"] + over, 0.0), pen="centre")
    yield Line(a=(0.0, -reach["y-"] - over), b=(0.0, reach["y+"] + over), pen="centre")
    long = 8.0 / scale
    if "y" in sections:
        for s in (1.0, -1.0):
            y = s * (reach["y+" if s > 0 else "y-"] + 6.0 / scale)
            yield Arrow(tail=(long, y), tip=(0.0, y), pen="outline")
            yield Text(at=(long, y), text="A", height_mm=DIM_TEXT_MM, shift=(0.8, -1.2), bold=True)
    if "x" in sections:
        for s in (1.0, -1.0):
            x = s * (reach["x+" if s > 0 else "x-"] + 6.0 / scale)
            yield Arrow(tail=(x, -long), tip=(x, 0.0), pen="outline")
            yield Text(
                at=(x, -long), text="B", height_mm=DIM_TEXT_MM, anchor="centre", shift=(0.0, -3.4), bold=True
            )
    up = outward(tray.up)
    side = np.array([up[1], -up[0]]) * 0.5 * tray.half_mm("x-" if tray.up[0] == "y" else "y-")
    far = tray.base_reach_mm(tray.up)
    tail, tip = up * (far - 14.0 / scale) - side, up * (far - 3.0 / scale) - side
    yield Arrow(tail=(float(tail[0]), float(tail[1])), tip=(float(tip[0]), float(tip[1])), pen="outline")
    yield Text(
        at=(float(tail[0]), float(tail[1])),
        text="hangs UP",
        anchor="centre" if tray.up[0] == "y" else "right",
        shift=(0.0, -3.0) if tray.up[0] == "y" else (-1.0, -0.9),
    )


def _tip(tray: Tray, lip: TrayLip) -> tuple[float, float]:
    """How far out the inner and the outer edge of a lip's tip are."""
    b = math.radians(lip.angle_deg)
    out = tray.half_mm(lip.edge) + lip.height_mm * math.cos(b)
    return out - tray.thickness_mm * math.sin(b), out


def _section(design: Design, tray: Tray, axis: str) -> Iterator[Item]:
    """The cut through the middle: right is + along the axis, up is towards the radiator."""
    k = 0 if axis == "x" else 1
    stations: list[float] = []
    for sign in (-1.0, 1.0):
        lip = tray.lip(axis + ("+" if sign > 0 else "-"))
        if lip is None:
            ends = [tray.half_mm(axis + "+")]
        else:
            ends = [*np.linspace(lip.tangent_mm, lip.bend_end_mm, _PER_BEND), lip.tip_mm]
        stations += [sign * float(d) for d in (ends if sign > 0 else ends[::-1])]
    flat = np.zeros((len(stations), 2))
    flat[:, k] = stations
    inner, outer = fold(tray, flat, 0.0)[:, [k, 2]], fold(tray, flat, 1.0)[:, [k, 2]]
    yield Shape(contour=Contour.polygon([*outer, *inner[::-1]]), pen="thin", filled=True)
    t = tray.thickness_mm
    half = tray.half_mm(axis + "+")
    yield Line(a=(0.0, -t - 3.0), b=(0.0, 6.0), pen="centre")
    lips = {s: tray.lip(axis + s) for s in "+-"}
    yield LinearDim(
        a=(-half, -t), b=(half, -t), offset_mm=-14.0, after=plus_minus(general_mm(design, 2.0 * half))
    )
    lip = lips["+"]
    if lip is not None:
        b = math.radians(lip.angle_deg)
        end = (half + lip.height_mm * math.cos(b), -t + lip.height_mm * math.sin(b))
        yield LinearDim(
            a=(half, -t),
            b=end,
            offset_mm=-10.0,
            angle_deg=lip.angle_deg,
            after=plus_minus(general_mm(design, lip.height_mm)),
        )
        yield RadiusDim(
            centre=(lip.tangent_mm, tray.inside_radius_mm),
            radius_mm=tray.inside_radius_mm,
            angle_deg=-90.0 + lip.angle_deg / 2.0,
            inside=True,
            reach_mm=11.0,
            after=" inside",
        )
    lip = lips["-"]
    if lip is not None:
        yield AngleDim(
            vertex=(-half, -t),
            from_deg=180.0 - lip.angle_deg,
            to_deg=180.0,
            radius_mm=9.0,
            after=plus_minus(max(general_deg(design, lip.height_mm), 1.0)),
        )
    yield LinearDim(a=(-0.25 * half, -t), b=(-0.25 * half, 0.0), offset_mm=-4.0, angle_deg=90.0)
