"""`wavejig build --verify`: whether a pack on disk is what its recipe gives, and what differs where it is not."""

from __future__ import annotations

import hashlib
import json
import shutil
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from wavejig import pack as walk
from wavejig.cli import main

Capture = pytest.CaptureFixture[str]


@pytest.fixture
def copy(yard: tuple[Path, Any], tmp_path: Path) -> Path:
    return Path(shutil.copytree(yard[0], tmp_path / "out" / yard[0].name))


@pytest.fixture
def built_as_before(yard: tuple[Path, Any], monkeypatch: pytest.MonkeyPatch) -> list[dict[str, Any]]:
    """Stands for the build that verifying makes: it gives the pack that this session has built already."""
    asked: list[dict[str, Any]] = []

    def build(path: Path, out: Path, *rest: Any, **options: Any) -> walk.Built:
        asked.append(options | {"recipe": path.read_text()})
        folder = Path(shutil.copytree(yard[0], out / yard[0].name))
        return walk.Built(folder=folder, files=0, bytes=0, inspection=None, prediction=None)  # type: ignore[arg-type]

    monkeypatch.setattr(walk, "build", build)
    return asked


def forged(pack: Path, name: str, text: str) -> None:
    """A file changed, and the manifest made to fit."""
    (pack / name).write_text(text)
    data = json.loads((pack / "manifest.json").read_text())
    for entry in data["files"]:
        if entry["path"] == name:
            entry |= {"bytes": len(text), "sha256": hashlib.sha256(text.encode()).hexdigest()}
    (pack / "manifest.json").write_text(json.dumps(data))


def test_a_pack_built_again_from_its_own_recipe(
    yard: tuple[Path, Any], copy: Path, tmp_path: Path, capsys: Capture
) -> None:
    """For real: the whole build once more, in another folder, later in the same process."""
    assert main(["build", "--verify", str(copy)]) == 0
    told = capsys.readouterr()
    assert f"{copy}: is what its recipe gives: " in told.out and "same bytes" in told.out
    assert not told.err
    assert [p.name for p in tmp_path.iterdir()] == ["out"] and [p.name for p in copy.parent.iterdir()] == [
        copy.name
    ]


def test_a_touched_pack_is_told_without_a_build(
    copy: Path, built_as_before: list[dict[str, Any]], capsys: Capture
) -> None:
    (copy / "report.html").unlink()
    (copy / "notes.txt").write_text("mine")
    (copy / "assembly.step").write_bytes((copy / "assembly.step").read_bytes() + b"\n")
    assert main(["build", "--verify", str(copy), "--json"]) == 1
    (data,) = json.loads(capsys.readouterr().out)
    assert data["verdict"] == "differs"
    assert data["differing"] == [
        {"path": "assembly.step", "how": "changed"},
        {"path": "notes.txt", "how": "extra"},
        {"path": "report.html", "how": "missing"},
    ]
    assert built_as_before == []


def test_a_forged_manifest_is_found_out_by_building(
    copy: Path, built_as_before: list[dict[str, Any]], capsys: Capture
) -> None:
    forged(copy, "radiator/bend-table.csv", "bend,angle\n1,90\n")
    assert main(["build", "--verify", str(copy)]) == 1
    told = capsys.readouterr()
    assert "is not what its recipe gives" in told.err and "changed  radiator/bend-table.csv" in told.err
    assert "other versions" not in told.err and not told.out
    (asked,) = built_as_before
    assert asked["predict"] is True and asked["recipe"] == (copy / "recipe.toml").read_text()


def test_other_versions_are_named(copy: Path, built_as_before: list[dict[str, Any]], capsys: Capture) -> None:
    data = json.loads((copy / "manifest.json").read_text())
    data["versions"]["ezdxf"] = "1.0"
    data["made"]["program"] = "5" * 64
    (copy / "manifest.json").write_text(json.dumps(data))
    assert main(["build", "--verify", str(copy)]) == 0  # the bytes are what counts
    told = capsys.readouterr().out
    assert "ezdxf: 1.0 made it, " in told and "program: 555555555555 made it, " in told
    forged(copy, "report.html", "<p>other")
    assert main(["build", "--verify", str(copy), "--json"]) == 1
    (told_data,) = json.loads(capsys.readouterr().out)
    assert (
        "made by other versions" in told_data["message"] and told_data["versions"]["ezdxf"]["pack"] == "1.0"
    )


@pytest.mark.parametrize(
    ("made", "expected"),
    [({"free": "start", "field": False}, ("start", False)), ({"free": "tuned"}, ("tuned", True))],
)
def test_it_is_built_as_it_was(
    made: dict[str, Any], expected: tuple[str, bool], copy: Path, built_as_before: list[dict[str, Any]]
) -> None:
    data = json.loads((copy / "manifest.json").read_text())
    data["made"] |= made
    (copy / "manifest.json").write_text(json.dumps(data))
    assert main(["build", "--verify", str(copy), "--from-scratch"]) == 0
    (asked,) = built_as_before
    assert (asked["free"], asked["predict"]) == expected and asked["anew"] is True


def empty(pack: Path) -> None:
    shutil.rmtree(pack)
    pack.mkdir()


def of_an_older_version(pack: Path) -> None:
    data = json.loads((pack / "manifest.json").read_text())
    del data["made"]
    (pack / "manifest.json").write_text(json.dumps(data))


def broken(pack: Path) -> None:
    (pack / "manifest.json").write_text("{")


@pytest.mark.parametrize("spoil", [shutil.rmtree, empty, of_an_older_version, broken])
def test_what_is_no_pack_is_wrong_input(
    spoil: Callable[[Path], None],
    copy: Path,
    yard: tuple[Path, Any],
    built_as_before: list[Any],
    capsys: Capture,
) -> None:
    spoil(copy)
    assert main(["build", "--verify", str(copy), str(yard[0])]) == 2
    told = capsys.readouterr()
    assert str(copy) in told.err and "Traceback" not in told.err
    assert f"{yard[0]}: is what its recipe gives" in told.out  # the other one is looked at all the same


def test_a_recipe_that_gives_no_pack(copy: Path, capsys: Capture) -> None:
    forged(copy, "recipe.toml", (copy / "recipe.toml").read_text().replace('"biquad"', '"biquat"'))
    assert main(["build", "--verify", str(copy)]) == 1
    assert "gives no pack here" in capsys.readouterr().err


def test_a_list_that_leads_out_of_the_pack_is_not_followed(copy: Path, capsys: Capture) -> None:
    secret = copy.parent.parent / "secret.txt"
    secret.write_text("secret")
    data = json.loads((copy / "manifest.json").read_text())
    digest = hashlib.sha256(b"secret").hexdigest()
    for name in ("../../secret.txt", str(secret)):
        data["files"].append(data["files"][0] | {"path": name, "bytes": 6, "sha256": digest})
    (copy / "manifest.json").write_text(json.dumps(data))
    assert main(["build", "--verify", str(copy), "--json"]) == 1
    (told,) = json.loads(capsys.readouterr().out)
    assert {d["path"]: d["how"] for d in told["differing"]} == {
        "../../secret.txt": "missing",
        str(secret): "missing",
    }


def test_either_recipes_or_packs(copy: Path, capsys: Capture) -> None:
    assert main(["build", str(copy / "recipe.toml"), "--verify", str(copy)]) == 2
    assert main(["build"]) == 2
    assert "which recipe" in capsys.readouterr().err
