"""The three readers of other people's files, and what must hold for any bytes at all.

`recipe`, `sweep` and `model` read bytes as a file of that kind and say how it ended: "read", or the message of
the refusal. Anything else than the reader's own refusal comes out as it is, and is a fault. So is a message
that does not say where, or that holds what a terminal would obey.
"""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path

import numpy as np

from wavejig.design import resolve
from wavejig.field import ModelError
from wavejig.field.model import Model
from wavejig.recipe import RecipeError, read_recipe
from wavejig.tuning.sweepfile import SweepError, read_sweep

LONGEST_MESSAGE = 2000
LOW_HZ, HIGH_HZ = 2.400e9, 2.4835e9


def recipe(path: Path) -> str:
    """Read and resolve: the names in it are looked up and the keys held against each other."""
    try:
        file = read_recipe(path)
        try:
            resolve(file.recipe)
        except RecipeError as err:
            raise file.error(err.problems) from err
    except RecipeError as err:
        assert err.problems
        lines = path.read_bytes().count(b"\n") + 1
        for p in err.problems:
            assert 1 <= p.line <= lines, f"line {p.line} of {lines}: {p}"
            assert p.key and p.allowed and p.fix, p
        for row in str(err).split("\n"):
            judge(row, rf"{re.escape(str(path))}:\d+: \S.*: .*allowed: ")
        return str(err)
    return "read"


def sweep(path: Path) -> str:
    """Read as the reflection of an antenna for the demo's band."""
    try:
        read = read_sweep(path, LOW_HZ, HIGH_HZ, 50.0)
    except SweepError as err:
        judge(str(err), rf"{re.escape(str(path))}: ")
        return str(err)
    f, s = read.frequencies_hz, read.reflection
    assert f.shape == s.shape and f.ndim == 1
    assert np.isfinite(f).all() and (np.diff(f) > 0.0).all() and f[0] > 0.0
    assert np.isfinite(s.real).all() and np.isfinite(s.imag).all()
    loss, at = read.worst_return_loss_db(LOW_HZ, HIGH_HZ)
    assert np.isfinite(loss) and LOW_HZ <= at <= HIGH_HZ
    judge(read.serial, "")
    return "read"


def model(path: Path) -> str:
    """Read as a model of wires and triangles; whether it can be solved is another question."""
    try:
        read = Model.load(path)
    except ModelError as err:
        assert err.code == "file"
        judge(str(err), rf"file: {re.escape(str(path))}(:\d+)?: ")
        return str(err)
    again = Model.from_dict(read.to_dict())
    assert again.wires == read.wires and again.ports == read.ports and again.plane == read.plane
    assert np.array_equal(again.triangles, read.triangles) and np.isfinite(read.triangles).all()
    return "read"


def judge(message: str, begins: str) -> None:
    """One line that can be shown, of a length that can be read, beginning with where the fault stands."""
    assert message.isprintable(), repr(message[:300])
    assert len(message) <= LONGEST_MESSAGE, len(message)
    assert re.match(begins, message), f"{message!r} does not begin like {begins!r}"


READERS: dict[str, tuple[str, Callable[[Path], str]]] = {
    "recipe": ("case.toml", recipe),
    "sweep": ("case.s1p", sweep),
    "model": ("case.json", model),
}
