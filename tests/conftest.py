"""Cases for the tests: specs from the starters of the methods, solved once and kept."""
from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import pytest
from hypothesis import settings

# A busy machine is no fault of the code: no test fails on wall time.
settings.register_profile("untimed", deadline=None)
settings.load_profile("untimed")

SHEET = """\
calcpack: 1
sheet:
  {{number: T-1, title: Test, project: Works, revision: A, status: draft, purpose: Test., scope: All., units: {units}}}
case:
  method: none
"""


def _spec_text(method: str, options: Mapping[str, str] | None = None, fluids: Mapping[str, str] | None = None,
               units: str = "si") -> str:
    """The starter's spec for a method, with other fluids or print units."""
    from calcpack.methods.starter import starter
    text = starter(method, dict(options or {})).replace("units: si ", f"units: {units} ")
    for role, fluid in (fluids or {}).items():
        text, count = re.subn(rf"(?m)^    {role}: [^#\n]*", f"    {role}: {fluid} ", text, count=1)
        assert count == 1, f"the starter has no fluid {role}"
    return text


def _solution(text: str, inputs: Mapping[str, str] | None = None) -> Any:
    """The solution of a spec's text, before any check of it."""
    from calcpack.errors import SpecError
    from calcpack.solving import solved
    from calcpack.solving.bind import bind
    from calcpack.spec import read_for_faults
    spec, faults = read_for_faults(Path("test.yaml"), text=text, name="test.yaml")
    if spec is None:
        raise SpecError(faults)
    return solved(bind(spec, inputs, faults))


@pytest.fixture(scope="session")
def spec_text() -> Callable[..., str]:
    """``spec_text(method, options, fluids, units)`` is a spec that solves as it stands."""
    return _spec_text


@pytest.fixture(scope="session")
def solution_of() -> Callable[..., Any]:
    """``solution_of(text, inputs)`` binds and solves a spec's text."""
    return _solution


@pytest.fixture(scope="session")
def arranged() -> Callable[..., Any]:
    """``arranged(method, options, inputs, fluids, units)`` is a method's solution; equal cases are solved once."""
    kept: dict[tuple, Any] = {}

    def solve(method: str, options: Mapping[str, str] | None = None, inputs: Mapping[str, str] | None = None,
              fluids: Mapping[str, str] | None = None, units: str = "si") -> Any:
        key = (method, *(tuple(sorted((one or {}).items())) for one in (options, inputs, fluids)), units)
        if key not in kept:
            kept[key] = _solution(_spec_text(method, options, fluids, units), inputs)
        return kept[key]
    return solve


@pytest.fixture(scope="session")
def own_sheet() -> Callable[..., str]:
    """``own_sheet(rest, units)`` is a spec of the engineer's own steps; ``rest`` follows ``method: none``."""
    return lambda rest, units="si": SHEET.format(units=units) + rest


def _laid(plan: Any, inputs: Mapping[str, str], system: str = "si") -> tuple[Any, tuple]:
    """A plan of the test's own, laid for inputs written as quantities; levels in degC, differences in K."""
    from calcpack.plan.laid import LaidInput
    from calcpack.plan.lay import lay
    from calcpack.plan.outputs import measure_of_kind, measure_of_unit
    from calcpack.units import read_quantity
    known = {}
    for symbol, text in inputs.items():
        written = read_quantity(text).unit
        difference = written.symbol == "K"
        measure = measure_of_kind("temperature difference") if difference else measure_of_unit(written.symbol)
        known[symbol] = LaidInput(symbol, symbol, measure, written)
    return lay(plan, known, system)


@pytest.fixture(scope="session")
def laid() -> Callable[..., Any]:
    """``laid(plan, {"a": "5 kW"})`` gives the laid plan and its faults."""
    return _laid


@pytest.fixture(scope="session")
def run() -> Callable[..., tuple[Any, dict[str, float]]]:
    """``run(plan, {"a": "5 kW"})`` gives the program and all SI values."""
    from calcpack.solving.program import Program
    from calcpack.units import read_quantity

    def run_plan(plan: Any, inputs: Mapping[str, str]) -> tuple[Any, dict[str, float]]:
        laid_plan, faults = _laid(plan, inputs)
        assert faults == ()
        program = Program(laid_plan)
        return program, program.run({name: read_quantity(text).value for name, text in inputs.items()})
    return run_plan


COMPANIONS = {("source_stream", "none"): {"evaporating": "temperature"},
              ("evaporating", "supercritical"): {"expander_inlet": "temperature"},
              ("sink_stream", "none"): {"condensing": "temperature"}, ("process", "heat"): {"size_by": "flow"}}
"""What another option must be for a value: no pinch can be found without a stream, say."""


def every_option_once() -> list[Any]:
    """A case for each method as it stands, and for each value of each option once."""
    from calcpack.methods import methods
    cases = []
    for method in methods().values():
        cases.append(pytest.param(method.name, {}, id=method.name))
        for option in method.options:
            for value in list(option.values)[1:]:
                if value == "…":
                    # Words of the engineer's own choice: what they may be is tested with the method.
                    continue
                options = {**COMPANIONS.get((option.name, value), {}), option.name: value}
                cases.append(pytest.param(method.name, options, id=f"{method.name}-{option.name}-{value}"))
    return cases


def pytest_generate_tests(metafunc: pytest.Metafunc) -> None:
    """The grid for a test that takes ``method`` and ``options``; each method once for one that takes ``any_method``."""
    if "any_method" in metafunc.fixturenames:
        from calcpack.methods import methods
        metafunc.parametrize("any_method", list(methods()))
    marked = [mark.args[0] for mark in metafunc.definition.iter_markers("parametrize")]
    if {"method", "options"} <= set(metafunc.fixturenames) and not any("method" in names for names in marked):
        metafunc.parametrize("method, options", every_option_once())
