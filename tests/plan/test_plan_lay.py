"""Plans are read and proved before any number: all faults together, each once, at its place."""
from __future__ import annotations

import pytest

from calcpack.errors import CalcpackError
from calcpack.plan.plan import Plan
from calcpack.units import unit


def plan_of(*formulas, unit_=None):
    plan = Plan({}, {})
    section = plan.section("One")
    for symbol, formula in formulas:
        section.formula(symbol, formula, symbol, unit_)
    return plan


def only_fault(laid, plan, inputs):
    _, faults = laid(plan, inputs)
    assert len(faults) == 1
    return faults[0]


def test_steps_are_numbered_by_section_and_know_what_they_use(laid):
    plan = Plan({}, {})
    plan.section("First").formula("a", "q * 2", "A")
    second = plan.section("Second")
    second.formula("b", "a * q / a + q", "B")
    second.formula("c", "b", "C")
    found, faults = laid(plan, {"q": "5 kW"})
    assert faults == ()
    assert [(step.id, step.symbol, step.uses) for step in found.steps] == [
        ("1.1", "a", ("q",)), ("2.1", "b", ("a", "q")), ("2.2", "c", ("b",))]


def test_a_step_without_a_unit_is_printed_in_the_customary_one(laid):
    found, _ = laid(plan_of(("Q", "m_dot * dh")), {"m_dot": "3 kg/s", "dh": "5 kJ/kg"})
    assert found.step("Q").unit == unit("kW")
    found, _ = laid(plan_of(("Q", "m_dot * dh")), {"m_dot": "3 kg/s", "dh": "5 kJ/kg"}, "us")
    assert found.step("Q").unit == unit("kBtu/h")


def test_a_level_is_printed_in_kelvin_and_known_as_a_level(laid):
    found, _ = laid(plan_of(("T_2", "T_1 + dT"), ("gap", "T_2 - T_1")), {"T_1": "20 degC", "dT": "5 K"})
    assert (found.step("T_2").unit.symbol, found.step("T_2").level) == ("K", True)
    assert (found.step("gap").unit.symbol, found.step("gap").level) == ("K", False)


@pytest.mark.parametrize("formula, what", [
    ("q + T_1", "in the method's step x: this adds what has different dimensions: 'q' is length²·mass/time³ (power), "
     "'T_1' is a temperature level"),
    ("y * 2", "in the method's step x: 'y' has no value"), ("q +", "in the method's step x: a value is missing here"),
    ("h(wf, p=p, T=T_1)", "in the method's step x: 'wf' is not a fluid of this sheet"),
    ("enthalpy(wf)", "in the method's step x: there is no property or function 'enthalpy'")])
def test_a_methods_faulty_step_is_named(laid, formula, what):
    assert only_fault(laid, plan_of(("x", formula)), {"q": "5 kW", "T_1": "20 degC", "p": "1 bar"}).what == what


def test_a_function_misspelt_as_a_look_up_is_offered(laid):
    fault = only_fault(laid, plan_of(("x", "sqr(q)")), {"q": "5"})
    assert fault.hint == "did you mean 'sqrt'?"


def test_one_fault_is_told_once_and_what_hangs_on_it_is_not_blamed(laid):
    plan = plan_of(("a", "q + 1"), ("b", "a * 2"), ("c", "b + a"), ("d", "q * missing"))
    _, faults = laid(plan, {"q": "5 kW"})
    assert [fault.what.split(":")[0] for fault in faults] == ["in the method's step a", "in the method's step d"]


def test_a_symbol_can_have_one_value_only(laid):
    assert only_fault(laid, plan_of(("q", "2")), {"q": "5 kW"}).what == "'q' already has a value"


def test_a_symbol_used_too_early_is_told_as_such(laid):
    fault = only_fault(laid, plan_of(("a", "b + q"), ("b", "q")), {"q": "5 kW"})
    assert fault.what == "in the method's step a: 'b' is used before it has a value"


@pytest.mark.parametrize("formula, spelled, what", [
    ("q * 2", "bar", "Q is length²·mass/time³ (power), its unit 'bar' is mass/(length·time²) (pressure)"),
    ("T_1 - T_2", "degC", "Q is a temperature difference, its unit 'degC' is for levels")])
def test_a_print_unit_must_fit(laid, formula, spelled, what):
    plan = plan_of(("Q", formula), unit_=spelled)
    assert only_fault(laid, plan, {"q": "5 kW", "T_1": "20 degC", "T_2": "10 degC"}).what == what


def test_a_roots_bracket_must_be_of_the_unknowns_kind(laid):
    plan = Plan({}, {})
    plan.section("One").root("T", "T - T_1", ("T_1 - 5 K", "q"), "Unknown", "degC")
    plan.close("T")
    assert only_fault(laid, plan, {"q": "5 kW", "T_1": "20 degC"}).what == (
        "the bracket's high end is length²·mass/time³ (power), the unknown T is a temperature level")


def test_branches_must_be_of_one_kind(laid):
    plan = Plan({}, {})
    plan.section("One").choice("x", (("q > 2 kW", "q", "big"), ("", "5 bar", "small")), "Chosen")
    assert only_fault(laid, plan, {"q": "5 kW"}).what == (
        "the branches differ: one is length²·mass/time³ (power), one is mass/(length·time²) (pressure)")


def test_a_tables_rows_must_fit(laid):
    plan = Plan({}, {})
    plan.section("One").lookup("x", "q", (("1 kW", "5 %"), ("2 bar", "6 %")), "Looked up", "R1")
    assert only_fault(laid, plan, {"q": "1 kW"}).what.startswith("the table's row 2 bar, 6 % does not fit")


OWN = """\
  fluids: {wf: propane}
  inputs: {p_1: 8 bar, T_1: 60 degC, m_dot: 2 kg/s}
steps:
"""


@pytest.mark.parametrize("step, line, column, what", [
    ("{symbol: a, title: A, formula: m_dot * p_1 + T_1}", 9, None,
     "this adds what has different dimensions: 'm_dot * p_1' is mass²/(length·time³), 'T_1' is a temperature level"),
    ("{symbol: a, title: A, formula: m_dott * 2}", 9, 36, "'m_dott' has no value"),
    ("{symbol: a, title: A, formula: 'h(wf, p=T_1, T=T_1)'}", 9, None,
     "p= takes mass/(length·time²) (pressure), this is a temperature level"),
    ("{symbol: a, title: A, formula: 'h(wx, p=p_1, T=T_1)'}", 9, None, "'wx' is not a fluid of this sheet"),
    ("{symbol: a, title: A, formula: 'h(wf, q=p_1, T=T_1)'}", 9, None, "'q' is not a property"),
    ("{symbol: a, title: A, formula: m_dot ** 2}", 9, 42, "'**' is not an operator here"),
    ("{symbol: p_1, title: A, formula: m_dot}", 9, 14, "the symbol 'p_1' has a value already, as an input")])
def test_a_fault_in_an_own_step_stands_in_the_file(own_sheet, solution_of, step, line, column, what):
    with pytest.raises(CalcpackError) as caught:
        solution_of(own_sheet(f"{OWN}  - {step}\n"))
    fault, = caught.value.faults
    assert fault.what == what
    assert (fault.place.file, fault.place.line) == ("test.yaml", line)
    if column is not None:
        assert fault.place.column == column


def test_all_faults_of_a_spec_come_together_in_the_order_of_the_file(own_sheet, solution_of):
    steps = ("  - {symbol: a, title: A, formula: m_dot + p_1}\n  - {symbol: b, title: B, formula: a * 2}\n"
             "  - {symbol: c, title: C, formula: m_dot * nothing}\nresults: [zzz]\n")
    with pytest.raises(CalcpackError) as caught:
        solution_of(own_sheet(OWN.replace("2 kg/s", "2 kg/s, odd: 5 parsec") + steps))
    assert [fault.place.line for fault in caught.value.faults] == sorted(
        fault.place.line for fault in caught.value.faults)
    whats = [fault.what for fault in caught.value.faults]
    assert whats[0] == "'parsec' is not a unit that calcpack reads"
    assert any("'nothing' has no value" in what for what in whats) and any("this adds" in what for what in whats)
    assert not any("'a'" in what for what in whats)
