"""The guide's examples run as they stand, one after another, and so do the readme's one-line commands' parts."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import pytest

import wavejig

TOP = Path(__file__).parents[1]
BLOCKS = re.findall(
    r"^```python\n(.*?)^```", (TOP / "DEVELOPERS.md").read_text(encoding="utf-8"), re.M | re.S
)


def test_the_guide_s_examples_run(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(TOP)
    assert len(BLOCKS) >= 4
    room: dict[str, Any] = {}
    for block in BLOCKS:
        exec(compile(block, "DEVELOPERS.md", "exec"), room)
    assert capsys.readouterr().out
    # and what they work out is what they say
    assert [row[0] for row in room["table"]] == list(range(1, 10))
    assert room["length"] == pytest.approx(1.5708 * 3.9, abs=1e-3)  # a quarter turn of the centreline
    assert 3.9 < room["radius"] < 4.3  # it springs open
    assert room["flat"] == pytest.approx(1.5708 * 1.42, abs=1e-3)
    # a dipole of 0.48 wavelengths at 300 MHz is near resonance: its dip lies inside the band
    dip = int(abs(room["reflection"]).argmin())
    assert 0 < dip < 40 and abs(room["reflection"][dip]) < 0.25
    assert callable(room["pack"])


def test_every_module_the_guide_names_is_there() -> None:
    text = (TOP / "DEVELOPERS.md").read_text(encoding="utf-8") + (TOP / "README.md").read_text(
        encoding="utf-8"
    )
    named = set(re.findall(r"`((?:tests|\w+)/[\w/]+\.(?:py|sh|toml|js|css))`", text))
    assert len(named) > 8
    for name in sorted(named):
        assert (TOP / name).is_file() or (Path(wavejig.__file__).parent / name).is_file(), name
