"""Touchstone files as a second reader sees them, and what the read-back catches."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from wavejig.files.errors import FileCheckError
from wavejig.files.touchstone import check_s1p, write_s1p

F = np.linspace(2.3e9, 2.6e9, 11)
S = 0.4 * np.exp(1j * np.linspace(0.0, 3.0, 11))


def test_a_second_reader_sees_the_same(tmp_path: Path) -> None:
    """scikit-rf, a reader that is not ours: frequencies, values, reference."""
    rf = pytest.importorskip("skrf")
    path = tmp_path / "a.s1p"
    write_s1p(path, F, S, 75.0, ("name with umlaut \u00fc", "two\nlines"))
    network = rf.Network(str(path))
    assert np.allclose(network.f, F) and np.allclose(network.s[:, 0, 0], S, atol=1e-5)
    assert np.allclose(network.z0, 75.0)
    text = path.read_text(encoding="ascii")
    assert text.splitlines()[0] == "! name with umlaut ?" and "! two lines" in text


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("# Hz S RI R 50", "# Hz S RI R 75"),
        ("# Hz S RI R 50", "# GHz S RI R 50"),
        ("2300000000 0.40000", "2300000000 0.40010"),
        ("2330000000 ", "2230000000 "),
    ],
)
def test_the_read_back_sees_a_changed_file(old: str, new: str, tmp_path: Path) -> None:
    path = tmp_path / "a.s1p"
    write_s1p(path, F, S, 50.0)
    check_s1p(path, F, S, 50.0)
    text = path.read_text()
    assert old in text
    path.write_text(text.replace(old, new, 1))
    with pytest.raises(FileCheckError):
        check_s1p(path, F, S, 50.0)


def test_a_lost_row_is_seen(tmp_path: Path) -> None:
    path = tmp_path / "a.s1p"
    write_s1p(path, F, S, 50.0)
    path.write_text("\n".join(path.read_text().splitlines()[:-1]) + "\n")
    with pytest.raises(FileCheckError, match="10 rows"):
        check_s1p(path, F, S, 50.0)
