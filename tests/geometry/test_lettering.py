"""Lettering: complete, on its grid, placed where it is asked for, never an exception for a character."""

from __future__ import annotations

import math
from itertools import combinations, pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely import LineString

from wavejig.geometry.lettering import alphabet, strokes, text_width_mm
from wavejig.geometry.plane import Stroke

REQUIRED = "ABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789.,-_/+()=%:#<>°× ↑→"


def points(drawn: tuple[Stroke, ...]) -> np.ndarray:
    return np.array([point for stroke in drawn for point in stroke.points])


def test_every_promised_character_has_a_glyph_of_its_own() -> None:
    letters = alphabet()
    assert [c for c in REQUIRED if c not in letters.glyphs] == []
    drawings = {c: frozenset(glyph.strokes) for c, glyph in letters.glyphs.items()}
    assert len(set(drawings.values())) == len(drawings)
    assert frozenset(letters.unknown.strokes) not in drawings.values()


def test_glyphs_keep_to_whole_grid_units_from_the_left_edge() -> None:
    for character, glyph in alphabet().glyphs.items():
        for chain in glyph.strokes:
            for x, y in chain:
                assert x == round(x) and 0 <= x <= glyph.width <= 6, character
                assert y == round(y) and -1 <= y <= 6, character
        if glyph.strokes:
            assert min(x for chain in glyph.strokes for x, _ in chain) == 0, character


def test_no_glyph_runs_twice_over_the_same_ground() -> None:
    for character, glyph in alphabet().glyphs.items():
        edges = [LineString(edge) for chain in glyph.strokes for edge in pairwise(chain)]
        assert all(edge.length > 0 for edge in edges), character
        for a, b in combinations(edges, 2):
            assert a.intersection(b).length == 0, character


def test_alike_characters_differ_by_more_than_a_tenth_of_their_height() -> None:
    """The pairs that are misread on a bench differ by at least 0.7 of a grid unit somewhere (a tenth of a capital)."""
    for a, b in ("0O", "0Ø", "1I", "5S", "8B", "2Z", "OQ", "OD", "UV", "6G", "CG"):
        shapes = [LineString([p for s in strokes(c, 6.0) for p in s.points]).segmentize(0.1) for c in (a, b)]
        assert shapes[0].hausdorff_distance(shapes[1]) >= 0.7, a + b


def test_capitals_are_as_tall_as_asked_and_start_at_the_point() -> None:
    drawn = points(strokes("HE8", 3.0, x_mm=10.0, y_mm=-2.0))
    np.testing.assert_allclose(drawn.min(axis=0), [10.0, -2.0], atol=1e-12)
    np.testing.assert_allclose(drawn.max(axis=0), [10.0 + text_width_mm("HE8", 3.0), 1.0], atol=1e-12)


def test_widths_count_the_gaps_between_and_not_after() -> None:
    assert text_width_mm("", 6.0) == 0.0
    assert text_width_mm("H", 6.0) == pytest.approx(4.0)
    assert text_width_mm("HH", 6.0) == pytest.approx(4.0 + 2.0 + 4.0)
    assert text_width_mm("H H", 12.0) == pytest.approx(2 * (4.0 + 2.0 + 3.0 + 2.0 + 4.0))


def test_centred_text_has_its_middle_at_the_point_at_any_angle() -> None:
    for angle in (0.0, 37.0, 90.0, 180.0):
        drawn = points(strokes("HOH", 4.0, 5.0, 6.0, angle, "centre"))
        np.testing.assert_allclose((drawn.min(axis=0) + drawn.max(axis=0)) / 2.0, [5.0, 6.0], atol=1e-12)


def test_rotation_is_counter_clockwise_about_the_point() -> None:
    (stem,) = [s for s in strokes("L", 6.0, 1.0, 1.0, 90.0)]
    np.testing.assert_allclose(stem.points, [(-5.0, 1.0), (1.0, 1.0), (1.0, 5.0)], atol=1e-12)


def test_small_letters_are_drawn_as_capitals() -> None:
    assert strokes("bend-2", 2.5) == strokes("BEND-2", 2.5)


@pytest.mark.parametrize("character", ["€", "\n", "\t", "\x00", "ß", "😀", "\ud800"])
def test_unknown_characters_are_an_empty_box(character: str) -> None:
    (box,) = strokes(character, 6.0)
    assert box.points == ((0.0, 0.0), (3.0, 0.0), (3.0, 6.0), (0.0, 6.0), (0.0, 0.0))


@given(text=st.text(max_size=30), height=st.floats(0.5, 50.0), angle=st.floats(-360.0, 360.0))
def test_any_text_is_drawn_inside_its_width(text: str, height: float, angle: float) -> None:
    drawn = strokes(text, height, 3.0, 4.0, angle)
    if not drawn:
        assert set(text) <= {" "}
        return
    turn = math.radians(-angle)
    back = (points(drawn) - [3.0, 4.0]) @ np.array(
        [[math.cos(turn), math.sin(turn)], [-math.sin(turn), math.cos(turn)]]
    )
    slack = 1e-9 * max(1.0, text_width_mm(text, height))
    assert back[:, 0].min() >= -slack and back[:, 0].max() <= text_width_mm(text, height) + slack
    assert back[:, 1].min() >= -height / 6.0 - slack and back[:, 1].max() <= height + slack


@pytest.mark.parametrize("height", [0.0, -1.0, math.nan, math.inf])
def test_heights_that_cannot_be_are_refused(height: float) -> None:
    with pytest.raises(ValueError, match="lettering: got a height of"):
        strokes("A", height)


def test_positions_and_alignments_that_cannot_be_are_refused() -> None:
    with pytest.raises(ValueError, match="finite numbers"):
        strokes("A", 1.0, x_mm=math.nan)
    with pytest.raises(ValueError, match='got align "middle"'):
        strokes("A", 1.0, align="middle")  # type: ignore[arg-type]
