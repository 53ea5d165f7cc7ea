"""Formulas to trees: what binds how, what is refused and where, and that nothing takes long."""
from __future__ import annotations

import time

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.errors import FormulaError
from calcpack.formula.evaluate import value
from calcpack.formula.parse import MAX_DEPTH, parse, parse_condition
from calcpack.formula.tree import (
    Binary,
    Call,
    Compare,
    Logic,
    Negative,
    Number,
    PropertyCall,
    Quantity,
    Symbol,
    symbols_of,
    walk,
)

A, B, C, D = map(Symbol, "abcd")
TWO = Number(2.0, "2")


def fault_of(text, read=parse):
    with pytest.raises(FormulaError) as caught:
        read(text)
    return caught.value.faults[0]


@pytest.mark.parametrize("text, tree", [
    ("a + b * c", Binary("+", A, Binary("*", B, C))),
    ("a - b - c", Binary("-", Binary("-", A, B), C)),
    ("a / b / c", Binary("/", Binary("/", A, B), C)),
    ("a / b * c", Binary("*", Binary("/", A, B), C)),
    ("-a^2", Negative(Binary("^", A, TWO))),
    ("(-a)^2", Binary("^", Negative(A), TWO)),
    ("a^-2", Binary("^", A, Negative(TWO))),
    ("2^a * b", Binary("*", Binary("^", TWO, A), B)),
    ("-a * b", Binary("*", Negative(A), B)),
    ("a - -b", Binary("-", A, Negative(B))),
    ("min(a, b, c)", Call("min", (A, B, C))),
    ("a * 4.20 kJ/(kg·K)", Binary("*", A, Quantity(4.2, "4.20", "kJ/(kg·K)"))),
    ("pi", Symbol("pi")),
    ("h(wf, p=a, s=b)", PropertyCall("h", "wf", (("p", A), ("s", B)))),
    ("T_crit(wf)", PropertyCall("T_crit", "wf", ())),
    ("h(«R-1234ze(E)», p=2, x=a + b)", PropertyCall("h", "R-1234ze(E)", (("p", TWO), ("x", Binary("+", A, B))))),
    ("sqrt(a)", Call("sqrt", (A,)))])
def test_what_a_text_means(text, tree):
    assert parse(text) == tree


@pytest.mark.parametrize("text, tree", [
    ("a < b", Compare("<", A, B)), ("a + b >= c", Compare(">=", Binary("+", A, B), C)),
    ("a < b and b < c", Logic("and", Compare("<", A, B), Compare("<", B, C))),
    ("a < b or b < c and c < d",
     Logic("or", Compare("<", A, B), Logic("and", Compare("<", B, C), Compare("<", C, D)))),
    ("a < b and b < c or c < d",
     Logic("or", Logic("and", Compare("<", A, B), Compare("<", B, C)), Compare("<", C, D))),
    ("x < 5 and a > 2", Logic("and", Compare("<", Symbol("x"), Number(5.0, "5")), Compare(">", A, TWO)))])
def test_what_a_condition_means(text, tree):
    assert parse_condition(text) == tree


@given(st.booleans(), st.booleans(), st.booleans())
def test_and_binds_tighter_than_or(a, b, c):
    text = " {} ".join(f"{int(flag)} > 0.5" for flag in (a, b, c))
    assert bool(value(parse_condition(text.format("or", "and")))) == (a or (b and c))
    assert bool(value(parse_condition(text.format("and", "or")))) == ((a and b) or c)


TOWER = "a power of a power is not allowed"


@pytest.mark.parametrize("text, column, what", [
    ("9^9^9^9", 4, TOWER), ("a^b^c", 2, TOWER), ("9^(9^9)", 2, TOWER), ("a^13", 2, "the exponent is beyond 12"),
    ("a^-13", 2, "the exponent is beyond 12"), ("9**9**9**9", 2, "'**' is not an operator here"),
    ("eval(2)", 1, "there is no function 'eval'"), ("__import__('os')", 1, "'_' has no place in a formula"),
    ("a.real", 2, "'.' has no place in a formula"), ("a.__class__.__mro__", 2, "'.' has no place in a formula"),
    ("a[1]", 2, "'[' has no place in a formula"), ("a(b + c)", 1, "there is no function 'a'"),
    ("log(a, b)", 9, "'=' is missing here"), ("sqrt(a, b)", 1, "sqrt takes 1 argument"),
    ("min()", 5, "a value is missing here"),
    ("min(" + ", ".join("a" * 13) + ")", 1, "min takes 1 to 12 arguments"),
    ("a b", 3, "an operator is missing here"), ("a (2)", 1, "there is no function 'a'"),
    ("(a) (b)", 5, "an operator is missing here"),
    ("(a + b", 7, "')' is missing here"), ("a + b)", 6, "')' does not belong here"),
    ("a +", 4, "a value is missing here"),
    ("* a", 1, "a value is missing here"), ("", 1, "a value is missing here"), ("   ", 4, "a value is missing here"),
    ("a < b", 3, "a comparison stands where a value is meant"), ("a and b", 3, "an operator is missing here"),
    ("and", 1, "'and' stands where a value is meant"), ("a = b", 3, "'=' does not belong here"),
    ("a, b", 2, "',' does not belong here"), ("2 * h(wf, p=a)", 5, None), ("h(wf, p=a, p=b)", 12, "'p' is given twice"),
    ("h(wf, 5)", 7, "a known property is missing here"), ("h(wf, p)", 8, "'=' is missing here"),
    ("1e999", 1, "the number is too large")])
def test_what_is_refused_with_its_column(text, column, what):
    fault = fault_of(text)
    assert fault.place.column == column
    if what is not None:
        assert fault.what == what


@pytest.mark.parametrize("text, column, what", [
    ("a", 2, "a comparison is missing here"), ("a < b < c", 7, "a comparison stands where a value is meant"),
    ("a < b and", 10, "a value is missing here"), ("(a < b) and c < d", 4, "')' is missing here"),
    ("a == b", 3, "a comparison is missing here"), ("not a < b", 5, "a comparison is missing here")])
def test_conditions_that_are_refused(text, column, what):
    fault = fault_of(text, parse_condition)
    assert (fault.place.column, fault.what) == (column, what)


@pytest.mark.parametrize("text", [
    "(" * 300 + "a" + ")" * 299, "(" * 200 + "a" + ")" * 40, "-" * 200 + "a", "sqrt(" * 100 + "a" + ")" * 100,
    "+".join(["a"] * 300), "a^" * 200 + "a", "9^" * 299 + "9", "min(" * 80 + "a" + ",a)" * 80, "a" * 100_000,
    "(" * 100_000, "9" * 100_000, "1e" * 50_000, "a<" * 100_000])
@pytest.mark.parametrize("read", [parse, parse_condition])
def test_hostile_texts_are_refused_quickly(text, read):
    start = time.process_time()
    with pytest.raises(FormulaError):
        read(text)
    assert time.process_time() - start < 0.5


def test_the_depth_that_is_allowed_can_be_read_back_and_evaluated():
    deep = "(" * MAX_DEPTH + "2 + 3" + ")" * MAX_DEPTH
    assert value(parse(deep)) == 5.0
    assert fault_of("(" + deep + ")").what == f"the formula nests deeper than {MAX_DEPTH} levels"
    assert value(parse("+".join(["1"] * 120))) == 120.0


@given(st.text("ab12 +-*/^(),.<>=e_", max_size=40), st.sampled_from([parse, parse_condition]))
def test_any_text_is_a_tree_or_a_formula_error_inside_it(text, read):
    try:
        node = read(text)
    except FormulaError as error:
        place = error.faults[0].place
        assert (place.file, place.line) == ("", 1) and 1 <= place.column <= len(text) + 1
        return
    assert all(0 <= part.at <= len(text) for part in walk(node))


def test_a_name_near_a_function_is_offered():
    fault = fault_of("sqr(2 * a)")
    assert (fault.expected, fault.hint) == ("one of abs, exp, ln, max, min, sqrt", "did you mean 'sqrt'?")


def test_symbols_are_listed_once_in_reading_order_without_pi():
    assert symbols_of(parse("b * pi + a / b - min(c, a)")) == ("b", "a", "c")
