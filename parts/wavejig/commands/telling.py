"""What all commands share: exit codes, and how results and faults are told."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

OK, CANNOT_BE_MADE, WRONG_INPUT, MACHINE = 0, 1, 2, 3


def input_error(path: Path, err: Any, as_json: bool) -> dict[str, Any]:
    """A RecipeError, told on stderr or as data."""
    if not as_json:
        sys.stderr.write(f"{err}\n")
    return {
        "recipe": str(path),
        "problems": [
            {"line": p.line, "key": p.key, "read": p.read, "allowed": p.allowed, "fix": p.fix}
            for p in err.problems
        ],
    }


def unreadable(path: Path, err: OSError, as_json: bool) -> dict[str, Any]:
    """A recipe that could not be read."""
    message = f"{path}: cannot be read: {err.strerror or err}. Allowed: a recipe file; `wavejig new FILE` writes one."
    if not as_json:
        sys.stderr.write(f"{message}\n")
    return {"recipe": str(path), "error": message}


def stop(code: int, message: str) -> int:
    """Say why on stderr; returns the code."""
    sys.stderr.write(f"wavejig: {message}\n")
    return code


def say(text: str) -> None:
    """A result, on stdout, at once."""
    sys.stdout.write(f"{text}\n")
    sys.stdout.flush()


def announce(message: str) -> None:
    """Something that takes its time and is no result, on stderr."""
    sys.stderr.write(f"{message}\n")
    sys.stderr.flush()
