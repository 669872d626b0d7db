"""Choosing scales and setting out views."""

from __future__ import annotations

# Preferred scales of ISO 5455, from memory.
SCALES = (10.0, 5.0, 2.0, 1.0, 0.5, 0.2, 0.1, 0.05, 0.02)


def best_scale(
    wide_mm: float, high_mm: float, room_wide_mm: float, room_high_mm: float, most: float = 5.0
) -> float:
    """The largest preferred scale, no more than `most`, at which the size fits the room (else the smallest)."""
    for scale in SCALES:
        if scale <= most and wide_mm * scale <= room_wide_mm and high_mm * scale <= room_high_mm:
            return scale
    return SCALES[-1]
