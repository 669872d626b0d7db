"""Plates: everything printed as often as the batch needs it, apart and within the bed."""

from __future__ import annotations

import itertools
from collections import Counter

from hypothesis import given
from hypothesis import strategies as st

from tests.designs import design
from wavejig.batch.model import PrintPiece
from wavejig.batch.plates import print_plan, spacer_sets

BED = ["120 mm", "110 mm", "120 mm"]
piece_lists = st.lists(
    st.tuples(
        st.floats(4.0, 110.0), st.floats(4.0, 100.0), st.integers(1, 40), st.sampled_from(["PETG", "ASA"])
    ),
    min_size=1,
    max_size=8,
)


@given(piece_lists)
def test_any_pieces(drawn: list[tuple[float, float, int, str]]) -> None:
    made = design(printer={"bed": BED})
    pieces = [
        PrintPiece(
            part="fixture",
            name=f"piece-{i}",
            plastic=plastic,
            size_mm=(w, h),
            height_mm=5.0,
            volume_mm3=w * h * 5.0,
            count=count,
        )
        for i, (w, h, count, plastic) in enumerate(drawn)
    ]
    plan = print_plan(made, pieces)
    by_name = {p.name: p for p in pieces}
    printed: Counter[str] = Counter()
    for plate in plan.plates:
        found = []
        for spot in plate.spots:
            piece = by_name[spot.name]
            assert piece.plastic == plate.plastic
            printed[spot.name] += plate.times
            w, h = piece.size_mm[::-1] if spot.turn_deg else piece.size_mm
            box = (spot.x_mm - w / 2.0, spot.y_mm - h / 2.0, spot.x_mm + w / 2.0, spot.y_mm + h / 2.0)
            assert box[0] >= 5.0 - 1e-6 and box[1] >= 5.0 - 1e-6
            assert box[2] <= 115.0 + 1e-6 and box[3] <= 105.0 + 1e-6
            found.append(box)
        for a, b in itertools.combinations(found, 2):
            assert max(b[0] - a[2], a[0] - b[2], b[1] - a[3], a[1] - b[3]) >= plan.spacing_mm - 1e-6
    assert printed == {p.name: p.count for p in pieces}
    assert plan.prints == sum(p.times for p in plan.plates)
    petg = sum(p.volume_mm3 * p.count for p in pieces if p.plastic == "PETG") / 1000.0
    assert dict(plan.mass_g).get("PETG", 0.0) >= petg  # its density is above 1


def test_how_many_spacers() -> None:
    assert spacer_sets(design(quantity=1)) == 1
    assert spacer_sets(design(quantity=50)) == 2
    assert spacer_sets(design(quantity=50, spacer={"sets": 4})) == 4
    assert spacer_sets(design(quantity=50, spacer={"style": "posts"})) == 50
