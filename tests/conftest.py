"""Shared test settings: hypothesis runs the same examples every time, and --whole runs the long ones."""

from __future__ import annotations

import itertools
import os
import signal
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, settings

settings.register_profile(
    "steady", derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow], database=None
)
settings.load_profile("steady")

# A run in a shell's background ignores these, and so would every command that tests start and then stop.
for _number in (signal.SIGINT, signal.SIGHUP):
    if signal.getsignal(_number) == signal.SIG_IGN:
        signal.signal(_number, signal.default_int_handler)


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption("--whole", action="store_true", help="run the long tests whole, not their samples")


def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    if config.getoption("--whole"):
        return
    skip = [item for item in items if "slow" in item.keywords]
    if skip:
        config.hook.pytest_deselected(items=skip)
        items[:] = [item for item in items if "slow" not in item.keywords]


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    """Say how many tests were skipped for want of a program, where it cannot be overlooked."""
    skipped = terminalreporter.stats.get("skipped", [])
    if skipped:
        terminalreporter.write_sep("!", f"{len(skipped)} tests skipped: see the reasons above")


@pytest.hookimpl(trylast=True)
def pytest_sessionfinish(session: pytest.Session) -> None:
    """Where every program is meant to be there (WAVEJIG_NO_SKIPS is set), a skip is a failure."""
    reporter = session.config.pluginmanager.get_plugin("terminalreporter")
    if os.environ.get("WAVEJIG_NO_SKIPS") and reporter is not None and reporter.stats.get("skipped"):
        session.exitstatus = pytest.ExitCode.TESTS_FAILED


@pytest.fixture(autouse=True)
def own_cache(tmp_path_factory: pytest.TempPathFactory, monkeypatch: pytest.MonkeyPatch) -> None:
    """Every test starts without kept answers, and leaves none in the user's own cache."""
    folder = tmp_path_factory.getbasetemp() / "caches"
    monkeypatch.setenv("WAVEJIG_CACHE", str(folder / f"{next(_NUMBERS)}"))


_NUMBERS = itertools.count()


@pytest.fixture(scope="session")
def saltmarsh(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """One built pack, tuned and predicted, for many looks; tests read it and leave it as it is."""
    from wavejig.pack import build

    recipe = Path(__file__).parents[1] / "recipes" / "saltmarsh-2g4.toml"
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("WAVEJIG_CACHE", str(tmp_path_factory.mktemp("cache")))
        return build(recipe, tmp_path_factory.mktemp("packs")).folder


@pytest.fixture(scope="session")
def yard(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Any]:
    """A small pack that took seconds, and what its build kept for the next; tests leave the pack as it is."""
    from tests.yard import YARD
    from wavejig.files.kept import Kept
    from wavejig.pack import build

    recipe = tmp_path_factory.mktemp("recipes") / "yard.toml"
    recipe.write_text(YARD, encoding="utf-8")
    memory = Kept()
    return build(recipe, tmp_path_factory.mktemp("packs"), memory=memory).folder, memory
