"""Every exit code of every command, and every family of message: a table each.

What a code needs a solve or a kernel for is met where that is tested (`tests/test_match.py`, `tests/test_pack.py`,
`tests/tuning/test_commands.py`, `tests/test_watch.py`); here stand those that are cheap, and the codes that any
command gives when it is stopped.
"""

from __future__ import annotations

import importlib
import re
import socket
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from tests.recipe.bad_recipes import GOOD, below
from tests.tuning.test_commands import GIVEN
from wavejig.cli import main
from wavejig.commands.arguments import COMMANDS

Capture = pytest.CaptureFixture[str]
LINE = r"{bad}:6: radiator\.family: read \"bquad\"; allowed: .*\. Did you mean \"biquad\"\?"
UNREADABLE = r"{gone}: cannot be read: No such file or directory\. Allowed: a recipe file"
FINDING = r"  error   radiator-cannot-be-bent \(.*\): .*smaller bend radius.*\n          Change the number"
NOTHING_PREDICTED = r"{unmade}: cannot be made, so nothing is predicted; see `wavejig check`"

# command line with files in braces, exit code, what stderr (or, with a "+", stdout) must match
ROWS: list[tuple[str, int, str]] = [
    # -- new
    ("new {fresh}", 0, r"+fresh\.toml written\. Next: wavejig check"),
    ("new --schema", 0, r'+"\$schema"'),
    ("new --schema yield", 0, r'+"urn:wavejig:yield"'),
    ("new --schema mesured", 2, r'no schema "mesured"; allowed: recipe, .*Did you mean "measured"\?'),
    ("new {good}", 2, r"exists already, and is left as it is"),
    ("new", 2, r"which file\?"),
    ("new {nowhere}", 3, r"cannot be written: No such file or directory"),
    # -- check
    ("check {good}", 0, r"+can be made: 0 errors"),
    ("check {unmade}", 1, "+" + FINDING),
    ("check {bad}", 2, LINE),
    ("check {gone}", 2, UNREADABLE),
    ("check {folder}", 2, r"cannot be read: Is a directory"),
    ("check {unmade} {bad} {good}", 2, LINE),
    # -- match
    ("match {unmade}", 1, NOTHING_PREDICTED),
    ("match {bad}", 2, LINE),
    ("match {gone}", 2, UNREADABLE),
    ("match {good} {given} --plot m.png", 2, r"one recipe at a time"),
    ("match {good} --plot m.gif", 2, r"\.png"),
    # -- tune
    ("tune {given}", 0, r"gives every number itself"),
    ("tune {unmade}", 1, r"cannot be made as it starts, so nothing is tuned: radiator-cannot-be-bent"),
    ("tune {bad}", 2, LINE),
    ("tune {gone}", 2, UNREADABLE),
    ("tune {good} --grid 0.05", 2, r"--grid \"0\.05\".*no unit"),
    ("tune {good} --grid 5m", 2, r"0\.001 mm to 5 mm"),
    ("tune {good} --aim loudness", 2, r"loudness"),
    # -- build
    ("build {unmade} --out {out}", 1, FINDING + r"[\s\S]*No pack was written"),
    ("build {bad} --out {out}", 2, LINE),
    ("build {gone} --out {out}", 2, UNREADABLE),
    ("build {good} --skip-field --out {file}", 3, r"{good}: pack not written: .*; an earlier pack is as it was"),
    ("build --verify {folder}", 2, r"no pack: no manifest\.json in it"),
    # -- yield
    ("yield {unmade}", 1, NOTHING_PREDICTED),
    ("yield {bad}", 2, LINE),
    ("yield {gone}", 2, UNREADABLE),
    # -- measured
    ("measured {unmade} {sweep}", 1, NOTHING_PREDICTED),
    ("measured {bad} {sweep}", 2, LINE),
    ("measured {gone} {sweep}", 2, UNREADABLE),
    ("measured {good} {sweep}", 2, r"{sweep}: line 2 holds 2 numbers, a point of this file has 3"),
    ("measured {good} {gone}", 2, r"{gone}: cannot be read: No such file"),
    ("measured {good} {sweep} --reading side=3", 2, r"--reading side=3: .*no unit"),
    # -- watch
    ("watch {gone}", 2, r"{gone}: no such recipe"),
    ("watch {good} --port 70000", 2, r"allowed: 0 to 65535"),
    ("watch {good} --port {port}", 3, r"port \d+ cannot be used: .*; try another --port"),
    # -- stock
    ("stock", 0, r"+connectors  "),
    ("stock metals", 0, r"+source: "),
    ("stock conectors", 2, r'Nearest: "connectors"|did you mean.*connectors|connectors'),
    # -- the command line itself
    ("--version", 0, r"+wavejig \d+\.\d+"),
    ("--help", 0, r"+exit codes: 0 fine; 1 "),
    ("", 2, r"required"),
    ("chek {good}", 2, r'no command "chek", did you mean "check"\?'),
    ("xyzzy", 2, r'no command "xyzzy"\n'),
    ("check", 2, r"RECIPE"),
    ("check {good} --jsn", 2, r"--jsn, did you mean \"--json\"\?"),
    ("build {good} --skipfield", 2, r"did you mean \"--skip-field\"\?"),
]  # fmt: skip


@pytest.fixture
def files(tmp_path: Path) -> dict[str, Any]:
    texts = {
        "good": GOOD,
        "bad": GOOD.replace('"biquad"', '"bquad"'),
        "unmade": below("radiator", 'inside_bend_radius = "20 mm"').replace('"spare"', '"unmade"'),
        "given": GIVEN,
    }
    found: dict[str, Any] = {name: tmp_path / f"{name}.toml" for name in (*texts, "gone", "fresh")}
    for name, text in texts.items():
        found[name].write_text(text, encoding="utf-8")
    found |= {"folder": tmp_path, "out": tmp_path / "out", "nowhere": tmp_path / "no" / "x.toml"}
    found |= {"file": tmp_path / "file", "sweep": tmp_path / "a.s1p"}
    found["file"].write_text("")
    found["sweep"].write_text("# MHz S RI R 50\n2400 0.1\n")
    return found


def run(arguments: list[str]) -> int:
    """The exit code, however it comes."""
    try:
        return main(arguments)
    except SystemExit as stop:
        return int(stop.code or 0)


@pytest.mark.parametrize(("line", "code", "says"), ROWS, ids=[row[0] for row in ROWS])
def test_exit_code_and_message(
    line: str, code: int, says: str, files: dict[str, Any], capsys: Capture
) -> None:
    before = {p.name for p in files["folder"].iterdir()}
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        files["port"] = taken.getsockname()[1]
        got = run([word.format(**files) for word in line.split()])
    told = capsys.readouterr()
    assert got == code, told.err + told.out
    stream = told.out if says.startswith("+") else told.err
    want = says.removeprefix("+")
    for name, path in files.items():
        want = want.replace(f"{{{name}}}", re.escape(str(path)))
    assert re.search(want, stream), stream
    assert "Traceback" not in told.err
    if code in (2, 3):
        assert not told.out or "{unmade} {bad}" in line  # of several recipes each is told on its own
        assert {p.name for p in files["folder"].iterdir()} == before


def test_the_table_has_every_command_with_what_it_can_give() -> None:
    """0 and 1 of the commands that solve, and 0 of those that build, are met in their own tests."""
    given = {c: {code for line, code, _ in ROWS if line.split()[:1] == [c]} for c in COMMANDS}
    assert given == {
        "new": {0, 2, 3}, "check": {0, 1, 2}, "match": {1, 2}, "tune": {0, 1, 2}, "build": {1, 2, 3},
        "yield": {1, 2}, "measured": {1, 2}, "watch": {2, 3}, "stock": {0, 2},
    }  # fmt: skip


# -- stopped, whatever the command ------------------------------------------------------------------------------

_MODULES = {
    "new": "starting", "check": "checking", "match": "matching", "tune": "tuning", "build": "building",
    "yield": "yielding", "measured": "measuring", "watch": "watching", "stock": "stocking",
}  # fmt: skip
_MORE = {"measured": ["a.s1p"]}


@pytest.mark.parametrize("command", COMMANDS)
def test_interrupted_is_3_and_says_that_packs_are_as_they_were(
    command: str, monkeypatch: pytest.MonkeyPatch, capsys: Capture
) -> None:
    assert run_with(command, monkeypatch, KeyboardInterrupt()) == 3
    assert "packs already on disk are as they were" in capsys.readouterr().err


def run_with(command: str, monkeypatch: pytest.MonkeyPatch, fault: BaseException) -> int:
    """The command as it ends when its work raises."""

    def broken(_: object) -> int:
        raise fault

    monkeypatch.setattr(importlib.import_module(f"wavejig.commands.{_MODULES[command]}"), "run", broken)
    return run([command, "x.toml", *_MORE.get(command, [])])


# -- refusals by the model, and by the disk ----------------------------------------------------------------------


def planted(fault: Exception) -> Callable[..., Any]:
    def raises(*_: object, **__: object) -> Any:
        raise fault

    return raises


def test_a_model_that_cannot_be_solved_is_1_by_its_name(
    files: dict[str, Any], monkeypatch: pytest.MonkeyPatch, capsys: Capture
) -> None:
    from wavejig.field import prediction
    from wavejig.field.errors import ModelError

    monkeypatch.setattr(
        prediction, "predict", planted(ModelError("zero-length wire", "wire 3 has no length"))
    )
    assert run(["match", str(files["given"]), "--as-is"]) == 1
    assert "cannot be predicted: zero-length wire: wire 3 has no length" in capsys.readouterr().err


@pytest.mark.parametrize("number", [28, 30, 13], ids=["full", "read-only", "forbidden"])
def test_a_disk_that_fails_is_3_by_what_it_says(
    number: int, files: dict[str, Any], monkeypatch: pytest.MonkeyPatch, capsys: Capture
) -> None:
    import os

    from wavejig import pack

    fault = OSError(number, os.strerror(number), str(files["out"] / "spare"))
    monkeypatch.setattr(pack, "build", planted(fault))
    assert run(["build", str(files["good"]), "--skip-field", "--out", str(files["out"])]) == 3
    told = capsys.readouterr().err
    assert (
        f"pack not written: {os.strerror(number)} ({files['out'] / 'spare'}); an earlier pack is as it was"
        in told
    )
