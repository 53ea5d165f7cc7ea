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


@pytest.fixture(scope="session")
def ammonia(vary: Callable[..., Solved]) -> Solved:
    return vary(wf="R-717")


@pytest.fixture(scope="session")
def carbon_dioxide(vary: Callable[..., Solved]) -> Solved:
    return vary(wf="R-744", T_source_in="-5 degC", T_source_out="-10 degC", T_sink_in="5 degC", T_sink_out="10 degC",
                source="{fluid: ethylene glycol, mass_fraction: 0.4}")


@pytest.fixture(scope="session")
def harmless(vary: Callable[..., Solved]) -> Solved:
    return vary(wf="R-134a")


@pytest.fixture(scope="session")
def steam() -> Solved:
    return solve_text(engine_text(wf="water", T_c="40 degC", T_e="180 degC", T_source_in="350 degC"))
