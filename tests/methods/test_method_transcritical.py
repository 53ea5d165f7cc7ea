"""Transcritical carbon dioxide: what is known of its free high pressure and its gliding heat."""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.errors import NoAnswerError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec

METHOD = "transcritical-co2"
BARE = {"gas_cooler": "outlet", "source_stream": "none"}


def test_no_pressure_beats_the_optimum(arranged):
    best = arranged(METHOD, BARE | {"high_side": "optimum"})
    for factor in (0.97, 0.99, 1.01, 1.03):
        near = arranged(METHOD, BARE, {"p_2": f"{factor * best.value('p_2')!r} Pa"})
        assert near.value("COP") < best.value("COP")


def test_the_optimum_rises_with_the_temperature_after_the_gas_cooler(arranged):
    found = [arranged(METHOD, BARE | {"high_side": "optimum"}, {"T_3": T}).value("p_2")
             for T in ("33 degC", "38 degC", "43 degC")]
    assert found == sorted(found) and found[2] - found[0] > 20e5


@pytest.mark.parametrize("T", ["35 degC", "40 degC", "45 degC"])
def test_the_optimum_is_near_every_published_fit(arranged, T):
    """Within the fits' own scatter; Sarkar's was made for a machine with an internal exchanger (all from memory)."""
    value = arranged(METHOD, BARE | {"high_side": "optimum", "suction": "saturated"}, {"T_3": T}).value
    assert value("r_Liao") == pytest.approx(1.0, abs=0.04)
    assert value("r_Chen") == pytest.approx(1.0, abs=0.04)
    assert value("r_Kauf") == pytest.approx(1.0, abs=0.05)
    assert value("r_Sarkar") == pytest.approx(1.0, abs=0.07)


def test_the_fits_are_printed_beside_a_given_pressure_too(arranged):
    solution = arranged(METHOD)
    assert solution.value("r_Liao") == pytest.approx(solution.value("p_2") / solution.value("p_Liao"))
    assert all("from memory" in solution.step(name).step.reference for name in ("p_Liao", "p_Chen", "p_Kauf",
                                                                                "p_Sarkar"))


def test_an_internal_exchanger_lowers_the_optimum_and_raises_the_cop(arranged):
    without, with_it = (arranged(METHOD, BARE | {"high_side": "optimum", "internal_exchanger": one},
                                 {"T_3": "42 degC"})
                        for one in ("none", "effectiveness"))
    assert with_it.value("p_2") < without.value("p_2")
    assert with_it.value("COP") > without.value("COP")


def test_the_pinch_that_is_found_is_the_pinch_that_was_asked(arranged):
    solution = arranged(METHOD, {"gas_cooler": "pinch"}, {"T_sink_out": "60 degC"})
    assert solution.value("dT_min_g") == pytest.approx(4.0, abs=1e-5)
    assert solution.value("T_3") > solution.value("T_sink_in")


def test_the_closest_approach_of_a_gas_cooler_can_be_inside_it(arranged):
    rows = arranged(METHOD, {"gas_cooler": "pinch"}, {"T_sink_out": "75 degC"}).program.tables["dT_min_g"]
    gaps = [row[-1] for row in rows]
    assert 0 < gaps.index(min(gaps)) < len(gaps) - 1


def test_a_pinch_as_approach_gives_the_same_machine(arranged):
    found = arranged(METHOD, {"gas_cooler": "pinch"})
    approach = found.value("T_3") - found.value("T_sink_in")
    again = arranged(METHOD, inputs={"dT_app": f"{approach!r} K"})
    for name in ("COP", "T_2", "UA_g", "dT_min_g"):
        assert again.value(name) == pytest.approx(found.value(name), rel=1e-7), name


def test_the_gas_cooler_closes_and_its_checks_hold(spec_text):
    record = solve_spec(Path("co2.yaml"), text=spec_text(METHOD, {"evaporating": "pinch",
                                                                  "internal_exchanger": "effectiveness"}))
    assert [check for check in record.data["checks"] if check["status"] == "fails"] == []
    assert [one["title"] for one in record.data["exchangers"]] == ["Gas cooler", "Evaporator"]


@pytest.mark.parametrize("options, inputs, what, hint", [
    ({"high_side": "given"}, {"T_sink_out": "85 degC"}, "the temperatures cross in the gas cooler",
     "set gas_cooler to pinch"),
    ({"gas_cooler": "outlet"}, {"T_3": "150 degC"},
     "the compressed gas is no warmer than the gas-cooler outlet",
     "raise the pressure of the gas cooler"),
    ({"evaporating": "pressure"}, {"p_e": "80 bar"}, "80 bar is above the critical pressure", "")])
def test_what_cannot_be_is_told_with_what_to_change(options, inputs, what, hint):
    with pytest.raises(NoAnswerError) as caught:
        solve_spec(Path("case.yaml"), inputs, text=starter(METHOD, options))
    fault = caught.value.faults[0]
    assert what in fault.what and hint in (fault.hint or ""), fault
