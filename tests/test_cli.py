"""The command line as a person and a program meet it: exit codes, streams, JSON, nothing unasked on disk."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import jsonschema
import pytest

import wavejig
from tests.recipe.bad_recipes import BAD, GOOD
from wavejig.cli import main
from wavejig.recipe import read_recipe
from wavejig.recipe.models import Recipe

STARTER = Path(wavejig.__file__).parent / "recipe" / "starter.toml"

Capture = pytest.CaptureFixture[str]
RECIPES = sorted((Path(__file__).parents[1] / "recipes").glob("*.toml"))


def test_help_teaches_by_example(capsys: Capture) -> None:
    for arguments in (
        ["--help"],
        ["check", "--help"],
        ["build", "--help"],
        ["new", "--help"],
        ["stock", "--help"],
        ["match", "--help"],
        ["tune", "--help"],
    ):
        with pytest.raises(SystemExit) as stop:
            main(arguments)
        assert stop.value.code == 0
        told = capsys.readouterr().out
        assert "examples:" in told and "wavejig " in told


@pytest.mark.parametrize(
    ("arguments", "needle"),
    [
        (["chek", "x"], '"check"'),
        (["biuld", "x"], '"build"'),
        (["build", "x.toml", "--otu", "d"], "--out"),
        ([], "required"),
        (["check"], "RECIPE"),
        (["stock", "conectors"], "connectors"),
        (["new"], "which file"),
    ],
)
def test_wrong_arguments_exit_2_and_name_the_nearest(
    arguments: list[str], needle: str, capsys: Capture
) -> None:
    try:
        code = main(arguments)
    except SystemExit as stop:
        code = int(stop.code or 0)
    told = capsys.readouterr()
    assert code == 2
    assert needle in told.err and not told.out


@pytest.mark.parametrize("path", RECIPES, ids=lambda p: p.stem)
def test_demo_recipes_can_be_made(path: Path, capsys: Capture) -> None:
    assert main(["check", str(path)]) == 0
    told = capsys.readouterr()
    assert "can be made: 0 errors" in told.out
    assert not told.err


def test_check_json(tmp_path: Path, capsys: Capture) -> None:
    bad = tmp_path / "bad.toml"
    bad.write_text(GOOD.replace('"biquad"', '"bquad"'))
    good = tmp_path / "good.toml"
    good.write_text(GOOD)
    assert main(["check", str(good), str(bad), str(tmp_path / "none.toml"), "--json"]) == 2
    told = capsys.readouterr()
    first, second, third = json.loads(told.out)
    assert first["can_be_made"] is True and first["name"] == "spare"
    assert {f["severity"] for f in first["findings"]} <= {"error", "warning", "note"}
    assert first["values"]["standoff"] == {"value": 15.35, "from": "starting value", "unit": "mm"}
    assert second["problems"][0]["key"] == "radiator.family" and second["problems"][0]["line"] == 6
    assert "cannot be read" in third["error"]


def test_a_folder_or_a_missing_file_is_wrong_input(tmp_path: Path, capsys: Capture) -> None:
    for path in (tmp_path, tmp_path / "none.toml"):
        for command in ("check", "build"):
            assert (
                main([command, str(path), *(["--out", str(tmp_path / "o")] if command == "build" else [])])
                == 2
            )
            assert str(path) in capsys.readouterr().err
    assert not (tmp_path / "o").exists()


def test_new_writes_a_recipe_that_passes_and_never_overwrites(tmp_path: Path, capsys: Capture) -> None:
    path = tmp_path / "my dish, 2.4.toml"
    assert main(["new", str(path)]) == 0
    assert read_recipe(path).recipe.name == "my-dish-2-4"
    assert main(["check", str(path)]) == 0
    before = path.read_bytes()
    assert main(["new", str(path)]) == 2
    assert "exists already" in capsys.readouterr().err
    assert path.read_bytes() == before
    assert main(["new", str(tmp_path / "no" / "such" / "folder.toml")]) == 3


def test_the_starter_names_every_key() -> None:
    """Each key of the models stands in the starter, set or as a remark, in its table."""
    text = STARTER.read_text()
    from wavejig.recipe.reader import _all_keys

    for table, keys in _all_keys().items():
        header = f"[{table}]" if table else ""
        assert header in text
        block = text.split(header, 1)[1] if header else text
        block = block.split("\n[", 1)[0].split("\n# [", 1)[0]
        for key in keys:
            if f"{table}.{key}".strip(".") in _all_keys() or key == "holes":
                continue
            assert f"{key} = " in block, f"{table}.{key} is not in the starter"


def test_remarks_of_the_starter_are_valid_values(tmp_path: Path) -> None:
    """Taking the # away from every simple line still gives a recipe that reads (contradictions aside)."""
    text = STARTER.read_text().replace("@name@", "all")
    lines = []
    for line in text.splitlines():
        bare = line.removeprefix("# ")
        is_key = line.startswith("# ") and (" = " in bare.split("#")[0] or bare.startswith("["))
        lines.append(bare if is_key else line)
    path = tmp_path / "all.toml"
    path.write_text("\n".join(lines))
    recipe = read_recipe(path).recipe
    assert recipe.radiator.corners is not None and len(recipe.reflector.holes) == 1


def test_the_schema_takes_good_recipes_and_refuses_bad_ones(capsys: Capture) -> None:
    """Second opinion on the schema: the jsonschema library over our demo recipes and the bad list."""
    import tomllib

    assert main(["new", "--schema"]) == 0
    schema = json.loads(capsys.readouterr().out)
    validator = jsonschema.Draft202012Validator(schema)
    validator.check_schema(schema)
    for path in RECIPES:
        validator.validate(tomllib.loads(path.read_text()))
    caught = 0
    for what, text, code, _, _, _ in BAD:
        try:
            data = tomllib.loads(text if isinstance(text, str) else text.decode())
        except (ValueError, RecursionError):
            continue
        if code == 1:
            assert validator.is_valid(data), what  # good values that cannot be made together
        caught += not validator.is_valid(data)
    assert caught >= 35


def test_every_model_field_has_a_description() -> None:
    schema = json.dumps(Recipe.model_json_schema())
    assert schema.count('"description"') > 60


def test_stock_tables_print_and_say_their_source(capsys: Capture) -> None:
    from wavejig.stock.tables import table_names

    assert main(["stock"]) == 0
    listed = capsys.readouterr().out
    for name in table_names():
        assert name in listed
        assert main(["stock", name]) == 0
        told = capsys.readouterr().out
        assert "source: " in told
        assert (
            max(len(line) for line in told.splitlines() if not line.startswith(("source", "note", "  ")))
            <= 160
        )
        assert main(["stock", name, "--json"]) == 0
        assert json.loads(capsys.readouterr().out)["name"] == name


def test_a_reader_that_goes_away_is_no_error() -> None:
    command = f"{sys.executable} -m wavejig stock metals | head -1; exit ${{PIPESTATUS[0]}}"
    done = subprocess.run(
        ["bash", "-c", command], capture_output=True, text=True, env=os.environ, check=False
    )
    assert done.returncode == 0 and "Traceback" not in done.stderr
