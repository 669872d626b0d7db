"""How finely each straight, arc and cell is cut: taken once from a design, it meshes its neighbours alike.

A mesh whose counts jump while a dimension moves by a tenth of a millimetre puts steps into the predicted
match. Tuning, yield and fits to a measurement therefore mesh every neighbour of a design with its plan.
"""

from __future__ import annotations

from collections.abc import Callable, Hashable
from typing import Any, TypeVar

T = TypeVar("T", bound=Hashable)


class MeshPlan:
    """Choices of a mesh by their place in the walk. Records while a first model is made, then repeats them.

    A choice that a neighbour meets and the first model did not is made afresh and not kept: the answer does
    not depend on which neighbour came first.
    """

    def __init__(self) -> None:
        self._known: dict[Hashable, Any] = {}
        self._recorded = False

    @property
    def recorded(self) -> bool:
        """Whether a first model has been made with it."""
        return self._recorded

    def close(self) -> None:
        """From now on repeat, never record."""
        self._recorded = True

    def choose(self, place: Hashable, fresh: Callable[[], T]) -> T:
        """The recorded choice at this place, or a fresh one."""
        if place in self._known:
            kept: T = self._known[place]
            return kept
        made = fresh()
        if not self._recorded:
            self._known[place] = made
        return made
