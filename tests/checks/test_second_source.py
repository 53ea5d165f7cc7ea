"""The second source: it agrees where it should, and finds a wrong equation."""
from __future__ import annotations

from collections.abc import Callable

import pytest
from check_cases import Solved, by_id, with_value

from calcpack.checks.second_source import second_source


def test_water_and_refrigerant_agree_with_their_second_formulation(heat_pump: Solved) -> None:
    found = by_id(second_source(*heat_pump))
    assert set(found) == {"V-2-source", "V-2-sink", "V-2-evaporating", "V-2-condensing"}
    assert {one["status"] for one in found.values()} == {"ok"}


@pytest.mark.parametrize(("factor", "status"), [(1.0, "ok"), (1.002, "ok"), (1.01, "fails")])
def test_a_wrong_enthalpy_of_the_water_is_found(heat_pump: Solved, factor: float, status: str) -> None:
    solution, record = heat_pump
    value = solution.value
    spoiled = with_value(solution, h_sink_out=value("h_sink_in") + factor * (value("h_sink_out") - value("h_sink_in")))
    assert by_id(second_source(spoiled, record))["V-2-sink"]["status"] == status


def test_a_wrong_saturation_pressure_is_found(heat_pump: Solved, monkeypatch: pytest.MonkeyPatch) -> None:
    solution, record = heat_pump
    fluid = solution.plan.fluids["wf"]
    reader = type(fluid).reader
    monkeypatch.setattr(type(fluid), "reader", lambda self, output, names: (
        lambda *given: 1.1 * reader(self, output, names)(*given)) if output == "p" else reader(self, output, names))
    found = by_id(second_source(solution, record))
    assert (found["V-2-evaporating"]["status"], found["V-2-condensing"]["status"]) == ("fails", "fails")


def test_a_fluid_without_a_second_formulation_says_so(vary: Callable[..., Solved]) -> None:
    # The property library has no cubic constants for this one.
    found = by_id(second_source(*vary(wf="R-1336mzz(Z)", dT_sh="15 K")))
    assert found["V-2-condensing"]["status"] == "not evaluated"
    assert found["V-2-condensing"]["detail"] == "there is no second formulation of R-1336mzz(Z) at hand"
