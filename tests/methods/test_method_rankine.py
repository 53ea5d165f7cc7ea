"""Organic Rankine: what a thermal engineer would expect of the numbers."""
from __future__ import annotations

from itertools import pairwise

import pytest

METHOD = "organic-rankine"


def rises(values):
    return all(a < b for a, b in pairwise(values))


def test_a_recuperator_raises_thermal_efficiency_and_net_power_at_a_bounded_outlet(arranged):
    without, with_it = (arranged(METHOD, {"recuperator": value}) for value in ("none", "yes"))
    assert with_it.value("eta_th") > 1.03 * without.value("eta_th")
    assert with_it.value("W_dot_net") > without.value("W_dot_net")
    assert with_it.value("T_source_out") == pytest.approx(without.value("T_source_out"), abs=1e-6)


def test_a_recuperator_passes_on_what_it_takes(arranged):
    solution = arranged(METHOD, {"recuperator": "yes"})
    assert solution.value("h_4") - solution.value("h_6") == pytest.approx(
        solution.value("h_5") - solution.value("h_2"), rel=1e-9)
    assert solution.value("T_6") - solution.value("T_2") == pytest.approx(10.0, abs=1e-9)
    assert solution.value("dT_rec_hot") > 0.0


def test_thermal_efficiency_rises_with_the_evaporating_level(arranged):
    assert rises([arranged(METHOD, inputs={"T_e": T}).value("eta_th") for T in ("110 degC", "140 degC", "170 degC")])


def test_net_power_rises_with_a_hotter_source_and_a_colder_sink(arranged):
    assert rises([arranged(METHOD, inputs={"T_source_in": T}).value("W_dot_net")
                  for T in ("220 degC", "250 degC", "280 degC")])
    colder = arranged(METHOD, inputs={"T_sink_in": "17 degC", "T_sink_out": "22 degC"})
    assert colder.value("W_dot_net") > arranged(METHOD).value("W_dot_net")


def test_efficiencies_of_the_machines_act_as_they_should(arranged):
    base = arranged(METHOD)
    better = arranged(METHOD, inputs={"eta_t": "0.88"})
    assert better.value("w_t") == pytest.approx(base.value("w_t") * 0.88 / 0.80, rel=0.01)
    assert better.value("W_dot_net") > base.value("W_dot_net")
    worse_pump = arranged(METHOD, inputs={"eta_p": "0.5"})
    assert worse_pump.value("w_p") == pytest.approx(base.value("w_p") * 0.65 / 0.5, rel=0.01)


def test_the_lowest_outlet_governs_or_the_pinch_does_and_the_other_has_to_spare(arranged):
    outlet = arranged(METHOD)
    assert outlet.value("T_source_out") == pytest.approx(outlet.value("T_source_min"), abs=1e-6)
    assert outlet.value("dT_min_h") > outlet.value("dT_pinch_h")
    assert outlet.program.held["dT_spare"] == 1
    assert outlet.value("dT_spare") == pytest.approx(outlet.value("dT_min_h") - 15.0, abs=1e-6)
    pinch = arranged(METHOD, inputs={"T_source_min": "30 degC"})
    assert pinch.value("dT_min_h") == pytest.approx(15.0, abs=1e-6)
    assert pinch.value("T_source_out") > pinch.value("T_source_min") + 1.0
    assert pinch.program.held["dT_spare"] == 0
    assert pinch.value("Q_dot_h") > outlet.value("Q_dot_h")


def test_the_level_found_by_the_pinch_is_the_level_that_gives_this_pinch(arranged):
    found = arranged(METHOD, {"evaporating": "pinch"})
    assert found.value("dT_min_h") == pytest.approx(15.0, abs=1e-6)
    assert found.value("T_source_out") == pytest.approx(363.15, abs=1e-6)
    given = arranged(METHOD, inputs={"T_e": f"{found.value('T_e')!r} K", "T_source_in": "180 degC",
                                     "T_source_min": "90 degC"})
    for name in ("W_dot_net", "eta_th", "Q_dot_h", "m_dot_wf", "T_c"):
        assert given.value(name) == pytest.approx(found.value(name), rel=1e-6), name


@pytest.mark.parametrize("given, symbol, unit", [("temperature", "T", "K"), ("pressure", "p", "Pa")])
def test_a_condensing_level_given_as_it_was_found_gives_the_same_engine(arranged, given, symbol, unit):
    found = arranged(METHOD)
    again = arranged(METHOD, {"condensing": given}, {f"{symbol}_c": f"{found.value(f'{symbol}_c')!r} {unit}"})
    for name in ("W_dot_net", "eta_th", "m_dot_wf", "dT_min_c", "UA_c"):
        assert again.value(name) == pytest.approx(found.value(name), rel=1e-7), name


def test_an_evaporating_pressure_given_as_it_was_found_gives_the_same_engine(arranged):
    found = arranged(METHOD)
    again = arranged(METHOD, {"evaporating": "pressure"}, {"p_e": f"{found.value('p_e')!r} Pa"})
    assert again.value("W_dot_net") == pytest.approx(found.value("W_dot_net"), rel=1e-7)


def test_without_a_source_stream_the_flow_alone_sets_the_size(arranged):
    alone = arranged(METHOD, {"source_stream": "none"}, {"m_dot_wf": "2 kg/s"})
    half = arranged(METHOD, {"source_stream": "none"}, {"m_dot_wf": "1 kg/s"})
    assert alone.value("W_dot_net") == pytest.approx(2 * half.value("W_dot_net"), rel=1e-9)
    assert alone.value("eta_th") == pytest.approx(arranged(METHOD).value("eta_th"), rel=1e-6)


def test_hot_water_as_the_source(arranged):
    solution = arranged(METHOD, inputs={"T_source_in": "150 degC", "p_source": "10 bar", "T_source_min": "70 degC",
                                        "T_e": "95 degC", "m_dot_source": "10 kg/s"}, fluids={"source": "water"})
    assert solution.value("dT_min_h") == pytest.approx(15.0, abs=1e-6) or solution.value(
        "T_source_out") == pytest.approx(343.15, abs=1e-6)
    # Water between 110 and 150 °C has about 4.26 kJ/(kg·K) (steam tables).
    cooled = 423.15 - solution.value("T_source_out")
    assert solution.value("Q_dot_h") / 10.0 / cooled == pytest.approx(4250.0, rel=0.01)
    assert 0.05 < solution.value("eta_th") < solution.value("eta_rev")


EXHAUST = "{composition: {N2: 75.5 %, O2: 13.0 %, CO2: 4.5 %, H2O: 7.0 %}, basis: mole}"


def test_a_combustion_gas_carries_a_little_more_heat_than_air(arranged):
    gas, air = arranged(METHOD, fluids={"source": EXHAUST}), arranged(METHOD)
    ratio = gas.value("Q_dot_h") / air.value("Q_dot_h")
    assert 1.02 < ratio < 1.10, "water vapour raises the heat capacity by some per cent"


def test_superheat_is_what_was_asked_and_a_dry_fluid_leaves_dry(arranged):
    solution = arranged(METHOD, {"expander_inlet": "superheated"})
    assert solution.value("T_3") - solution.value("T_e") == pytest.approx(10.0, abs=1e-9)
    assert solution.value("dh_dry") > 0.0


def test_a_wet_exhaust_is_condensed_from_where_it_enters(arranged):
    solution = arranged(METHOD, inputs={"T_e": "110 degC"}, fluids={"wf": "water"})
    assert solution.value("dh_dry") < 0.0
    assert solution.value("h_cv") == solution.value("h_4") < solution.value("h_g_c")
    assert solution.value("dT_min_c") == pytest.approx(5.0, abs=1e-5)
