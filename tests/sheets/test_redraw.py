"""From the blank's drawing alone the blank comes out again: outline, bend lines and holes within 0.05 mm."""

from __future__ import annotations

import math
from collections.abc import Callable
from pathlib import Path

import ezdxf
import pytest
from shapely import Polygon

from tests.designs import design
from tests.sheets.conftest import CUT, inspected, pattern_of
from tests.sheets.paper import Printed, printed_dimensions, printed_table, rounded_outline
from wavejig.sheets.sheetfiles import write_sheets
from wavejig.shop import Inspection, inspect

NEAR_MM = 0.05


class Redrawn:
    """What a person puts on a sheet of metal with the drawing beside them."""

    def __init__(self, path: Path) -> None:
        self.dims = printed_dimensions(path)
        self.main = [d for d in self.dims if not d.detail]
        self.holes = printed_table(path, ("hole", "x", "y", "size", "for"))
        across, up = self._sizes("x"), self._sizes("y")
        self.wide, self.high = max(across), max(up)
        self.bends = self._bends()
        # widths of lips that stop short of the corners, each at its cut edge
        self.lip_x = self._at_edge("x", -self.high / 2.0)  # width of the lip at y-
        self.lip_y = self._at_edge("y", -self.wide / 2.0)  # width of the lip at x-

    @property
    def mitred(self) -> bool:
        """The drawing has a corner drawn larger, with radii of its own."""
        return any(d.detail and d.kind == "radius" for d in self.dims)

    def _whole(self, axis: str) -> list[Printed]:
        """Sizes from side to side, over the datum."""
        k = "xy".index(axis)
        return [d for d in self.main if d.kind == axis and d.a[k] * d.b[k] < 0.0]

    def _sizes(self, axis: str) -> list[float]:
        return [d.value for d in self._whole(axis)]

    def _bends(self) -> dict[str, float]:
        """Distance of each bend line from the datum, by edge."""
        out = {}
        for d in self.main:
            if d.kind not in "xy":
                continue
            k = "xy".index(d.kind)
            ends = sorted((d.a[k], d.b[k]), key=abs)
            if abs(ends[0]) < 1e-6:  # begins on the centre line
                out[f"{d.kind}{'+' if ends[1] > 0.0 else '-'}"] = d.value
        return out

    def _at_edge(self, axis: str, level: float) -> float | None:
        """A width less than the whole that is taken at one cut edge; None if the edge is as wide as the blank."""
        k = "xy".index(axis)
        whole = self.wide if axis == "x" else self.high
        for d in self._whole(axis):
            if abs(d.value - whole) > 1e-9 and math.isclose(d.a[1 - k], level, abs_tol=0.5):
                return d.value
        return None

    def radii(self) -> list[tuple[float, bool, float]]:
        """(radius, hollow, how far the arc is from the middle) of every radius on the drawing."""
        out = []
        for d in self.dims:
            if d.kind == "radius":
                outward = math.hypot(*d.b) - math.hypot(*d.a)
                out.append((d.value, outward < 0.0 if not d.detail else None, math.hypot(*d.b)))
        return out  # type: ignore[return-value]

    def corners(self) -> list[tuple[float, float, float]]:
        """(x, y, radius) of one quarter, counter-clockwise from x+, for open corners and for none."""
        radii = self.radii()
        tip = next(r for r, hollow, _ in radii if hollow is False)
        x, y = self.wide / 2.0, self.high / 2.0
        if self.lip_x is None or self.lip_y is None:
            return [(x, y, tip)]
        notch = next(r for r, hollow, _ in radii if hollow is True)
        a, b = self.lip_x / 2.0, self.lip_y / 2.0
        return [(x, b, tip), (a, b, notch), (a, y, tip)]

    def mitred_corners(self) -> list[tuple[float, float, float]]:
        """The same for mitred corners: the ears' figures come from the detail of the corner."""
        detail = [d for d in self.dims if d.detail]
        (tip,) = [r for r, hollow, _ in self.radii() if hollow is False]
        arcs = {d.count: d.value for d in detail if d.kind == "radius"}
        hollow, outer = arcs[12], arcs[8]  # 4 notches and 8 hollow ear corners; 8 outer ear corners
        (past_x,) = [d.value for d in detail if d.kind == "x"]
        (past_y,) = [d.value for d in detail if d.kind == "y"]
        assert self.lip_x is not None and self.lip_y is not None
        x, y, a, b = self.wide / 2.0, self.high / 2.0, self.lip_x / 2.0, self.lip_y / 2.0
        ear_x, ear_y = self.bends["x+"] + past_x, self.bends["y+"] + past_y
        foot_x, reach_x = self._ear("x", self.wide, self.lip_x)
        foot_y, reach_y = self._ear("y", self.high, self.lip_y)
        return [
            (x, reach_y, tip), (ear_x, foot_y, outer), (ear_x, b, hollow), (a, b, hollow), (a, ear_y, hollow),
            (foot_x, ear_y, outer), (reach_x, y, tip),
        ]  # fmt: skip

    def _ear(self, axis: str, whole: float, lip: float) -> tuple[float, float]:
        """How far an ear reaches from the middle, where it begins and at its tip; upright ears have one size."""
        sizes = sorted(v / 2.0 for v in self._sizes(axis) if v not in (whole, lip))
        return sizes[0], sizes[-1]


def all_round(quarter: list[tuple[float, float, float]]) -> list[tuple[float, float, float]]:
    """The four quarters of a blank that is alike about both centre lines, counter-clockwise."""
    out = []
    for sx, sy, backwards in ((1, 1, False), (-1, 1, True), (-1, -1, False), (1, -1, True)):
        part = [(sx * x, sy * y, r) for x, y, r in quarter]
        out += part[::-1] if backwards else part
    return out


LEANING = {"lips": "four", "corners": "mitre", "lip_angle": "60 deg"}  # ears that widen towards their tips


def test_leaning_mitred_lips_come_out_too(tmp_path: Path) -> None:
    made = inspect(design("quad", reflector=LEANING, sheet={"paper": "Letter", "projection": "third"}))
    write_sheets(made, pattern_of(made), tmp_path)
    check_redrawn(tmp_path / "drawings" / "blank.dxf", made)


@pytest.mark.parametrize("name", CUT)
def test_the_paper_alone_gives_the_blank_again(name: str, written: Callable[[str], Path]) -> None:
    check_redrawn(written(name) / "drawings" / "blank.dxf", inspected(name))


def check_redrawn(path: Path, made: Inspection) -> None:
    """The drawing's numbers against the blank of the design."""
    drawn = Redrawn(path)
    tray = made.tray
    assert tray is not None
    outline = rounded_outline(all_round(drawn.mitred_corners() if drawn.mitred else drawn.corners()))
    expected = Polygon(tray.outline.points(0.002))
    redrawn = Polygon(outline)
    assert redrawn.is_valid
    assert apart(redrawn, expected) < NEAR_MM
    assert apart(expected, redrawn) < NEAR_MM
    # bends
    pattern = pattern_of(made)
    assert {b.edge for b in pattern.bends} == set(drawn.bends)
    for bend in pattern.bends:
        k = "xy".index(bend.edge[0])
        assert abs(abs(bend.line[0][k]) - drawn.bends[bend.edge]) < NEAR_MM
    # holes
    assert len(drawn.holes) == len(tray.holes)
    for row, hole in zip(drawn.holes, tray.holes, strict=True):
        x, y, d = float(row[1]), float(row[2]), float(row[3].removeprefix("\u00d8"))
        assert math.dist((x, y), (hole.x_mm, hole.y_mm)) < NEAR_MM
        assert abs(d - hole.diameter_mm) < NEAR_MM


def apart(a: Polygon, b: Polygon) -> float:
    """The furthest that a point of one outline, every 0.1 mm along it, is from the other outline."""
    ring = a.exterior
    return max(b.exterior.distance(ring.interpolate(0.1 * i)) for i in range(int(ring.length * 10)))


def test_saltmarsh_is_redrawn_from_a_handful_of_numbers(written: Callable[[str], Path]) -> None:
    """The bend table says the same as the dimensions, and which way."""
    path = written("saltmarsh-2g4") / "drawings" / "blank.dxf"
    drawn = Redrawn(path)
    rows = printed_table(path, ("edge", "datum to bend", "edge to bend", "angle", "R inside"))
    assert [r[0] for r in rows] == ["x+", "y+", "x-", "y-"]
    for edge, datum, past, angle, radius in rows:
        assert float(datum) == drawn.bends[edge]
        half = (drawn.wide if edge[0] == "x" else drawn.high) / 2.0
        assert abs(float(past.strip("()")) + float(datum) - half) < 0.02
        assert angle == "UP 90\u00b0"
        assert float(radius) == 0.8


def test_a_wrong_number_on_the_paper_is_noticed(written: Callable[[str], Path]) -> None:
    """The comparison can fail: a lip drawn 0.2 mm narrower is found out."""
    drawn = Redrawn(written("saltmarsh-2g4") / "drawings" / "blank.dxf")
    assert drawn.lip_x is not None
    drawn.lip_x -= 0.2
    tray = inspected("saltmarsh-2g4").tray
    assert tray is not None
    redrawn, expected = (
        Polygon(rounded_outline(all_round(drawn.corners()))),
        Polygon(tray.outline.points(0.002)),
    )
    assert apart(redrawn, expected) > NEAR_MM


def test_no_view_of_the_blank_is_mirrored(written: Callable[[str], Path]) -> None:
    """The drawn circles of the main view stand at the holes' own places, x to the right, y up."""
    path = written("saltmarsh-2g4") / "drawings" / "blank.dxf"
    circles = {
        (round(c.dxf.center.x, 4), round(c.dxf.center.y, 4), round(2.0 * c.dxf.radius, 4))
        for c in ezdxf.readfile(path).modelspace().query("CIRCLE")
    }
    tray = inspected("saltmarsh-2g4").tray
    assert tray is not None
    wanted = {(round(h.x_mm, 4), round(h.y_mm, 4), round(h.diameter_mm, 4)) for h in tray.holes}
    assert wanted <= circles
    lopsided = {(x, y) for x, y, _ in wanted if (x, -y) not in {(u, v) for u, v, _ in wanted}}
    assert lopsided  # so a mirrored view could not have passed


def test_the_nest_is_the_mirror_image_and_says_so(written: Callable[[str], Path]) -> None:
    path = written("saltmarsh-2g4") / "drawings" / "fixture.dxf"
    texts = [t.plain_text() for t in ezdxf.readfile(path).modelspace().query("TEXT")]
    (nest,) = [t for t in texts if t.startswith("CHECK NEST")]
    assert "face DOWN" in nest and "mirror image" in nest
    (board,) = [t for t in texts if t.startswith("BENDING BOARD")]
    assert "radiator face DOWN, legs up (mirror image)" in board
