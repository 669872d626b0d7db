"""Pictures of the bending: the wire on the board after each step, in the order it is done.

On the board a wire is drawn in the board's plan. A bend off the board is drawn from its side, on its block; one
on the stop block from above. What is told to do are the words of the planned order, as in fixture/steps.svg.
Lengths in mm.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.fixture.bending.forming import stock_wire
from wavejig.fixture.bending.frames import Pose, poses
from wavejig.fixture.bending.model import AT_MARK, BOARD, STOPS, BendOrder, BendStep
from wavejig.fixture.bending.words import instruction
from wavejig.fixture.model import Fixture, Station
from wavejig.geometry.path import PathBend, path_from_bends
from wavejig.geometry.plane import Circle
from wavejig.radiator.model import Bend, Piece, Radiator
from wavejig.sheets.bendframe import Frame, cut_off, wire_shapes
from wavejig.sheets.feedsteps import NAMES
from wavejig.sheets.laid import laid
from wavejig.sheets.model import SMALL_TEXT_MM, Arrow, Item, Line, Ring, Shape, Text, number
from wavejig.sheets.stoppicture import stop_picture

_TURNED = np.array([-1.0, 1.0, -1.0])
_BLOCK_SHOWN_MM = 16.0  # how much straight wire a block's picture shows on either side
# The swing's arrow stands off the former by so much, or by this share of the board's width. Taste, no source.
_SWING_MM, _SWING_SHARE = 8.0, 0.07


def frames(
    design: Design, radiator: Radiator, fixture: Fixture, order: BendOrder | None
) -> tuple[Frame, ...]:
    """A frame for each bend of every bent piece, in the planned order, or in the table's without one."""
    out: list[Frame] = []
    stations = {s.number: s for s in fixture.stations}
    for piece in radiator.pieces:
        if not piece.bends or piece.role == "inner":
            continue
        planned = None
        if order is not None:
            planned = next((p for p in order.pieces if p.piece == piece.role and p.found), None)
        steps: list[tuple[Bend, BendStep | None]]
        rows = {b.number: b for b in piece.bends}
        steps = [(rows[s.number], s) for s in planned.steps] if planned else [(b, None) for b in piece.bends]
        on_stops: dict[int, Pose] = {}
        if planned is not None and any(s.place == STOPS for s in planned.steps):
            shapes = poses(planned, stock_wire(design, piece), None, fixture.stop_block)
            on_stops = {pose.step.number: pose for pose in shapes if pose.step.place == STOPS}
        done: list[int] = []
        for count, (bend, step) in enumerate(steps, start=1):
            station = stations.get(bend.number) if piece is radiator.main else None
            title = f"{NAMES[piece.role]}, step {count} of {len(steps)}: bend {bend.number}"
            if step is None:
                text = _unplanned(bend, station)
            else:
                text = instruction(step, stock_wire(design, piece), fixture, done).replace(" deg", "\u00b0")
            if bend.number in on_stops and fixture.stop_block is not None:
                wide = design.radiator.covered_diameter_mm
                out.append(stop_picture(on_stops[bend.number], fixture.stop_block, wide, title, text))
            elif station is not None and (step is None or step.place == BOARD):
                out.append(_board_frame(piece, bend, step, fixture, station, tuple(done), title, text))
            else:
                out.append(_block_frame(piece, bend, step, title, text))
            done.append(bend.number)
    return tuple(out)


def marks_to_draw(order: BendOrder | None) -> tuple[str, ...]:
    """What is drawn on each wire before it is bent: which end is START, and marks counted from there."""
    out = []
    for piece in order.pieces if order is not None else ():
        if not piece.found or not piece.steps:
            continue
        marks = sorted((s.mark_mm, s.number) for s in piece.steps if s.located == AT_MARK)
        listed = ", ".join(f"{number(mm, 1)} (bend {n})" for mm, n in marks)
        drawn = f"; draw marks at these distances from it, in mm: {listed}" if marks else ""
        out.append(f"{NAMES[piece.piece].capitalize()}: call one cut end START, the other END{drawn}.")
    return tuple(out)


def _unplanned(bend: Bend, station: Station | None) -> str:
    """What the table says of a bend, when no order has been planned."""
    turned = ""
    if station is not None:
        turned = f"Turn {station.turn}. "
    elif bend.number > 1 and abs(bend.rotation_deg) > 0.05:
        way = "clockwise" if bend.rotation_deg > 0 else "counter-clockwise"
        turned = (
            f"Plane turned {number(abs(bend.rotation_deg), 1)}\u00b0 {way} from bend {bend.number - 1}'s, looking "
            "along the wire from its start. "
        )
    return (
        f"{turned}Begins {number(bend.from_start_mm, 1)} mm from the start. Bend to "
        f"{number(bend.loaded_angle_deg, 1)}\u00b0; it springs back to {number(bend.angle_deg, 1)}\u00b0."
    )


def _board_frame(
    piece: Piece,
    bend: Bend,
    step: BendStep | None,
    fixture: Fixture,
    station: Station,
    before: tuple[int, ...],
    title: str,
    text: str,
) -> Frame:
    from_end = step is not None and step.held == "end"
    now = laid(piece, {*before, bend.number}, bend.number, from_end=from_end)
    was = laid(piece, set(before), bend.number, from_end=from_end)
    if fixture.face_down:  # the radiator lies turned over about the y axis, as the board is drawn
        now, was = now * _TURNED[: now.shape[1]], was * _TURNED[: was.shape[1]]
    x0, y0, x1, y1 = fixture.board.outline.bounds()
    items: list[Item] = [Shape(contour=fixture.board.outline, pen="grey")]
    for s in fixture.stations:
        standing = s.number in step.pins if step is not None else s.number in (*before, bend.number)
        if s.tool == "disc" and not standing:
            continue
        circle = Circle(x_mm=s.at[0], y_mm=s.at[1], diameter_mm=s.tool_diameter_mm)
        items.append(Ring(circle=circle, pen="outline" if standing else "grey"))
        if standing:
            items.append(Text(at=s.at, text=str(s.number), height_mm=1.6, anchor="centre", shift=(0.0, -0.8)))
    items += wire_shapes(was, piece.diameter_mm, "grey")
    items += wire_shapes(now, piece.diameter_mm, "wire")
    # a long straight tail would make the board tiny: what leaves the board is shown cut off
    clip = (x0 - 4.0, y0 - 4.0, x1 + 4.0, y1 + 4.0)
    items += _swing(station, clip, from_end=from_end)
    return Frame(
        title=title, text=text, items=tuple(cut_off(items, clip)), box=clip,
        seen="from above the board, the radiator face down" if fixture.face_down else "from above the board",
    )  # fmt: skip


def swing_rad(station: Station, *, from_end: bool) -> tuple[float, float]:
    """Directions, seen from the pin, in which the free side runs before the bend and when it is loaded.

    With the start held the end swings the way the bend turns; with the end held the start swings the other way.
    """
    heading, loaded = math.radians(station.heading_deg), math.radians(station.loaded_angle_deg)
    turn = loaded if station.turn == "left" else -loaded
    if from_end:
        return heading + turn + math.pi, heading + math.pi
    return heading, heading + turn


def _swing(station: Station, box: tuple[float, float, float, float], *, from_end: bool) -> Iterator[Item]:
    """An arrow about the pin from where the free side lay to where it is pulled, as far as it is in the box."""
    at = np.array(station.at)
    radius = station.tool_diameter_mm / 2.0 + max(_SWING_MM, _SWING_SHARE * (box[2] - box[0]))
    first, last = swing_rad(station, from_end=from_end)
    angles = np.linspace(first, last, 25)
    points = at + radius * np.column_stack([np.cos(angles), np.sin(angles)])
    low, high = np.array(box[:2]), np.array(box[2:])
    inside = np.flatnonzero(((points >= low) & (points <= high)).all(axis=1))
    # the last unbroken run in the box: the arrow's head is what matters
    run = inside[np.flatnonzero(np.diff(inside, prepend=-9) > 1)[-1] :] if len(inside) else inside
    if len(run) < 3:
        return
    shown = points[run]
    for a, b in itertools.pairwise(shown[:-1]):
        yield Line(a=_pt(a), b=_pt(b))
    yield Arrow(tail=_pt(shown[-3]), tip=_pt(shown[-1]))


def _block_frame(piece: Piece, bend: Bend, step: BendStep | None, title: str, text: str) -> Frame:
    """A bend over a dowel: the held wire level, the free end bent down."""
    d, r = piece.diameter_mm, bend.inside_radius_mm + piece.diameter_mm / 2.0
    angle = math.radians(bend.angle_deg)
    path = path_from_bends(
        [PathBend(feed_mm=_BLOCK_SHOWN_MM, rotation_deg=0.0, angle_deg=bend.angle_deg, radius_mm=r)],
        _BLOCK_SHOWN_MM,
        start=(-_BLOCK_SHOWN_MM, r, 0.0),
        direction=(1.0, 0.0, 0.0),
        normal=(0.0, 0.0, -1.0),
    )
    now = path.sample(chord_error_mm=0.02)[:, :2]
    was = np.array([[-_BLOCK_SHOWN_MM, r], [_BLOCK_SHOWN_MM + r * angle, r]])
    items: list[Item] = [
        Ring(circle=Circle(x_mm=0.0, y_mm=0.0, diameter_mm=2.0 * bend.loaded_inside_radius_mm))
    ]
    items += wire_shapes(was, d, "grey")
    items += wire_shapes(now, d, "wire")
    items.append(
        Text(at=(0.0, 0.0), text=str(bend.number), height_mm=1.6, anchor="centre", shift=(0.0, -0.8))
    )
    side = "" if step is None else " END side" if step.held == "end" else " START side"
    items.append(
        Text(at=(-_BLOCK_SHOWN_MM, r + d), text=f"held{side}", height_mm=SMALL_TEXT_MM, shift=(0.0, 0.8))
    )
    x = _BLOCK_SHOWN_MM + 3.0
    far = bend.loaded_inside_radius_mm
    low = min(float(now[:, 1].min()), -far) - d - 1.0
    high = max(r + d, far) + d + 4.0
    return Frame(
        title=title, text=text, items=tuple(items), box=(-x, low, x + r, high),
        seen="from the side of the block",
    )  # fmt: skip


def _pt(v: np.ndarray) -> tuple[float, float]:
    return (float(v[0]), float(v[1]))
