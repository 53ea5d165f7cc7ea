"""Gas turbines and reversed gas cycles: what a thermal engineer would expect of the numbers."""
from __future__ import annotations

import re
from itertools import pairwise
from pathlib import Path

import pytest

from calcpack.errors import NoAnswerError, SpecError
from calcpack.pipeline import solve_spec

TURBINE, REVERSED = "gas-turbine", "reversed-gas-cycle"
IDEAL = {"eta_c": "1", "eta_t": "1"}


def rises(values):
    return all(a < b for a, b in pairwise(values))


def test_with_constant_heat_capacities_and_ideal_machines_the_pressure_ratio_alone_sets_the_efficiency(arranged):
    for T_t in ("900 degC", "1200 degC"):
        solution = arranged(TURBINE, {"gas": "cold-air"}, {**IDEAL, "T_t": T_t})
        assert solution.value("eta") == pytest.approx(1.0 - 12.0 ** (-0.4 / 1.4), rel=1e-12)


def test_most_work_of_an_ideal_plant_is_at_the_known_ratio(arranged):
    solution = arranged(TURBINE, {"gas": "cold-air", "pressure_ratio": "most-work"}, IDEAL)
    known = (solution.value("T_t") / solution.value("T_1")) ** (1.4 / 0.8)
    assert solution.value("r_p") == pytest.approx(known, rel=1e-4)
    most = solution.value("w_net")
    for share in (0.8, 1.25):
        beside = arranged(TURBINE, {"gas": "cold-air"}, {**IDEAL, "r_p": f"{share * known:.6f}"})
        assert beside.value("w_net") < most


@pytest.mark.parametrize("options",
                         [{}, {"compressors": "2", "reheats": "1", "regenerator": "yes", "losses": "given"},
                                     {"compressors": "2"}, {"reheats": "2"}])
def test_no_ratio_beside_the_optimum_gives_more_work(arranged, options):
    best = arranged(TURBINE, {**options, "pressure_ratio": "most-work"})
    for share in (0.9, 1.1):
        beside = arranged(TURBINE, options, {"r_p": repr(share * best.value("r_p"))})
        assert beside.value("w_net") < best.value("w_net")


def test_intercooling_and_reheat_raise_the_work_and_lower_the_back_work(arranged):
    for option, values in (("compressors", "1234"), ("reheats", "0123")):
        solutions = [arranged(TURBINE, {option: value}) for value in values]
        assert rises([one.value("w_net") for one in solutions])
        assert rises([-one.value("r_bw") for one in solutions])


def test_a_regenerator_raises_the_efficiency_and_leaves_the_work(arranged):
    without, with_it = (arranged(TURBINE, {"regenerator": value}) for value in ("none", "yes"))
    assert with_it.value("eta") > 1.2 * without.value("eta")
    assert with_it.value("w_net") == pytest.approx(without.value("w_net"), rel=1e-12)
    exhaust = with_it.plan.facts.states[-1].T
    assert with_it.value(exhaust) < without.value("T_4") - 100.0


def test_many_stages_with_a_perfect_regenerator_come_near_carnot(arranged):
    solution = arranged(TURBINE, {"gas": "cold-air", "compressors": "4", "reheats": "3", "regenerator": "yes"},
                        {**IDEAL, "epsilon": "1", "T_ic": "15 degC", "r_p": "2"})
    assert 0.95 < solution.value("eta") / solution.value("eta_C") < 1.0


def test_pressures_lost_and_poorer_machines_cost_efficiency(arranged):
    base = arranged(TURBINE)
    assert arranged(TURBINE, {"losses": "given"}).value("eta") < base.value("eta")
    assert arranged(TURBINE, inputs={"eta_c": "0.8"}).value("eta") < base.value("eta")
    assert arranged(TURBINE, inputs={"eta_t": "0.8"}).value("eta") < base.value("eta")
    none = dict.fromkeys(("f_cc", "f_ex"), "0")
    assert arranged(TURBINE, {"losses": "given"}, none).value("eta") == pytest.approx(base.value("eta"),
                                                                                      rel=1e-12)


def test_equal_split_gives_equal_ratios_also_with_pressures_lost(arranged):
    for losses in ("none", "given"):
        solution = arranged(TURBINE, {"compressors": "3", "reheats": "2", "losses": losses})
        states = {point.number: solution.value(point.p) for point in solution.plan.facts.states}
        for ends in ((("1", "2"), ("3", "4"), ("5", "6")), (("8", "7"), ("10", "9"), ("12", "11"))):
            ratios = [states[high] / states[low] for low, high in ends]
            assert max(ratios) == pytest.approx(min(ratios), rel=1e-12)
        assert states["6"] == pytest.approx(12.0 * states["1"], rel=1e-12)


@pytest.mark.parametrize("size, symbol",
                         [("volume-flow", "V_dot_1"), ("power", "W_dot_net"), ("heat", "Q_dot_in")])
def test_the_ways_to_give_the_size_lead_to_one_plant(arranged, size, symbol):
    base = arranged(TURBINE)
    # R of air from its molar mass, 28.9655 g/mol.
    value = base.value("m_dot") * 287.047 * 288.15 / 1.013e5 if size == "volume-flow" else base.value(symbol)
    unit = "m³/s" if size == "volume-flow" else "W"
    again = arranged(TURBINE, {"size": size}, {symbol: f"{value!r} {unit}"})
    assert again.value("m_dot") == pytest.approx(base.value("m_dot"), rel=5e-6)
    assert again.value("E_dot_ex") == pytest.approx(base.value("E_dot_ex"), rel=5e-6)


def test_heat_rate_and_efficiency_say_the_same(arranged):
    solution = arranged(TURBINE)
    record = next(step for step in solution.plan.steps if step.symbol == "HR")
    assert record.unit.symbol == "kJ/kWh"
    assert record.unit.from_si(solution.value("HR")) == pytest.approx(3600.0 / solution.value("eta_el"),
                                                                      rel=1e-12)


def test_products_burn_the_fuel_that_their_enthalpy_asks_for(arranged):
    solution = arranged(TURBINE, {"gas": "products"})
    value = solution.value
    entering = value("m_dot") * value("h_2") + value("m_dot_f") * 0.99 * 50e6
    assert entering == pytest.approx(value("m_dot_g") * value("h_3"), rel=1e-12)
    assert value("x_CO2") + value("x_H2O") + value("x_O2") + value("x_N2") == pytest.approx(1.0, rel=1e-12)
    # Atoms: each carbon gives one CO2, each two hydrogens one H2O.
    assert value("x_H2O") == pytest.approx(2.0 * value("x_CO2"), rel=1e-12)
    mass = value("x_CO2") * 44.0095 + value("x_H2O") * 18.0153 + value("x_O2") * 31.9988 + value("x_N2") * 28.158
    fuel_and_air = value("M_f") * 1e3 * (1.0 + 1.0 / value("f"))
    assert mass * value("n_g") == pytest.approx(fuel_and_air, rel=2e-3)


def test_products_give_more_work_than_air_alone_at_nearly_the_same_efficiency(arranged):
    air, products = arranged(TURBINE), arranged(TURBINE, {"gas": "products"})
    assert products.value("w_net") > 1.05 * air.value("w_net")
    assert products.value("eta") == pytest.approx(air.value("eta"), rel=0.03)


def test_products_of_another_composition_are_refused_with_the_shares_to_state(spec_text, solution_of):
    text, count = re.subn("composition: {[^}]*}", "composition: {N2: 77 %, O2: 20 %, CO2: 2 %, H2O: 1 %}",
                          spec_text(TURBINE, {"gas": "products"}))
    assert count == 1
    with pytest.raises(NoAnswerError, match="is not that of the products") as caught:
        solution_of(text)
    fault = caught.value.faults[0]
    assert all(f"{name} = 0." in fault.found for name in ("x_CO2", "x_H2O", "x_O2", "x_N2"))
    assert "composition of the fluid gas" in fault.hint


@pytest.mark.parametrize("options, inputs, what", [
    ({}, {"r_p": "80", "eta_c": "0.6"},
     "the plant gives no work: the compressors take all that the turbines give"),
    ({"regenerator": "yes"}, {"r_p": "40"},
     "the exhaust is colder than the air: a regenerator would cool the air"),
    ({"compressors": "2"}, {"T_ic": "200 degC"}, "an intercooler would have to heat the air"),
    ({"compressors": "2"}, {"T_0": "40 degC"}, "the intercoolers cool below the surroundings"),
    ({"reheats": "1"}, {"T_rh": "500 degC"}, "a reheater would have to cool the gas"),
    ({"compressors": "2", "split": "given"}, {"p_ic1": "20 bar"},
     "the pressures do not rise from compressor to compressor"),
    ({"reheats": "1", "split": "given"}, {"p_rh1": "0.5 bar"},
     "the pressures do not fall from turbine to turbine")])
def test_what_no_plant_can_do_is_told(arranged, options, inputs, what):
    with pytest.raises(NoAnswerError) as caught:
        arranged(TURBINE, options, inputs)
    assert caught.value.faults[0].what == what
    assert caught.value.faults[0].hint


@pytest.mark.parametrize("options",
                         [{"gas": "products", "reheats": "1"},
                          {"pressure_ratio": "most-work", "split": "given"}])
def test_contradicting_options_of_a_gas_turbine_are_told(arranged, options):
    with pytest.raises(SpecError) as caught:
        arranged(TURBINE, options)
    assert "set " in caught.value.faults[0].hint


@pytest.mark.parametrize("options", [
    {"compressors": "4", "reheats": "3", "regenerator": "yes", "losses": "given"},
    {"compressors": "2", "reheats": "1", "split": "given", "losses": "given", "gas": "cold-air"},
    {"gas": "products", "compressors": "2", "regenerator": "yes", "losses": "given"},
    {"gas": "products", "compressors": "4", "pressure_ratio": "most-work"}])
def test_arrangements_with_everything_solve_and_no_check_fails(spec_text, options):
    record = solve_spec(Path("test.yaml"), text=spec_text(TURBINE, options))
    assert [check for check in record.data["checks"] if check["status"] == "fails"] == []


@pytest.mark.parametrize("gas", ["cold-air", "air-standard"])
def test_a_reversed_cycle_of_ideal_machines_comes_near_carnot_as_the_ratio_falls(arranged, gas):
    def share(ratio):
        inputs = {**IDEAL, "r_p": ratio, "T_1": "5 degC", "T_3": "10 degC"}
        return arranged(REVERSED, {"gas": gas}, inputs).value("g_rev")
    assert rises([share(ratio) for ratio in ("4", "2", "1.2")])


def test_with_constant_heat_capacities_the_pressure_ratio_alone_sets_the_coefficient(arranged):
    solution = arranged(REVERSED, {"gas": "cold-air"}, IDEAL)
    assert solution.value("COP") == pytest.approx(1.0 / (4.0 ** (0.4 / 1.4) - 1.0), rel=1e-12)
    pump = arranged(REVERSED, {"gas": "cold-air", "duty": "heat-pump"}, IDEAL)
    assert pump.value("COP") == pytest.approx(1.0 / (1.0 - 4.0 ** (-0.4 / 1.4)), rel=1e-12)


def test_a_regenerator_reaches_lower_temperatures_at_a_lower_pressure_ratio(arranged):
    with_it = arranged(REVERSED, {"regenerator": "yes"})
    assert with_it.value("T_5") < arranged(REVERSED).value("T_4")
    assert with_it.value("r_p") < arranged(REVERSED).value("r_p")
    without_effect = arranged(REVERSED, {"regenerator": "yes"}, {"epsilon": "0", "r_p": "4", "T_6": "-20 degC"})
    assert without_effect.value("COP") == pytest.approx(arranged(REVERSED).value("COP"), rel=1e-12)


@pytest.mark.parametrize("inputs, what", [
    ({"T_3": "-25 degC"}, "the hot side is not warmer than the cold side"),
    ({"r_p": "1.5"}, "the compressed gas is not warmer than the hot side")])
def test_what_no_reversed_cycle_can_do_is_told(arranged, inputs, what):
    with pytest.raises(NoAnswerError) as caught:
        arranged(REVERSED, inputs=inputs)
    assert caught.value.faults[0].what == what
