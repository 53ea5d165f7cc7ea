"""What is wrong before a number is computed: every fault, in words, with what would be right."""
from __future__ import annotations

import pytest

from calcpack.errors import CalcpackError, describe

BASE = """\
calcpack: 1
sheet: {number: T-1, title: Test, project: Works, revision: A, status: draft, purpose: Test., scope: All.}
case:
  method: vapour-compression
  options: {evaporating: temperature, condensing: temperature, source_stream: none, sink_stream: none}
  fluids: {wf: R-1234ze(E)}
  inputs:
    T_e: 2 degC
    T_c: 40 degC
    dT_sh: 6 K
    dT_sc: 4 K
    eta_is: 0.72
    eta_drive: 1.0
    eta_motor: 0.94
    f_loss: 0.02
    Q_dot_sink: 100 kW
"""


def faults_of(solution_of, text, inputs=None):
    with pytest.raises(CalcpackError) as caught:
        solution_of(text, inputs)
    assert caught.value.exit_status == 2
    return caught.value.faults


def test_the_base_itself_solves(solution_of):
    assert 3.0 < solution_of(BASE).value("COP") < 8.0


@pytest.mark.parametrize("old, new, line, what, found, expected, hint", [
    ("eta_is: 0.72", "eta_is: 1.2", 12, "eta_is, isentropic efficiency of the compressor, is out of its range", "'1.2'",
     "above 0 and at most 1", None),
    ("dT_sh: 6 K", "dT_sh: 6 degC", 10, "a temperature level stands where a difference is meant", "'6 degC'",
     "a difference, in K or °R", "write 6 K"),
    ("dT_sh: 6 K", "dT_sh: 0 K", 10, "dT_sh, superheat at the compressor inlet, is out of its range", "'0 K'",
     "above 0 K", "for none, set the option suction to saturated"),
    ("T_e: 2 degC", "T_e: 2 delta_degC", 8, "a temperature difference stands where a level is meant", "'2 delta_degC'",
     "a level, in degC, degF or K", None),
    ("T_e: 2 degC", "T_e: -280 degC", 8, "a temperature at or below absolute zero", "'-280 degC'",
     "above 0 K (-273.15 degC)", None),
    ("100 kW", "100 kWh", 16, "a power is meant here", "'100 kWh', length²·mass/time² (energy)",
    "a quantity such as '5 kW'",
     None),
    ("f_loss: 0.02", "f_loss: 0.9", 15,
    "f_loss, share of the shaft power that the compressor loses as heat, is out of its range",
     "'0.9'", "at least 0 and at most 0.5", None),
    ("100 kW", "100 parsec", 16, "'parsec' is not a unit that calcpack reads", "'parsec'", None,
     "units and their case are listed by 'calcpack methods --units'")])
def test_an_input_that_cannot_be(solution_of, old, new, line, what, found, expected, hint):
    fault, = faults_of(solution_of, BASE.replace(old, new))
    assert (fault.what, fault.found, fault.expected, fault.hint) == (what, found, expected, hint)
    assert (fault.place.file, fault.place.line) == ("test.yaml", line)


def test_an_unknown_method_names_all_and_the_nearest(solution_of):
    fault, = faults_of(solution_of, BASE.replace("vapour-compression", "vapor-compression"))
    assert fault.what == "there is no method 'vapor-compression'"
    assert fault.expected.startswith("one of carnot-bound, carnot-cycle, vapour-compression, ")
    assert fault.hint == "did you mean 'vapour-compression'?"


def test_an_unknown_option_and_a_wrong_value(solution_of):
    text = BASE.replace("{evaporating: temperature", "{evaporatin: pinch, suction: wet")
    first, second = faults_of(solution_of, text)
    assert (first.what, first.hint) == ("vapour-compression has no option 'evaporatin'", "did you mean 'evaporating'?")
    assert (second.what, second.expected) == ("option suction cannot be 'wet'", "one of superheated, saturated")


def test_an_unknown_fluid_is_told_with_the_nearest(solution_of):
    fault, = faults_of(solution_of, BASE.replace("R-1234ze(E)", "R-1234ze(F)"))
    assert "R-1234ze(F)" in fault.what
    assert fault.hint in ("did you mean 'R-1234ze(E)'?", "did you mean 'R-1234ze(Z)'?")
    assert fault.place.line == 6


def test_a_missing_fluid_says_which_is_meant(solution_of):
    faults = faults_of(solution_of, BASE.replace("  fluids: {wf: R-1234ze(E)}\n", ""))
    assert [fault.what for fault in faults] == ["the fluid 'wf' is missing"]
    assert faults[0].expected == "case.fluids.wf: refrigerant, such as R-1234ze(E)"


def test_a_fluid_without_a_use_is_told(solution_of):
    fault, = faults_of(solution_of, BASE.replace("{wf: R-1234ze(E)}", "{wf: R-1234ze(E), sorce: water}"))
    assert (fault.what, fault.expected) == (
        "vapour-compression has no use for a fluid 'sorce' with these options", "one of wf")


def test_missing_inputs_come_all_at_once(solution_of):
    text = "".join(line + "\n" for line in BASE.splitlines() if not line.strip().startswith(("T_e", "eta_is", "Q_dot")))
    faults = faults_of(solution_of, text)
    assert [(fault.what, fault.expected) for fault in faults] == [
        ("the input 'T_e' is missing", "case.inputs.T_e: evaporating temperature (dew point), such as '2 degC'"),
        ("the input 'eta_is' is missing",
         "case.inputs.eta_is: isentropic efficiency of the compressor, such as '0.72'"),
        ("the input 'Q_dot_sink' is missing", "case.inputs.Q_dot_sink: heat given to the sink, such as '250 kW'")]


@pytest.mark.parametrize("role, level", [("source", "evaporating"), ("sink", "condensing")])
@pytest.mark.parametrize("method", ["vapour-compression", "organic-rankine"])
def test_options_that_contradict_say_what_to_set(spec_text, role, level, method):
    from calcpack.errors import SpecError
    with pytest.raises(SpecError) as caught:
        spec_text(method, {level: "pinch", f"{role}_stream": "none"})
    fault = caught.value.faults[0]
    assert fault.what == f"option {level}: pinch needs a {role} stream, and {role}_stream is none"
    assert fault.hint == f"set {level} to temperature or pressure, or give the stream"


def test_options_that_contradict_in_a_spec_stand_at_the_options(solution_of):
    fault, = faults_of(solution_of, BASE.replace("condensing: temperature", "condensing: pinch"))
    assert fault.what == "option condensing: pinch needs a sink stream, and sink_stream is none"
    assert fault.place.line == 5


def test_a_dead_state_is_for_engines(solution_of):
    text = BASE.replace("vapour-compression", "carnot-bound").split("  options")[0] + (
        "  options: {machine: refrigerator, between: dead-state}\n")
    fault = next(fault for fault in faults_of(solution_of, text) if "option" in fault.what)
    assert (fault.what, fault.hint) == ("option between: dead-state is for engines",
                                        "choose reservoirs or streams for a heat pump or a refrigerator")


@pytest.mark.parametrize("inputs, what, hint", [
    ({"eta_iss": "0.7"}, "--set eta_iss: there is no input of that symbol", "did you mean 'eta_is'?"),
    ({"eta_is": "70 kW"}, "--set eta_is: a number is meant here", None),
    ({"eta_is": "1,2"}, "--set eta_is: '1,2' is not a quantity",
    "write the decimal point as '.', and no thousands separators"),
    ({"T_e": "2 K K"}, "--set T_e: 'K K' is not a unit that calcpack reads", None)])
def test_a_replaced_input_that_cannot_be_is_told_by_its_option(solution_of, inputs, what, hint):
    fault, = faults_of(solution_of, BASE, inputs)
    assert fault.what == what
    assert fault.place is None
    if hint is not None:
        assert fault.hint == hint


def test_a_replaced_input_counts_and_is_kept_as_written(solution_of):
    solution = solution_of(BASE, {"T_e": "0 degC", "W_dot_aux": "1 kW"})
    assert solution.value("T_e") == 273.15 and solution.written["T_e"] == "0 degC"
    assert solution.value("W_dot_net") - solution.value("W_dot_el") == pytest.approx(1000.0)


@pytest.mark.parametrize("tail, what, hint", [
    ("results: [COPP]\n", "the result 'COPP' has no value on this sheet", "did you mean 'COP'?"),
    ("limits:\n  - {id: L1, symbol: T_22, at_most: 100 degC, why: Oil.}\n",
     "the limited quantity 'T_22' has no value on this sheet", "did you mean 'T_2'?"),
    ("limits:\n  - {id: L1, symbol: T_2, at_most: 5 bar, why: Oil.}\n", "a temperature is meant here", None),
    ("limits:\n  - {id: L1, symbol: dT_sh, at_least: 5 degC, why: Oil.}\n",
     "a temperature level stands where a difference is meant", "write 5 K")])
def test_results_and_limits_must_name_what_the_sheet_has(solution_of, tail, what, hint):
    fault, = faults_of(solution_of, BASE + tail)
    assert (fault.what, fault.hint) == (what, hint)


@pytest.mark.parametrize("tol, what", [
    ("1 degC", "a temperature level stands where a difference is meant"), ("-1 K", "a tolerance is not negative"),
    ("1 bar", "a temperature difference is meant here")])
def test_a_tolerance_is_a_difference_of_its_inputs_kind(solution_of, tol, what):
    fault, = faults_of(solution_of, BASE.replace("T_e: 2 degC", f"T_e: {{value: 2 degC, tol: {tol}}}"))
    assert fault.what == what
    assert fault.place.line == 8


def test_an_own_step_may_not_take_a_symbol_of_the_method(solution_of):
    fault, = faults_of(solution_of, BASE + "steps:\n  - {symbol: h_1, title: Mine, formula: 2 * eta_is}\n")
    assert (fault.what, fault.hint) == ("'h_1' has a value already, from the method or the inputs",
                                        "give the step another symbol")
    assert fault.place.line == 18


@pytest.mark.parametrize("symbol, text, level", [("T_x", "300 K", True), ("dT_x", "3 K", False), ("T_x", "20 degC",
    True)])
def test_an_own_input_in_kelvin_is_a_level_unless_its_symbol_says_difference(solution_of, symbol, text, level):
    solution = solution_of(BASE.replace("    T_e:", f"    {symbol}: {text}\n    T_e:") + f"results: [{symbol}]\n")
    assert solution.level(symbol) is level


def test_an_input_that_nothing_uses_is_a_slip(solution_of):
    fault, = faults_of(solution_of, BASE.replace("    T_e:", "    W_dot_axu: 2 kW\n    T_e:"))
    assert fault.what == "nothing on this sheet uses the input 'W_dot_axu'"
    assert fault.hint == "did you mean 'W_dot_aux'?"


def test_a_fault_is_shown_with_its_line_and_caret(solution_of):
    text = BASE.replace("eta_is: 0.72", "eta_is: 1.2")
    shown = describe(faults_of(solution_of, text), {"test.yaml": text})
    assert shown == (
        "test.yaml:12:13: eta_is, isentropic efficiency of the compressor, is out of its range\n"
        "        eta_is: 1.2\n"
        "                ^^^\n"
        "    found:    '1.2'\n"
        "    expected: above 0 and at most 1\n"
        "1 error, nothing was written.")


def test_results_and_limits_on_what_a_faulty_input_gives_are_not_blamed(solution_of):
    fault, = faults_of(solution_of, BASE.replace("eta_is: 0.72", "eta_is: 7") + (
        "limits:\n  - {id: L1, symbol: T_2, at_most: 100 degC, why: Oil.}\n"
        "  - {id: L2, symbol: COP, at_least: eta_is, why: So.}\n"
        "results: [COP, T_2, eta_is]\n"))
    assert fault.what.startswith("eta_is, isentropic efficiency of the compressor, is out of its range")
