"""A digest of plain values by their content: the same in every process, whatever the order of hashing."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator, Mapping
from dataclasses import fields, is_dataclass
from enum import Enum
from pathlib import PurePath

import numpy as np
from pydantic import BaseModel


def fingerprint(value: object) -> str:
    """sha256 of a value's content.

    Numbers count by their exact bits (0.0 is not -0.0, 1 is not 1.0), sets without their order, mappings
    without theirs. Raises TypeError for a value whose content is not known from here.
    """
    digest = hashlib.sha256()
    for piece in _pieces(value):
        digest.update(piece)
    return digest.hexdigest()


def _pieces(value: object) -> Iterator[bytes]:
    """The value as bytes that no other value has: each kind begins with its mark and its length."""
    if value is None or isinstance(value, bool | int | float | complex | np.generic):
        yield f"{type(value).__name__}:{value!r};".encode()
    elif isinstance(value, str | bytes | PurePath):
        data = value if isinstance(value, bytes) else str(value).encode()
        yield f"{type(value).__name__} {len(data)}:".encode()
        yield data
    elif isinstance(value, Enum):
        yield f"{type(value).__qualname__}.{value.name};".encode()
    elif isinstance(value, np.ndarray):
        yield f"array {value.dtype.str} {value.shape}:".encode()
        yield np.ascontiguousarray(value).tobytes()
    elif isinstance(value, BaseModel):
        yield f"{type(value).__qualname__}:".encode()
        yield from _pieces({name: getattr(value, name) for name in type(value).model_fields})
    elif is_dataclass(value) and not isinstance(value, type):
        told = fields(value)
        yield f"{type(value).__qualname__} {len(told)}:".encode()
        for f in told:
            yield f"{f.name}=".encode()
            yield from _pieces(getattr(value, f.name))
    elif isinstance(value, Mapping):
        yield f"mapping {len(value)}:".encode()
        yield from sorted(fingerprint(pair).encode() for pair in value.items())
    elif isinstance(value, set | frozenset):
        yield f"set {len(value)}:".encode()
        yield from sorted(fingerprint(item).encode() for item in value)
    elif isinstance(value, tuple | list):
        yield f"list {len(value)}:".encode()
        for item in value:
            yield from _pieces(item)
    else:
        raise TypeError(f"no fingerprint of a {type(value).__qualname__}")
