"""Combined plant: every option solves and closes, two pressures cool the gas further, faults say what to change."""
from __future__ import annotations

from collections.abc import Callable, Mapping
from pathlib import Path

import pytest

from calcpack.errors import NoAnswerError, SpecError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec
from calcpack.record import Record

Solve = Callable[..., Record]


@pytest.fixture
def solve(tmp_path: Path) -> Solve:
    """``solve(options, inputs)`` is the record of the starter's spec."""
    def run(options: Mapping[str, str] | None = None, inputs: Mapping[str, str] | None = None) -> Record:
        (tmp_path / "plant.yaml").write_text(starter("combined-plant", dict(options or {})), "utf-8")
        return solve_spec(tmp_path / "plant.yaml", dict(inputs or {}))
    return run


def value(record: Record, symbol: str) -> float:
    return next(one["value"] for one in (*record.data["steps"], *record.data["inputs"]) if one["symbol"] == symbol)


@pytest.mark.parametrize("options", [
    {}, {"pressures": "2"}, {"gas": "cycle"}, {"gas": "cycle", "pressures": "2", "cooling": "outlet"},
    {"stack": "temperature", "cooling": "flow", "condensing": "temperature"},
], ids=lambda options: " ".join(f"{name}={one}" for name, one in options.items()) or "defaults")
def test_each_arrangement_closes_its_balances_and_can_be_done_again_from_print(solve: Solve,
        options: dict[str, str]) -> None:
    record = solve(options)
    assert not [f"{one['id']} {one['text']}: "
                f"{one['value']}" for one in record.data["checks"] if one["status"] == "fails"]
    groups = {one["group"] for one in record.data["checks"] if one["status"] == "ok"}
    assert {"Energy balance", "Mass balance", "Re-done from print"} <= groups


def test_the_pinch_is_where_the_profile_is_narrowest_but_for_the_approach(solve: Solve) -> None:
    record = solve({}, {"dT_pinch_hp": "12 K", "dT_app_hp": "0.001 K"})
    assert value(record, "dT_min_hr") == pytest.approx(12.0, abs=0.01)
    assert record.data["exchangers"][0]["pinch"]["dT"]["value"] == pytest.approx(12.0, abs=0.01)


def test_a_set_stack_temperature_and_the_pinch_it_leads_to_are_each_others_inverse(solve: Solve) -> None:
    by_pinch = solve({}, {"dT_app_hp": "0.0001 K"})
    by_stack = solve({"stack": "temperature"}, {"T_stack": f"{value(by_pinch, 'T_gas_out')!r} K"})
    assert value(by_stack, "m_dot_hp") == pytest.approx(value(by_pinch, "m_dot_hp"), rel=1e-9)
    assert value(by_stack, "dT_min_hr") == pytest.approx(value(by_pinch, "dT_pinch_hp"), abs=1e-3)


def test_a_second_pressure_cools_the_gas_further_and_gives_more_power(solve: Solve) -> None:
    one, two = solve({}, {"p_hp": "80 bar", "T_hp": "520 degC"}), solve({"pressures": "2"})
    assert value(two, "T_gas_out") < value(one, "T_gas_out")
    assert value(two, "W_dot_net") > value(one, "W_dot_net")
    assert value(two, "E_dot_stack") < value(one, "E_dot_stack")


def test_power_stays_below_the_exergy_of_the_exhaust_and_that_below_its_heat(solve: Solve) -> None:
    record = solve({"pressures": "2"})
    heat = value(record, "m_dot_gas") * (value(record, "h_gas_in") - value(record, "h_gas_0"))
    assert value(record, "W_dot_snet") < value(record, "W_dot_rev_taken") < value(record, "W_dot_rev") < heat


def test_the_steam_side_adds_to_the_gas_turbine(solve: Solve) -> None:
    record = solve({"gas": "cycle"})
    assert value(record, "eta_g") < value(record, "eta_cc") < value(record, "eta_C")
    gas = value(record, "W_dot_gnet") / value(record, "Q_dot_fuel")
    assert value(record, "eta_cc") == pytest.approx(gas + value(record, "W_dot_snet") / value(record, "Q_dot_fuel"),
        rel=1e-12)
    assert "gas" in {state["fluid_role"] for state in record.data["states"]}


@pytest.mark.parametrize(("options", "inputs", "words"), [
    ({}, {"T_gas_in": "470 degC"}, "the gas is colder than the steam"),
    ({}, {"T_hp": "200 degC"}, "the steam is not superheated"),
    ({"stack": "temperature"}, {"T_stack": "80 degC"}, "temperatures cross in the steam generator"),
    ({"pressures": "2"}, {"p_lp": "90 bar"}, "the pressures do not fall"),
    ({}, {"T_0": "60 degC"}, "the dead state is warmer than the condenser"),
    ({"gas": "cycle"}, {"T_g3": "350 degC"}, "hotter than the turbine inlet"),
])
def test_numbers_without_an_answer_say_what_to_change(solve: Solve, options: dict, inputs: dict, words: str) -> None:
    with pytest.raises(NoAnswerError) as caught:
        solve(options, inputs)
    fault = caught.value.faults[0]
    assert words in fault.what
    assert fault.hint


def test_a_stack_temperature_with_two_pressures_is_told_before_any_number() -> None:
    with pytest.raises(SpecError, match="needs option pressures: 1"):
        starter("combined-plant", {"stack": "temperature", "pressures": "2"})
