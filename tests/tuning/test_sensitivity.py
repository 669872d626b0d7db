"""Sobol indices against functions whose indices are known in closed form."""

from __future__ import annotations

import numpy as np
import pytest

from wavejig.tuning.sensitivity import shares


def test_ishigami() -> None:
    """Ishigami & Homma 1990, a = 7, b = 0.1; indices in closed form (Saltelli et al. 2008; from memory)."""
    a, b = 7.0, 0.1

    def output(u: np.ndarray) -> np.ndarray:
        x = np.pi * (2.0 * u - 1.0)
        return np.asarray(np.sin(x[:, 0]) + a * np.sin(x[:, 1]) ** 2 + b * x[:, 2] ** 4 * np.sin(x[:, 0]))

    variance = a**2 / 8 + b * np.pi**4 / 5 + b**2 * np.pi**8 / 18 + 0.5
    v1 = 0.5 * (1 + b * np.pi**4 / 5) ** 2
    v2 = a**2 / 8
    v13 = b**2 * np.pi**8 * (1 / 18 - 1 / 50)
    found = shares(output, 3, base=8192)
    for got, first, total in zip(found, (v1, v2, 0.0), (v1 + v13, v2, v13), strict=True):
        assert got.first == pytest.approx(first / variance, abs=0.01)
        assert got.total == pytest.approx(total / variance, abs=0.01)


def test_a_sum_has_no_interactions() -> None:
    found = shares(lambda u: 3.0 * u[:, 0] + 4.0 * u[:, 1], 3)
    assert [round(s.first, 2) for s in found] == [0.36, 0.64, 0.0]
    assert [round(s.total, 2) for s in found] == [0.36, 0.64, 0.0]


def test_what_does_not_vary_has_no_shares() -> None:
    assert all(s.first == s.total == 0.0 for s in shares(lambda u: np.ones(len(u)), 4))
