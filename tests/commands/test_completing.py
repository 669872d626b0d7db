"""Completion, asked as a shell asks: by environment, in a process of its own."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

TOP = Path(__file__).parents[2]


def completed(line: str, folder: Path, *, where: Path = TOP) -> set[str]:
    answer = folder / "answer"
    env = {
        **os.environ,
        "_ARGCOMPLETE": "1",
        "_ARGCOMPLETE_IFS": "\n",
        "_ARGCOMPLETE_STDOUT_FILENAME": str(answer),
        "COMP_LINE": line,
        "COMP_POINT": str(len(line)),
    }
    done = subprocess.run(
        [sys.executable, "-m", "wavejig"], env=env, cwd=where, capture_output=True, timeout=60, check=False
    )
    assert done.returncode == 0 and not done.stdout, done.stderr
    return {word.strip() for word in answer.read_text().split("\n")} - {""}


@pytest.mark.parametrize(
    ("line", "words"),
    [
        ("wavejig m", {"match", "measured"}),
        ("wavejig build --fr", {"--from-scratch"}),
        ("wavejig stock c", {"connectors", "cutters"}),
        ("wavejig check recipes/sa", {"recipes/saltmarsh-2g4.toml"}),
    ],
)
def test_words(line: str, words: set[str], tmp_path: Path) -> None:
    assert completed(line, tmp_path) == words


def test_only_sweeps_where_sweeps_go(tmp_path: Path) -> None:
    for name in ("first.s1p", "notes.txt", "a.toml"):
        (tmp_path / name).write_text("")
    assert completed("wavejig measured a.toml ", tmp_path, where=tmp_path) >= {"first.s1p"}
    assert "notes.txt" not in completed("wavejig measured a.toml ", tmp_path, where=tmp_path)


def test_nothing_of_it_is_loaded_in_a_run() -> None:
    code = "import sys; from wavejig.cli import main; main(['stock']); sys.exit('argcomplete' in sys.modules)"
    subprocess.run([sys.executable, "-c", code], capture_output=True, timeout=60, check=True)
