"""1:1 templates to check parts against, tiled over as many pages as they need. Paper and true mm are the same."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.radiator.drawing import views as plan_views
from wavejig.radiator.model import Radiator
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray
from wavejig.sheets.model import Arrow, Chain, Item, Line, Ring, Shape, Text
from wavejig.sheets.tiles import Tile, tiled


def templates(
    radiator: Radiator, tray: Tray, pattern: FlatPattern, frame_mm: tuple[float, float]
) -> Iterator[Tile]:
    """The radiator's and the blank's template for pages with a frame of that width and height."""
    half = radiator.main.diameter_mm / 2.0
    legs = all(p.role != "tube" for p in radiator.pieces)
    low, high = radiator.main.path.bounds()
    box = (low[0] - half - 1.0, low[1] - half - 1.0, high[0] + half + 1.0, high[1] + half + 1.0)
    yield from tiled(
        "RADIATOR, seen from the radiator side: lay it on face up"
        + (", legs through a hole cut in the middle" if legs else ", before it is soldered to the tube"),
        tuple(_radiator(radiator)), box, frame_mm,
    )  # fmt: skip
    if tray.own is not None:
        yield from drill_templates(tray, pattern, frame_mm)
        return
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield from tiled(
        f"REFLECTOR BLANK{' before folding' if tray.lips else ''}, seen from the radiator side",
        tuple(_blank(tray, pattern)), (x0 - 1.0, y0 - 1.0, x1 + 1.0, y1 + 1.0), frame_mm,
    )  # fmt: skip


def drill_templates(tray: Tray, pattern: FlatPattern, frame_mm: tuple[float, float]) -> Iterator[Tile]:
    """The floor of a dish that is there already, to lie in it while its holes are punched."""
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield from tiled(
        "FLOOR OF THE DISH, seen from the radiator side: cut out along its edge, tape in, punch through the crosses",
        tuple(_blank(tray, pattern)), (x0 - 1.0, y0 - 1.0, x1 + 1.0, y1 + 1.0), frame_mm, "DRILL TEMPLATE 1:1",
    )  # fmt: skip


def _radiator(radiator: Radiator) -> Iterator[Item]:
    for view in plan_views(radiator):
        for outline in view.outlines:
            yield Shape(contour=outline, pen="wire")
        for circle in view.ends_on:
            yield Ring(circle=circle, pen="wire")
        for line in view.centrelines:
            yield Chain(points=line.points, pen="centre")
    low, high = radiator.main.path.bounds()
    yield Line(a=(low[0], 0.0), b=(high[0], 0.0), pen="grey")
    yield from _up(low[1], high[1], 0.0)


def _blank(tray: Tray, pattern: FlatPattern) -> Iterator[Item]:
    yield Shape(contour=pattern.outline, pen="thin")
    for circle in tray.circles:
        yield Ring(circle=circle, pen="thin", cross=True)
    for bend in pattern.bends:
        yield Line(a=bend.line[0], b=bend.line[1], pen="bend")
    for mark in pattern.marks:
        yield Chain(points=mark.points, pen="grey")
    x0, y0, x1, y1 = pattern.outline.bounds()
    yield Line(a=(x0, 0.0), b=(x1, 0.0), pen="centre")
    yield Line(a=(0.0, y0), b=(0.0, y1), pen="centre")
    yield from _up(0.12 * y1, 0.42 * y1, 0.25 * x0)


def _up(from_y: float, to_y: float, x: float) -> Iterator[Item]:
    """Which way is up in the drawings: without it a turned template can be read two ways."""
    yield Arrow(tail=(x, from_y), tip=(x, to_y))
    yield Text(at=(x, (from_y + 2.0 * to_y) / 3.0), text="y+", shift=(1.2, 0.0))
