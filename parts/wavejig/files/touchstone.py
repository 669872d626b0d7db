"""Touchstone 1.1 one-port files: writer and read-back. Kernel-free.

Form (Touchstone File Format Specification, Version 1.1, IBIS Open Forum 2002): comments after "!", one
option line "# Hz S RI R 50", then frequency and one pair a line, frequencies ascending.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from wavejig.files.errors import FileCheckError

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]


def write_s1p(
    path: Path, frequencies_hz: Array, s11: Complex, reference_ohm: float, remarks: tuple[str, ...] = ()
) -> None:
    """frequencies_hz (n,) ascending, s11 (n,) complex; remarks become comment lines, ASCII only."""
    lines = [f"! {_plain(remark)}" for remark in remarks]
    lines.append(f"# Hz S RI R {reference_ohm:g}")
    # five places: 0.001 dB at 20 dB, far below what any bench can tell
    lines += [
        f"{f:.0f} {s.real + 0.0:.5f} {s.imag + 0.0:.5f}" for f, s in zip(frequencies_hz, s11, strict=True)
    ]
    path.write_text("\n".join(lines) + "\n", encoding="ascii", newline="\n")


def check_s1p(path: Path, frequencies_hz: Array, s11: Complex, reference_ohm: float) -> None:
    """Raise FileCheckError unless the file read back says the same, read by the format's rules alone."""
    rows, option = [], None
    for line in path.read_text(encoding="ascii").splitlines():
        body = line.split("!", 1)[0].split()
        if not body:
            continue
        if body[0].startswith("#"):
            option = [word.upper() for word in " ".join(body).removeprefix("#").split()]
        else:
            rows.append([float(word) for word in body])
    if (
        option is None
        or option[:4] != ["HZ", "S", "RI", "R"]
        or float(option[4]) != float(f"{reference_ohm:g}")
    ):
        raise FileCheckError(path, f"the option line {option}", f"# Hz S RI R {reference_ohm:g}")
    data = np.array(rows)
    if data.shape != (len(frequencies_hz), 3):
        raise FileCheckError(path, f"{len(rows)} rows", f"{len(frequencies_hz)} rows of three")
    if not (np.diff(data[:, 0]) > 0).all():
        raise FileCheckError(path, "frequencies out of order", "ascending frequencies")
    if np.abs(data[:, 0] - frequencies_hz).max() > 0.51:
        raise FileCheckError(path, "other frequencies", "the ones written")
    off = float(np.abs(data[:, 1] + 1j * data[:, 2] - s11).max())
    if off > 1e-5:
        raise FileCheckError(path, f"a reflection off by {off:.2e}", "at most 0.00001 off")


def _plain(text: str) -> str:
    """One line of printable ASCII."""
    return "".join(c if 32 <= ord(c) < 127 else "?" for c in " ".join(text.split()))
