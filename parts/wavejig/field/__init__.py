"""The electromagnetic solver: wires, sheets and ports in; match, pattern, gain and losses out.

SI units throughout. Importing this room loads numpy only; scipy and the compiled loops come with the first
call of solve or sweep.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from wavejig.field.errors import ModelError, ModelWarning, Remark
from wavejig.field.model import Insulation, Model, Port, Wire

if TYPE_CHECKING:
    from wavejig.field.response import Response
    from wavejig.field.solver import solve
    from wavejig.field.sweeping import Sweep, sweep

__all__ = [
    "Insulation",
    "Model",
    "ModelError",
    "ModelWarning",
    "Port",
    "Remark",
    "Response",
    "Sweep",
    "Wire",
    "solve",
    "sweep",
]

_LAZY = {"Response": "response", "solve": "solver", "Sweep": "sweeping", "sweep": "sweeping"}


def __getattr__(name: str) -> Any:
    if name in _LAZY:
        from importlib import import_module

        return getattr(import_module(f"wavejig.field.{_LAZY[name]}"), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
