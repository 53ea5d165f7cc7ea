"""Bounds, second ways, pinches and ranges: what passes them is found."""
from __future__ import annotations

import dataclasses

import pytest
from check_cases import Solved, by_id, with_value

from calcpack.checks.bounds import bounds, pinches, two_ways
from calcpack.checks.ranges import critical_margins, fluid_ranges
from calcpack.errors import BrokenLawError
from calcpack.plan.facts import Bound, Equal, Facts


def with_facts(solution, **facts):
    """The solution with other facts said of it."""
    return dataclasses.replace(solution, plan=dataclasses.replace(solution.plan, facts=Facts(**facts)))


def test_a_coefficient_of_performance_above_the_reversible_one_is_an_error(heat_pump: Solved) -> None:
    solution, record = heat_pump
    assert bounds(solution, record)[0]["value"] == f"COP = {solution.shown('COP')}"
    with pytest.raises(BrokenLawError, match="a law is broken: COP passes COP_rev"):
        bounds(with_value(solution, COP=solution.value("COP_rev") * 1.0001), record)


def test_a_value_at_its_bound_within_rounding_holds(heat_pump: Solved) -> None:
    solution, record = heat_pump
    at = with_value(solution, COP=solution.value("COP_rev") * (1 + 1e-12))
    assert bounds(at, record)[0]["status"] == "ok"


def test_a_lower_bound_is_passed_from_above(heat_pump: Solved) -> None:
    solution, record = heat_pump
    lower = with_facts(solution, bounds=[Bound("COP", "r_p", "for the test", above=True)])
    assert bounds(lower, record)[0]["allowed"].startswith("at least r_p")
    with pytest.raises(BrokenLawError):
        bounds(with_value(lower, COP=solution.value("r_p") / 2), record)


@pytest.mark.parametrize(("factor", "status"), [(1.0, "ok"), (1 + 1e-10, "ok"), (1 + 1e-8, "fails")])
def test_two_ways_agree_within_their_share(heat_pump: Solved, factor: float, status: str) -> None:
    solution, record = heat_pump
    pair = with_facts(solution, equals=[Equal("h_3", "h_4", "throttling keeps the enthalpy", 1e-9)])
    spoiled = with_value(pair, h_4=solution.value("h_3") * factor)
    assert two_ways(spoiled, record)[0]["status"] == status


def test_two_ways_apart_by_more_than_arithmetic_are_an_error(heat_pump: Solved) -> None:
    solution, record = heat_pump
    pair = with_facts(solution, equals=[Equal("h_3", "h_4", "throttling keeps the enthalpy", 1e-9)])
    with pytest.raises(BrokenLawError, match="two ways to one quantity disagree"):
        two_ways(with_value(pair, h_4=solution.value("h_3") * 1.001), record)


def test_each_exchanger_has_its_pinch_printed_with_its_place(heat_pump: Solved) -> None:
    condenser, evaporator = pinches(*heat_pump)
    assert (condenser["value"], evaporator["value"]) == ("3.00 K", "4.00 K")
    assert condenser["detail"].endswith("condensing, warm end")


@pytest.mark.parametrize("value", [0.0, -0.5])
def test_crossing_temperatures_are_an_error(heat_pump: Solved, value: float) -> None:
    solution, record = heat_pump
    with pytest.raises(BrokenLawError, match="the temperatures cross in the condenser"):
        pinches(with_value(solution, dT_min_c=value), record)


def test_ranges_name_each_fluid_with_what_it_meets(heat_pump: Solved) -> None:
    found = {entry["text"].split(",")[0]: entry for entry in fluid_ranges(*heat_pump)}
    assert set(found) == {"wf", "source", "sink"}
    assert found["sink"]["value"].startswith("328.15 K (55.00 °C) to 343.15 K (70.00 °C)")
    assert found["wf"]["allowed"] == "T 168.62 to 420 K, p up to 15 MPa"


@pytest.mark.parametrize(("symbol", "value"), [("T_2", 421.0), ("T_4", 160.0), ("p_c", 151e5)])
def test_a_state_outside_the_equation_is_found(heat_pump: Solved, symbol: str, value: float) -> None:
    solution, record = heat_pump
    entries = fluid_ranges(with_value(solution, **{symbol: value}), record)
    assert {entry["text"].split(",")[0] for entry in entries if entry["status"] == "fails"} == {"wf"}


def test_a_pressure_in_the_critical_band_is_found(heat_pump: Solved) -> None:
    solution, record = heat_pump
    p_crit = solution.plan.fluids["wf"].reader("p_crit", ())()
    assert by_id(critical_margins(solution, record))["V-C1"]["status"] == "ok"
    assert by_id(critical_margins(with_value(solution, p_c=p_crit * 1.001), record))["V-C1"]["status"] == "fails"
