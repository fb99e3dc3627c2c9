"""Lines that tests add to the end of the report, whichever process they ran in; no test depends on how fast it runs."""

import pytest
from hypothesis import settings

settings.register_profile("untimed", deadline=None)
settings.load_profile("untimed")
MEASURED = "measured"


@pytest.fixture
def report(request):
    """A function that adds a line to the report."""
    return lambda line: request.node.user_properties.append((MEASURED, line))


def pytest_terminal_summary(terminalreporter):
    done = [r for reports in terminalreporter.stats.values() for r in reports]
    properties = (p for r in done if getattr(r, "when", "") == "call" for p in r.user_properties)
    lines = [line for name, line in properties if name == MEASURED]
    if lines:
        terminalreporter.section(MEASURED)
        for line in lines:
            terminalreporter.write_line(line)
