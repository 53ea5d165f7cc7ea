"""Compiled formulas: floats and arrays agree, and arithmetic without an answer says so."""
from __future__ import annotations

import math

import numpy
import pytest
from hypothesis import given
from hypothesis import strategies as st
from random_trees import conditions, numbers, trees

from calcpack.formula.evaluate import compiled, value
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import Call, Symbol, children
from calcpack.units import unit

SLOTS = {"u": 0, "v": 1, "w": 2}
LEAVES = st.one_of(numbers(), st.sampled_from([*SLOTS, "pi"]).map(Symbol))
COLUMN = st.lists(st.one_of(st.floats(-1e3, 1e3), st.sampled_from([0.0, 1.0, -1.0])), min_size=4, max_size=4)


def exact(tree):
    """Whether only correctly rounded operations occur: then floats and arrays give the same bits."""
    return not (isinstance(tree, Call) and tree.name in ("ln", "exp")) and all(map(exact, children(tree)))


@given(trees(LEAVES, powers=False).filter(exact), COLUMN, COLUMN, COLUMN)
def test_arrays_give_what_floats_give(tree, u, v, w):
    by_float, by_array = compiled(tree, SLOTS), compiled(tree, SLOTS, arrays=True)
    try:
        with numpy.errstate(all="ignore"):
            found = numpy.broadcast_to(by_array([numpy.array(u), numpy.array(v), numpy.array(w)]), 4)
    except (ArithmeticError, ValueError) as error:
        # A part of written numbers only is worked as floats, whatever the symbols are.
        with pytest.raises(type(error)):
            by_float((u[0], v[0], w[0]))
        return
    for index, row in enumerate(zip(u, v, w, strict=True)):
        try:
            alone = by_float(row)
        except (ArithmeticError, ValueError):
            # Where floats stop, arrays go on with nan or inf: there is nothing to compare.
            continue
        assert alone == found[index] or not math.isfinite(alone)


@pytest.mark.parametrize("text", ["u^2", "u^0.5", "exp(u / 500)", "ln(u)", "u^w", "exp(ln(u))", "u^(-1.4)"])
@given(u=st.floats(1e-3, 1e3), w=st.floats(-3.0, 3.0))
def test_powers_and_logarithms_of_arrays_agree_to_rounding(text, u, w):
    tree = parse(text)
    found = compiled(tree, SLOTS, arrays=True)([numpy.array([u, u]), 0.0, w])
    assert found == pytest.approx([compiled(tree, SLOTS)([u, 0.0, w])] * 2, rel=1e-13)


@given(conditions())
def test_conditions_hold_alike_for_floats_and_arrays(tree):
    names = ("T_1", "T_source_in", "Q_dot_sink", "eta", "x", "h_4s", "dT_pinch_e", "min", "e1")
    slots = {name: index for index, name in enumerate(names)}
    row = [0.5 + index for index in range(len(names))]
    try:
        alone = compiled(tree, slots)(row)
    except (ArithmeticError, ValueError, TypeError):
        return
    with numpy.errstate(all="ignore"):
        found = compiled(tree, slots, arrays=True)([numpy.full(3, number) for number in row])
    if all(exact(part) for part in children(tree)) and "^" not in repr(tree):
        assert numpy.broadcast_to(found, 3).tolist() == [bool(alone)] * 3


@pytest.mark.parametrize("text, number", [
    ("2 + 3 * 4", 14.0), ("2^3", 8.0), ("-2^2", -4.0), ("10 / 4 / 5", 0.5), ("sqrt(16)", 4.0),
    ("ln(exp(2))", 2.0), ("min(3, 1, 2)", 1.0), ("max(3)", 3.0), ("abs(-3)", 3.0), ("2 * pi", 2 * math.pi),
    ("38 degC", 311.15), ("2 kW", 2000.0), ("5 %", 0.05), ("1 bar / 100 kPa", 1.0), ("60 1/min", 1.0),
    ("4.2 kJ/(kg·K) * 10 K", 42000.0), ("9 degR", 5.0)])
def test_values_of_formulas(text, number):
    assert value(parse(text)) == pytest.approx(number, rel=1e-14)


@pytest.mark.parametrize("text, kind", [
    ("1 / 0", ZeroDivisionError), ("ln(0)", ValueError), ("ln(-1)", ValueError), ("sqrt(-1)", ValueError),
    ("exp(1000)", OverflowError), ("((9^12)^12)^12", OverflowError), ("0^(-1)", ZeroDivisionError)])
def test_arithmetic_without_an_answer_raises(text, kind):
    with pytest.raises(kind):
        value(parse(text))


def test_a_tower_of_powers_costs_no_time():
    assert value(parse("(9^9)^9")) == 9.0**81


def test_a_condition_on_values():
    holds = compiled(parse_condition("u < 5 and v >= 2 or w > 1"), SLOTS)
    assert [bool(holds(row)) for row in ([4, 2, 0], [5, 2, 0], [4, 1, 0], [9, 9, 2])] == [True, False, False, True]


def test_symbols_are_read_from_their_slots_only():
    assert value(parse("u - v"), {"v": 2.0, "u": 5.0}) == 3.0
    with pytest.raises(KeyError):
        value(parse("u - missing"), {"u": 1.0})


def test_a_property_look_up_is_not_arithmetic():
    with pytest.raises(ValueError, match="evaluated by its fluid"):
        compiled(parse("h(wf, p=u, T=v)"), SLOTS)


@given(st.floats(-1e6, 1e6), st.sampled_from(["kJ/kg", "bar", "°R", "kBtu/h", "ft³/min"]))
def test_a_quantity_is_its_si_value(number, symbol):
    text = repr(abs(number))
    assert value(parse(f"{text} {symbol}")) == unit(symbol).to_si(abs(number))
