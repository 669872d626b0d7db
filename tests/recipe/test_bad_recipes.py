"""Every bad recipe gets its exit code, one clear message with line and key, and leaves nothing on disk."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.recipe.bad_recipes import BAD, GOOD, Row
from wavejig.cli import main


def test_the_list_is_long_and_its_names_differ() -> None:
    assert len(BAD) >= 60
    assert len({row[0] for row in BAD}) == len(BAD)


def test_the_recipe_they_spoil_is_good(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "good.toml"
    path.write_text(GOOD)
    assert main(["check", str(path)]) == 0, capsys.readouterr().out


@pytest.mark.parametrize("row", BAD, ids=[row[0].replace(" ", "-") for row in BAD])
@pytest.mark.parametrize("command", ["check", "build"])
def test_bad_recipe(row: Row, command: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    _, text, code, line, key, needles = row
    path = tmp_path / "bad.toml"
    path.write_bytes(text if isinstance(text, bytes) else text.encode())
    out = tmp_path / "out"
    got = main([command, str(path), *(["--out", str(out)] if command == "build" else [])])
    told = capsys.readouterr()
    said = told.err if code == 2 or command == "build" else told.out
    assert got == code, said
    assert "Traceback" not in said
    if code == 2:
        place = f"{path}:{line}: {key}:"
        rows = [row for row in said.splitlines() if row.startswith(place)]
        assert rows, f"no message begins {place!r} in:\n{said}"
        assert len(rows) == 1
        assert "allowed:" in rows[0]
        said = rows[0]
    else:
        rows = [i for i, row in enumerate(said.splitlines()) if row.strip().startswith(f"error   {key} ")]
        assert rows, f"no error finding {key} in:\n{said}"
        said = "\n".join(said.splitlines()[rows[0] : rows[0] + 2])
    for needle in needles:
        assert needle in said
    assert not out.exists()
    assert [p.name for p in tmp_path.iterdir()] == ["bad.toml"]


def test_all_faults_come_at_once(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "bad.toml"
    path.write_text(
        GOOD.replace('"1.8 mm"', "1.8")
        .replace('"biquad"', '"bquad"')
        .replace("quantity = 2", "quantity = -1")
    )
    assert main(["check", str(path)]) == 2
    told = capsys.readouterr().err
    for key in ("quantity", "radiator.family", "radiator.wire"):
        assert f" {key}: read" in told
