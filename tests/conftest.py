"""Shared test settings: hypothesis runs the same examples every time, and --whole runs the long ones."""

from __future__ import annotations

import pytest
from hypothesis import HealthCheck, settings

settings.register_profile(
    "steady", derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow], database=None
)
settings.load_profile("steady")


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption("--whole", action="store_true", help="run the long tests whole, not their samples")


def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    if config.getoption("--whole"):
        return
    skip = [item for item in items if "slow" in item.keywords]
    if skip:
        config.hook.pytest_deselected(items=skip)
        items[:] = [item for item in items if "slow" not in item.keywords]
