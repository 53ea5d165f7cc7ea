"""Cases that are solved once for all tests of the checks."""
from __future__ import annotations

from collections.abc import Callable

import pytest
from check_cases import Solved, engine_text, heat_pump_text, solve_text


@pytest.fixture(scope="session")
def heat_pump() -> Solved:
    """The usual heat pump in SI units."""
    return solve_text(heat_pump_text())


@pytest.fixture(scope="session")
def engine() -> Solved:
    """The usual engine on a flue gas."""
    return solve_text(engine_text())


@pytest.fixture(scope="session")
def vary() -> Callable[..., Solved]:
    """The heat pump with changed values."""
    return lambda **changed: solve_text(heat_pump_text(**changed))
