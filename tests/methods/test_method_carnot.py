"""Carnot's bound and cycle: closed forms worked beside them."""
from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.solving.program import Program


@pytest.mark.parametrize("machine, symbol, figure", [
    ("engine", "eta_rev", 1 - 300 / 600), ("heat-pump", "COP_rev", 600 / 300), ("refrigerator", "COP_rev", 300 / 300)])
def test_reservoirs_at_round_temperatures(arranged, machine, symbol, figure):
    solution = arranged("carnot-bound", {"machine": machine}, {"T_h": "600 K", "T_c": "300 K"})
    assert solution.value(symbol) == pytest.approx(figure, rel=1e-14)


def test_a_heat_pumps_figure_exceeds_a_refrigerators_by_one(arranged):
    inputs = {"T_h": "320 K", "T_c": "280 K"}
    pump, cooler = (arranged("carnot-bound", {"machine": machine}, inputs) for machine in ("heat-pump", "refrigerator"))
    assert pump.value("COP_rev") == pytest.approx(cooler.value("COP_rev") + 1.0, rel=1e-13)


@pytest.mark.parametrize("machine", ["engine", "heat-pump", "refrigerator"])
def test_streams_of_vanishing_glide_are_reservoirs(arranged, machine):
    between = {"engine": ("180 degC", "20 degC"), "heat-pump": ("12 degC", "50 degC"),
               "refrigerator": ("12 degC", "50 degC")}[machine]
    celsius = [float(text.split()[0]) for text in between]
    inputs = {"T_source_in": f"{celsius[0] + 5e-4!r} degC", "T_source_out": f"{celsius[0] - 5e-4!r} degC",
              "T_sink_in": f"{celsius[1] - 5e-4!r} degC", "T_sink_out": f"{celsius[1] + 5e-4!r} degC"}
    if machine == "engine":
        inputs["p_source"] = "12 bar"
    streams = arranged("carnot-bound", {"machine": machine, "between": "streams"}, inputs)
    hot, cold = between if machine == "engine" else between[::-1]
    reservoirs = arranged("carnot-bound", {"machine": machine}, {"T_h": hot, "T_c": cold})
    symbol = "eta_rev" if machine == "engine" else "COP_rev"
    assert streams.value(symbol) == pytest.approx(reservoirs.value(symbol), rel=1e-6)


def test_a_finite_stream_is_worth_less_than_a_reservoir_at_its_inlet(arranged):
    streams = arranged("carnot-bound", {"between": "streams"})
    reservoirs = arranged("carnot-bound", inputs={"T_h": "180 degC", "T_c": "20 degC"})
    assert streams.value("eta_rev") < reservoirs.value("eta_rev")


def test_the_maximum_work_of_a_stream_is_the_same_by_both_ways_and_vanishes_at_the_dead_state(arranged):
    options = {"between": "dead-state"}
    solution = arranged("carnot-bound", options)
    assert solution.value("W_dot_rev") == pytest.approx(solution.value("W_dot_rev_2"), rel=1e-10)
    near = arranged("carnot-bound", options, {"T_source_in": "15.1 degC"})
    # Near the dead state the exergy of ΔT is c_p ΔT²/(2 T0): 1005·0.01/(2·288.15) J/kg.
    assert near.value("e_source") == pytest.approx(1005.0 * 0.01 / (2 * 288.15), rel=0.01)


def test_a_real_engine_at_the_bound_gives_nothing_away(arranged):
    base = arranged("carnot-bound")
    real = arranged("carnot-bound", {"real": "power"}, {"W_dot_real": f"{base.value('W_dot_rev')!r} W"})
    assert real.value("g_rev") == pytest.approx(1.0, rel=1e-12)
    assert real.value("W_dot_lost") == pytest.approx(0.0, abs=1e-6)


@pytest.fixture(scope="module")
def cycle(arranged):
    return arranged("carnot-cycle")


@given(n=st.floats(0.01, 100.0), gamma=st.floats(1.05, 1.9), T_c=st.floats(50.0, 500.0), ratio=st.floats(1.05, 4.0),
       V_1=st.floats(1e-4, 1.0), growth=st.floats(1.05, 20.0))
def test_efficiency_is_carnots_whatever_the_gas_and_its_amount(cycle, n, gamma, T_c, ratio, V_1, growth):
    values = Program(cycle.plan).run({"n": n, "gamma": gamma, "T_h": T_c * ratio, "T_c": T_c, "V_1": V_1,
                                      "V_2": V_1 * growth})
    assert values["eta"] == pytest.approx(1 - 1 / ratio, rel=1e-9)
    assert values["W_net"] == pytest.approx(values["Q_net"], rel=1e-9)
    assert values["S_4"] == pytest.approx(0.0, abs=1e-9 * values["S_2"])
    assert values["k_23"] == pytest.approx(1.0, rel=1e-10)
    assert values["r_k"] == pytest.approx(gamma, rel=1e-12)
    assert values["p_1"] * values["V_1"] == pytest.approx(n * 8.314462618 * T_c * ratio, rel=1e-12)


def test_a_cycle_given_by_mass_or_by_pressures_is_the_same_cycle(cycle, arranged):
    by_mass = arranged("carnot-cycle", {"amount": "mass"}, {"m": "0.02897 kg", "M": "28.97 g/mol"})
    pressures = {f"p_{corner}": f"{cycle.value(f'p_{corner}')!r} Pa" for corner in "12"}
    by_pressure = arranged("carnot-cycle", {"corners": "pressures"}, pressures)
    for other in (by_mass, by_pressure):
        assert other.value("W_net") == pytest.approx(cycle.value("W_net"), rel=1e-12)
        assert other.value("V_3") == pytest.approx(cycle.value("V_3"), rel=1e-12)
