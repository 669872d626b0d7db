"""Pictures of the bending: the wire on the board after each step, in the order it is done.

On the board a wire is drawn in the board's plan. A bend off the board is drawn from its side, on its block.
Lengths in mm.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from wavejig.fixture.bending.model import BLOCK, BendOrder, BendStep
from wavejig.fixture.bending.scene import CLAMP, STOP
from wavejig.fixture.model import Fixture, Station
from wavejig.geometry.path import PathBend, path_from_bends
from wavejig.geometry.plane import Circle, Contour
from wavejig.radiator.model import Bend, Piece, Radiator
from wavejig.sheets.feedsteps import NAMES
from wavejig.sheets.laid import laid
from wavejig.sheets.model import SMALL_TEXT_MM, Arrow, Item, Line, Pen, Ring, Shape, Text, number
from wavejig.sheets.project import outlines_of

_TURNED = np.array([-1.0, 1.0, -1.0])
_BLOCK_SHOWN_MM = 16.0  # how much straight wire a block's picture shows on either side


@dataclass(frozen=True, slots=True, kw_only=True)
class Frame:
    """One picture: items in mm with the box (x0, y0, x1, y1) to show, and what is said below it."""

    title: str
    text: str
    items: tuple[Item, ...]
    box: tuple[float, float, float, float]
    seen: str


def frames(radiator: Radiator, fixture: Fixture, order: BendOrder | None) -> tuple[Frame, ...]:
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
        done: list[int] = []
        for count, (bend, step) in enumerate(steps, start=1):
            station = stations.get(bend.number) if piece is radiator.main else None
            on_block = step.place == BLOCK if step is not None else station is None
            before = tuple(done)
            done.append(bend.number)
            title = f"{NAMES[piece.role]}, step {count} of {len(steps)}: bend {bend.number}"
            if on_block or station is None:
                out.append(_block_frame(piece, bend, step, fixture, title))
            else:
                out.append(_board_frame(piece, bend, step, fixture, station, before, title))
    return tuple(out)


def _board_frame(
    piece: Piece,
    bend: Bend,
    step: BendStep | None,
    fixture: Fixture,
    station: Station,
    before: tuple[int, ...],
    title: str,
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
    items += _wire(was, piece.diameter_mm, "grey")
    items += _wire(now, piece.diameter_mm, "wire")
    items += _swing(station)
    clip = (x0 - 4.0, y0 - 4.0, x1 + 4.0, y1 + 4.0)
    # a long straight tail would make the board tiny: what leaves the board is shown cut off
    text = [
        f"Turn {station.turn}{' (the start side swings)' if from_end else ''} to "
        f"{number(bend.loaded_angle_deg, 1)}\u00b0, "
        f"springs back to {number(bend.angle_deg, 1)}\u00b0."
    ]
    if step is not None:
        if step.pins_in or step.pins_out:
            text.append(
                "; ".join(
                    f"{word} {_many(pins)}"
                    for word, pins in (("put in", step.pins_in), ("take out", step.pins_out))
                    if pins
                ).capitalize()
                + "."
            )
        if step.trim_first:
            text.append("Cut the extra length off first.")
        text.append(_located(step))
        if step.lift_deg > 0.5:
            text.append(f"Lift the swinging side {number(step.lift_deg, 0)}\u00b0 over what lies there.")
    else:
        text.append(f"Begins {number(bend.from_start_mm, 1)} mm from the start.")
    return Frame(
        title=title, text=" ".join(t for t in text if t), items=tuple(_cut_off(items, clip)), box=clip,
        seen="from above the board, the radiator face down" if fixture.face_down else "from above the board",
    )  # fmt: skip


def _located(step: BendStep) -> str:
    if step.located == "stop":
        return "Cut end at the stop."
    if step.located == "mark":
        return f"Mark on the wire, {number(step.mark_mm, 1)} mm from the cut start, at the bend's begin."
    return "Formed bend in its place."


def _many(labels: tuple[int, ...]) -> str:
    """Pins by number; labels below 1 are the stop and the clamp."""
    pins = [str(p) for p in labels if p > 0]
    named = [word for label, word in ((STOP, "the stop"), (CLAMP, "the clamp")) if label in labels]
    numbered = [("pins " if len(pins) > 1 else "pin ") + ", ".join(pins)] if pins else []
    return " and ".join(numbered + named)


def _wire(points: np.ndarray, diameter: float, pen: Pen) -> Iterator[Item]:
    for contour, holes in outlines_of(points, diameter):
        yield Shape(contour=contour, holes=holes, pen=pen, filled=pen == "wire")


def _swing(station: Station) -> Iterator[Item]:
    """An arrow from where the free side lay to where it is pulled, along the arc about the pin."""
    at = np.array(station.at)
    radius = station.tool_diameter_mm / 2.0 + 12.0
    t = math.radians(station.heading_deg)
    left = station.turn == "left"
    start = t + (-math.pi / 2 if left else math.pi / 2)
    # beginning where the straight wire leaves the pin, towards the loaded side
    first = start + (math.radians(25.0) if left else -math.radians(25.0))
    last = start + (1.0 if left else -1.0) * math.radians(max(station.loaded_angle_deg, 40.0))
    points = [at + radius * np.array([math.cos(a), math.sin(a)]) for a in np.linspace(first, last, 12)]
    for a, b in itertools.pairwise(points[:-1]):
        yield Line(a=_pt(a), b=_pt(b))
    yield Arrow(tail=_pt(points[-3]), tip=_pt(points[-1]))


def _cut_off(items: list[Item], box: tuple[float, float, float, float]) -> Iterator[Item]:
    """The items with filled and grey wire clipped to a box."""
    from shapely import MultiPolygon, Polygon
    from shapely import box as rectangle

    frame = rectangle(*box)
    for item in items:
        if not isinstance(item, Shape) or item.pen not in ("wire", "grey"):
            yield item
            continue
        whole = Polygon(item.contour.points(), [h.points() for h in item.holes]).buffer(0.0)
        part = whole.intersection(frame)
        for piece in part.geoms if isinstance(part, MultiPolygon) else [part]:
            if isinstance(piece, Polygon) and not piece.is_empty:
                contour, *holes = (
                    Contour.polygon([*ring.coords][:-1]) for ring in (piece.exterior, *piece.interiors)
                )
                yield Shape(contour=contour, holes=tuple(holes), pen=item.pen, filled=item.filled)


def _block_frame(piece: Piece, bend: Bend, step: BendStep | None, fixture: Fixture, title: str) -> Frame:
    """A bend over a block's dowel: seen from the block's side, the held wire level, the free end bent down."""
    block = None
    if step is not None:
        block = next((b for b in fixture.blocks if b.name == step.tool), None)
    if block is None:
        block = next(
            (b for b in fixture.blocks if abs(b.loaded_angle_deg - bend.loaded_angle_deg) < 0.05), None
        )
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
    items += _wire(was, d, "grey")
    items += _wire(now, d, "wire")
    items.append(
        Text(at=(0.0, 0.0), text=str(bend.number), height_mm=1.6, anchor="centre", shift=(0.0, -0.8))
    )
    items.append(Text(at=(-_BLOCK_SHOWN_MM, r + d), text="held", height_mm=SMALL_TEXT_MM, shift=(0.0, 0.8)))
    text = [
        f"On {block.name if block else 'pliers or a pin'}: to {number(bend.loaded_angle_deg, 1)}\u00b0, "
        "springs back to "
        f"{number(bend.angle_deg, 1)}\u00b0. Begins {number(bend.from_start_mm, 1)} mm from the start."
    ]
    if bend.number > 1 and abs(bend.rotation_deg) > 0.05:
        text.append(
            f"Plane turned {number(abs(bend.rotation_deg), 1)}\u00b0 "
            + ("clockwise" if bend.rotation_deg > 0 else "counter-clockwise")
            + " from the bend before, looking along the wire from its start."
        )
    if step is not None:
        if step.held == "end":
            text.append("The start side is bent; hold the far side.")
        if step.trim_first:
            text.append("Cut the extra length off first.")
        text.append(_located(step))
    x = _BLOCK_SHOWN_MM + 3.0
    low = min(float(now[:, 1].min()) - d, -bend.loaded_inside_radius_mm) - 1.0
    return Frame(
        title=title,
        text=" ".join(text),
        items=tuple(items),
        box=(-x, low, x + r, r + d + 5.0),
        seen="from the side of the block",
    )


def _pt(v: np.ndarray) -> tuple[float, float]:
    return (float(v[0]), float(v[1]))
