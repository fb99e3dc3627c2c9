"""Lines that tests add to the end of the report."""

import pytest

LINES = pytest.StashKey[list[str]]()


def pytest_configure(config):
    config.stash[LINES] = []


@pytest.fixture
def report(request):
    """A function that adds a line to the report."""
    return request.config.stash[LINES].append


def pytest_terminal_summary(terminalreporter, config):
    if config.stash[LINES]:
        terminalreporter.section("measured")
        for line in config.stash[LINES]:
            terminalreporter.write_line(line)
