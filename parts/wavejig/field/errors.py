"""What is wrong with an electromagnetic model: refusals, and remarks that do not stop the solver."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from wavejig.recipe.errors import cut, visible

_LONGEST = 600  # of a message; what a model file holds may be longer


class ModelError(ValueError):
    """A model that cannot be solved; code names what is wrong, the text says where and what to do."""

    def __init__(self, code: str, message: str) -> None:
        super().__init__(cut(visible(f"{code}: {message}"), _LONGEST))
        self.code = code


class ModelWarning(UserWarning):
    """A model that can be solved, with less trust than usual."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Remark:
    """One thing to know about a model: severity, a stable code, and what it means for the result."""

    severity: Literal["warning", "note"]
    code: str
    message: str
