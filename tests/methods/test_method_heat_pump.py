"""Vapour compression: what a thermal engineer would expect of the numbers."""
from __future__ import annotations

from itertools import pairwise

import pytest

METHOD = "vapour-compression"


def figures(arranged, symbol="COP", **cases):
    """A symbol's values with one input varied: ``figures(arranged, T_sink_out=("35 degC", …))``."""
    (name, texts), = cases.items()
    return [arranged(METHOD, inputs={name: text}).value(symbol) for text in texts]


def falls(values):
    return all(a > b for a, b in pairwise(values))


def test_cop_falls_when_the_sink_is_hotter(arranged):
    assert falls(figures(arranged, T_sink_out=("35 degC", "45 degC", "55 degC", "65 degC")))


def test_cop_rises_when_the_source_is_warmer(arranged):
    assert falls(figures(arranged, T_source_in=("25 degC", "18 degC", "12 degC")))


@pytest.mark.parametrize("symbol", ["dT_pinch_e", "dT_pinch_c"])
def test_cop_falls_with_a_wider_pinch(arranged, symbol):
    assert falls(figures(arranged, **{symbol: ("2 K", "5 K", "10 K")}))


def test_cop_rises_with_the_compressors_efficiency_and_falls_with_auxiliaries(arranged):
    assert falls(figures(arranged, eta_is=("0.9", "0.72", "0.5")))
    assert falls(figures(arranged, W_dot_aux=("0 kW", "2 kW", "5 kW")))


def test_cop_of_heating_and_cooling_differ_by_the_useful_heats(arranged):
    heating, cooling = (arranged(METHOD, {"serves": serves}) for serves in ("heating", "cooling"))
    assert heating.value("COP") / cooling.value("COP") == pytest.approx(
        heating.value("Q_dot_sink") / heating.value("Q_dot_source"), rel=1e-9)


def test_discharge_is_hotter_with_a_worse_compressor(arranged):
    assert falls(figures(arranged, "T_2", eta_is=("0.5", "0.72", "0.9")))


@pytest.mark.parametrize("tag", ["e", "c"])
def test_the_pinch_that_is_found_is_the_pinch_that_was_asked(arranged, tag):
    for source in ("outlet", "flow"):
        solution = arranged(METHOD, {"source_stream": source})
        assert solution.value(f"dT_min_{tag}") == pytest.approx(solution.value(f"dT_pinch_{tag}"), abs=1e-6)


def test_the_pinch_of_a_condenser_is_inside_it_where_condensation_begins(arranged):
    """With little subcooling and a hot discharge the closest approach is not at an end."""
    solution = arranged(METHOD)
    rows = solution.program.tables["dT_min_c"]
    gaps = [row[-1] for row in rows]
    assert gaps.index(min(gaps)) not in (0, len(gaps) - 1)


@pytest.mark.parametrize("given, symbol, unit", [("temperature", "T", "K"), ("pressure", "p", "Pa")])
def test_a_level_that_is_given_as_it_was_found_gives_the_same_machine(arranged, given, symbol, unit):
    found = arranged(METHOD)
    inputs = {f"{symbol}_{tag}": f"{found.value(f'{symbol}_{tag}')!r} {unit}" for tag in "ec"}
    again = arranged(METHOD, {"evaporating": given, "condensing": given}, inputs)
    for name in ("COP", "W_dot_net", "T_2", "UA_c", "UA_e", "m_dot_source", "dT_min_e", "dT_min_c"):
        assert again.value(name) == pytest.approx(found.value(name), rel=1e-7), name


def test_the_same_machine_by_either_duty_by_swept_volume_or_by_flow(arranged):
    base = arranged(METHOD)
    volume = base.value("m_dot_wf") / base.value("rho_1") / 0.85
    for options, inputs in (
            ({"size_by": "source-duty"}, {"Q_dot_source": f"{base.value('Q_dot_source')!r} W"}),
            ({"size_by": "swept-volume"}, {"V_dot_swept": f"{volume!r} m3/s", "eta_v": "0.85"}),
            ({"size_by": "mass-flow"}, {"m_dot_wf": f"{base.value('m_dot_wf')!r} kg/s"})):
        again = arranged(METHOD, options, inputs)
        for name in ("Q_dot_sink", "Q_dot_source", "W_dot_net", "COP", "m_dot_sink", "UA_c"):
            assert again.value(name) == pytest.approx(base.value(name), rel=1e-8), (options, name)


def test_a_streams_flow_given_as_it_was_found_gives_its_outlet_back(arranged):
    base = arranged(METHOD)
    again = arranged(METHOD, {"source_stream": "flow", "sink_stream": "flow"}, {
        f"m_dot_{role}": f"{base.value(f'm_dot_{role}')!r} kg/s" for role in ("source", "sink")})
    assert again.value("T_source_out") == pytest.approx(base.value("T_source_out"), abs=1e-5)
    assert again.value("T_sink_out") == pytest.approx(base.value("T_sink_out"), abs=1e-5)
    assert again.value("COP") == pytest.approx(base.value("COP"), rel=1e-7)


def test_double_the_duty_is_double_the_machine(arranged):
    one, two = (arranged(METHOD, inputs={"Q_dot_sink": duty}) for duty in ("250 kW", "500 kW"))
    for name in ("W_dot_net", "m_dot_wf", "m_dot_source", "UA_e", "V_dot_1"):
        assert two.value(name) == pytest.approx(2 * one.value(name), rel=1e-8)
    assert two.value("COP") == pytest.approx(one.value("COP"), rel=1e-9)


def test_without_loss_the_heats_and_the_shaft_power_balance(arranged):
    solution = arranged(METHOD, inputs={"f_loss": "0"})
    assert solution.value("Q_dot_sink") == pytest.approx(
        solution.value("Q_dot_source") + solution.value("W_dot_shaft"), rel=1e-9)


@pytest.mark.parametrize("fluid, least, most", [("R-407C", 4.0, 7.0), ("R-454C", 2.0, 9.0)])
def test_a_blend_glides_in_both_exchangers(arranged, fluid, least, most):
    """Glides near 30 °C: about 5 K for R-407C, 7 to 8 K for R-454C (makers' data sheets, from memory)."""
    solution = arranged(METHOD, fluids={"wf": fluid})
    assert least < solution.value("T_c") - solution.value("T_bub") < most
    assert solution.value("T_4") < solution.value("T_e") - 1.0, "an evaporating blend warms up"
    assert solution.value("dT_min_c") == pytest.approx(3.0, abs=1e-5)
    assert 0.2 < solution.value("g_rev") < 0.7
    assert solution.value("Q_dot_sink") == pytest.approx(solution.value("Q_dot_source") + solution.value(
        "W_dot_shaft") - solution.value("Q_dot_loss"), rel=1e-6)


def test_glide_that_follows_the_streams_raises_the_share_of_the_bound(arranged):
    """A stream that changes by ten kelvin suits a blend with glide better than one temperature."""
    streams = {"T_source_out": "2 degC", "T_sink_out": "40 degC"}
    blend, pure = (arranged(METHOD, {"suction": "saturated", "liquid": "saturated"}, streams, {"wf": fluid})
                   for fluid in ("R-454C", "R-1234yf"))
    gap_blend, gap_pure = (one.value("T_c") - one.value("T_bub") for one in (blend, pure))
    assert gap_blend > 5.0 and gap_pure < 1e-6
    assert blend.value("W_dot_net") < pure.value("W_dot_net") * 1.05


BRINE = "{fluid: ethylene glycol, mass_fraction: 30 %, model: incompressible}"


def test_a_brine_source_may_be_colder_than_ice(arranged):
    solution = arranged(METHOD, inputs={"T_source_in": "-2 degC", "T_source_out": "-6 degC"}, fluids={"source": BRINE})
    assert solution.value("T_e") < 273.15 - 6.0
    # 30 % ethylene glycol has about 3.7 kJ/(kg·K) near 0 °C (brine tables, from memory).
    heat = solution.value("Q_dot_source") / solution.value("m_dot_source") / 4.0
    assert heat == pytest.approx(3700.0, rel=0.03)


def test_air_as_the_source(arranged):
    solution = arranged(METHOD, inputs={"T_source_in": "7 degC", "T_source_out": "2 degC", "p_source": "1.013 bar"},
                        fluids={"source": "air"})
    # Dry air has 1.005 kJ/(kg·K).
    assert solution.value("Q_dot_source") / solution.value("m_dot_source") / 5.0 == pytest.approx(1005.0, rel=5e-3)
    assert solution.value("dT_min_e") == pytest.approx(5.0, abs=1e-6)


def test_subcooling_and_superheat_are_what_was_asked(arranged):
    solution = arranged(METHOD, inputs={"dT_sc": "7 K", "dT_sh": "9 K"})
    assert solution.value("T_bub") - solution.value("T_3") == pytest.approx(7.0, abs=1e-9)
    assert solution.value("T_1") - solution.value("T_e") == pytest.approx(9.0, abs=1e-9)
