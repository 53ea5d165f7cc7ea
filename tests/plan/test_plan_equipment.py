"""Equipment lays the steps of its machine: checked with numbers worked out beside them."""
from __future__ import annotations

import math

import pytest

from calcpack.errors import NoAnswerError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.plan.equipment.exchanger import Exchanger, Zone, conductance, log_mean, profile, require_pinch
from calcpack.plan.equipment.machines import compressor, expander, pump, saturation, state, valve
from calcpack.plan.equipment.streams import balance, entropic_mean, inlet_state, stream
from calcpack.plan.plan import Plan

PROPANE = open_fluid(FluidDefinition("propane"))
WATER = open_fluid(FluidDefinition("water"))


def read(fluid, output, **known):
    return fluid.reader(output, tuple(known))(*known.values())


def plan_with(**fluids):
    plan = Plan({}, fluids)
    return plan, plan.section("One")


def test_a_compressor_draws_isentropic_work_over_its_efficiency_and_heats_by_what_it_does_not_lose(run):
    plan, section = plan_with(wf=PROPANE)
    state(section, "1", "wf", "at the inlet", p="p_1", T="T_1")
    compressor(section, "wf", "1", "2", "p_2", "f_loss")
    _, values = run(plan, {"p_1": "4 bar", "T_1": "10 degC", "p_2": "15 bar", "eta_is": "0.7", "f_loss": "0.1"})
    ideal = read(PROPANE, "h", p=15e5, s=values["s_1"]) - values["h_1"]
    assert values["w_comp"] == pytest.approx(ideal / 0.7, rel=1e-12)
    assert values["h_2"] == pytest.approx(values["h_1"] + 0.9 * ideal / 0.7, rel=1e-12)
    assert read(PROPANE, "h", p=15e5, T=values["T_2"]) == pytest.approx(values["h_2"], rel=1e-7)


def test_an_expander_gives_its_efficiencys_share_and_entropy_grows(run):
    plan, section = plan_with(wf=PROPANE)
    state(section, "3", "wf", "at the inlet", p="p_1", T="T_1")
    expander(section, "wf", "3", "4", "p_2")
    _, values = run(plan, {"p_1": "20 bar", "T_1": "110 degC", "p_2": "6 bar", "eta_t": "0.8"})
    ideal = values["h_3"] - read(PROPANE, "h", p=6e5, s=values["s_3"])
    assert values["w_t"] == pytest.approx(0.8 * ideal, rel=1e-12)
    assert values["h_3"] - values["h_4"] == pytest.approx(values["w_t"], rel=1e-12)
    assert values["s_4"] > values["s_3"]


def test_a_pump_draws_about_volume_times_pressure_rise(run):
    plan, section = plan_with(wf=WATER)
    state(section, "1", "wf", "at the inlet", p="p_1", T="T_1")
    pump(section, "wf", "1", "2", "p_2")
    _, values = run(plan, {"p_1": "1 bar", "T_1": "20 degC", "p_2": "50 bar", "eta_p": "0.6"})
    # The liquid is nearly incompressible: w = v Δp / η within the change of v, some 0.1 %.
    assert values["w_p"] == pytest.approx(49e5 / 998.2 / 0.6, rel=2e-3)
    assert values["s_2"] > values["s_1"]


def test_a_valve_keeps_enthalpy(run):
    plan, section = plan_with(wf=PROPANE)
    saturation(section, "c", "wf", "temperature", "Condensing")
    state(section, "3", "wf", "at the inlet", p="p_c", x="0")
    valve(section, "wf", "3", "4", "p_e")
    _, values = run(plan, {"T_c": "40 degC", "p_e": "4 bar"})
    assert values["h_4"] == values["h_3"] and values["s_4"] > values["s_3"]
    assert values["p_c"] == pytest.approx(read(PROPANE, "p", T=313.15, x=1.0), rel=1e-12)


@pytest.mark.parametrize("a, b", [(12.4, 5.1), (5.1, 12.4), (5.0, 5.0), (5.0, 5.0049), (5.0, 5.0051), (0.3, 40.0)])
def test_the_log_mean_of_two_differences(run, a, b):
    plan, section = plan_with()
    log_mean(section, "LMTD", "a", "b", "Mean")
    _, values = run(plan, {"a": f"{a} K", "b": f"{b} K"})
    exact = a if a == b else (a - b) / math.log(a / b)
    assert values["LMTD"] == pytest.approx(exact, rel=1e-7)
    assert min(a, b) <= values["LMTD"] <= max(a, b)


def water_stream(mode, inputs, run, gives_heat=True):
    plan, section = plan_with(source=WATER)
    it = stream(plan, "source", gives_heat=gives_heat, mode=mode)
    inlet_state(section, it)
    balance(section, it, "Q_dot")
    entropic_mean(section, it, "T_m")
    return run(plan, {"p_source": "3 bar", "Q_dot": "100 kW", **inputs})[1]


def test_flow_and_outlet_of_a_stream_follow_from_each_other(run):
    by_outlet = water_stream("outlet", {"T_source_in": "40 degC", "T_source_out": "30 degC"}, run)
    by_flow = water_stream("flow", {"T_source_in": "40 degC", "m_dot_source": f"{by_outlet['m_dot_source']!r} kg/s"},
        run)
    # Water at 35 °C has 4.18 kJ/(kg·K): 100 kW / 41.8 kJ/kg.
    assert by_outlet["m_dot_source"] == pytest.approx(2.392, rel=1e-3)
    assert by_flow["T_source_out"] == pytest.approx(303.15, abs=1e-7)
    assert by_flow["T_m"] == pytest.approx(by_outlet["T_m"], abs=1e-6)
    # The entropic mean of a stream of constant heat capacity is the log-mean of its end temperatures.
    assert by_outlet["T_m"] == pytest.approx(10.0 / math.log(313.15 / 303.15), abs=5e-3)


@pytest.mark.parametrize("gives_heat, text", [(True, "the source does not cool down"), (False,
    "the source does not warm up")])
def test_a_stream_that_goes_the_wrong_way_stops_the_solution(run, gives_heat, text):
    ends = {"T_source_in": "30 degC", "T_source_out": "40 degC"} if gives_heat else {
        "T_source_in": "40 degC", "T_source_out": "30 degC"}
    with pytest.raises(NoAnswerError) as caught:
        water_stream("outlet", ends, run, gives_heat)
    assert caught.value.faults[0].what == text


def evaporator(run, pinch_demand=False, T_out="8 degC"):
    """Propane evaporating at 5 bar against water, the heat given: all ends known."""
    plan, section = plan_with(wf=PROPANE, source=WATER)
    it = stream(plan, "source", gives_heat=True, mode="outlet")
    inlet_state(section, it)
    saturation(section, "e", "wf", "pressure", "Evaporating")
    section.property("h_4", "h(wf, p=p_e, x=0.2)", "Inlet")
    section.property("T_4", "T(wf, p=p_e, x=0.2)", "Inlet")
    section.property("h_g", "h(wf, p=p_e, x=1)", "Vapour")
    section.formula("Q_dot", "m_dot_wf * (h_g - h_4)", "Duty")
    balance(section, it, "Q_dot")
    exchanger = Exchanger("Evaporator", "e", "wf", "p_e", "m_dot_wf", "Q_dot", it, (
        Zone("evaporating", "ee", "h_4", "h_g", "T_4", "T_e"),))
    profile(plan, section, exchanger)
    if pinch_demand:
        require_pinch(plan, exchanger)
    conductance(section, exchanger)
    return run(plan, {"p_e": "5 bar", "m_dot_wf": "0.5 kg/s", "T_source_in": "15 degC", "T_source_out": T_out,
                      "p_source": "3 bar"})


def test_an_exchangers_profile_balances_row_by_row_and_finds_the_pinch(run):
    program, values = evaporator(run)
    rows = program.tables["dT_min_e"]
    assert rows[0][0] == values["h_4"] and rows[-1][0] == pytest.approx(values["h_g"], rel=1e-12)
    for h, T, h_source, T_source, dT in rows:
        assert values["m_dot_source"] * (h_source - values["h_source_out"]) == pytest.approx(
            0.5 * (h - values["h_4"]), rel=1e-9, abs=1e-6)
        assert read(WATER, "h", p=3e5, T=T_source) == pytest.approx(h_source, rel=1e-7)
        assert dT == T_source - T
    assert values["dT_min_e"] == min(row[-1] for row in rows)
    # Evaporating at one temperature, the pinch is where the water leaves.
    assert values["dT_min_e"] == pytest.approx(281.15 - values["T_e"], abs=1e-6)
    assert rows[-1][3] == pytest.approx(288.15, abs=1e-6)


def test_conductance_times_mean_difference_is_the_duty(run):
    _, values = evaporator(run)
    a, b = 281.15 - values["T_4"], 288.15 - values["T_e"]
    assert values["UA_ee"] * (a - b) / math.log(a / b) == pytest.approx(values["Q_dot"], rel=1e-6)


def test_temperatures_that_cross_stop_the_solution(run):
    with pytest.raises(NoAnswerError) as caught:
        evaporator(run, pinch_demand=True, T_out="0.5 degC")
    fault = caught.value.faults[0]
    assert fault.what == "the temperatures cross in the evaporator"
    assert fault.expected == "dT_min_e > 0 K"
