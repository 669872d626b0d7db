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
from wavejig.spacer import keepout, marks, profile
from wavejig.spacer.keepout import Keepout, Wires
from wavejig.spacer.model import BlockPiece, Carry, Layer
from wavejig.spacer.profile import Columns, Frame

# Proportions: common practice, no source.
ARM_DEPTHS = (0.5, 0.44, 0.38, 0.32, 0.26, 0.2, 0.15, 0.1)  # share of a hump's height arms reach down
HUMP_FLOOR = 0.35  # a hump is wire that rises above this share of the highest
CARRY_WIDTH_MM = (4.0, 12.0)  # least and greatest reach of an arm beyond the wire it meets first
ARM_GAP_MM = 4.0  # arms nearer to each other than this become one
SPINE_MM = 12.0  # wanted width: room for a grip and for lettering
BRACE_MM = 6.0  # least width of the spine below the wire; above it the rim may be narrower
LIFT_PLAY_MM = 0.5  # beyond the wire before the piece is lifted
RIM_ABOVE_CENTRE = 0.3  # rim's top above the wire's centre, in diameters: half a wire to clip down on
LEAST_FLOOR_MM = 1.2  # plastic below the wire
GRIP_MM = 10.0  # how far the grip stands up over the rim
GRIP_THICKNESS_MM = 4.0
GRIP_LENGTH_MM = 24.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Trial:
    """A piece with arms of one depth, and what is wrong with it (code -> numbers)."""

    piece: BlockPiece | None
    spine_mm: float
    faults: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Side:
    """What a piece of one withdrawal direction must hold and avoid, as curves over its columns."""

    frame: Frame
    columns: Columns
    wire: np.ndarray  # centreline of the in-plane main wire, outermost
    edge: np.ndarray  # outermost edge of all wire, clearance included
    bare_edge: np.ndarray  # the same without clearance
    blocked: np.ndarray  # outermost edge of keep-outs inside the lobes
    outer: tuple[Keepout, ...]  # keep-outs wholly beyond the wire
    humps: tuple[tuple[int, int], ...]
    base_mm: float
    peak_mm: float


def side(design: Design, wires: Wires, discs: tuple[Keepout, ...], frame: Frame) -> Side:
    """Look at the radiator along a withdrawal direction."""
    uv = frame.local(wires.points[:, :2])
    chords = [frame.local(chain) for chain in wires.chords]
    reach = 30.0
    columns = Columns.over(float(uv[:, 0].min()) - reach, float(uv[:, 0].max()) + reach)
    wire = np.max([columns.line(chain) for chain in chords], axis=0)
    there = np.isfinite(wire)
    peak, base = float(wire[there].max()), max(0.0, float(wire[there].min()))
    clearance = design.printer.clearance_mm
    edge = profile.widened(columns.envelope(uv, wires.radius_mm + clearance))
    bare = columns.envelope(uv, wires.radius_mm)
    off = ~wires.flat
    blocked = columns.envelope(uv[off], wires.radius_mm[off] + clearance + keepout.HARDWARE_PLAY_MM)
    centres = frame.local(np.array([[d.x_mm, d.y_mm] for d in discs]))
    inner = np.array([c[1] - d.radius_mm < peak for c, d in zip(centres, discs, strict=True)])
    radii = np.array([d.radius_mm for d in discs])
    blocked = profile.widened(np.maximum(blocked, columns.envelope(centres[inner], radii[inner])))
    floor = base + HUMP_FLOOR * (peak - base)
    humps = tuple(r for r in profile.runs(wire >= floor) if (r[1] - r[0]) * profile.STEP_MM >= 3.0)
    return Side(
        frame=frame,
        columns=columns,
        wire=wire,
        edge=edge,
        bare_edge=bare,
        blocked=blocked,
        outer=tuple(d for d, is_inner in zip(discs, inner, strict=True) if not is_inner),
        humps=humps,
        base_mm=base,
        peak_mm=peak,
    )


def make_piece(design: Design, s: Side, humps: tuple[tuple[int, int], ...], name: str) -> Trial:
    """The best piece that carries these humps: the deepest arms that leave a full spine, else the widest."""
    best: Trial | None = None
    for depth in ARM_DEPTHS:
        trial = _trial(design, s, humps, name, depth)
        if not trial.faults and trial.spine_mm >= SPINE_MM - 1e-9:
            return trial
        if best is None or _rank(trial) > _rank(best):
            best = trial
    assert best is not None
    return best


def _rank(trial: Trial) -> tuple[float, float]:
    return (-float(len(trial.faults)), trial.spine_mm)


def _trial(design: Design, s: Side, humps: tuple[tuple[int, int], ...], name: str, depth: float) -> Trial:
    columns, u = s.columns, s.columns.u
    wall = max(2.0, 5.0 * design.printer.nozzle_mm)
    faults: list[tuple[str, str]] = []

    arm = np.full(u.size, np.inf)  # least v of the arms; inf where there is none
    for number, hump in enumerate(humps):
        faults += _arms(design, s, hump, number, depth, wall, arm)
    reached = np.flatnonzero(np.isfinite(arm))
    if not reached.size:
        return Trial(piece=None, spine_mm=0.0, faults=tuple(faults))
    first, last = int(reached[0]), int(reached[-1])
    span = slice(first, last + 1)
    armed = np.isfinite(arm)

    # the rim keeps twice the clearance from wire no arm carries: bent corners, wire between the arms
    rim_at = np.where(armed, s.edge, s.edge + design.printer.clearance_mm)
    rim_top = float(rim_at[span].max())
    travel = math.ceil(2.0 * (float((s.edge - np.minimum(arm, rim_top))[span].max()) + LIFT_PLAY_MM)) / 2.0
    rest, pulled, across = keepout.limits_mm(design, s.frame)
    spine = math.floor(2.0 * min(SPINE_MM, rest - rim_top, pulled - travel - rim_top)) / 2.0
    if spine < wall:
        need = rim_top + wall + (travel if pulled - travel < rest else 0.0)
        have = min(rest, pulled)
        faults.append(
            (
                "travel" if pulled < math.inf else "base",
                f"needs {need:.1f} mm from the middle and has {have:.1f} mm",
            )
        )
        spine = wall
    v_out = rim_top + spine
    low = np.maximum(np.where(armed, arm, min(rim_top, v_out - BRACE_MM)), s.blocked)
    low = profile.without_spikes(low[span], wall)
    if float(low.max()) > v_out - wall:
        faults.append(("blocked", _what_blocks(s, u[first], u[last], v_out - wall)))
        low = np.minimum(low, v_out - wall)
    travel = max(travel, math.ceil(2.0 * (float((s.edge[span] - low).max()) + LIFT_PLAY_MM)) / 2.0)
    if v_out + travel > pulled + 1e-6 and not any(code == "travel" for code, _ in faults):
        faults.append(("travel", f"needs {v_out + travel:.1f} mm from the middle and has {pulled:.1f} mm"))
    widest = max(-float(u[first]), float(u[last]))
    if widest > across:
        faults.append(("width", f"reaches {widest:.1f} mm to the side and has {across:.1f} mm"))
    for disc in _in_the_way(
        s, float(u[first]), float(u[last]), v_out + (travel if pulled < math.inf else 1e9)
    ):
        faults.append(
            ("blocked", f"{disc.what} at ({disc.x_mm:.1f}, {disc.y_mm:.1f}) mm stands in its way out")
        )

    rim = profile.without_spikes(np.maximum(low, rim_at[span]), 3.0 * design.printer.nozzle_mm)
    covered = design.radiator.covered_diameter_mm
    seat = design.radiator.standoff_mm - covered / 2.0
    rim_z = design.radiator.standoff_mm + RIM_ABOVE_CENTRE * covered
    if seat < LEAST_FLOOR_MM:
        faults.append(
            ("low", f"leaves {seat:.2f} mm of plastic below the wire and needs {LEAST_FLOOR_MM:g} mm")
        )
        return Trial(piece=None, spine_mm=spine, faults=tuple(faults))
    here = Columns(u=u[span])
    end = here.u.size - 1
    layers = [
        Layer(bottom_mm=0.0, top_mm=seat, contour=profile.above(here, low, 0, end, v_out, s.frame)),
        Layer(bottom_mm=seat, top_mm=rim_z, contour=profile.above(here, rim, 0, end, v_out, s.frame)),
    ]
    band_low = rim_top
    band_high = v_out
    if spine >= GRIP_THICKNESS_MM + marks.LEAST_BAND_MM:
        half = min(GRIP_LENGTH_MM, 0.6 * (u[last] - u[first])) / 2.0
        middle = (u[first] + u[last]) / 2.0
        band_high = v_out - GRIP_THICKNESS_MM
        corners = [
            (middle - half, band_high),
            (middle + half, band_high),
            (middle + half, v_out),
            (middle - half, v_out),
        ]
        grip = profile.Contour.polygon(s.frame.world(corners))
        layers.append(Layer(bottom_mm=rim_z, top_mm=rim_z + GRIP_MM, contour=grip))
    text, engraved = marks.piece_marks(
        name,
        design.name,
        design.radiator.standoff_mm,
        (float(u[first]), float(u[last]), band_low, band_high),
        s.frame,
    )
    piece = BlockPiece(
        name=name,
        withdrawal=s.frame.direction,
        travel_mm=travel,
        available_mm=pulled - v_out,
        layers=tuple(layers),
        carries=_carries(s, humps, span, low),
        lobes=len(humps),
        slack_along_mm=_slack_along(s, span, rim),
        slack_across_mm=_slack_across(s, span, rim),
        text=text,
        marks=engraved,
        marks_z_mm=rim_z,
        marks_depth_mm=min(marks.DEPTH_MM, (rim_z - seat) / 2.0),
        mark_width_mm=max(marks.LINE_MM, 1.25 * design.printer.nozzle_mm),
    )
    return Trial(piece=piece, spine_mm=spine, faults=tuple(faults))


def _arms(
    design: Design,
    s: Side,
    hump: tuple[int, int],
    number: int,
    depth: float,
    wall: float,
    arm: np.ndarray,
) -> list[tuple[str, str]]:
    """Cut the two arms of one hump into the curve `arm`; what is missing comes back as faults."""
    i, j = hump
    heights = s.wire[i : j + 1]
    top = float(heights.max())
    at_top = np.flatnonzero(heights >= top - 1e-6)
    peak = i + int(at_top[at_top.size // 2])
    low = profile.without_spikes(np.maximum(top - depth * (top - s.base_mm), s.blocked), wall)
    carried = np.zeros(s.columns.u.size, dtype=bool)
    carried[i : j + 1] = heights - _seat_margin_mm(design) >= low[i : j + 1]
    least = least_carry_mm(design)
    want = float(np.clip(0.35 * (j - i) * profile.STEP_MM / 2.0, *CARRY_WIDTH_MM))
    cheek = float(s.edge[peak] - s.wire[peak]) + wall
    u = s.columns.u
    faults, spans = [], []
    for word, a, b in (("before", i, peak), ("after", peak, j)):
        found = [
            (a + p, a + q)
            for p, q in profile.runs(carried[a : b + 1])
            if (q - p) * profile.STEP_MM >= least - 1e-9
        ]
        if not found:
            faults.append(
                ("carry", f"carries less than {least:.1f} mm of wire {word} the peak of hump {number + 1}")
            )
            continue
        wide = [r for r in found if (r[1] - r[0]) * profile.STEP_MM >= want] or [
            max(found, key=lambda r: r[1] - r[0])
        ]
        p, q = wide[0] if word == "before" else wide[-1]
        if word == "before":
            spans.append((u[p] - cheek, min(u[p] + want, u[q])))
        else:
            spans.append((max(u[q] - want, u[p]), u[q] + cheek))
    if len(spans) == 2 and spans[1][0] - spans[0][1] < ARM_GAP_MM:
        spans = [(spans[0][0], spans[1][1])]
    for start, end in spans:
        a, b = s.columns.index(start), s.columns.index(end)
        arm[a : b + 1] = np.minimum(arm[a : b + 1], low[a : b + 1])
    return faults


def least_carry_mm(design: Design) -> float:
    """Shortest stretch of wire, across the pull, that counts as a support."""
    return max(1.0, design.radiator.covered_diameter_mm)


def _seat_margin_mm(design: Design) -> float:
    """Wire's centreline must lie this far inside an arm's end to rest on it."""
    return max(0.3, design.radiator.covered_diameter_mm / 4.0)


def _carries(s: Side, humps: tuple[tuple[int, int], ...], span: slice, low: np.ndarray) -> tuple[Carry, ...]:
    out = []
    full = np.full(s.columns.u.size, np.inf)
    full[span] = low
    u = s.columns.u
    for number, (i, j) in enumerate(humps):
        heights = s.wire[i : j + 1]
        at_top = np.flatnonzero(heights >= float(heights.max()) - 1e-6)
        peak = i + int(at_top[at_top.size // 2])
        for word, a, b in (("before", i, peak), ("after", peak, j)):
            for p, q in profile.runs(s.wire[a : b + 1] >= full[a : b + 1]):
                p, q = a + p, a + q
                ends = s.frame.world([(float(u[p]), float(s.wire[p])), (float(u[q]), float(s.wire[q]))])
                run = np.column_stack([u[p : q + 1], s.wire[p : q + 1]])
                length = float(np.linalg.norm(np.diff(run, axis=0), axis=1).sum())
                if length < 0.5:
                    continue  # a graze, not a support
                out.append(Carry(lobe=number, side=word, start=ends[0], end=ends[1], length_mm=length))
    return tuple(out)


def _slack_along(s: Side, span: slice, rim: np.ndarray) -> float:
    return float((rim - s.bare_edge[span]).min())


def _slack_across(s: Side, span: slice, rim: np.ndarray) -> float:
    """Greatest of the two side shifts at which the wire first meets the rim; infinite past 5 mm."""
    padded = np.full(s.columns.u.size, np.inf)
    padded[span] = rim
    worst = 0.0
    for sign in (-1, 1):
        for k in range(1, round(5.0 / profile.STEP_MM)):
            if np.any(np.roll(s.bare_edge, sign * k) > padded):
                worst = max(worst, k * profile.STEP_MM)
                break
        else:
            return math.inf
    return worst


def _in_the_way(s: Side, u_low: float, u_high: float, v_high: float) -> list[Keepout]:
    out = []
    for disc in s.outer:
        du, dv = s.frame.local(np.array([[disc.x_mm, disc.y_mm]]))[0]
        if u_low - disc.radius_mm < du < u_high + disc.radius_mm and dv - disc.radius_mm < v_high:
            out.append(disc)
    return out


def _what_blocks(s: Side, u_low: float, u_high: float, v: float) -> str:
    column = int(np.argmax(np.where((s.columns.u >= u_low) & (s.columns.u <= u_high), s.blocked, -np.inf)))
    x, y = s.frame.world([(float(s.columns.u[column]), float(s.blocked[column]))])[0]
    return f"solder, hardware or wire out of the plane near ({x:.1f}, {y:.1f}) mm reaches into its spine"
