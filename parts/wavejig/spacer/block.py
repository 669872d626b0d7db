"""Shape of the removable block's pieces: arms under the wire, rims outside it, a spine that joins them.

A piece stands on the sheet on the outer side of the lobes. Its arms reach in under the wire; on them a
rim stands only beyond the wire as seen from the feed, so the piece slides out from under the wire along
v, never past it, and lifts once it is clear. Each hump of the wire (each lobe, seen from that side) is
held on two slopes, which places it along both axes; bent corners touch nothing, so their radius may vary.
Lengths in mm.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from wavejig.design.model import Design
from wavejig.design.version import version_code
from wavejig.geometry.plane import Contour
from wavejig.spacer import marks, profile
from wavejig.spacer.keepout import axis_of, limits_mm, lip_tip_mm
from wavejig.spacer.model import BlockPiece, Carry, Layer
from wavejig.spacer.profile import STEP_MM, Columns
from wavejig.spacer.side import Hump, Side, highest_block, in_the_way, slack_across_mm, slack_along_mm

Fault = tuple[str, str]  # what fails (a key of `plan`'s remedies), and the numbers

# Proportions: common practice, no source.
ARM_DEPTHS = (0.5, 0.44, 0.38, 0.32, 0.26, 0.2, 0.15, 0.1)  # share of a hump's height arms reach down
CARRY_WIDTH_MM = (4.0, 12.0)  # least and greatest reach of an arm beyond the wire it meets first
ARM_GAP_MM = 4.0  # arms nearer to each other than this become one
SPINE_MM = 13.0  # wanted width: room for a grip and for lettering
BRACE_MM = 6.0  # least width of the spine below the wire; above it the rim may be narrower
LIFT_PLAY_MM = 0.5  # beyond the wire before the piece is lifted
RIM_ABOVE_CENTRE = 0.3  # rim's top above the wire's centre, in diameters: half a wire to clip down on
LEAST_FLOOR_MM = 1.2  # plastic below the wire
GRIP_MM = (24.0, 4.0, 10.0)  # length, thickness, height over the rim
OVER_LIP_MM = 2.5  # of the grip, where the lip is taller: a hand and a hold-down reach over it
MOST_GRIP_MM = 20.0  # a taller grip breaks off
_HALF_MM = 0.5  # travels are told, and spines made, in these steps


@dataclass(frozen=True, slots=True, kw_only=True)
class Trial:
    """A piece with arms of one depth, and what is wrong with it."""

    piece: BlockPiece | None
    spine_mm: float
    faults: tuple[Fault, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class _Plan:
    """Curves of one piece over the columns `span`: least v of its floor and of its rim, and its outer v."""

    span: slice
    low: np.ndarray
    rim: np.ndarray
    rim_top: float  # highest v any rim must stay beyond
    spine: float
    travel: float
    pulled: float  # greatest v while it is pulled

    @property
    def v_out(self) -> float:
        return self.rim_top + self.spine


def make_piece(design: Design, s: Side, humps: tuple[Hump, ...], name: str) -> Trial:
    """The best piece that carries these humps: the deepest arms that leave a full spine, else the widest."""
    best = None
    for depth in ARM_DEPTHS:
        trial = _trial(design, s, humps, name, depth)
        if not trial.faults and trial.spine_mm >= SPINE_MM - 1e-9:
            return trial
        if best is None or _rank(trial) > _rank(best):
            best = trial
    assert best is not None
    return best


def least_carry_mm(design: Design) -> float:
    """Shortest stretch of wire, across the pull, that counts as a support."""
    return max(1.0, design.radiator.covered_diameter_mm)


def _rank(trial: Trial) -> tuple[float, float]:
    return (-float(len(trial.faults)), trial.spine_mm)


def _trial(design: Design, s: Side, humps: tuple[Hump, ...], name: str, depth: float) -> Trial:
    faults: list[Fault] = []
    arm = np.full(s.columns.u.size, np.inf)
    for number, hump in enumerate(humps, start=1):
        faults += _cut_arms(design, s, hump, number, depth, arm)
    if not np.any(np.isfinite(arm)):
        return Trial(piece=None, spine_mm=0.0, faults=(*faults, ("carry", "finds no wire to carry")))
    p, more = _lay_out(design, s, arm)
    faults += more
    r = design.radiator
    seat = r.standoff_mm - r.covered_diameter_mm / 2.0
    if seat < LEAST_FLOOR_MM:
        message = f"leaves {seat:.2f} mm of plastic below the wire and needs {LEAST_FLOOR_MM:g} mm"
        return Trial(piece=None, spine_mm=p.spine, faults=(*faults, ("low", message)))
    piece = _draw(design, s, humps, name, p, seat)
    return Trial(piece=piece, spine_mm=p.spine, faults=tuple(faults))


def _cut_arms(design: Design, s: Side, hump: Hump, number: int, depth: float, arm: np.ndarray) -> list[Fault]:
    """Write the least v of one hump's two arms into `arm`; what is missing comes back as faults."""
    wall = _wall_mm(design)
    top = float(s.wire[hump.peak])
    low = profile.without_spikes(np.maximum(top - depth * (top - s.base_mm), s.blocked), wall)
    # the centreline must lie a little inside an arm's end for the wire to rest on it
    margin = max(0.3, design.radiator.covered_diameter_mm / 4.0)
    carried = s.wire - margin >= low
    least = least_carry_mm(design)
    want = float(np.clip(0.35 * (hump.last - hump.first) * STEP_MM / 2.0, *CARRY_WIDTH_MM))
    # the rim's cheek stands beside the wire where the arm meets it first
    cheek = float(s.edge[hump.peak] - s.wire[hump.peak]) + wall
    u = s.columns.u
    faults: list[Fault] = []
    spans: list[tuple[float, float]] = []
    for word, a, b in (("before", hump.first, hump.peak), ("after", hump.peak, hump.last)):
        found = [
            (a + i, a + j) for i, j in profile.runs(carried[a : b + 1]) if (j - i) * STEP_MM >= least - 1e-9
        ]
        if not found:
            faults.append(
                ("carry", f"carries less than {least:.1f} mm of wire {word} the peak of its lobe {number}")
            )
            continue
        wide = [r for r in found if (r[1] - r[0]) * STEP_MM >= want]
        wide = wide or [max(found, key=lambda r: r[1] - r[0])]
        if word == "before":
            i, j = wide[0]
            spans.append((u[i] - cheek, min(u[i] + want, u[j])))
        else:
            i, j = wide[-1]
            spans.append((max(u[j] - want, u[i]), u[j] + cheek))
    if len(spans) == 2 and spans[1][0] - spans[0][1] < ARM_GAP_MM:
        spans = [(spans[0][0], spans[1][1])]
    for start, end in spans:
        cut = slice(s.columns.index(start), s.columns.index(end) + 1)
        arm[cut] = np.minimum(arm[cut], low[cut])
    return faults


def _lay_out(design: Design, s: Side, arm: np.ndarray) -> tuple[_Plan, list[Fault]]:
    """Spine, travel and rim for given arms (inf where there is none)."""
    faults: list[Fault] = []
    u, wall = s.columns.u, _wall_mm(design)
    armed = np.isfinite(arm)
    reached = np.flatnonzero(armed)
    span = slice(int(reached[0]), int(reached[-1]) + 1)
    # twice the clearance from wire no arm carries: bent corners, wire between the arms
    rim_at = np.where(armed, s.edge, s.edge + design.printer.clearance_mm)[span]
    rim_top = float(rim_at.max())
    travel = _travel_mm(s.edge[span], np.minimum(arm[span], rim_top))
    widest = max(-float(u[span][0]), float(u[span][-1]))
    rest, pulled, across = limits_mm(design, s.frame, widest)
    spine = math.floor(min(SPINE_MM, rest - rim_top, pulled - travel - rim_top) / _HALF_MM) * _HALF_MM
    if spine < wall:
        lipped = pulled < math.inf
        need = rim_top + wall + (travel if lipped else 0.0)
        fold = "the fold" if design.reflector.own is None else "the wall"
        faults.append(
            (
                "travel" if lipped else "base",
                f"needs {need:.1f} mm from the sheet's middle to "
                f"{fold + ', to be pulled out,' if lipped else 'its edge'} and has {rest:.1f} mm",
            )
        )
        spine = wall
    v_out = rim_top + spine
    low = np.where(armed, arm, min(rim_top, v_out - BRACE_MM))[span]
    low = profile.without_spikes(np.maximum(low, s.blocked[span]), wall)
    if float(low.max()) > v_out - wall:
        x, y = highest_block(s, span)
        faults.append(
            ("blocked", f"is cut in two by solder, hardware or bent wire that reaches ({x:.1f}, {y:.1f}) mm")
        )
        low = np.minimum(low, v_out - wall)
    travel = max(travel, _travel_mm(s.edge[span], low))
    if v_out + travel > pulled + 1e-6 and not faults:
        faults.append(
            ("travel", f"needs {v_out + travel:.1f} mm from the sheet's middle and has {pulled:.1f} mm")
        )
    if widest > across:
        faults.append(("width", f"reaches {widest:.1f} mm across and the flat base {across:.1f} mm"))
    way = v_out + travel if pulled < math.inf else math.inf
    for disc in in_the_way(s, float(u[span][0]), float(u[span][-1]), way):
        place = f"({disc.x_mm:.1f}, {disc.y_mm:.1f}) mm"
        faults.append(("blocked", f"meets {disc.what} at {place} on its way out"))
    here = Columns(u=u[span])
    low = profile.settled(here, low)
    rim = profile.without_spikes(np.maximum(low, rim_at), 3.0 * design.printer.nozzle_mm)
    rim = profile.settled(here, np.where((rim_at <= low) & (rim - low < STEP_MM), low, rim), low)
    return (
        _Plan(span=span, low=low, rim=rim, rim_top=rim_top, spine=spine, travel=travel, pulled=pulled),
        faults,
    )


def _draw(design: Design, s: Side, humps: tuple[Hump, ...], name: str, p: _Plan, seat: float) -> BlockPiece:
    """The piece itself: layers, lettering, and what it does to the wire."""
    r = design.radiator
    here = Columns(u=s.columns.u[p.span])
    start, end = float(here.u[0]), float(here.u[-1])
    rim_z = r.standoff_mm + RIM_ABOVE_CENTRE * r.covered_diameter_mm
    layers = [
        Layer(bottom_mm=0.0, top_mm=seat, contour=profile.above(here, p.low, p.v_out, s.frame)),
        Layer(bottom_mm=seat, top_mm=rim_z, contour=profile.above(here, p.rim, p.v_out, s.frame, p.low)),
    ]
    length, thick, rise = GRIP_MM
    rise = max(rise, min(MOST_GRIP_MM, lip_tip_mm(design, *axis_of(s.frame))[1] + OVER_LIP_MM - rim_z))
    # the flat top: beyond every rim, and beyond keep-outs that reach into the spine
    band_low, band_top = float(p.rim.max()), p.v_out
    if band_top - band_low >= thick + marks.LEAST_BAND_MM:
        band_top -= thick
        half, middle = min(length, 0.6 * (end - start)) / 2.0, (start + end) / 2.0
        corners = [(middle - half, band_top), (middle + half, band_top)]
        corners += [(middle + half, p.v_out), (middle - half, p.v_out)]
        grip = Contour.polygon(s.frame.world(corners))
        layers.append(Layer(bottom_mm=rim_z, top_mm=rim_z + rise, contour=grip))
    band = (start, end, band_low, band_top)
    text, strokes = marks.piece_marks(
        name, design.name, version_code(design), r.standoff_mm, band, s.frame, design.printer.nozzle_mm
    )
    return BlockPiece(
        name=name,
        withdrawal=s.frame.direction,
        travel_mm=p.travel,
        available_mm=p.pulled - p.v_out,
        layers=tuple(layers),
        carries=_carries(s, humps, p),
        lobes=len(humps),
        slack_along_mm=slack_along_mm(s, p.span, p.rim),
        slack_across_mm=slack_across_mm(s, p.span, p.rim),
        text=text,
        marks=strokes,
        marks_z_mm=rim_z,
        marks_depth_mm=min(marks.DEPTH_MM, (rim_z - seat) / 2.0),
        mark_width_mm=marks.line_mm(design.printer.nozzle_mm),
    )


def _carries(s: Side, humps: tuple[Hump, ...], p: _Plan) -> tuple[Carry, ...]:
    """Stretches of wire over the floor, on either side of each hump's peak; grazes left out."""
    out = []
    low = np.full(s.columns.u.size, np.inf)
    low[p.span] = p.low
    u = s.columns.u
    for number, hump in enumerate(humps):
        for word, a, b in (("before", hump.first, hump.peak), ("after", hump.peak, hump.last)):
            for i, j in profile.runs(s.wire[a : b + 1] >= low[a : b + 1]):
                run = np.column_stack([u, s.wire])[a + i : a + j + 1]
                length = float(np.linalg.norm(np.diff(run, axis=0), axis=1).sum())
                if length < STEP_MM * 10.0:
                    continue
                first, last = s.frame.world([(float(run[k, 0]), float(run[k, 1])) for k in (0, -1)])
                out.append(Carry(lobe=number, side=word, start=first, end=last, length_mm=length))
    return tuple(out)


def _travel_mm(edge: np.ndarray, low: np.ndarray) -> float:
    """Pull after which a floor that starts at `low` is clear of wire that reaches `edge`."""
    return math.ceil((float((edge - low).max()) + LIFT_PLAY_MM) / _HALF_MM) * _HALF_MM


def _wall_mm(design: Design) -> float:
    """Thinnest arm, rim and spine: five lines of the nozzle, at least 2 mm."""
    return max(2.0, 5.0 * design.printer.nozzle_mm)
