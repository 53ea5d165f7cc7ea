"""Balances of the control volumes: they close, and a spoiled value opens them."""
from __future__ import annotations

import dataclasses

import pytest
from check_cases import Solved, by_id, heat_pump_text, solve_text, with_value

from calcpack.checks.closures import energy_balances, entropy_balances, mass_balances, whole_of
from calcpack.errors import BrokenLawError
from calcpack.methods.starter import starter
from calcpack.plan.facts import Facts, Flow, Volume
from calcpack.plan.plan import Section
from calcpack.solving.solution import Solution


def with_volumes(solution: Solution, *volumes: Volume) -> Solution:
    """The solution with other control volumes said of it."""
    facts = Facts(volumes=list(volumes))
    return dataclasses.replace(solution, plan=dataclasses.replace(solution.plan, facts=facts))


def test_every_balance_of_the_heat_pump_closes(heat_pump: Solved) -> None:
    entries = (*mass_balances(*heat_pump), *energy_balances(*heat_pump), *entropy_balances(*heat_pump))
    assert {entry["status"] for entry in entries} == {"ok"}
    titles = [entry["text"] for entry in entries if entry["group"] == "Energy balance"]
    assert titles == ["Compressor", "Expansion valve", "Condenser", "Evaporator", "Whole machine",
                      "Equipment taken together"]


def test_entropy_of_the_whole_is_the_sum_of_its_parts(heat_pump: Solved) -> None:
    found = {entry["text"]: float(entry["value"].split()[0]) for entry in entropy_balances(*heat_pump)}
    parts = sum(found[name] for name in ("Compressor", "Expansion valve", "Condenser", "Evaporator"))
    assert found["Equipment taken together"] == pytest.approx(parts, rel=1e-3)


def test_the_valves_entropy_is_what_its_end_states_say(heat_pump: Solved) -> None:
    solution, record = heat_pump
    value = solution.value
    expected = value("m_dot_wf") * (value("s_4") - value("s_3")) / 1e3
    found = {entry["text"]: entry["value"] for entry in entropy_balances(solution, record)}
    assert found["Expansion valve"].endswith("kW/K")
    assert float(found["Expansion valve"].split()[0]) == pytest.approx(expected, rel=2e-4)


@pytest.mark.parametrize(("symbol", "equipment"), [
    ("W_dot_shaft", "compressor"), ("h_4", "expansion valve"), ("m_dot_sink", "condenser"),
    ("h_source_out", "evaporator")])
def test_a_value_spoiled_by_a_thousandth_opens_the_balance_of_its_equipment(
        heat_pump: Solved, symbol: str, equipment: str) -> None:
    solution, record = heat_pump
    spoiled = with_value(solution, **{symbol: solution.value(symbol) * 1.001})
    with pytest.raises(BrokenLawError) as raised:
        energy_balances(spoiled, record)
    assert f"the energy balance of the {equipment} is open by" in raised.value.faults[0].what
    assert raised.value.exit_status == 3
    assert " in, " in raised.value.faults[0].found


def test_a_flipped_sign_in_the_plan_is_found(monkeypatch: pytest.MonkeyPatch) -> None:
    plain = Section.formula

    def flipped(self: Section, symbol: str, formula: str, *rest: object, **more: object) -> str:
        wrong = formula.replace("+", "-", 1) if symbol == "h_2" else formula
        return plain(self, symbol, wrong, *rest, **more)
    monkeypatch.setattr(Section, "formula", flipped)
    solution, record = solve_text(starter("vapour-compression", {
        "evaporating": "temperature", "condensing": "temperature", "source_stream": "none", "sink_stream": "none"}))
    assert record.step("h_2")["formula"] == "h_1 - (1 - f_loss) * w_comp"
    with pytest.raises(BrokenLawError, match="the energy balance of the compressor is open"):
        energy_balances(solution, record)


def test_destroyed_entropy_is_an_error_that_names_the_machine(heat_pump: Solved) -> None:
    solution, record = heat_pump
    spoiled = with_value(solution, s_4=solution.value("s_3") - 1.0)
    with pytest.raises(BrokenLawError, match="the expansion valve destroys entropy: -") as raised:
        entropy_balances(spoiled, record)
    assert "W/K" in raised.value.faults[0].found


def test_mass_that_vanishes_is_an_error(heat_pump: Solved) -> None:
    solution, record = heat_pump
    leak = Volume("leaking pipe", (Flow("m_dot_wf", "h_1"),), (Flow("m_dot_sink", "h_1"),), scale="W_dot_shaft")
    with pytest.raises(BrokenLawError, match="the mass balance of the leaking pipe is open"):
        mass_balances(with_volumes(solution, leak), record)


def test_entropy_is_not_evaluated_where_a_flow_has_none(heat_pump: Solved) -> None:
    solution, record = heat_pump
    pipe = Volume("pipe", (Flow("m_dot_wf", "h_1"),), (Flow("m_dot_wf", "h_1"),), scale="W_dot_shaft")
    entry, = entropy_balances(with_volumes(solution, pipe), record)
    assert entry["status"] == "not evaluated"
    assert entry["detail"].startswith("entropy not evaluated")


def cooled(T: str | None) -> Volume:
    """Gas cooled from state 2 to 3, its heat leaving at the temperature of a symbol, or at none stated."""
    return Volume("cooler", (Flow("m_dot_wf", "h_2", "s_2"),), (Flow("m_dot_wf", "h_3", "s_3"),),
                  heat_out=(("Q_dot_sink", T),), scale="Q_dot_sink")


def test_heat_that_leaves_at_an_unstated_temperature_decides_nothing(heat_pump: Solved) -> None:
    solution, record = heat_pump
    entry, = entropy_balances(with_volumes(solution, cooled(None)), record)
    assert entry["status"] == "not evaluated"


def test_heat_that_leaves_at_a_stated_temperature_counts_with_it(heat_pump: Solved) -> None:
    solution, record = heat_pump
    value = solution.value
    entry, = entropy_balances(with_volumes(solution, cooled("T_sink_in")), record)
    expected = value("m_dot_wf") * (value("s_3") - value("s_2")) + value("Q_dot_sink") / value("T_sink_in")
    assert float(entry["value"].split()[0]) == pytest.approx(expected / 1e3, rel=1e-3)
    # Heat cannot leave at a temperature above the fluid's own.
    with pytest.raises(BrokenLawError, match="the cooler destroys entropy"):
        entropy_balances(with_value(with_volumes(solution, cooled("T_2")), T_2=420.0), record)


def test_heat_that_enters_at_an_unstated_temperature_can_still_break_the_law(heat_pump: Solved) -> None:
    solution, record = heat_pump
    heater = Volume("heater", (Flow("m_dot_wf", "h_2", "s_2"),), (Flow("m_dot_wf", "h_3", "s_3"),),
                    heat_in=(("Q_dot_sink", None),), scale="Q_dot_sink")
    with pytest.raises(BrokenLawError, match="the heater destroys entropy"):
        entropy_balances(with_volumes(solution, heater), record)


def test_the_whole_keeps_only_what_crosses_its_boundary(heat_pump: Solved) -> None:
    solution, _ = heat_pump
    whole = whole_of(solution.plan.facts.volumes, solution)
    assert {flow.m_dot for flow in (*whole.flows_in, *whole.flows_out)} == {"m_dot_source", "m_dot_sink"}
    assert whole.work_in == ("W_dot_shaft",)


def test_residuals_are_told_in_the_units_of_the_sheet() -> None:
    solution, record = solve_text(heat_pump_text(units="us"))
    by = by_id(entropy_balances(solution, record))
    assert by["V-S1"]["value"].endswith("Btu/(h·°R)")
    assert by_id(energy_balances(solution, record))["V-E1"]["allowed"].endswith("kBtu/h")
