"""`wavejig match` as a person and a program meet it."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from wavejig.cli import main

Capture = pytest.CaptureFixture[str]
QUICK = Path(__file__).parents[1] / "recipes" / "boatshed-5g8.toml"
RIDGE = Path(__file__).parents[1] / "recipes" / "ridge-868.toml"


def test_json_and_exit_codes(capsys: Capture) -> None:
    """Starting values: ridge meets its 14 dB, boatshed misses; the worse code wins."""
    assert main(["match", str(RIDGE), str(QUICK), "--as-is", "--json"]) == 1
    ridge, quick = json.loads(capsys.readouterr().out)
    assert ridge["meets_target"] and not quick["meets_target"]
    assert ridge["name"] == "ridge-868"
    assert len(ridge["match"]) == 3
    for key in ("gain_dbi", "front_to_back_db", "resonance_hz", "e_plane", "h_plane", "reference_plane"):
        assert key in ridge


def test_the_table_and_the_picture(tmp_path: Path, capsys: Capture) -> None:
    picture = tmp_path / "m.png"
    assert main(["match", str(RIDGE), "--as-is", "--plot", str(picture)]) == 0
    told = capsys.readouterr()
    assert "meets 14 dB" in told.out and "beamwidth" in told.out
    assert picture.read_bytes().startswith(b"\x89PNG")


@pytest.mark.parametrize(
    ("arguments", "code", "needle"),
    [
        (["{quick}", "{quick}", "--plot", "x.png"], 2, "one recipe at a time"),
        (["{quick}", "--plot", "x.xlsx"], 2, ".png"),
        (["nowhere.toml"], 2, "cannot be read"),
        (["{broken}"], 2, "radiator.wire"),
        (["{hopeless}"], 1, "cannot be made"),
        (["{quick}", "--as-is", "--plot", "{tmp}/no/such/folder/x.png"], 3, "not written"),
    ],
    ids=["two", "ending", "missing", "broken", "hopeless", "folder"],
)
def test_refusals(arguments: list[str], code: int, needle: str, tmp_path: Path, capsys: Capture) -> None:
    broken, hopeless = tmp_path / "broken.toml", tmp_path / "hopeless.toml"
    broken.write_text(QUICK.read_text().replace('"1.0 mm"', '"1.0 kg"'))
    hopeless.write_text(QUICK.read_text().replace("[feed]", 'inside_bend_radius = "9 mm"\n[feed]'))
    names = {"quick": QUICK, "broken": broken, "hopeless": hopeless, "tmp": tmp_path}
    assert main(["match", *(a.format(**names) for a in arguments)]) == code
    told = capsys.readouterr()
    assert needle in told.err and "Traceback" not in told.err
