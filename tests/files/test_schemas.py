"""The published schemas: closed, kept by what the commands and packs really hold, and failed by anything else."""

from __future__ import annotations

import copy
import json
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import jsonschema
import pytest
from tests.field.test_model_file import BAD as BAD_MODELS
from tests.recipe.bad_recipes import BAD, GOOD, below
from tests.tuning.test_commands import GIVEN

from wavejig.cli import main
from wavejig.commands.arguments import COMMANDS
from wavejig.files.schemas import names, schema

Capture = pytest.CaptureFixture[str]
UNMADE = below("radiator", 'inside_bend_radius = "20 mm"').replace('"spare"', '"unmade"')
BROKEN = GOOD.replace('"biquad"', '"bquad"')
# Objects of design.json that tell of the making and may gain keys; tables and figures by name are maps.
OPEN = {"fixture", "spacer", "prints", "batch"}


def errors(name: str, data: Any) -> list[str]:
    """What the second implementation has against it."""
    found = jsonschema.Draft202012Validator(schema(name)).iter_errors(data)
    return [f"{e.json_path}: {e.message[:300]}" for e in found]


def objects(node: Any, path: str = "") -> Iterator[tuple[str, dict[str, Any]]]:
    """Every schema of an object."""
    if isinstance(node, dict):
        if node.get("type") == "object":
            yield path, node
        for key, value in node.items():
            yield from objects(value, f"{path}/{key}")
    elif isinstance(node, list):
        for i, value in enumerate(node):
            yield from objects(value, f"{path}/{i}")


def test_there_is_one_for_every_command_that_tells_programs() -> None:
    """`new` prints the recipe's own schema, `watch` prints for people."""
    assert set(COMMANDS) - {"new", "watch"} <= set(names())
    assert set(names()) - set(COMMANDS) == {"design", "field", "manifest", "model", "verify"}


@pytest.mark.parametrize("name", names())
def test_schemas_are_sound_and_closed(name: str) -> None:
    jsonschema.Draft202012Validator.check_schema(schema(name))
    for path, node in objects(schema(name)):
        if path.split("/properties/")[-1].split("/")[0] in OPEN:
            continue
        assert node.get("additionalProperties") is not None, path
        if "properties" in node:
            assert node["additionalProperties"] is False, path
            assert set(node["required"]) <= set(node["properties"]), path


@pytest.fixture
def recipe(tmp_path: Path) -> dict[str, Path]:
    made = {}
    for name, text in (("good", GOOD), ("broken", BROKEN), ("unmade", UNMADE), ("given", GIVEN)):
        made[name] = tmp_path / f"{name}.toml"
        made[name].write_text(text, encoding="utf-8")
    made["gone"] = tmp_path / "gone.toml"
    made["folder"] = tmp_path
    (tmp_path / "file").write_text("no folder")
    made["out"] = tmp_path / "file"
    return made


# (schema, arguments, exit code): words in capitals are files of the fixture above
SAID = [
    ("check", "check GOOD BROKEN GONE FOLDER UNMADE --json", 2),
    ("check", "check UNMADE --json", 1),
    ("check", "check GIVEN --json", 0),
    ("build", "build BROKEN GONE UNMADE --json", 2),
    ("build", "build UNMADE --skip-field --json", 1),
    ("build", "build GOOD --skip-field --out OUT --json", 3),
    ("verify", "build --verify FOLDER GONE --json", 2),
    ("match", "match BROKEN GONE UNMADE --json", 2),
    ("tune", "tune BROKEN GONE UNMADE GIVEN --json", 2),
    ("yield", "yield BROKEN GONE UNMADE --json", 2),
    ("measured", "measured BROKEN a.s1p --json", 2),
    ("measured", "measured GONE a.s1p --json", 2),
    ("measured", "measured GOOD GONE OUT --json", 2),
    ("stock", "stock --json", 0),
]


def said(arguments: str, files: dict[str, Path], capsys: Capture) -> tuple[int, Any]:
    """Exit code and data of a command line."""
    code = main([str(files[w.lower()]) if w.isupper() else w for w in arguments.split()])
    return code, json.loads(capsys.readouterr().out)


@pytest.mark.parametrize(("name", "arguments", "code"), SAID, ids=[row[1] for row in SAID])
def test_what_commands_say(
    name: str, arguments: str, code: int, recipe: dict[str, Path], capsys: Capture
) -> None:
    got, data = said(arguments, recipe, capsys)
    assert got == code
    assert errors(name, data) == []


def test_every_table_of_the_stock(capsys: Capture) -> None:
    from wavejig.stock.tables import table_names

    for table in table_names():
        assert main(["stock", table, "--json"]) == 0
        assert errors("stock", json.loads(capsys.readouterr().out)) == []


def test_every_bad_recipe_is_told_in_shape(tmp_path: Path, capsys: Capture) -> None:
    paths = []
    for i, (_, text, *_rest) in enumerate(BAD):
        paths.append(tmp_path / f"{i}.toml")
        paths[-1].write_bytes(text if isinstance(text, bytes) else text.encode())
    assert main(["check", *map(str, paths[:70]), "--json"]) == 2
    data = json.loads(capsys.readouterr().out)
    assert len(data) == 70 and errors("check", data) == []


DOCUMENTS = {
    "design": "design.json",
    "manifest": "manifest.json",
    "field": "field/field.json",
    "model": "field/model.json",
}


@pytest.mark.parametrize("name", DOCUMENTS)
def test_documents_of_a_pack(name: str, yard: tuple[Path, Any]) -> None:
    data = json.loads((yard[0] / DOCUMENTS[name]).read_text(encoding="utf-8"))
    assert errors(name, data) == []
    for spoiled in spoilings(name, data):
        assert errors(name, spoiled), "a spoiled document passed"


def spoilings(name: str, data: dict[str, Any]) -> Iterator[dict[str, Any]]:
    """The document with a key more, a key less, and values of a wrong kind."""
    yield {**data, "more": 1}
    for key in data:
        less = {k: v for k, v in data.items() if k != key}
        if key in schema(name).get("required", ()):
            yield less
        yield {**data, key: object_of_another_kind(data[key])}
    for key, value in data.items():
        if isinstance(value, list) and value and isinstance(value[0], dict) and key not in OPEN:
            deeper = copy.deepcopy(data)
            deeper[key][0]["more"] = 1
            yield deeper


def object_of_another_kind(value: Any) -> Any:
    return {"x": None} if not isinstance(value, dict) else [None]


def test_a_pack_told_by_build_and_verify(yard: tuple[Path, Any], tmp_path: Path, capsys: Capture) -> None:
    """A build that finds its pack unchanged, and a pack that was spoiled."""
    import shutil

    from tests.yard import YARD

    shutil.copytree(yard[0], tmp_path / "packs" / yard[0].name)
    (tmp_path / "yard.toml").write_text(YARD, encoding="utf-8")
    assert main(["build", str(tmp_path / "yard.toml"), "--out", str(tmp_path / "packs"), "--json"]) in (0, 1)
    data = json.loads(capsys.readouterr().out)
    assert errors("build", data) == [] and data[0]["state"] == "unchanged"
    pack = tmp_path / "packs" / yard[0].name
    (pack / "design.json").write_text("{}")
    assert main(["build", "--verify", str(pack), "--json"]) == 1
    data = json.loads(capsys.readouterr().out)
    assert errors("verify", data) == []
    assert data[0]["differing"] == [{"path": "design.json", "how": "changed"}]


def test_match_once_solved(recipe: dict[str, Path], capsys: Capture) -> None:
    code, data = said("match GIVEN --as-is --json", recipe, capsys)
    assert code in (0, 1) and errors("match", data) == [] and data[0]["name"] == "spare-5g8"


@pytest.mark.parametrize(("data", "says"), BAD_MODELS, ids=[b[1] for b in BAD_MODELS])
def test_the_model_s_schema_refuses_what_its_reader_refuses(data: Any, says: str) -> None:
    if "inf" in repr(data):  # JSON has no such number
        data = json.loads(json.dumps(data).replace("Infinity", '"Infinity"'))
    assert errors("model", data)
