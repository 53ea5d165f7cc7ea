"""Programs: every step kind evaluated, and what has no answer told with the step's number."""
from __future__ import annotations

import pytest

from calcpack.errors import NoAnswerError
from calcpack.plan.plan import Plan
from calcpack.solving.program import Program
from calcpack.solving.tables import interpolated, neighbours


def section_of():
    plan = Plan({}, {})
    return plan, plan.section("One")


def fault_of(run, plan, inputs):
    with pytest.raises(NoAnswerError) as caught:
        run(plan, inputs)
    return caught.value.faults[0]


def test_formulas_are_evaluated_in_si(run):
    plan, section = section_of()
    section.formula("Q", "m_dot * cp * dT", "Heat")
    assert run(plan, {"m_dot": "3600 kg/h", "cp": "4.2 kJ/(kg·K)", "dT": "10 K"})[1]["Q"] == pytest.approx(42e3,
        rel=1e-12)


@pytest.mark.parametrize("x, value, held", [("1", 10.0, 0), ("2", 10.0, 0), ("2.5", 20.0, 1), ("9", 30.0, 2)])
def test_a_choice_takes_the_first_branch_that_holds(run, x, value, held):
    plan, section = section_of()
    section.choice("y", (("x <= 2", "10", "low"), ("x < 5 or x < 3", "20", "middle"), ("", "30", "high")), "Chosen")
    program, values = run(plan, {"x": x})
    assert (values["y"], program.held["y"]) == (value, held)


POINTS = (("0 kW", "50 %"), ("10 kW", "70 %"), ("30 kW", "80 %"))


@pytest.mark.parametrize("at, value", [("0 kW", 0.5), ("5 kW", 0.6), ("10 kW", 0.7), ("20 kW", 0.75), ("30 kW", 0.8)])
def test_a_lookup_interpolates_between_neighbours(run, at, value):
    plan, section = section_of()
    section.lookup("eta", "Q", POINTS, "Efficiency", "data sheet")
    assert run(plan, {"Q": at})[1]["eta"] == pytest.approx(value, rel=1e-12)


@pytest.mark.parametrize("at", ["-0.001 kW", "30.001 kW"])
def test_a_lookup_outside_its_table_is_no_guess(run, at):
    plan, section = section_of()
    section.lookup("eta", "Q", POINTS, "Efficiency", "data sheet")
    fault = fault_of(run, plan, {"Q": at})
    assert fault.what == "step 1.1, eta (efficiency): the value looked up is outside the table"
    assert fault.expected == "from 0 kW to 30 kW"


def test_neighbours_of_a_point_of_the_table():
    table = [(0.0, 1.0), (1.0, 2.0), (2.0, 4.0)]
    assert neighbours(table, 0.0) == neighbours(table, 1.0) == (table[0], table[1])
    assert neighbours(table, 2.0) == (table[1], table[2])
    assert interpolated(table, 1.5) == 3.0


@pytest.mark.parametrize("reduction, value", [("min", 1.0), ("max", 9.0), ("sum", 14.0), ("mean", 14.0 / 3)])
def test_a_series_is_reduced(run, reduction, value):
    plan, section = section_of()
    section.series("s", reduction, "square", (("one", "a"), ("two", "a + 1"), ("three", "a + 2")),
                   (("n", "Number", "", None), ("square", "Square", "n^2", None)), "Series")
    program, values = run(plan, {"a": "1"})
    assert values["s"] == pytest.approx(value, rel=1e-14)
    assert program.tables["s"] == [[1.0, 1.0], [2.0, 4.0], [3.0, 9.0]]


def test_a_root_leaves_the_values_of_its_body_at_the_root(run):
    plan, section = section_of()
    section.root("x", "f - goal", ("0", "10"), "Unknown")
    section.formula("g", "x + 1", "Body")
    section.formula("f", "g^2", "Body")
    plan.close("x")
    section.formula("after", "f * 2", "After")
    program, values = run(plan, {"goal": "16"})
    assert values["x"] == pytest.approx(3.0, abs=1e-9)
    assert (values["g"], values["f"], values["after"]) == pytest.approx((4.0, 16.0, 32.0), rel=1e-9)
    assert (program.roots["x"].low, program.roots["x"].high) == (0.0, 10.0)


def nested_roots():
    """x + y = total with the inner y = x / 2."""
    plan, section = section_of()
    section.root("x", "x + y - total", ("0", "total"), "Outer")
    section.root("y", "2 * y - x", ("-1", "total"), "Inner")
    plan.close("y")
    plan.close("x")
    return plan


def test_roots_nest(run):
    _, values = run(nested_roots(), {"total": "9"})
    assert (values["x"], values["y"]) == pytest.approx((6.0, 3.0), rel=1e-9)


def test_a_residual_at_a_trial_value_changes_nothing_that_the_run_found(laid):
    plan, section = section_of()
    section.root("x", "s - 6", ("0", "10"), "Unknown")
    section.series("s", "sum", "n", (("one", "x"), ("two", "2 * x")), (("n", "Number", "", None),), "Series")
    section.choice("c", (("x < 5", "1", "low"), ("", "2", "high")), "Choice")
    plan.close("x")
    program = Program(laid(plan, {})[0])
    values = program.run({})
    before = ({name: [list(row) for row in rows] for name, rows in program.tables.items()}, dict(program.held),
              dict(program.roots))
    assert program.residual_at("x", 7.0, values) == pytest.approx(15.0)
    assert (program.tables, program.held, program.roots) == before
    assert values["x"] == pytest.approx(2.0, abs=1e-9)


def test_an_optimum_is_found_by_its_body(run):
    plan, section = section_of()
    section.optimum("x", "area", ("0 m", "10 m"), "Side of the largest yard", "m", sense="greatest")
    section.formula("area", "x * (fence - 2 * x)", "Area")
    plan.close("x")
    program, values = run(plan, {"fence": "20 m"})
    assert values["x"] == pytest.approx(5.0, abs=1e-4)
    assert values["area"] == pytest.approx(50.0, abs=1e-6)
    assert program.optima["x"].objective == pytest.approx(50.0, abs=1e-6)


def test_a_demand_that_does_not_hold_stops_the_solution_with_its_own_words(run):
    plan, section = section_of()
    section.formula("y", "x * 2", "Doubled")
    plan.demand("y > 5 and x < 100", "the doubled value is too small", "take a greater x")
    assert run(plan, {"x": "3"})[1]["y"] == 6.0
    fault = fault_of(run, plan, {"x": "2"})
    assert (fault.what, fault.hint, fault.found, fault.expected) == (
        "the doubled value is too small", "take a greater x", "y = 4.00000, x = 2.00000", "y > 5 and x < 100")


@pytest.mark.parametrize("formula, x, what", [
    ("1 / x", "0", "a division by zero"), ("ln(x)", "-1", "a root or logarithm of a number that has none"),
    ("sqrt(x)", "-1", "a root or logarithm of a number that has none"),
    ("exp(x)", "1000", "arithmetic without a real result"),
    ("(x^12)^12", "1e9", "arithmetic without a real result")])
def test_arithmetic_without_an_answer_is_told_in_words(run, formula, x, what):
    plan, section = section_of()
    section.formula("y", formula, "Result")
    fault = fault_of(run, plan, {"x": x})
    assert fault.what == what
    assert fault.hint == f"see step 1.1, y = {formula}"


def test_a_power_that_leaves_the_real_numbers_is_no_result(run):
    plan, section = section_of()
    section.formula("y", "x^0.5", "Result")
    fault = fault_of(run, plan, {"x": "-4"})
    assert fault.what == "step 1.1, y: the result is not a finite real number"


def test_a_complex_value_used_further_is_told_as_arithmetic(run):
    plan, section = section_of()
    section.formula("y", "x^0.5", "Result")
    section.formula("z", "min(y, 2)", "Further")
    assert fault_of(run, plan, {"x": "-4"}).what == "arithmetic without a real result"


def test_no_root_is_told_with_the_innermost_step(run):
    plan = nested_roots()
    fault = fault_of(run, plan, {"total": "-9"})
    assert fault.what == "step 1.1, x (outer): the bracket is empty"


def test_a_program_runs_again_for_other_inputs(laid):
    program = Program(laid(nested_roots(), {"total": "1"})[0])
    assert [round(program.run({"total": total})["x"], 9) for total in (9.0, 3.0, 9.0)] == [6.0, 2.0, 6.0]


def test_a_root_that_is_not_there_is_told_in_the_units_of_print_with_the_inputs_behind_it(run):
    plan, section = section_of()
    section.root("T", "Q - UA * (T - T_0)", ("T_0", "T_0 + 5 K"), "Temperature of the wall", "degC")
    plan.close("T")
    fault = fault_of(run, plan, {"Q": "90 kW", "UA": "10 kW/K", "T_0": "20 degC"})
    assert fault.what == "step 1.1, T (temperature of the wall): the equation has no root in its bracket"
    assert fault.found == "left minus right is 90.00 kW at the low end and 40.00 kW at the high end"
    assert fault.hint == ("the bracket runs from T_0 = 293.150 K (20.00 °C) to T_0 + 5 K = 298.150 K (25.00 °C); it "
                          "hangs on the inputs Q, UA, T_0")


def test_a_fault_with_many_inputs_behind_it_names_those_that_its_step_reads(run):
    plan, section = section_of()
    names = [f"a_{index}" for index in range(7)]
    section.formula("b", " - ".join(names), "Seven")
    section.root("x", "x - b - c", ("7", "9"), "Unknown")
    plan.close("x")
    fault = fault_of(run, plan, dict.fromkeys((*names, "c"), "1"))
    assert fault.hint == "the bracket runs from 7 = 7.00000 to 9 = 9.00000; it hangs on the input c and through " \
                         "other steps on more"
