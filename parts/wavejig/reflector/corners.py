"""Where edges meet: corners of base, flanges and blank, each with its radius; reliefs and mitres.

Lengths in mm, angles in degrees. Imports numpy only.
"""

from __future__ import annotations

import math
from collections.abc import Iterator

from wavejig.geometry.plane import Contour
from wavejig.reflector.model import EDGES, CornerPractice, LipEnd, Tray, TrayLip, place
from wavejig.reflector.outline import rounded

Corner = tuple[float, float, float]
"""Two coordinates and the radius the corner is rounded to; all in mm."""


def lip_end(
    *,
    neighbour_half_mm: float,
    inset_mm: float,
    setback_mm: float,
    flange_mm: float,
    inside_radius_mm: float,
    angle_deg: float,
    mitred: bool,
    practice: CornerPractice,
) -> LipEnd:
    """One end of a lip at an edge that runs into the edge `neighbour_half_mm` away.

    inset_mm: how far the corner's notch reaches in from the neighbour's mould line, 0 if it has no lip.

    The mitre plane stands on the diagonal through the crossing of both lips' inner faces. Of a lip's
    thickness the inner face comes nearest to it, so that face decides: at height w up the flange it is
    R sin(b) + w cos(b) beyond the tangent, in x as in y. Each lip keeps half the gap from the plane.
    An ear that would be narrower than half the notch beside it, or on a flange hardly longer than that
    notch, is left off: nothing would be gained.
    """
    half = neighbour_half_mm - inset_mm
    if not mitred:
        return LipEnd(half_mm=half)
    b = math.radians(angle_deg)
    at_bend = neighbour_half_mm - setback_mm + inside_radius_mm * math.sin(b)
    at_bend -= practice.mitre_gap_mm / math.sqrt(2.0)
    start = inset_mm - setback_mm  # the notch reaches as far up the flange as into the base
    width = at_bend + start * math.cos(b) - half
    if flange_mm < 3.0 * start or width < start / 2.0:
        return LipEnd(half_mm=half)
    return LipEnd(half_mm=half, ear_mm=start, ear_base_mm=at_bend, ear_slope=math.cos(b))


def flange_corners(lip: TrayLip, practice: CornerPractice) -> tuple[Corner, ...]:
    """(w, s, radius) corners of the flange in its own plane, from s < 0 at the bend round to s > 0."""
    left = [(w, -s, r) for w, s, r in _side(lip, lip.left, practice)]
    right = _side(lip, lip.right, practice)
    return ((0.0, -lip.left.half_mm, 0.0), *left, *reversed(right), (0.0, lip.right.half_mm, 0.0))


def base_corners(tray: Tray) -> tuple[Corner, ...]:
    """(x, y, radius) corners of the flat base: tangents, notches, cut edges; counter-clockwise."""
    out: list[Corner] = []
    for edge, following in _turns():
        a, b = tray.lip(edge), tray.lip(following)
        if a:
            out.append((*place(edge, a.tangent_mm, a.right.half_mm), 0.0))
        out.extend(_root(tray, edge, following))
        if b:
            out.append((*place(following, b.tangent_mm, -b.left.half_mm), 0.0))
    return tuple(out)


def blank_outline(tray: Tray) -> Contour:
    """The blank's cut contour, counter-clockwise, corners rounded."""
    out: list[Corner] = []
    for edge, following in _turns():
        a, b = tray.lip(edge), tray.lip(following)
        if a:
            side = reversed(_side(a, a.right, tray.practice))
            out.extend((*place(edge, a.bend_end_mm + w, s), r) for w, s, r in side)
        out.extend(_root(tray, edge, following))
        if b:
            side = iter(_side(b, b.left, tray.practice))
            out.extend((*place(following, b.bend_end_mm + w, -s), r) for w, s, r in side)
    return rounded(out)


def _turns() -> Iterator[tuple[str, str]]:
    return zip(EDGES, (*EDGES[1:], EDGES[0]), strict=True)


def _root(tray: Tray, edge: str, following: str) -> list[Corner]:
    """The corner between two edges: the notch between two lips, the cut corner between none."""
    a, b = tray.lip(edge), tray.lip(following)
    if a and b:
        # half of how far the notch reaches past the nearer tangent: ends well before either bend
        past = min(a.tangent_mm - b.left.half_mm, b.tangent_mm - a.right.half_mm)
        return [(*place(edge, b.left.half_mm, a.right.half_mm), past / 2.0)]
    if a or b:
        return []  # the lip runs the full width: its side goes straight on into the cut edge
    return [(*place(edge, tray.half_mm(edge), tray.half_mm(following)), tray.practice.round_mm)]


def _side(lip: TrayLip, end: LipEnd, practice: CornerPractice) -> list[Corner]:
    """(w, reach, radius) corners up one side of a flange, above the bend: an ear's two, then the tip."""
    flange = lip.flange_mm
    if end.ear_mm is None:
        return [(flange, end.half_mm, min(practice.round_mm, flange / 2.0))]
    # turning outward into the ear, up along the mitre, and back at the tip; the tip is the sharpest
    width = end.reach_mm(end.ear_mm) - end.half_mm
    lean = math.atan(end.ear_slope)
    tip = min(practice.round_mm, (flange - end.ear_mm) / 2.0 / math.tan((math.pi / 2.0 + lean) / 2.0))
    return [
        (end.ear_mm, end.half_mm, min(end.ear_mm, width) / 2.0),
        (end.ear_mm, end.reach_mm(end.ear_mm), min(practice.round_mm, width / 2.0)),
        (flange, end.reach_mm(flange), tip),
    ]
