"""A library that is not there is met with the command that brings it."""

from __future__ import annotations

from typing import Any

import pytest

from wavejig import cli
from wavejig.commands.missing import DEBIAN, missing

KERNEL = "libGL.so.1: cannot open shared object file: No such file or directory"


def test_a_library_of_the_system_names_its_package() -> None:
    for start, package in DEBIAN.items():
        told = missing(ImportError(f"{start}.1: cannot open shared object file: No such file or directory"))
        assert told is not None and f"apt-get install {package}" in told and f"{start}.1" in told


def test_a_python_package_is_named_as_pip_knows_it() -> None:
    told = missing(ModuleNotFoundError("No module named 'skrf'", name="skrf.io"))
    assert told is not None and "pip install scikit-rf" in told
    # a fault of ours is no missing package
    assert missing(ModuleNotFoundError("No module named 'wavejig.x'", name="wavejig.x")) is None
    assert missing(ImportError("cannot import name 'x' from 'wavejig.recipe'")) is None


def test_the_command_says_so_and_ends_with_3(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    class Broken:
        @staticmethod
        def run(args: Any) -> int:
            raise ImportError(KERNEL)

    monkeypatch.setattr(cli, "import_module", lambda name: Broken)
    assert cli.main(["build", "recipes/saltmarsh-2g4.toml"]) == 3
    out, err = capsys.readouterr()
    assert not out and "apt-get install libgl1" in err and "Traceback" not in err
