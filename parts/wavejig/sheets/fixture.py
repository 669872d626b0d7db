"""The bending fixture's drawing: which pin makes which bend, in order, and how the nest is used."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from wavejig.design.model import Design
from wavejig.fixture.bending.stopview import stop_name
from wavejig.fixture.model import Fixture, Plate, StopBlock
from wavejig.geometry.plane import Circle
from wavejig.radiator.model import Radiator
from wavejig.sheets.common import block
from wavejig.sheets.fit import best_scale
from wavejig.sheets.fonts import width_mm
from wavejig.sheets.frame import landscape, room
from wavejig.sheets.model import (
    DIM_TEXT_MM,
    SMALL_TEXT_MM,
    Arrow,
    Chain,
    Item,
    LinearDim,
    Ring,
    Shape,
    Sheet,
    Table,
    Text,
    View,
    number,
    scale_text,
)

_LEAST_TEXT_MM = 1.2  # of a station's number; what a laser printer still prints clearly, common practice
_TABLES_WIDE_MM = 92.0


def fixture_drawing(design: Design, fixture: Fixture, radiator: Radiator) -> Sheet:
    """What the wire is bent on, board or stop block, and the nest, in use on one sheet."""
    paper = landscape(design.sheet.paper)
    x0, y0, x1, y1 = room(paper)
    left = x1 - _TABLES_WIDE_MM
    stops = fixture.stop_block if fixture.style == "stop-block" else None
    plate, called = (fixture.board, "bending board") if stops is None else (stops.plate, "stop block")
    board, nest = plate.outline.bounds(), fixture.nest.outline.bounds()
    board_high, nest_high = board[3] - board[1], nest[3] - nest[1]
    field_wide, field_high = left - x0 - 26.0, y1 - y0
    # the board matters more: the nest takes what is left
    scale = best_scale(board[2] - board[0], board_high, field_wide, field_high - 70.0, most=2.0)
    rest = field_high - board_high * scale - 40.0
    nest_scale = best_scale(nest[2] - nest[0], nest_high, field_wide, rest, most=scale)
    centre = x0 + (left - x0) / 2.0 + 4.0
    legs = ", legs up" if design.feed.style == "legs" else ""
    nest_base = y0 + 9.0
    nest_at = (centre - (nest[0] + nest[2]) / 2.0 * nest_scale, nest_base - nest[1] * nest_scale)
    board_base = y1 - 14.0 - board_high * scale
    board_at = (centre - (board[0] + board[2]) / 2.0 * scale, board_base - board[1] * scale)
    views = [
        View(
            title=f"{called.upper()}: seen from above, "
            + (f"radiator face DOWN{legs} (mirror image)" if fixture.face_down else "radiator face up"),
            items=tuple(_board(fixture, scale) if stops is None else _stop_block(stops)),
            at=board_at,
            scale=scale,
            title_at=(centre, board_base - 6.0),
        ),
        View(
            title=f"CHECK NEST ({scale_text(nest_scale)}): from above, radiator face DOWN{legs} (mirror image)",
            items=tuple(_nest(fixture.nest)),
            at=nest_at,
            scale=nest_scale,
            title_at=(centre, y0 + 1.0),
        ),
    ]
    return Sheet(
        name="fixture",
        paper_mm=paper,
        views=tuple(views),
        tables=tuple(_tables(fixture, radiator, left, y1)),
        notes=_notes(fixture),
        notes_at=(x0, y0 - 5.0),
        block=block(
            design,
            title="fixture in use",
            part=f"{called} and check nest",
            material=f"printed, {design.printer.plastic}",
            scale=scale,
            note="for the bench, not to make it from",
            per=0,
        ),
    )


def _notes(fixture: Fixture) -> tuple[str, ...]:
    order = "Bend in the order of fixture/steps.svg and the build sheet."
    nest = "let go, compare in the nest."
    how: tuple[str, ...]
    if fixture.style == "stop-block":
        how = (
            f"{order} For each bend three pins stand and no others: pin, fence, and the stop of the table.",
            "Lay the wire along its lane against the stop (inside the bend before, where there is one), swing the "
            f"free side round the pin until its inner edge reaches the tick (loaded angle), {nest}",
        )
    else:
        how = (
            f"{order} Put in only the pins the wire has reached: a later pin is in the way.",
            f"Pull the wire round until its inner edge reaches the tick (loaded angle), {nest}",
            "Plain circles near the start: the pin at which the cut end stops, and the clamp's two screws."
            if fixture.clamp is not None
            else "Plain circle near the start: the pin at which the cut end stops.",
        )
    return (*how, "Wire ends spring: wear eye protection.")


def _stop_block(block: StopBlock) -> Iterator[Item]:
    """The stop block as it prints: holes, ticks, and the names engraved beside them."""
    yield Shape(contour=block.plate.outline, pen="outline")
    for hole in block.plate.holes:
        yield Ring(circle=Circle(x_mm=hole.at[0], y_mm=hole.at[1], diameter_mm=hole.diameter_mm))
    for stroke in block.plate.marks:
        yield Chain(points=stroke.points, pen="mark")
    x0, y0, x1, y1 = block.plate.outline.bounds()
    yield LinearDim(a=(x0, y1), b=(x1, y1), offset_mm=6.0, reference=True)
    yield LinearDim(a=(x0, y0), b=(x0, y1), offset_mm=6.0, angle_deg=90.0, reference=True)


def _board(fixture: Fixture, scale: float) -> Iterator[Item]:
    board = fixture.board
    yield from _plate(board)
    for hole in board.holes:
        yield Ring(circle=Circle(x_mm=hole.at[0], y_mm=hole.at[1], diameter_mm=hole.diameter_mm), pen="thin")
    for station in fixture.stations:
        circle = Circle(x_mm=station.at[0], y_mm=station.at[1], diameter_mm=station.tool_diameter_mm)
        yield Ring(circle=circle, pen="outline")
        yield Chain(points=station.tick.points, pen="mark")
        # two figures in a small pin: smaller letters
        label, wide = str(station.number), 0.85 * station.tool_diameter_mm * scale
        high = DIM_TEXT_MM * min(1.0, wide / width_mm(label, DIM_TEXT_MM, bold=True))
        high = max(high, _LEAST_TEXT_MM)
        yield Text(
            at=station.at,
            text=label,
            height_mm=high,
            anchor="centre",
            shift=(0.0, -high / 2.0),
            bold=True,
        )
    if fixture.stations:
        first = fixture.stations[0]
        t = math.radians(first.heading_deg)
        u = np.array([math.cos(t), math.sin(t)])
        side = np.array([-u[1], u[0]]) * (1.0 if first.turn == "right" else -1.0) * 4.0 / scale
        tip = np.array(first.tangent) + side - u * 2.0 / scale
        tail = tip - u * 12.0 / scale
        yield Arrow(tail=(float(tail[0]), float(tail[1])), tip=(float(tip[0]), float(tip[1])), pen="outline")
        x, y = _clear_of_holes(fixture, [tip + side * 0.8 - u * k / scale for k in range(2, 34, 2)], scale)
        yield Text(at=(x, y), text="start", anchor="centre", shift=(0.0, -0.9))
    x0, y0, x1, y1 = board.outline.bounds()
    yield LinearDim(a=(x0, y1), b=(x1, y1), offset_mm=6.0, reference=True)
    yield LinearDim(a=(x0, y0), b=(x0, y1), offset_mm=6.0, angle_deg=90.0, reference=True)


def _clear_of_holes(fixture: Fixture, places: list[np.ndarray], scale: float) -> tuple[float, float]:
    """The first of some places where "start" keeps off the board's holes; the first of all where none does."""
    half = np.array([width_mm("start", SMALL_TEXT_MM) / 2.0 + 0.5, SMALL_TEXT_MM / 2.0 + 0.5]) / scale
    circles = [(h.at, h.diameter_mm / 2.0) for h in fixture.board.holes]
    circles += [(s.at, s.tool_diameter_mm / 2.0) for s in fixture.stations]

    def clear(place: np.ndarray) -> bool:
        beyond = [(np.maximum(np.abs(np.subtract(at, place)) - half, 0.0), r) for at, r in circles]
        return all(float(np.linalg.norm(off)) > r for off, r in beyond)

    found = next((p for p in places if clear(p)), places[0])
    return (float(found[0]), float(found[1]))


def _nest(nest: Plate) -> Iterator[Item]:
    yield from _plate(nest)
    x0, y0, x1, y1 = nest.outline.bounds()
    yield LinearDim(a=(x0, y1), b=(x1, y1), offset_mm=6.0, reference=True)
    yield LinearDim(a=(x0, y0), b=(x0, y1), offset_mm=6.0, angle_deg=90.0, reference=True)


def _plate(plate: Plate) -> Iterator[Item]:
    yield Shape(contour=plate.outline, pen="outline")
    for sunk in plate.sunk:
        yield Shape(contour=sunk.contour, pen="thin")
    if len(plate.tiles) > 1:
        for tile in plate.tiles:
            yield Shape(contour=tile, pen="hidden")


def _tables(fixture: Fixture, radiator: Radiator, left: float, top: float) -> Iterator[Table]:
    tools = {"dowel": "dowel pin", "turned": "turned pin", "post": "printed post", "disc": "former disc"}
    stops = fixture.stop_block if fixture.style == "stop-block" else None
    stations = {s.number: s for s in fixture.stations}
    blocks: dict[int, str] = {}
    for b in fixture.blocks:
        for n in b.bends:
            blocks.setdefault(n, b.name)
    rows: list[tuple[str, ...]] = []
    for bend in radiator.main.bends:
        s = stations.get(bend.number)
        if s is not None:
            tool = f"{tools[s.tool]} \u00d8{number(s.tool_diameter_mm)}"
            if stops is not None:
                tool = f"stop {stop_name(stops, bend.number)}, pin \u00d8{number(s.tool_diameter_mm)}"
            rows.append(
                (
                    str(bend.number),
                    number(bend.from_start_mm, 1),
                    s.turn,
                    number(bend.loaded_angle_deg, 1),
                    tool,
                )
            )
        else:
            where = "off board" if stops is None else "\u2013"
            angle = number(bend.loaded_angle_deg, 1)
            on = blocks.get(bend.number, "by hand")
            rows.append((str(bend.number), number(bend.from_start_mm, 1), where, angle, on))
    yield Table(
        title="BENDS of the main wire, mm along it; angles loaded",
        head=("no.", "from start", "turn", "bend to, \u00b0", "on"),
        rows=tuple(rows),
        widths_mm=(9.0, 19.0, 16.0, 19.0, 29.0),
        at=(left, top),
        name="stations",
    )
