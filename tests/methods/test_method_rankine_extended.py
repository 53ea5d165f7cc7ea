"""Organic Rankine: above the critical pressure, greatest power, carrier loop, pumps and fans, blends, size."""
from __future__ import annotations

from itertools import pairwise
from pathlib import Path

import pytest

from calcpack.errors import CalcpackError
from calcpack.pipeline import solve_spec

METHOD = "organic-rankine"
ABOVE = {"evaporating": "supercritical", "expander_inlet": "temperature"}
LOOP = {"loop": "yes", "evaporating": "pinch"}


def refused(spec_text, options, inputs=None):
    """What is wrong with a case that cannot be solved, in one text."""
    with pytest.raises(CalcpackError) as caught:
        base = spec_text(METHOD)
        for name, value in options.items():
            base = "\n".join(f"    {name}: {value}" if line.startswith(f"    {name}: ") else line
                             for line in base.splitlines())
        solve_spec(Path("t.yaml"), inputs, text=base, name="t.yaml")
    return "; ".join(fault.what for fault in caught.value.faults)


def test_above_the_critical_pressure_the_heater_has_no_zones_and_keeps_its_pinch(arranged):
    solution = arranged(METHOD, {**ABOVE, "recuperator": "yes"})
    assert solution.value("p_e") > solution.value("p_crit_wf")
    assert solution.value("dT_min_h") == pytest.approx(15.0, abs=1e-6)
    assert not solution.has("T_e") and not solution.has("h_f_e")
    parts = [solution.value(f"Q_dot_h{index}p") for index in range(1, 5)]
    assert parts == pytest.approx([solution.value("Q_dot_h") / 4] * 4, rel=1e-9)
    assert sum(solution.value(f"UA_h{index}p") for index in range(1, 5)) == pytest.approx(solution.value("UA_h"),
                                                                                          rel=1e-12)


def test_no_temperature_of_a_supercritical_heater_stands_still(arranged):
    solution = arranged(METHOD, ABOVE)
    table = solution.program.tables["dT_min_h"]
    at = [column.symbol for column in solution.step("dT_min_h").columns].index("T_x_h")
    temperatures = [row[at] for row in table]
    assert all(after > before + 0.5 for before, after in pairwise(temperatures))


@pytest.mark.parametrize("symbol, unit, options", [
    ("T_e", "K", {"evaporating": "optimum", "recuperator": "yes"}),
    ("dT_sh", "K", {"expander_inlet": "optimum"})])
def test_the_greatest_power_is_greater_than_on_either_side(arranged, symbol, unit, options):
    best = arranged(METHOD, options)
    given = {"T_e": {"evaporating": "temperature"}, "dT_sh": {"expander_inlet": "superheated"}}[symbol]
    at = best.value(symbol)
    powers = [arranged(METHOD, {**options, **given}, {symbol: f"{at + move!r} {unit}"}).value("W_dot_net")
              for move in (-3.0, 0.0, 3.0)]
    assert powers[1] == pytest.approx(best.value("W_dot_net"), rel=1e-7)
    assert powers[0] < powers[1] > powers[2]


def test_a_cool_source_asks_for_a_level_far_below_it(arranged):
    solution = arranged(METHOD, {"evaporating": "optimum", "condensing": "temperature"}, {
        "T_source_in": "150 degC", "T_source_min": "60 degC", "p_source": "10 bar", "m_dot_source": "10 kg/s"},
        {"source": "water", "wf": "R-245fa"})
    assert 350.0 < solution.value("T_e") < 390.0
    assert solution.value("dT_min_h") == pytest.approx(15.0, abs=1e-5)


def test_a_carrier_loop_keeps_both_pinches_and_all_heat(arranged):
    solution = arranged(METHOD, LOOP)
    assert solution.value("dT_min_h") == pytest.approx(10.0, abs=1e-6)
    assert solution.value("dT_min_l") >= 10.0 - 1e-6
    loop = solution.value("m_dot_loop") * (solution.value("h_loop_in") - solution.value("h_loop_out"))
    source = solution.value("m_dot_source") * (solution.value("h_source_in") - solution.value("h_source_out"))
    assert loop == pytest.approx(source, rel=1e-9) == pytest.approx(solution.value("Q_dot_h"), rel=1e-9)


def test_a_loop_costs_power_against_the_same_heat_taken_at_once(arranged):
    at_once = arranged(METHOD, {"evaporating": "pinch"}, {"T_source_in": "280 degC", "T_source_set": "120 degC",
                                                          "dT_pinch_h": "30 K"})
    through = arranged(METHOD, LOOP)
    assert through.value("Q_dot_h") == pytest.approx(at_once.value("Q_dot_h"), rel=1e-6)
    assert through.value("W_dot_net") < at_once.value("W_dot_net")


def test_pumps_and_fans_draw_flow_times_rise_over_efficiency(arranged):
    options = {"auxiliaries": "computed", "loop": "yes"}
    solution = arranged(METHOD, options, {"dp_sink": "2 bar", "eta_sink_aux": "0.5", "W_dot_other": "3 kW"})
    flow = solution.value("m_dot_sink") / solution.value("rho_sink")
    assert solution.value("W_dot_sink_aux") == pytest.approx(flow * 2e5 / 0.5, rel=1e-12)
    parts = sum(solution.value(f"W_dot_{role}_aux") for role in ("source", "sink", "loop"))
    assert solution.value("W_dot_aux") == pytest.approx(3000.0 + parts, rel=1e-12)


def test_air_moved_by_fans_cools_the_condenser(arranged):
    inputs = {"T_sink_in": "15 degC", "T_sink_out": "25 degC", "p_sink": "1.013 bar", "dp_sink": "150 Pa"}
    solution = arranged(METHOD, {"auxiliaries": "computed"}, inputs, {"sink": "air"})
    # Air near 15 °C has 1.22 kg/m³ (from memory): 10 K of warming takes about 0.8 m³/s for each 10 kW.
    assert solution.value("rho_sink") == pytest.approx(1.22, abs=0.02)
    assert 0.0 < solution.value("W_dot_sink_aux") < 0.25 * solution.value("W_dot_gen")


def test_the_size_parameter_is_that_of_its_definition(arranged):
    solution = arranged(METHOD)
    flow, work = solution.value("V_dot_4"), solution.value("h_3") - solution.value("h_4s")
    assert solution.value("SP") == pytest.approx(flow ** 0.5 / work ** 0.25, rel=1e-12)
    assert solution.value("r_v") == pytest.approx(solution.value("v_4") / solution.value("v_3"), rel=1e-12)


def test_a_blend_glides_in_the_heater_and_in_the_condenser(arranged):
    solution = arranged(METHOD, {"evaporating": "pressure"}, {
        "T_source_in": "110 degC", "p_source": "5 bar", "T_source_min": "50 degC", "p_e": "22 bar"},
        {"source": "water", "wf": "R-454C"})
    assert 2.0 < solution.value("T_e") - solution.value("T_bub_e") < 10.0
    assert 2.0 < solution.value("T_c") - solution.value("T_bub_c") < 12.0
    assert solution.value("dT_min_h") >= 15.0 - 1e-6


@pytest.mark.parametrize("options", [
    {**ABOVE, "recuperator": "yes"}, {"evaporating": "optimum", "recuperator": "yes"}, {**LOOP,
                                                                                        "auxiliaries": "computed"}])
def test_every_number_can_be_done_again_and_every_balance_closes(spec_text, options):
    record = solve_spec(Path("t.yaml"), text=spec_text(METHOD, options), name="t.yaml")
    checks = {one["id"]: one for one in record.data["checks"]}
    assert checks["V-H"]["status"] == "ok"
    assert not [one for one in checks.values() if one["status"] == "fails"]
    texts = [one["text"] for one in checks.values() if one["group"] == "Energy balance"]
    assert ("Loop heater" in texts) == ("loop" in options)


@pytest.mark.parametrize("options, inputs, what", [
    ({"evaporating": "supercritical"}, {},
     "option expander_inlet: saturated has no meaning above the critical pressure"),
    ({"evaporating": "optimum", "expander_inlet": "temperature"}, {}, "leaves no room for an evaporating level"),
    ({"evaporating": "pinch", "expander_inlet": "optimum"}, {}, "optimum needs a given evaporating level"),
    ({"evaporating": "optimum", "source_stream": "none"}, {}, "option evaporating: optimum needs a source stream"),
    ({"loop": "yes", "evaporating": "optimum"}, {}, "with a carrier loop the heat taken is the loop's"),
    ({"loop": "yes", "source_stream": "none"}, {}, "option loop: yes needs a source stream"),
    ({"auxiliaries": "computed", "source_stream": "none", "sink_stream": "none", "condensing": "temperature"}, {},
     "option auxiliaries: computed needs a stream"),
])
def test_options_that_contradict_one_another_are_told_before_any_number(spec_text, options, inputs, what):
    assert what in refused(spec_text, options, inputs)


@pytest.mark.parametrize("options, inputs, what", [
    (ABOVE, {"p_e": "40 bar"}, "the high pressure is not above the critical pressure"),
    ({"expander_inlet": "temperature"}, {"T_3": "120 degC"}, "the expander inlet is not warmer than the evaporating"),
    ({"loop": "yes"}, {"T_loop_in": "275 degC", "p_loop": "80 bar"}, "the source is not hot enough for the loop"),
    ({"loop": "yes"}, {"T_loop_in": "145 degC"}, "the temperatures cross in the heater"),
])
def test_what_no_engine_can_do_says_what_to_change(arranged, options, inputs, what):
    with pytest.raises(CalcpackError) as caught:
        arranged(METHOD, options, inputs)
    fault = caught.value.faults[0]
    assert what in fault.what and fault.hint


def test_the_profiles_name_the_fluids_on_both_sides(arranged):
    from calcpack.figures.exchanger_profile import profile_of
    from calcpack.record.build import build_record
    data = build_record(arranged(METHOD, LOOP)).data
    named = {one["title"]: profile_of(data, one) for one in data["exchangers"]}
    assert (named["Loop heater"].hot_name, named["Loop heater"].cold_name) == ("source, air", "loop, water")
    assert (named["Heater"].hot_name, named["Heater"].cold_name) == ("loop, water", "cyclopentane")
    assert (named["Condenser"].hot_name, named["Condenser"].cold_name) == ("cyclopentane", "sink, water")
