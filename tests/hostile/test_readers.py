"""The readers of other people's files against a kept corpus and against bombs: refusals, never faults.

The corpus holds what coverage-guided runs reached new branches with (`tests/hostile/fuzz.py`); it is replayed
whole, in this process. Bombs run in a process of their own, which may not take more memory than the limit.
"""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

import pytest

from tests.hostile.bombs import BOMBS
from tests.hostile.fuzz import kept, mutated, words
from tests.hostile.readers import READERS
from wavejig.recipe import Problem, RecipeError, read_recipe
from wavejig.recipe.errors import show, visible

KINDS = sorted(READERS)
SLOW_S = 2.0  # of one processor
MOST_BYTES_OF_MEMORY = 500 * 1024 * 1024
LEAST_KEPT = {"recipe": 150, "sweep": 40, "model": 20}


@pytest.mark.parametrize("kind", KINDS)
def test_the_kept_corpus_is_refused_or_read(kind: str, tmp_path: Path) -> None:
    name, reader = READERS[kind]
    inputs = kept(kind)
    assert len(inputs) >= LEAST_KEPT[kind]
    told = []
    for data in inputs:
        (tmp_path / name).write_bytes(data)
        began = time.process_time()
        told.append(reader(tmp_path / name))
        assert time.process_time() - began < SLOW_S, data
    assert "read" in told  # or the corpus never came past the refusals
    assert len(set(told)) > LEAST_KEPT[kind] / 3


def test_growing_an_input_keeps_its_length_and_changes_it() -> None:
    import random

    data = b'name = "a"\n[target]\nband = 1\n'
    grown = {mutated(data, 40, random.Random(seed), words("recipe")) for seed in range(200)}
    assert len(grown) > 100 and all(len(g) <= 40 for g in grown)


_CHILD = """
import resource, sys, time
from pathlib import Path
from tests.hostile.bombs import BOMBS
from tests.hostile.readers import READERS
kind, folder = sys.argv[1], Path(sys.argv[2])
name, reader = READERS[kind]
(folder / name).write_bytes(b"1")
reader(folder / name)  # what is imported at the first reading is no reader's memory
import skrf.io.touchstone
for what, data in BOMBS[kind]:
    (folder / name).write_bytes(data)
    size = len(data)
    del data
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    began = time.process_time()
    told = reader(folder / name)
    took = time.process_time() - began
    grown = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before
    print(f"{what}\\t{took:.3f}\\t{grown * 1024}\\t{told.splitlines()[0][:60]}", flush=True)
"""


@pytest.mark.parametrize("kind", KINDS)
def test_bombs_are_refused_in_time_and_within_memory(kind: str, tmp_path: Path) -> None:
    done = subprocess.run(
        [sys.executable, "-c", _CHILD, kind, str(tmp_path)],
        capture_output=True, text=True, cwd=Path(__file__).parents[2], check=False, timeout=300,
        env={**os.environ, "PYTHONUTF8": "1"},
    )  # fmt: skip
    assert done.returncode == 0, f"{done.stdout[-500:]}\n{done.stderr[-3000:]}"
    rows = [row.split("\t") for row in done.stdout.splitlines()]
    assert [row[0] for row in rows] == [what for what, _ in BOMBS[kind]]
    for what, took, grown, told in rows:
        assert float(took) < SLOW_S, f"{what}: {took} s"
        assert int(grown) < MOST_BYTES_OF_MEMORY, f"{what}: {int(grown) / 1e6:.0f} MB"
        assert told


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("what", ["folder", "pipe", "device", "loop", "nothing", "no right"])
def test_what_is_no_ordinary_file_is_refused_at_once(kind: str, what: str, tmp_path: Path) -> None:
    name, reader = READERS[kind]
    path = tmp_path / name
    if what == "folder":
        path.mkdir()
    elif what == "pipe":
        os.mkfifo(path)
    elif what == "device":
        path.symlink_to("/dev/zero")
    elif what == "loop":
        path.symlink_to(path)
    elif what == "no right":
        path.write_bytes(b"x")
        path.chmod(0)
        if os.access(path, os.R_OK):  # the administrator may read all the same: then it is read, and refused
            assert reader(path) != "read"
            return
    began = time.monotonic()
    try:
        assert "not a readable" in reader(path)  # of a model, refused like every fault of it
    except OSError as err:
        assert err.filename == str(path) and err.strerror
    assert time.monotonic() - began < SLOW_S


def test_a_recipe_by_another_name_is_read(tmp_path: Path) -> None:
    """Links to ordinary files are as good as the files."""
    from tests.recipe.bad_recipes import GOOD

    (tmp_path / "a.toml").write_text(GOOD)
    (tmp_path / "b.toml").symlink_to(tmp_path / "a.toml")
    assert read_recipe(tmp_path / "b.toml").recipe.name == "spare"


def test_names_of_files_reach_the_terminal_written_out() -> None:
    path = Path("a\x1b[31m\u202e\udcff.toml")
    err = RecipeError(path, [Problem(key="k\x07", read="\x1b", allowed="\u2066", fix="\ud800", line=3)])
    assert str(err) == r"a\x1b[31m\u202e\udcff.toml:3: k\x07: read \x1b; allowed: \u2066. \ud800"
    assert visible("a\nb\tc\rd", keep="\n\t") == "a\nb\tc\\x0dd"
    assert visible("Ω → µ “é”") == "Ω → µ “é”"
    assert show("x" * 100) == '"' + "x" * 58 + "…"
    assert show(10**5000).startswith("a very long int")


@pytest.mark.parametrize("what", ["pipe", "endless"])
def test_commands_do_not_wait_for_what_never_ends(
    what: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    """A recipe that is a pipe, or a file of gigabytes (here one with a hole), given to every command that reads one."""
    from wavejig.cli import main
    from wavejig.commands.serving import Board
    from wavejig.commands.watching import Watch

    path = tmp_path / "r.toml"
    if what == "pipe":
        os.mkfifo(path)
    else:
        with path.open("wb") as stream:
            stream.truncate(8 * 1024**3)
    began = time.process_time()
    for command in (["check"], ["build", str(path)], ["match"], ["tune"], ["yield"], ["measured", str(path)]):
        assert main([*command, str(path)]) == 2
        assert str(path) in capsys.readouterr().err
    told = Watch(path, tmp_path / "out", Board("r.toml")).look()
    assert told == (what == "endless")  # what cannot be read is as if it were not there
    assert time.process_time() - began < 2.0 * SLOW_S
    assert not (tmp_path / "out").exists()
