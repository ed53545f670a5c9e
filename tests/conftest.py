"""Options of the test run, and rated cases that every test file shares."""

from functools import cache
from pathlib import Path

import pytest

from reactor import load
from reactor.rating.whole import rate  # no test puts another in its place
from reactor.sizing.loop import closed

CASES = Path(__file__).parent.parent / "cases"


def pytest_addoption(parser):
    parser.addoption("--run-slow", action="store_true", help="run the deep checks too")
    parser.addoption("--save-golden", action="store_true", help="rewrite the golden rows of tests/golden/")


def pytest_collection_modifyitems(config, items):
    if config.getoption("--run-slow"):
        return
    skip = pytest.mark.skip(reason="deep check: add --run-slow")
    for item in items:
        if "slow" in item.keywords:
            item.add_marker(skip)


@cache
def _rated(name):
    return rate(closed(load(CASES / f"{name}.toml")))


@pytest.fixture(scope="session")
def rated():
    """Return a function: name of a shipped case -> its Result, each solved once in a session."""
    return _rated
