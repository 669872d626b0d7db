"""Solves of a tuning, kept by content: a walk whose shop limits changed is walked again without solving.

A tuned answer follows from the solves of its walk and from what the shop's findings allow on the way. Another
spacer, printer or cutter may allow something else, so its answer has to be looked for again; but the antenna
at each point is the same, and what is the same model at the same frequencies is solved once.
"""

from __future__ import annotations

import contextlib
from collections.abc import Callable, Iterator
from contextvars import ContextVar

import numpy as np
from numpy.typing import NDArray

from wavejig.field.model import Model
from wavejig.tuning import cache

Impedances = NDArray[np.complex128]
_KIND = "points"
_ANEW: ContextVar[bool] = ContextVar("solve_anew", default=False)


@contextlib.contextmanager
def solving_anew(anew: bool) -> Iterator[None]:
    """Within the block nothing is taken over, where `anew` says so; what is solved is kept all the same."""
    token = _ANEW.set(anew)
    try:
        yield
    finally:
        _ANEW.reset(token)


def kept_solve(
    model: Model, frequencies_hz: NDArray[np.float64], solve: Callable[[], tuple[Impedances, float]]
) -> tuple[Impedances, float]:
    """Impedances (F,) in ohm and the gain in dBi of a model; from the cache where it has been solved before."""
    key = cache.hashed([model.to_dict(), [float(f) for f in frequencies_hz]])
    if not _ANEW.get():
        found = _read(key, len(frequencies_hz))
        if found is not None:
            return found
    impedance_ohm, gain_dbi = solve()
    pairs = [[float(z.real), float(z.imag)] for z in impedance_ohm]
    cache.write(_KIND, key, {"impedance_ohm": pairs, "gain_dbi": gain_dbi})
    return impedance_ohm, gain_dbi


def _read(key: str, count: int) -> tuple[Impedances, float] | None:
    """None for what is not there or not a solve; decimal numbers of Python come back to the last bit."""
    try:
        data = cache.read(_KIND, key)
        impedance_ohm = np.array([complex(re, im) for re, im in data["impedance_ohm"]])
        gain_dbi = float(data["gain_dbi"])
    except (ValueError, KeyError, TypeError):
        return None
    good = len(impedance_ohm) == count and np.isfinite(impedance_ohm).all() and np.isfinite(gain_dbi)
    return (impedance_ohm, gain_dbi) if good else None
