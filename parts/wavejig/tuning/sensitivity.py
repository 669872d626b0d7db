"""Shares of the spread: first-order and total Sobol indices by pick-and-freeze.

First order: Saltelli et al., Computer Physics Communications 181 (2010) 259, table 2 (b); total: Jansen,
Computer Physics Communications 117 (1999) 35. Both on two halves of one scrambled Sobol sequence.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_SEED = 160493  # any fixed number


@dataclass(frozen=True, slots=True, kw_only=True)
class Share:
    """One input's part in the output's variance, as shares: alone, and with all it acts together with."""

    first: float
    total: float


def shares(output: Callable[[Array], Array], inputs: int, base: int = 2048) -> tuple[Share, ...]:
    """Indices of each of `inputs` inputs, uniform from 0 to 1, of output((n, inputs)) -> (n,).

    base: points in each of the two matrices, a power of two; base * (inputs + 2) outputs are computed. An
    output that does not vary gives zeros.
    """
    from scipy.stats import qmc

    both = qmc.Sobol(2 * inputs, scramble=True, seed=_SEED).random(base)
    a, b = both[:, :inputs], both[:, inputs:]
    ya, yb = output(a), output(b)
    middle = float(np.mean(np.concatenate([ya, yb])))
    variance = float(np.var(np.concatenate([ya, yb])))
    if variance <= 1e-18:
        return tuple(Share(first=0.0, total=0.0) for _ in range(inputs))
    found = []
    for i in range(inputs):
        mixed = a.copy()
        mixed[:, i] = b[:, i]
        ym = output(mixed)
        first = float(np.mean((yb - middle) * (ym - ya))) / variance
        total = float(np.mean((ya - ym) ** 2)) / (2.0 * variance)
        found.append(Share(first=min(max(first, 0.0), 1.0), total=max(total, 0.0)))
    return tuple(found)
