"""The errors of the files room."""

from __future__ import annotations

from pathlib import Path


class FileCheckError(ValueError):
    """A written file read back otherwise than it should: which file, what was found, what was expected."""

    def __init__(self, path: Path, found: str, expected: str) -> None:
        found = " ".join(found.split())  # readers' own messages come in several lines
        super().__init__(f"{path.name}: found {found}, expected {expected}. Path: {path}")
        self.path = path
        self.found = found
        self.expected = expected


class DrawingError(ValueError):
    """A plane drawing that no cutter should get: bad layer name, broken contour, doubled line."""


class MeshError(ValueError):
    """A surface that does not close, or triangles that cannot be one."""
