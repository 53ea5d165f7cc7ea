"""The engineer's own steps: any order that can be evaluated, circles named, unknowns closed in time."""
from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.errors import CalcpackError, Place, SpecError
from calcpack.plan.order import ordered
from calcpack.plan.steps import Closing, RootStep, Step


@st.composite
def chains(draw):
    """Steps s0 … sn, each using some of those before it, in a drawn order of writing."""
    count = draw(st.integers(1, 9))
    uses = {f"s{i}": draw(st.lists(st.sampled_from([f"s{j}" for j in range(i)] or ["given"]), max_size=3, unique=True))
            for i in range(count)}
    order = draw(st.permutations(sorted(uses)))
    return [Step(name, name, " + ".join([*uses[name], "1"])) for name in order], uses


@given(chains())
def test_each_step_comes_after_what_it_uses_and_none_is_lost(case):
    steps, uses = case
    found = [step.symbol for step in ordered(steps, uses)]
    assert sorted(found) == sorted(uses)
    for name in found:
        assert all(found.index(used) < found.index(name) for used in uses[name] if used in uses)


@given(chains())
def test_steps_written_in_order_stay_as_written(case):
    steps, uses = case
    steps = sorted(steps, key=lambda step: step.symbol)
    assert ordered(steps, uses) == steps


def fault_of(steps, uses):
    with pytest.raises(SpecError) as caught:
        ordered(steps, uses)
    return caught.value.faults[0]


def at(line):
    return Place("s.yaml", line, 5)


def test_a_circle_is_named_at_its_first_step():
    steps = [Step("a", "A", "1 + given", place=at(4)), Step("b", "B", "c", place=at(9)),
        Step("c", "C", "d + a", place=at(6)),
             Step("d", "D", "b", place=at(8))]
    fault = fault_of(steps, {"a": ["given"], "b": ["c"], "c": ["d", "a"], "d": ["b"]})
    assert fault.what == "these steps form a circle: b needs c needs d needs b"
    assert fault.place == at(6)
    assert fault.hint == "make one of them a root: an unknown with an equation and a bracket"


def test_a_step_that_needs_itself_is_a_circle():
    assert fault_of([Step("a", "A", "a + 1", place=at(1))], {"a": ["a"]}).what == \
        "these steps form a circle: a needs a"


def test_a_roots_closing_stands_behind_the_last_step_of_its_equation():
    root = RootStep("x", "X", "f - 3", low="0", high="9")
    steps = [Step("after", "After", "x * 2"), Step("f", "F", "g + x"), root, Step("g", "G", "x^2"),
        Step("far", "Far", "after")]
    uses = {"after": ["x"], "f": ["g", "x"], "x": [], "g": ["x"], "far": ["after"]}
    found = ordered(steps, uses)
    names = [item.symbol for item in found]
    closing = found.index(Closing("x"))
    assert names.index("x") < names.index("g") < names.index("f") < closing
    assert closing == names.index("f") + 1


CIRCLE = """\
  inputs: {V: 2 m3, n: 100 mol, T: 300 K}
steps:
  - {symbol: p, title: Pressure, formula: n * R * T / V_gas, unit: bar}
  - {symbol: V_gas, title: Volume, formula: V - k * p}
  - {symbol: R, title: Constant, formula: 8.314 J/(mol·K)}
  - {symbol: k, title: Give, formula: 0.1 m3 / 1 bar}
"""


def test_a_circle_in_a_spec_is_told_at_its_formula(own_sheet, solution_of):
    with pytest.raises(CalcpackError) as caught:
        solution_of(own_sheet(CIRCLE))
    fault = caught.value.faults[0]
    assert fault.what == "these steps form a circle: p needs V_gas needs p"
    assert fault.place.line == 8


TWO_ROOTS = """\
  inputs: {total: 10 m, gap: 2 m}
steps:
  - {symbol: check, title: Product, formula: x * y}
  - {symbol: y, title: Second unknown, unit: m, root: {equation: x - y - gap, between: [0 m, 20 m]}}
  - {symbol: both, title: Sum, formula: x + y}
  - {symbol: x, title: First unknown, unit: m, root: {equation: both - total, between: [0 m, 20 m]}}
"""


def test_two_unknowns_that_need_each_other_are_solved_in_any_order_of_writing(own_sheet, solution_of):
    text = own_sheet(TWO_ROOTS)
    head, *steps = text.split("\n  - ")
    for turn in range(len(steps)):
        turned = [one.rstrip("\n") for one in steps[turn:] + steps[:turn]]
        solution = solution_of("\n  - ".join([head, *turned]) + "\n")
        assert solution.value("x") == pytest.approx(6.0, abs=1e-8)
        assert solution.value("y") == pytest.approx(4.0, abs=1e-8)
        assert solution.value("check") == pytest.approx(24.0, abs=1e-7)
