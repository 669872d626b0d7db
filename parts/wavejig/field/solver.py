"""Model and frequencies in, Response out."""

from __future__ import annotations

import math
import warnings
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from wavejig.field.compiling import announced
from wavejig.field.elements import Elements, make_elements
from wavejig.field.errors import ModelError, ModelWarning, Remark
from wavejig.field.examine import check_numbers, examine
from wavejig.field.matrix import Pass, impedance_matrix, make_passes
from wavejig.field.model import Model
from wavejig.field.response import Response
from wavejig.field.symmetry import Mirror, find_mirrors, solve_by_parity
from wavejig.field.unknowns import find_unknowns, merge_points

Complex = NDArray[np.complex128]
Announce = Callable[[str], None]


@dataclass(frozen=True, slots=True, kw_only=True)
class Prepared:
    """A model ready to be solved at any frequency of a sweep: all that does not change with it."""

    model: Model
    elements: Elements
    passes: tuple[Pass, ...]
    mirrors: tuple[Mirror, ...]
    remarks: tuple[Remark, ...]


def prepare(model: Model, highest_hz: float, *, mirrors: bool = True) -> Prepared:
    """Examine a model and compute what does not depend on frequency. Raises ModelError."""
    check_numbers(model)
    nodes = merge_points(model)
    remarks = examine(model, highest_hz, nodes=nodes)
    for remark in remarks:
        if remark.severity == "warning":
            warnings.warn(f"{remark.code}: {remark.message}", ModelWarning, stacklevel=3)
    elements = make_elements(model, find_unknowns(model, nodes))
    return Prepared(
        model=model,
        elements=elements,
        passes=make_passes(model, elements),
        mirrors=find_mirrors(model, elements) if mirrors else (),
        remarks=remarks,
    )


def solve(
    model: Model,
    frequencies_hz: ArrayLike | Sequence[float],
    *,
    mirrors: bool = True,
    announce: Announce | None = None,
) -> Response:
    """Currents of a model at each frequency, and what follows from them.

    mirrors: use the model's mirror symmetry where it has one (never assumed, always checked). announce:
    told once if the solver has to be compiled first. Raises ModelError for a model that cannot be solved;
    warns with ModelWarning where the result deserves less trust.
    """
    frequencies = check_frequencies(frequencies_hz)
    with announced(announce):
        return solve_prepared(prepare(model, float(frequencies.max()), mirrors=mirrors), frequencies)


def check_frequencies(frequencies_hz: ArrayLike | Sequence[float]) -> NDArray[np.float64]:
    """(F,) hertz. Raises ModelError for none, or for any that is not positive and finite."""
    frequencies = np.atleast_1d(np.asarray(frequencies_hz, dtype=np.float64))
    if frequencies.ndim != 1 or not frequencies.size:
        raise ModelError("frequency", "give at least one frequency, as a list of hertz")
    if not (np.isfinite(frequencies).all() and (frequencies > 0.0).all()):
        raise ModelError("frequency", f"frequencies must be positive and finite, got {frequencies.tolist()}")
    return frequencies


def solve_prepared(prepared: Prepared, frequencies_hz: NDArray[np.float64]) -> Response:
    """As solve, for a model prepared before."""
    elements = prepared.elements
    if not prepared.model.ports:
        raise ModelError("ports", "the model has no port, so nothing drives it; add one at a wire's end")
    currents = np.empty(
        (len(frequencies_hz), elements.unknowns, len(prepared.model.ports)), dtype=np.complex128
    )
    for i, frequency in enumerate(frequencies_hz):
        z = impedance_matrix(prepared.model, elements, prepared.passes, float(frequency))
        currents[i] = _currents(z, elements, prepared.mirrors)
    return Response(
        frequencies_hz=frequencies_hz,
        model=prepared.model,
        elements=elements,
        currents_a_per_v=currents,
        remarks=prepared.remarks,
    )


def _currents(z: Complex, elements: Elements, mirrors: tuple[Mirror, ...]) -> Complex:
    """(unknowns, ports): currents for 1 volt at each port in turn, the others shorted. z is used up."""
    # the matrix is symmetric: seen by columns it is what LAPACK wants, without a copy
    currents = solve_by_parity(z.T, elements.ports.T.astype(np.complex128), mirrors)
    if not math.isfinite(float(np.abs(currents).sum())):
        raise ModelError(
            "singular", "the matrix has no solution at this frequency; look for overlapping or doubled parts"
        )
    return currents
