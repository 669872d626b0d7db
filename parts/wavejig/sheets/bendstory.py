"""The build sheet's bending: tables, folds, and the pictures of every step."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from reportlab.lib.units import mm
from reportlab.platypus import (
    KeepTogether,
    Spacer,
    Table,
)

from wavejig.sheets import bending, lists
from wavejig.sheets.buildmodel import BuildSheet, picture_of
from wavejig.sheets.feedsteps import NAMES
from wavejig.sheets.flow import PLAIN, heading, para, table
from wavejig.sheets.model import number

if TYPE_CHECKING:
    pass  # the solver is not needed to set its figures


_FRAME_COLUMNS = 2


def bend_tables(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.fixture
    rest = wide - 10.0
    widths = (10.0, *(rest * w for w in (0.115, 0.095, 0.1, 0.09, 0.095, 0.1, 0.105, 0.3)))
    before: list[Any] = [
        heading("Bend table of the wire"),
        para(
            "Lengths in mm from the cut end called START. From start: to where the bend begins. Feed: straight "
            "before it. "
            "Rotation: turn of the bend's plane from the bend before, clockwise looking along the wire "
            "from its "
            "start. Bend to: angle before the wire springs back to the finished angle. Radii inside.",
            small=True,
        ),
    ]
    for name, rows in lists.bends(i.radiator, i.fixture, sheet.order):
        made = table(lists.BEND_HEAD, rows, widths)
        yield KeepTogether([*before, para(name, bold=True, after=0.8), made, Spacer(1, 2.0 * mm)])
        before = []


def folding(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    tray = sheet.inspection.tray
    assert tray is not None
    if not tray.lips:
        return
    rows = [
        (
            lip.edge,
            "up, towards the radiator",
            f"{number(lip.angle_deg)}\u00b0",
            number(tray.inside_radius_mm),
            number((lip.tangent_mm + lip.bend_end_mm) / 2.0),
            number(lip.tip_mm - (lip.tangent_mm + lip.bend_end_mm) / 2.0),
            number(lip.deduction_mm, 3),
            number(lip.k_factor, 3),
        )
        for lip in tray.lips
    ]
    head = (
        "edge",
        "fold",
        "angle",
        "R inside",
        "bend line from datum",
        "bend line from edge",
        "deduction",
        "K-factor",
    )
    widths = tuple(wide * w for w in (0.07, 0.23, 0.09, 0.1, 0.16, 0.15, 0.11, 0.09))
    yield KeepTogether(
        [
            heading("Folds of the reflector"),
            table(head, rows, widths),
            Spacer(1, 1.0 * mm),
            para(
                "Face marked THIS FACE TO RADIATOR is inside. Datum: middle of the base. Lengths in mm.",
                small=True,
            ),
        ]
    )


def frames_story(sheet: BuildSheet, wide: float) -> Iterator[Any]:
    i = sheet.inspection
    assert i.radiator and i.fixture
    yield heading("Bending, step by step")
    yield para(
        "Black circles: pins and discs that stand in this step; the arrow: which way the free side is swung. Grey "
        "wire: before the bend; filled wire: after it has sprung back. What reaches past the picture is cut off."
        " The same steps in colour: fixture/steps.svg.",
        small=True,
    )
    for told in bending.marks_to_draw(sheet.order):
        yield para(told, small=True)
    for remark in _order_remarks(sheet):
        yield para(remark, small=True)
    cell = wide / _FRAME_COLUMNS
    cells = []
    for frame in bending.frames(sheet.design, i.radiator, i.fixture, sheet.order):
        x0, y0, x1, y1 = frame.box
        room = (cell - 6.0) / (x1 - x0)
        scale = min(room, 52.0 / (y1 - y0), 2.0)
        drawn = picture_of(frame.items, frame.box, scale)
        cells.append(
            [
                para(frame.title, bold=True, after=0.5),
                drawn,
                para(f"({frame.seen}) {frame.text}", small=True, after=2.0),
            ]
        )
    for k in range(0, len(cells), _FRAME_COLUMNS):
        row = cells[k : k + _FRAME_COLUMNS]
        row += [[]] * (_FRAME_COLUMNS - len(row))
        made = Table([row], colWidths=[cell * mm] * _FRAME_COLUMNS)
        made.setStyle(PLAIN)
        yield made


def _order_remarks(sheet: BuildSheet) -> Iterator[str]:
    """Where the pictures' order comes from, when no plan vouches for it."""
    if sheet.order is None:
        yield "The order is the bend table's; it has not been checked for collisions."
        return
    for piece in sheet.order.pieces:
        if not piece.found:
            yield (
                f"{NAMES[piece.piece]}: no order without a collision was found ({piece.reason}). The pictures show the "
                "bend table's order: mind where the wire's ends go."
            )
