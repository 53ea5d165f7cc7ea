"""The deviations that the published checks found, printed as one table when the tests end."""
from __future__ import annotations

import pytest

from calcpack.verification.published import Deviation, table

PROPERTY = "published value"


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    # Through the reports' own properties, so that the table is whole with parallel workers too.
    found = [Deviation(*value) for outcome in ("passed", "failed") for report in terminalreporter.stats.get(outcome, [])
             if report.when == "call" for name, value in report.user_properties if name == PROPERTY]
    if found:
        terminalreporter.section("published values")
        for line in table(found):
            terminalreporter.write_line(line)
