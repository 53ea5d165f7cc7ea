"""Cases without an answer: exit status 3, and a sentence that says why and what to do."""
from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.errors import BrokenLawError, FluidRangeError, NoAnswerError, RootError
from calcpack.methods.starter import starter
from calcpack.pipeline import solve_spec

PUMP, ENGINE, BOUND, CYCLE = "vapour-compression", "organic-rankine", "carnot-bound", "carnot-cycle"
LEVELS = {"condensing": "temperature", "evaporating": "temperature"}


def error_of(name, choices, inputs):
    with pytest.raises(NoAnswerError) as caught:
        solve_spec(Path("case.yaml"), inputs, text=(text := starter(name, choices)), name="case.yaml")
    error = caught.value
    assert error.exit_status == 3
    assert len(error.faults) == 1
    line = next(at for at, words in enumerate(text.splitlines(), start=1) if words.startswith("  method: "))
    assert (error.faults[0].place.file, error.faults[0].place.line) == ("case.yaml", line), "told at the sheet's case"
    return error


@pytest.mark.parametrize("name, choices, inputs, what, hint", [
    (PUMP, {}, {"T_source_in": "60 degC", "T_source_out": "55 degC"},
     "the condensing pressure is not above the evaporating pressure",
     "the source is warmer than the sink needs: no heat pump is called for"),
    (PUMP, {"source_stream": "none", "sink_stream": "none", **LEVELS}, {"T_c": "0 degC"},
     "the condensing pressure is not above the evaporating pressure",
     "the source is warmer than the sink needs: no heat pump is called for"),
    (PUMP, {}, {"T_source_in": "5 degC"}, "the source does not cool down", "check inlet and outlet temperature"),
    (PUMP, {}, {"T_sink_out": "25 degC"}, "the sink does not warm up", "check inlet and outlet temperature"),
    (PUMP, {"evaporating": "temperature"}, {"T_e": "9 degC"}, "the temperatures cross in the evaporator",
     "move the saturation temperature away from the stream, or change the stream's temperatures"),
    (PUMP, {"condensing": "temperature"}, {"T_c": "32 degC"}, "the temperatures cross in the condenser",
     "move the saturation temperature away from the stream, or change the stream's temperatures"),
    (ENGINE, {}, {"T_source_in": "15 degC"}, "the source is not hot enough for the expander inlet and the pinch",
     "lower the evaporating level or the superheat, or take a smaller pinch"),
    (ENGINE, {"expander_inlet": "superheated"}, {"T_source_in": "160 degC"},
     "the source is not hot enough for the expander inlet and the pinch",
     "lower the evaporating level or the superheat, or take a smaller pinch"),
    (ENGINE, {}, {"T_source_min": "300 degC"}, "the source's lowest outlet is not below its inlet",
     "check the two temperatures"),
    (ENGINE, {}, {"T_0": "50 degC"}, "the dead state is warmer than the sink's inlet",
     "take the sink's inlet temperature or less for T_0"),
    (ENGINE, {}, {"W_dot_aux": "900 kW"}, "the net power is not above zero",
    "pump and auxiliaries draw all that is made"),
    (BOUND, {}, {"T_h": "10 degC"}, "the hot side is not above the cold side", "check the temperatures"),
    (BOUND, {"between": "streams"}, {"T_sink_in": "300 degC", "T_sink_out": "320 degC"},
     "the hot side is not above the cold side", "check the temperatures"),
    (BOUND, {"between": "dead-state"}, {"T_0": "300 degC"}, "the stream is not warmer than the dead state",
     "check the two temperatures"),
    (CYCLE, {}, {"V_2": "1 L"}, "the gas does not expand along the hot isotherm",
     "the second corner must have the greater volume and the lower pressure"),
    (CYCLE, {}, {"T_h": "20 degC"}, "the hot isotherm is not above the cold one", "check the two temperatures")])
def test_a_demand_that_is_not_met(name, choices, inputs, what, hint):
    fault = error_of(name, choices, inputs).faults[0]
    assert (fault.what, fault.hint) == (what, hint)
    assert " = " in fault.found and "(SI)" not in fault.found and fault.expected


@pytest.mark.parametrize("name, choices, inputs, step, words", [
    (PUMP, {"condensing": "temperature"}, {"T_c": "120 degC"}, "p_c",
     "393.15 K (120.00 °C) is above the critical temperature 382.51 K (109.36 °C) of R-1234ze(E)"),
    (PUMP, {"condensing": "pressure"}, {"p_c": "40 bar"}, "T_c",
     "40 bar is above the critical pressure 36.3487 bar of R-1234ze(E)"),
    (PUMP, {"evaporating": "temperature"}, {"T_e": "-130 degC"}, "p_e",
     "143.15 K (-130.00 °C) is below the lowest of the equation for R-1234ze(E), 168.62 K (-104.53 °C)"),
    (PUMP, {}, {"T_source_out": "-5 degC"}, "h_source_out",
     "268.15 K (-5.00 °C) is below the limit of 273.16 K (0.01 °C) of the equation for water"),
    (PUMP, {}, {"p_sink": "20000 bar"}, "h_sink_in", "is above the limit"),
    (ENGINE, {}, {"T_e": "250 degC"}, "p_e", "is above the critical temperature 511.72 K (238.57 °C) of cyclopentane"),
    (ENGINE, {"evaporating": "pressure"}, {"p_e": "60 bar"}, "T_e",
     "60 bar is above the critical pressure 45.8277 bar of cyclopentane"),
    (ENGINE, {"expander_inlet": "superheated"}, {"dT_sh": "150 K"}, "h_3",
     "563.15 K (290.00 °C) is above the limit of 550.00 K (276.85 °C) of the equation for cyclopentane")])
def test_outside_a_fluids_range_the_step_the_value_and_the_limit_are_told(name, choices, inputs, step, words):
    error = error_of(name, choices, inputs)
    assert isinstance(error, FluidRangeError)
    fault = error.faults[0]
    assert fault.what.startswith("step ") and f", {step} (" in fault.what
    assert words in fault.what
    assert "bar" in fault.found or "K" in fault.found
    assert fault.expected is not None


@pytest.mark.parametrize("inputs, symbol, words", [
    ({"T_sink_in": "120 degC", "T_sink_out": "125 degC"}, "T_c", "the bracket is empty"),
    ({"dT_pinch_e": "100 K"}, "T_e", "the equation has no root in its bracket")])
def test_a_pinch_that_no_level_gives(inputs, symbol, words):
    error = error_of(PUMP, {}, inputs)
    assert isinstance(error, RootError)
    assert f", {symbol} (" in error.faults[0].what and error.faults[0].what.endswith(words)
    assert error.faults[0].hint.startswith("the bracket runs from ") and "°C" in error.faults[0].hint


@pytest.mark.parametrize("name, choices, inputs, what", [
    (BOUND, {"real": "power"}, {"W_dot_real": "400 kW"}, "W_dot_real passes W_dot_rev"),
    (BOUND, {"real": "power", "machine": "heat-pump"}, {"W_dot_real": "10 kW"}, "COP_real passes COP_rev")])
def test_a_claim_that_breaks_the_second_law_is_an_error(name, choices, inputs, what):
    error = error_of(name, choices, inputs)
    assert isinstance(error, BrokenLawError)
    assert error.faults[0].what == f"a law is broken: {what}"
