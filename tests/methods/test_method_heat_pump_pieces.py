"""Vapour compression with pieces added: losses, lines, internal exchanger, desuperheater, polynomials."""
from __future__ import annotations

import re
from pathlib import Path

import pytest

from calcpack.errors import NoAnswerError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec
from calcpack.plan.equipment.polynomial import TYPICAL

METHOD = "vapour-compression"
BARE = {"evaporating": "temperature", "condensing": "temperature", "source_stream": "none",
        "sink_stream": "none"}
LEVELS = {"evaporating": "temperature", "condensing": "temperature"}
ALL = {"internal_exchanger": "effectiveness", "suction_line": "warmed", "pressure_losses": "given",
       "desuperheater": "outlet"}
NO_LOSS = {f"dp_{tag}": "0 bar" for tag in ("e", "c", "suc", "dis")}


def test_everything_at_once_closes_and_can_be_done_again_by_hand(spec_text):
    record = solve_spec(Path("all.yaml"), text=spec_text(METHOD, ALL | {"compressor": "polynomial-en"}))
    assert [check for check in record.data["checks"] if check["status"] == "fails"] == []
    assert [state["number"] for state in record.data["states"]] == list("123456789")


@pytest.mark.parametrize("fluid", ["R-407C", "R-290", "R-410A"])
def test_every_piece_works_for_blends_and_pure_fluids(arranged, fluid):
    solution = arranged(METHOD, ALL, fluids={"wf": fluid})
    assert solution.value("dT_min_e") == pytest.approx(5.0, abs=1e-5)
    assert solution.value("dT_min_c") == pytest.approx(3.0, abs=1e-5)
    assert 0.2 < solution.value("g_rev") < 0.7


def test_drops_of_nothing_change_nothing(arranged):
    plain, dropped = arranged(METHOD), arranged(METHOD, {"pressure_losses": "given"}, NO_LOSS)
    for name in ("COP", "T_2", "T_e", "T_c", "UA_c", "UA_e"):
        assert dropped.value(name) == pytest.approx(plain.value(name), rel=1e-7), name


@pytest.mark.parametrize("symbol", ["dp_e", "dp_c", "dp_suc", "dp_dis"])
def test_every_pressure_drop_costs_performance(arranged, symbol):
    options = {"pressure_losses": "given"}
    none, some = (arranged(METHOD, options, NO_LOSS | {symbol: drop}) for drop in ("0 bar", "0.2 bar"))
    assert some.value("COP") < none.value("COP") * 0.999


def test_the_refrigerant_cools_down_as_its_pressure_falls_in_the_evaporator(arranged):
    solution = arranged(METHOD, {"pressure_losses": "given"}, NO_LOSS | {"dp_e": "0.2 bar"})
    assert solution.value("T_4") > solution.value("T_e") + 1.0
    rows = solution.program.tables["dT_min_e"]
    pressures = [row[1] for row in rows]
    assert pressures[0] == pytest.approx(solution.value("p_4"))
    assert pressures[-1] == pytest.approx(solution.value("p_e"))
    assert pressures == sorted(pressures, reverse=True)


def test_useless_superheat_costs_cooling_but_not_the_source(arranged):
    """Warming in the line adds volume and work; the evaporator's heat a kilogram stays as it was."""
    options = BARE | {"serves": "cooling", "size_by": "mass-flow"}
    without, warmed = arranged(METHOD, options), arranged(METHOD, options | {"suction_line": "warmed"},
                                                          {"dT_line": "10 K"})
    assert warmed.value("Q_dot_source") == pytest.approx(without.value("Q_dot_source"), rel=1e-12)
    useful = arranged(METHOD, options, {"dT_sh": "16 K"})
    assert useful.value("W_dot_net") == pytest.approx(warmed.value("W_dot_net"), rel=1e-12)
    assert warmed.value("COP") < without.value("COP") and warmed.value("COP") < useful.value("COP")
    assert warmed.value("Q_dot_line") > 0.0


def test_the_internal_exchanger_moves_the_states_by_equal_enthalpies(arranged):
    solution = arranged(METHOD, {"internal_exchanger": "effectiveness"}, {"epsilon_ihx": "0.6"})
    value = solution.value
    assert value("h_1") - value("h_5") == pytest.approx(value("h_3") - value("h_7"), rel=1e-9)
    assert (value("T_1") - value("T_5")) / (value("T_3") - value("T_5")) == pytest.approx(0.6, rel=1e-9)


@pytest.mark.parametrize("fluid, gains", [("R-1234yf", True), ("R-717", False)])
def test_an_internal_exchanger_helps_what_has_a_great_vapour_heat_capacity_and_harms_ammonia(arranged, fluid,
                                                                                             gains):
    """The rule of the textbooks: worth it for the propene and propane refrigerants, not for ammonia."""
    options = LEVELS | {"serves": "cooling", "suction": "saturated"}
    # Warmer sink: at small lifts the difference is small.
    inputs = {"T_c": "50 degC", "T_e": "-10 degC", "eta_is": "1"}
    streams = {"source_stream": "none", "sink_stream": "none"}
    without = arranged(METHOD, options | streams, inputs, {"wf": fluid})
    with_it = arranged(METHOD, options | streams | {"internal_exchanger": "effectiveness"}, inputs,
                       {"wf": fluid})
    assert (with_it.value("COP") > without.value("COP")) is gains


def test_the_desuperheater_takes_from_the_condenser_what_it_gives(arranged):
    options = LEVELS | {"size_by": "mass-flow"}
    plain, hot = arranged(METHOD, options), arranged(METHOD, options | {"desuperheater": "outlet"},
                                                     {"T_hot_out": "38 degC"})
    assert hot.value("Q_dot_heat") == pytest.approx(plain.value("Q_dot_sink"), rel=1e-9)
    assert hot.value("COP") == pytest.approx(plain.value("COP"), rel=1e-9)
    assert hot.value("T_8") == pytest.approx(hot.value("T_c") + 5.0)
    assert hot.value("T_m_heat") < hot.value("T_m_hot")


def test_the_hot_streams_flow_given_as_it_was_found_gives_its_outlet_back(arranged):
    base = arranged(METHOD, {"desuperheater": "outlet"})
    again = arranged(METHOD, {"desuperheater": "flow"}, {"m_dot_hot": f"{base.value('m_dot_hot')!r} kg/s"})
    assert again.value("T_hot_out") == pytest.approx(base.value("T_hot_out"), abs=1e-5)


def by_hand(coefficients, t_s, t_d):
    terms = (1, t_s, t_d, t_s**2, t_s * t_d, t_d**2, t_s**3, t_d * t_s**2, t_s * t_d**2, t_d**3)
    return sum(float(c) * term for c, term in zip(coefficients, terms, strict=True))


@pytest.mark.parametrize("form, scale, flow", [
    ("polynomial-en", lambda T: T - 273.15, 1 / 3600.0), ("polynomial-ahri", lambda T: 1.8 * T - 459.67,
                                                          0.45359237 / 3600.0)])
def test_the_polynomial_is_that_of_the_standards(arranged, form, scale, flow):
    solution = arranged(METHOD, BARE | {"compressor": form}, {"dT_sh_r": "10 K", "dT_sh": "10 K"})
    t_s, t_d = (scale(solution.value(name)) for name in ("T_e", "T_c"))
    power, mass = TYPICAL[form]
    assert solution.value("W_dot_one") == pytest.approx(by_hand(power, t_s, t_d), rel=1e-9)
    assert solution.value("m_dot_one") == pytest.approx(by_hand(mass, t_s, t_d) * flow, rel=1e-9)


def test_both_forms_of_the_invented_compressor_agree(arranged):
    one, other = (arranged(METHOD, LEVELS | {"compressor": form}, {"dT_sh_r": "10 K"})
                  for form in ("polynomial-en", "polynomial-ahri"))
    for name in ("W_dot_one", "m_dot_one", "COP", "T_2"):
        assert other.value(name) == pytest.approx(one.value(name), rel=5e-3), name


def test_flow_follows_the_suction_density_by_the_share_that_is_given(arranged):
    options = BARE | {"compressor": "polynomial-en"}
    solution = arranged(METHOD, options, {"dT_sh": "25 K", "T_e": "-8 degC", "F_flow": "0.75"})
    density = solution.value("rho_1") / solution.value("rho_r")
    assert density < 0.97
    assert solution.value("m_dot_one") / solution.value("m_dot_r") == pytest.approx(1 + 0.75 * (density - 1),
                                                                                    rel=1e-9)


def test_the_number_of_compressors_and_the_duty_are_two_ways_to_one_plant(arranged):
    by_duty = arranged(METHOD, {"compressor": "polynomial-en"})
    by_number = arranged(METHOD, {"compressor": "polynomial-en", "size_by": "compressors"},
                         {"n_comp": repr(by_duty.value("n_comp"))})
    assert by_number.value("Q_dot_sink") == pytest.approx(250e3, rel=1e-6)
    assert by_number.value("COP") == pytest.approx(by_duty.value("COP"), rel=1e-7)


def test_mid_points_are_below_the_dew_points_of_a_blend_as_it_condenses(arranged):
    options = LEVELS | {"compressor": "polynomial-en", "polynomial_levels": "mid"}
    solution = arranged(METHOD, options, fluids={"wf": "R-407C"})
    assert solution.value("T_mid_c") < solution.value("T_c") - 1.0
    assert solution.value("t_D") == pytest.approx(solution.value("T_mid_c") - 273.15)


@pytest.mark.parametrize("options, inputs, what, hint", [
    ({"internal_exchanger": "effectiveness"}, {"T_e": "2 degC", "T_c": "40 degC", "dT_sh": "40 K",
                                               "T_source_in": "60 degC"},
     "the internal exchanger has no temperature difference left", "set internal_exchanger to none"),
    ({"pressure_losses": "given"}, {"dp_c": "7 bar"}, "the pressure drops are greater than the pressures allow",
     "give smaller pressure drops"),
    ({"desuperheater": "outlet"}, {"dT_left": "60 K"},
     "the hot gas has no superheat left for the desuperheater",
     "leave less superheat after the desuperheater, or leave it out"),
    ({"desuperheater": "outlet"}, {"T_hot_out": "70 degC"}, "the temperatures cross in the desuperheater",
     "move"),
    ({"compressor": "polynomial-en"}, {"C_W_1": "-29000"}, "above one at these levels",
     "coefficients' order and units"),
    ({"compressor": "polynomial-en"}, {"C_m_1": "-9000"}, "no flow or no power at these levels",
     "order and units")])
def test_what_cannot_be_is_told_with_what_to_change(options, inputs, what, hint):
    with pytest.raises(NoAnswerError) as caught:
        solve_spec(Path("case.yaml"), inputs, text=starter(METHOD, LEVELS | options))
    fault = caught.value.faults[0]
    assert what in fault.what and hint in fault.hint, fault


def test_every_coefficient_says_what_it_multiplies():
    comments = re.findall(r"C_m_\d+: \S+ +# (.*); typical", starter(METHOD, {"compressor": "polynomial-en"}))
    assert len(comments) == 10
    assert comments[7] == "Mass flow in kg/h, coefficient of t_D t_S^2, t in °C"


def test_an_exchanger_with_a_pressure_drop_is_drawn_along_its_falling_pressure(spec_text):
    record = solve_spec(Path("drop.yaml"), text=spec_text(METHOD, {"pressure_losses": "given"}))
    diagram = next(one for one in record.data["diagrams"] if one["kind"] == "log p-h")
    path = next(one for one in diagram["paths"] if (one["from"], one["to"]) == ("4", "5"))
    assert path["style"] == "solid" and len(path["y"]) > 20
    assert path["y"] == sorted(path["y"], reverse=True) and path["y"][0] > path["y"][-1] + 0.05
