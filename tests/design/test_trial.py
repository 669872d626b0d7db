"""Trial readings in a recipe replace the stock table's springback and the usual neutral-axis factor."""

from __future__ import annotations

from typing import Any

import pytest

from tests.designs import design
from wavejig.forming.wire import relaxed_radius_mm
from wavejig.shop import inspect

READING = {"former": "6 mm", "bent_to": "100 deg", "relaxed_to": "97.5 deg"}


def test_a_trial_sets_the_loaded_angles() -> None:
    """The wire of the reading, bent on the same pin to the table's loaded angle, relaxes to the finished one."""
    from wavejig.radiator.plan import plan

    plain, tried = design(), design(radiator={"trial": [READING]})
    share = 97.5 / 100.0
    for bend in plan(tried).main.bends:
        assert bend.loaded_inside_radius_mm == pytest.approx(3.0)  # the reading's own pin
        assert bend.angle_deg / bend.loaded_angle_deg == pytest.approx(share, abs=1e-6)
    assert tried.radiator.springback_measured and not plain.radiator.springback_measured
    assert tried.radiator.inside_radius_mm > plain.radiator.inside_radius_mm
    origin = dict(tried.values)["strength_coefficient"]
    assert origin.origin == "measured trial" and origin.unit == "MPa"
    assert "strength_coefficient" not in dict(plain.values)


def test_insulation_stands_between_wire_and_former() -> None:
    """The same angles on the same pin mean a wider loaded radius when the wire is covered."""
    bare = design(radiator={"trial": [READING]}).radiator
    covered = design(
        radiator={"trial": [READING], "insulation": "plastic", "insulation_thickness": "0.5 mm"}
    ).radiator
    m = covered.metal
    relaxed = relaxed_radius_mm(
        3.0 + 0.5 + 0.9, 1.8, m.youngs_modulus_gpa, m.strength_coefficient_mpa, m.hardening_exponent
    )
    assert 4.4 / relaxed == pytest.approx(0.975, abs=1e-6)
    assert m.strength_coefficient_mpa != pytest.approx(bare.metal.strength_coefficient_mpa, rel=1e-3)


def test_an_impossible_reading_is_a_conflict_and_the_table_stays() -> None:
    bad = {"former": "6 mm", "bent_to": "90 deg", "relaxed_to": "95 deg"}
    d = design(radiator={"trial": [bad]})
    assert [c.key for c in d.conflicts] == ["radiator.trial"]
    assert d.radiator.metal.strength_coefficient_mpa == design().radiator.metal.strength_coefficient_mpa
    assert any(f.severity == "error" and "trial" in f.message for f in inspect(d).findings)


@pytest.mark.parametrize(("outside", "factor"), [("214.28 mm", 0.470), ("214.20 mm", 0.477)])
def test_a_trial_length_sets_the_factor(outside: str, factor: float) -> None:
    trial = {"cut": "200 mm", "outside": outside, "bends": 4, "angle": "90 deg", "former": "6 mm"}
    d = design(radiator={"trial_length": trial, "neutral_axis_factor": 0.5})
    assert d.radiator.neutral_axis_factor == pytest.approx(factor, abs=2e-3)
    assert dict(d.values)["neutral_axis_factor"].origin == "measured trial"


def test_a_trial_length_that_cannot_be_is_a_conflict() -> None:
    trial: dict[str, Any] = {"cut": "200 mm", "outside": "205 mm", "bends": 4, "former": "6 mm"}
    d = design(radiator={"trial_length": trial})
    assert [c.key for c in d.conflicts] == ["radiator.trial_length"]
    assert d.radiator.neutral_axis_factor == 0.5
