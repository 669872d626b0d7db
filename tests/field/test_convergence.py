"""The default mesh of every demo recipe says what a mesh of half its edges says (table: bench_convergence.py)."""

from __future__ import annotations

import pytest

from tests.bench.bench_convergence import compare
from tests.field.demos import NAMES, demo_design


@pytest.mark.filterwarnings("ignore::wavejig.field.ModelWarning")  # the study reaches far beyond the band
@pytest.mark.parametrize("name", [NAMES[0], *(pytest.param(n, marks=pytest.mark.slow) for n in NAMES[1:])])
def test_halving_every_edge_changes_little(name: str) -> None:
    """Resonance by less than 0.7 %, the peak of Re Y by less than 4 %."""
    change = compare(demo_design(name))
    assert change["inside"]
    assert abs(change["resonance_shift"]) < 0.7
    assert abs(change["peak_shift"]) < 4.0
