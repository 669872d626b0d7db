"""Nests: blanks apart, inside the margins, all there, all with the grain the same way. Judged by shapely."""

from __future__ import annotations

from functools import cache

import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st
from shapely import Polygon

from tests.designs import design
from wavejig.batch.findings import batch_findings
from wavejig.batch.model import Nest, NestedShapes, NestSheet
from wavejig.batch.nest import NestError, NumberedBlank, nest
from wavejig.batch.plan import plan as plan_batch
from wavejig.design.model import Design
from wavejig.geometry.plane import Circle, Contour
from wavejig.reflector.flat import FlatPattern, flat_pattern, with_kerf
from wavejig.reflector.model import Tray
from wavejig.reflector.tray import plan as plan_tray
from wavejig.shop import inspect


@cache
def blank(lips: str, base_x: int, base_y: int, name: str = "spare") -> tuple[Design, Tray, FlatPattern]:
    made = design(
        name=name,
        reflector={
            "lips": lips,
            "base": [f"{base_x} mm", f"{base_y} mm"],
            **({} if lips == "none" else {"lip_height": "14 mm"}),
        },
    )
    tray = plan_tray(made.reflector)
    return made, tray, flat_pattern(tray, made.name)


def on(made: Design, quantity: int, **cutter: object) -> Design:
    from dataclasses import replace

    return replace(made, quantity=quantity, cutter=replace(made.cutter, **cutter))  # type: ignore[arg-type]


def outlines(shapes: NestedShapes) -> list[Polygon]:
    return [Polygon(c.points(0.01)) for c in shapes.cut if isinstance(c, Contour)]


def all_shapes(
    made: Design, tray: Tray, pattern: FlatPattern, laid: Nest
) -> list[tuple[NestSheet, NestedShapes]]:
    numbered = NumberedBlank(made, tray, pattern)
    return [(sheet, numbered.shapes(laid, sheet)) for sheet in laid.sheets]


@given(
    st.sampled_from(["none", "two", "four"]),
    st.integers(90, 220),
    st.integers(90, 220),
    st.integers(1, 60),
    st.tuples(st.floats(150.0, 1300.0), st.floats(150.0, 900.0)),
    st.floats(0.5, 12.0),
    st.floats(0.0, 20.0),
    st.sampled_from(["x", "y", "none"]),
    st.sampled_from(["fibre-laser", "guillotine"]),
)
def test_any_batch(
    lips: str,
    base_x: int,
    base_y: int,
    quantity: int,
    stock: tuple[float, float],
    spacing: float,
    margin: float,
    grain: str,
    process: str,
) -> None:
    made, tray, pattern = blank(lips, base_x // 10 * 10, base_y // 10 * 10)
    made = on(
        made,
        quantity,
        stock_x_mm=stock[0],
        stock_y_mm=stock[1],
        spacing_mm=spacing,
        margin_mm=margin,
        grain=grain,
        process=process,
    )
    w, h = pattern.size_mm
    room = [s - 2.0 * margin for s in stock]
    try:
        laid = nest(made, tray, pattern)
    except NestError:
        assert not (
            (w <= room[0] - 0.01 and h <= room[1] - 0.01) or (h <= room[0] - 0.01 and w <= room[1] - 0.01)
        )
        return
    numbers = []
    turns = set()
    free = shapely.box(margin, margin, stock[0] - margin, stock[1] - margin).buffer(1e-3)
    for sheet, shapes in all_shapes(made, tray, pattern, laid):
        assert len(sheet.placements) <= laid.per_sheet
        numbers += [p.number for p in sheet.placements]
        turns |= {p.turn_deg for p in sheet.placements}
        found = outlines(shapes)
        assert len(found) == len(sheet.placements)
        for polygon in found:
            assert polygon.area == pytest.approx(abs(pattern.outline.area_mm2), rel=1e-4)
            assert free.covers(polygon)
        pairs = shapely.STRtree(found).query(found, predicate="dwithin", distance=spacing - 2e-3)
        assert all(i == j for i, j in pairs.T.tolist())
        holes = [c for c in shapes.cut if isinstance(c, Circle)]
        assert len(holes) == len(pattern.holes) * len(found)
        tree = shapely.STRtree(found)
        for hole in holes:
            assert len(tree.query(shapely.Point(hole.x_mm, hole.y_mm), predicate="within")) == 1
        assert sheet.utilisation == pytest.approx(
            sum(p.area for p in found) / (stock[0] * stock[1]), rel=1e-4
        )
    assert numbers == list(range(1, quantity + 1))
    if grain == "none":
        assert laid.blank_grain == "any"
    else:
        assert len(turns) == 1  # 0 and 180 deg keep the grain; a quarter turn is for all or none
        assert laid.blank_grain == (grain if turns == {0.0} else {"x": "y", "y": "x"}[grain])
    assert laid.fewest_sheets <= len(laid.sheets)
    offcut = laid.offcut_mm
    last = laid.sheets[-1].box
    assert offcut[0] <= stock[0] - last[2] or offcut[1] <= stock[1] - last[3]


@pytest.mark.parametrize("grain", ["x", "y"])
def test_folds_cross_the_grain_where_the_sheet_allows_it(grain: str) -> None:
    made, tray, pattern = blank("two", 120, 100)  # lips at y edges: folds along x
    laid = nest(on(made, 5, stock_x_mm=800.0, stock_y_mm=800.0, grain=grain), tray, pattern)
    assert laid.blank_grain == "y"
    assert laid.bends_across_grain and not laid.bends_along_grain


def test_folds_along_the_grain_are_told_when_only_so_it_fits() -> None:
    made = design(
        reflector={"lips": "two", "base": ["200 mm", "100 mm"], "lip_height": "14 mm"},
        cutter={"stock_sheet": ["400 mm", "150 mm"], "grain": "x"},
        quantity=3,
    )
    found = inspect(made)
    assert found.can_be_made, found.findings
    assert found.tray and found.radiator and found.spacer and found.fixture
    batch = plan_batch(
        made, found.radiator, found.tray, flat_pattern(found.tray), found.spacer, found.fixture
    )
    assert [f.code for f in batch_findings(batch)] == ["nest-along-grain"]


def test_every_blank_carries_its_own_number() -> None:
    """A number's strokes differ from the next one's, and all else on the mark layer is alike."""
    made, tray, pattern = blank("four", 120, 120, "shore-station")
    made = on(made, 12, stock_x_mm=900.0, stock_y_mm=700.0)
    laid = nest(made, tray, pattern)
    numbered = NumberedBlank(made, tray, pattern)
    assert numbered.has_number
    seen = set()
    for sheet in laid.sheets:
        for place in sheet.placements:
            alone = numbered.shapes(laid, NestSheet(placements=(place,), box=sheet.box, utilisation=0.0))
            (outline,) = outlines(alone)
            at = [
                tuple((round(x - place.x_mm, 4), round(y - place.y_mm, 4)) for x, y in stroke.points)
                for stroke in (*alone.marks, *alone.numbers)
            ]
            assert len(at) > len(pattern.marks)
            seen.add(tuple(at))
            for stroke in (*alone.marks, *alone.numbers):
                assert outline.contains(shapely.LineString(stroke.points))
    assert len(seen) == 12


def test_a_long_name_gives_way_to_the_number() -> None:
    made, tray, pattern = blank("none", 90, 90, "a-rather-long-name-that-fills-the-blank-12345678")
    numbered = NumberedBlank(on(made, 5000), tray, pattern)
    assert numbered.has_number


def test_marks_keep_clear_of_holes_and_bends() -> None:
    made, tray, pattern = blank("four", 130, 130, "shore")
    made = on(made, 99)
    laid = nest(made, tray, pattern)
    for sheet, shapes in all_shapes(made, tray, pattern, laid):
        assert sheet.placements
        marks = [shapely.LineString(s.points) for s in (*shapes.marks, *shapes.numbers)]
        tree = shapely.STRtree(marks)
        for c in shapes.cut:
            if isinstance(c, Circle):
                hole = shapely.Point(c.x_mm, c.y_mm).buffer(c.diameter_mm / 2.0)
                assert not len(tree.query(hole, predicate="intersects"))
        for start, end, _ in shapes.bends:
            assert not len(tree.query(shapely.LineString([start, end]), predicate="intersects"))


def test_kerf_in_the_file_widens_the_path_about_the_same_place() -> None:
    made, tray, pattern = blank("four", 120, 120)
    made = on(made, 4, kerf_mm=0.4, offset_in_file=True)
    laid = nest(made, tray, pattern)
    cut = with_kerf(pattern, 0.4)
    for (_, nominal), (_, path) in zip(
        all_shapes(made, tray, pattern, laid), all_shapes(made, tray, cut, laid), strict=True
    ):
        for a, b in zip(outlines(nominal), outlines(path), strict=True):
            assert b.contains(a)
            assert a.hausdorff_distance(b) == pytest.approx(0.2, abs=0.1)


def test_crowded_blanks_are_told() -> None:
    made = inspect(design(cutter={"spacing": "0.5 mm"}, quantity=4))
    assert "blanks-crowded" in {f.code for f in made.findings}
    alone = inspect(design(cutter={"spacing": "0.5 mm"}, quantity=1))
    assert "blanks-crowded" not in {f.code for f in alone.findings}


def test_a_blank_too_small_for_a_number_is_told() -> None:
    """A small sheet that holes all but fill."""
    found = inspect(
        design(
            band=["5.725 GHz", "5.875 GHz"],
            wire="1.0 mm",
            feed={"style": "tube", "tube": "tube-2.2"},
            reflector={
                "base": ["33 mm", "33 mm"],
                "holes": [
                    {"x": f"{x} mm", "y": f"{y} mm", "diameter": "9 mm"}
                    for x, y in (
                        (0, 7.5),
                        (0, -7.5),
                        *((s * 10.5, q) for s in (-1, 1) for q in (-10.5, 0, 10.5)),
                    )
                ],
            },
            quantity=3,
        )
    )
    assert found.tray and found.radiator and found.spacer and found.fixture
    pattern = flat_pattern(found.tray, found.design.name)
    batch = plan_batch(found.design, found.radiator, found.tray, pattern, found.spacer, found.fixture)
    assert batch.unmarked == (1, 2, 3)
    assert [f.code for f in batch_findings(batch)] == ["blanks-unnumbered"]
