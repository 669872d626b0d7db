"""What tells printed pieces of one state of a recipe from another's."""

from __future__ import annotations

import hashlib

from wavejig.design.model import Design


def version_code(design: Design) -> str:
    """Four characters that change with anything the printed pieces depend on, to tell old pieces from new."""
    text = repr((design.radiator, design.feed, design.reflector, design.printer, design.tolerances.nest_mm))
    return hashlib.sha256(text.encode()).hexdigest()[:4].upper()
