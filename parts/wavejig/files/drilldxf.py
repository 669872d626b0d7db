"""Layers of the drill template of a dish that is there already: for paper or a plotter, nothing in it is a cut."""

from __future__ import annotations

from wavejig.files.dxf import Layer
from wavejig.geometry.plane import Stroke
from wavejig.reflector.flat import FlatPattern
from wavejig.reflector.model import Tray

CROSS_MM = 1.5  # of a punch mark to each side; inside its hole, so that neighbours' never lie on each other
STUB_MM = 6.0  # of a centre line, outside the floor
BAR_MM = 100.0


def drill_layers(tray: Tray, pattern: FlatPattern) -> tuple[Layer, ...]:
    """Seen from the radiator side, 1:1: floor's edge, holes at their full size, punch crosses, stubs of
    the centre lines and the words; below them a bar of exactly 100 mm to measure."""
    crosses = []
    for c in tray.circles:
        reach = min(CROSS_MM, 0.4 * c.diameter_mm)
        crosses.append(Stroke(points=((c.x_mm - reach, c.y_mm), (c.x_mm + reach, c.y_mm))))
        crosses.append(Stroke(points=((c.x_mm, c.y_mm - reach), (c.x_mm, c.y_mm + reach))))
    x, y = tray.half_x_mm, tray.half_y_mm
    centre = tuple(
        Stroke(points=((a * x, b * y), (a * (x + STUB_MM), b * (y + STUB_MM))))
        for a, b in ((1.0, 0.0), (-1.0, 0.0), (0.0, 1.0), (0.0, -1.0))
    )
    bar = -y - 12.0
    scale = [Stroke(points=((-BAR_MM / 2.0, bar), (BAR_MM / 2.0, bar)))]
    for end in (-BAR_MM / 2.0, BAR_MM / 2.0):
        scale.append(Stroke(points=((end, bar - 2.0), (end, bar + 2.0))))
    layers = [
        Layer(name="floor-edge", entities=(pattern.outline,), colour=8),
        Layer(name="drill", entities=tuple(tray.circles), colour=1),
        Layer(name="punch", entities=tuple(crosses), colour=1),
        Layer(name="centre-lines", entities=centre, colour=5, linetype="CENTER"),
        Layer(name="marks", entities=pattern.marks, colour=3),
        Layer(name="scale-bar-100-mm", entities=tuple(scale), colour=7),
    ]
    return tuple(layer for layer in layers if layer.entities)
