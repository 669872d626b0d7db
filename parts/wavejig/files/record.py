"""What a build keeps on disk for the next one, in the user's cache: one file a pack, one a solve.

Nothing in it is needed: a file that is absent, cut short, of another version of this program or its
libraries, or not ours counts as nothing, and the next build does the work again. A pack's own files are not
kept twice; they are taken from the pack.

The bodies are Python's pickles, which can name any function to be called. So the reader takes plain values,
arrays and the dataclasses of this package and nothing else (Python's library reference, "Restricting
Globals").
"""

from __future__ import annotations

import contextlib
import dataclasses
import hashlib
import io
import os
import pickle
import zlib
from dataclasses import dataclass
from importlib import import_module
from pathlib import Path
from typing import TYPE_CHECKING, Any

from wavejig.files.fingerprint import fingerprint
from wavejig.files.kept import Done, Kept
from wavejig.files.origin import program, versions
from wavejig.tuning.cache import cache_folder

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction

MOST_BYTES = 2 << 30  # of all that is kept; the files longest unused go first
_ARRAYS = {
    ("numpy", "dtype"), ("numpy", "ndarray"), ("numpy._core.multiarray", "_reconstruct"),
    ("numpy._core.multiarray", "scalar"), ("numpy.core.multiarray", "_reconstruct"),
    ("numpy.core.multiarray", "scalar"), ("numpy._core.numeric", "_frombuffer"), ("builtins", "complex"),
    ("builtins", "set"), ("builtins", "frozenset"), ("pathlib", "PosixPath"), ("pathlib", "WindowsPath"),
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Solved:
    """Solves by content, in the cache."""

    def solved(self, key: str) -> Prediction | None:
        from wavejig.field.prediction import Prediction

        found = _read(_file("solved", key))
        return found if isinstance(found, Prediction) else None

    def keep_solved(self, key: str, prediction: Prediction) -> None:
        _write(_file("solved", key), prediction)


def recall(pack: Path) -> Kept:
    """What the last build of the pack in that folder left; nothing where it left nothing that counts."""
    found = _read(_place(pack))
    steps = found if isinstance(found, dict) and all(isinstance(d, Done) for d in found.values()) else {}
    return Kept(pack=pack, steps=steps, shelf=Solved())


def keep(kept: Kept) -> None:
    """Note it for the next build. A cache that cannot be written is no reason to stop."""
    if kept.pack is not None:
        _write(_place(kept.pack), kept.steps)
        _tidy(cache_folder())


def _place(pack: Path) -> Path:
    return _file("built", fingerprint(str(pack.resolve())))


def _file(kind: str, key: str) -> Path:
    return cache_folder() / kind / f"{key[:32]}.kept"


def _head() -> bytes:
    """Begins every file of this version of the program and its libraries."""
    return f"wavejig {fingerprint([program(), versions()])}\n".encode()


def _write(path: Path, value: object) -> None:
    body = zlib.compress(pickle.dumps(value, protocol=5), 1)
    beside = path.with_name(f".{path.name}.{os.getpid()}")
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        with beside.open("wb") as stream:
            stream.write(_head() + hashlib.sha256(body).digest() + body)
        beside.replace(path)
    except OSError:
        with contextlib.suppress(OSError):
            beside.unlink()


def _read(path: Path) -> Any:
    """The value; None for a file that does not count."""
    head = _head()
    try:
        data = path.read_bytes()
        body = data[len(head) + 32 :]
        if not data.startswith(head) or hashlib.sha256(body).digest() != data[len(head) : len(head) + 32]:
            return None
        value = _Reader(io.BytesIO(zlib.decompress(body))).load()
        os.utime(path)  # used just now, for _tidy alone
    except (OSError, ValueError, zlib.error, pickle.UnpicklingError, AttributeError, ImportError, EOFError,
            TypeError, IndexError, KeyError):  # fmt: skip
        return None
    return value


class _Reader(pickle.Unpickler):
    """Takes plain values, arrays and our dataclasses."""

    def find_class(self, module: str, name: str) -> Any:
        if (module, name) in _ARRAYS:
            return super().find_class(module, name)
        if module.startswith("wavejig."):
            found = getattr(import_module(module), name)
            if isinstance(found, type) and dataclasses.is_dataclass(found):
                return found
        raise pickle.UnpicklingError(f"{module}.{name} is nothing that is kept")


def _tidy(folder: Path) -> None:
    """Delete what was used longest ago, down to the limit."""
    with contextlib.suppress(OSError):
        files = [(p.stat().st_mtime, p.stat().st_size, p) for p in folder.glob("*/*.kept")]
        over = sum(size for _, size, _ in files) - MOST_BYTES
        for _, size, path in sorted(files):
            if over <= 0:
                break
            path.unlink(missing_ok=True)
            over -= size
