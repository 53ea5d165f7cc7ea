"""Reciprocating engines and regenerative gas cycles: what a thermal engineer would expect of the numbers."""
from __future__ import annotations

from itertools import pairwise, product
from math import exp, log

import pytest

from calcpack.errors import NoAnswerError, SpecError

ENGINE, REGENERATIVE = "gas-engine", "regenerative-gas-cycle"
COLD = {"gas": "cold-air"}
CLOSED_FORMS = {
    "otto": lambda v: 1.0 - v["r"] ** (1.0 - v["gamma"]),
    "diesel": lambda v: 1.0 - v["r"] ** (1.0 - v["gamma"]) * (v["r_c"] ** v["gamma"] - 1.0)
    / (v["gamma"] * (v["r_c"] - 1.0)),
    "dual": lambda v: 1.0 - v["r"] ** (1.0 - v["gamma"]) * (v["r_h"] * v["r_c"] ** v["gamma"] - 1.0)
    / (v["r_h"] - 1.0 + v["gamma"] * v["r_h"] * (v["r_c"] - 1.0)),
    "atkinson": lambda v: 1.0 - v["gamma"] * (v["r_e"] - v["r"]) / (v["r_e"] ** v["gamma"] - v["r"] ** v["gamma"]),
}


def rises(values):
    return all(a < b for a, b in pairwise(values))


@pytest.mark.parametrize("cycle", CLOSED_FORMS)
@pytest.mark.parametrize("heat", ["temperature", "heat"])
def test_with_constant_heat_capacities_the_closed_form_is_met(arranged, cycle, heat):
    solution = arranged(ENGINE, {"cycle": cycle, "heat": heat, **COLD})
    assert solution.value("eta") == pytest.approx(CLOSED_FORMS[cycle](solution.values), rel=1e-12)


@pytest.mark.parametrize("cycle, gas", list(product(CLOSED_FORMS, ("cold-air", "air-standard"))))
def test_entropy_is_kept_along_the_adiabats_and_comes_back(arranged, cycle, gas):
    solution = arranged(ENGINE, {"cycle": cycle, "gas": gas})
    hot, end = ("4", "5") if cycle == "dual" else ("3", "4")
    assert solution.value("s_2") == pytest.approx(solution.value("s_1"), abs=1e-6)
    assert solution.value(f"s_{end}") == pytest.approx(solution.value(f"s_{hot}"), abs=1e-6)


@pytest.mark.parametrize("cycle, gas, heat", list(product(("diesel", "dual"), ("cold-air", "air-standard"),
                                                          ("temperature", "heat", "cut-off"))))
def test_the_ways_to_give_the_heat_lead_to_one_cycle(arranged, cycle, gas, heat):
    base = arranged(ENGINE, {"cycle": cycle, "gas": gas, "heat": "temperature"})
    hot = "T_4" if cycle == "dual" else "T_3"
    same = {"temperature": {hot: f"{base.value(hot)!r} K"}, "heat": {"q_in": f"{base.value('q_in')!r} J/kg"},
            "cut-off": {"r_c": f"{base.value('r_c')!r}"}}[heat]
    again = arranged(ENGINE, {"cycle": cycle, "gas": gas, "heat": heat}, same)
    for symbol in ("eta", "w_net", "p_m", hot):
        assert again.value(symbol) == pytest.approx(base.value(symbol), rel=1e-8), symbol


def test_varying_heat_capacities_lower_the_efficiency(arranged):
    for cycle in CLOSED_FORMS:
        varying, constant = arranged(ENGINE, {"cycle": cycle}), arranged(ENGINE, {"cycle": cycle, **COLD})
        assert 0.8 * constant.value("eta") < varying.value("eta") < constant.value("eta")


def test_efficiency_rises_with_the_compression_ratio(arranged):
    for cycle in ("otto", "diesel"):
        assert rises([arranged(ENGINE, {"cycle": cycle}, {"r": r}).value("eta") for r in ("8", "11", "14")])


def test_expansion_to_the_first_pressure_gives_more_work_of_the_same_heat(arranged):
    otto, atkinson = arranged(ENGINE, {"cycle": "otto"}), arranged(ENGINE, {"cycle": "atkinson"})
    assert atkinson.value("q_in") == pytest.approx(otto.value("q_in"), rel=1e-12)
    assert atkinson.value("w_net") > otto.value("w_net")
    assert atkinson.value("r_e") > atkinson.value("r")


def test_a_dual_cycle_without_its_first_step_is_a_diesel_cycle(arranged):
    diesel = arranged(ENGINE, {"cycle": "diesel"})
    dual = arranged(ENGINE, {"cycle": "dual"}, {"r_h": "1.000000001"})
    assert dual.value("eta") == pytest.approx(diesel.value("eta"), rel=1e-7)


def test_power_is_mean_effective_pressure_times_swept_volume_each_cycle(arranged):
    two, four = (arranged(ENGINE, {"size": size}) for size in ("two-stroke", "four-stroke"))
    assert four.value("W_dot") == pytest.approx(four.value("p_m") * 2e-3 * 25.0, rel=1e-12)
    assert two.value("W_dot") == pytest.approx(2.0 * four.value("W_dot"), rel=1e-12)
    assert two.value("Q_dot_in") * two.value("eta") == pytest.approx(two.value("W_dot"), rel=1e-12)
    cylinder = arranged(ENGINE, {"size": "cylinder"})
    swept = cylinder.value("V_1") * (1.0 - 1.0 / cylinder.value("r"))
    assert cylinder.value("W_net") == pytest.approx(cylinder.value("p_m") * swept, rel=1e-12)


@pytest.mark.parametrize("options, inputs, what", [
    ({"cycle": "otto"}, {"T_3": "200 degC"},
     "the highest temperature is not above that before the heat is taken"),
    ({"cycle": "otto", "heat": "heat"}, {"q_in": "4000 kJ/kg"},
     "the heat brings the gas above the range of its equation"),
    ({"cycle": "diesel", "gas": "cold-air", "heat": "heat"}, {"r": "17", "q_in": "16 MJ/kg"},
     "the heat at constant pressure lasts beyond the end of the stroke"),
    ({"cycle": "dual", "heat": "heat"}, {"q_in": "200 kJ/kg"},
     "the heat at constant volume is more than all the heat"),
    ({"cycle": "diesel", "gas": "cold-air", "heat": "cut-off"}, {"r": "4", "r_c": "4.5"},
     "the heat at constant pressure lasts beyond the end of the stroke")])
def test_what_no_engine_can_do_is_told(arranged, options, inputs, what):
    with pytest.raises(NoAnswerError) as caught:
        arranged(ENGINE, options, inputs)
    assert caught.value.faults[0].what == what
    assert caught.value.faults[0].hint


def test_a_cut_off_needs_heat_at_constant_pressure(arranged):
    with pytest.raises(SpecError, match="cut-off needs heat at constant pressure"):
        arranged(ENGINE, {"cycle": "otto", "heat": "cut-off"})


@pytest.mark.parametrize("method", [ENGINE, REGENERATIVE, "gas-turbine", "reversed-gas-cycle"])
def test_a_fluid_that_is_no_ideal_gas_is_refused(arranged, method):
    with pytest.raises(SpecError, match="must be an ideal gas") as caught:
        arranged(method, fluids={"air": "{fluid: air, model: Helmholtz}"})
    assert "model: ideal gas" in caught.value.faults[0].hint


@pytest.mark.parametrize("cycle, gas", list(product(("stirling", "ericsson"), ("cold-air", "air-standard"))))
def test_a_perfect_regenerator_reaches_carnot_and_none_falls_far_below(arranged, cycle, gas):
    options = {"cycle": cycle, "gas": gas}
    perfect, none = (arranged(REGENERATIVE, options, {"epsilon": value}) for value in ("1", "0"))
    assert perfect.value("eta") == pytest.approx(perfect.value("eta_C"), rel=1e-12)
    assert none.value("eta") < 0.6 * none.value("eta_C")
    assert rises([arranged(REGENERATIVE, options, {"epsilon": value}).value("eta") for value in ("0", "0.5",
                                                                                                 "0.9", "1")])


def test_work_does_not_hang_on_the_regenerator(arranged):
    works = {round(arranged(REGENERATIVE, inputs={"epsilon": value}).value("w_net"), 9) for value in ("0",
                                                                                                      "0.5",
                                                                                                      "1")}
    assert len(works) == 1


def test_size_of_a_regenerative_engine(arranged):
    stirling = arranged(REGENERATIVE, {"size": "flow"})
    assert stirling.value("W_dot") == pytest.approx(0.005 * 25.0 * stirling.value("w_net"), rel=1e-12)
    ericsson = arranged(REGENERATIVE, {"size": "flow", "cycle": "ericsson"})
    assert ericsson.value("W_dot") == pytest.approx(ericsson.value("w_net"), rel=1e-12)


@pytest.mark.parametrize("gas", ["cold-air", "air-standard"])
@pytest.mark.parametrize("kind", ["p-v", "T-s"])
def test_the_lines_of_the_diagrams_run_through_the_corners_and_keep_their_law(arranged, gas, kind):
    from calcpack.solving.curves import diagrams
    solution = arranged(ENGINE, {"cycle": "diesel", "gas": gas})
    drawn = next(one for one in diagrams(solution) if one["kind"] == kind)
    corners = {point["label"]: (point["x"], point["y"]) for point in drawn["points"]}
    paths = {path["from"]: path for path in drawn["paths"]}
    for path in paths.values():
        assert (path["x"][0], path["y"][0]) == pytest.approx(corners[path["from"]])
        assert (path["x"][-1], path["y"][-1]) == pytest.approx(corners[path["to"]])
    if kind == "p-v":
        assert max(paths["2"]["y"]) == pytest.approx(min(paths["2"]["y"]))
        assert max(paths["4"]["x"]) == pytest.approx(min(paths["4"]["x"]))
        steepness = [log(b / a) / log(d / c) for (a, b),
                     (c, d) in zip(pairwise(paths["1"]["y"]), pairwise(paths["1"]["x"]),
                                                                       strict=True)]
        assert all(-1.41 < one < -1.3 for one in steepness)
    else:
        assert max(paths["1"]["x"]) == pytest.approx(min(paths["1"]["x"]), abs=1e-4)
        middle = exp(0.5 * (log(corners["2"][1] + 273.15) + log(corners["3"][1] + 273.15))) - 273.15
        at_half = next(T for s, T in zip(paths["2"]["x"], paths["2"]["y"], strict=True)
                       if s >= 0.5 * (corners["2"][0] + corners["3"][0]) - 1e-5)
        assert at_half == pytest.approx(middle, rel=0.06)
