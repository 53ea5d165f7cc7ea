"""Trees to text and back: the same tree, the same value, brackets only where they are needed."""
from __future__ import annotations

import math

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from random_trees import any_tree, conditions, numbers, trees

from calcpack.formula.evaluate import value
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.scan import MAX_LENGTH, MAX_TOKENS, scan
from calcpack.formula.text import printed_quantity, substitute, to_text
from calcpack.formula.tree import Binary, Number, Symbol, symbols_of
from calcpack.units import unit
from calcpack.units.digits import number_text


def short_text(tree):
    text = to_text(tree)
    assume(len(text) <= MAX_LENGTH)
    return text


@given(any_tree())
def test_reading_the_text_of_a_tree_gives_the_tree(tree):
    assert parse(short_text(tree)) == tree


@given(conditions())
def test_reading_the_text_of_a_condition_gives_the_condition(tree):
    text = short_text(tree)
    assert parse_condition(text) == tree
    assert len(scan(text)) <= MAX_TOKENS


def evaluated_by_python(text):
    """Python's own reading of the same text: an outside check of what binds how."""
    names = {"sqrt": math.sqrt, "ln": math.log, "exp": math.exp, "abs": abs, "__builtins__": {}}
    names |= {"min": lambda *parts: min(parts), "max": lambda *parts: max(parts)}
    return eval(text.replace("^", "**"), names)  # the text was made by to_text from a tree of numbers


@given(trees(numbers().map(lambda number: Number(float(number.value), repr(float(number.value))))))
def test_a_text_means_what_python_takes_it_for(tree):
    assume(not symbols_of(tree))
    text = short_text(tree)
    try:
        meant = evaluated_by_python(text)
    except (ArithmeticError, ValueError, TypeError):
        return
    found = value(tree)
    assert found == meant or (found != found and meant != meant)


@pytest.mark.parametrize("text", [
    "a - (b - c)", "a / (b * c)", "(a + b) * c", "a * b + c", "-(a + b)", "-a * b", "a * (-b)", "(-2)^2", "-a^2",
    "(a^2)^3",
    "a^(-2)", "a^(b * c)", "sqrt(a + b)", "(2e3)^2", "(4 m)^2", "min(a + b, -c)", "a - (-3)", "-(-a)", "2 kg * a",
    "h(wf, p=p_1, x=1 - y)", "T_crit(wf)", "h(«R-1234ze(E)», p=2 bar, s=1.7 kJ/(kg·K))", "a / 50 1/s"])
def test_texts_with_the_fewest_brackets_stay_as_they_are(text):
    assert to_text(parse(text)) == text


@pytest.mark.parametrize("text, plain", [
    ("((a))+(b*c)", "a + b * c"), ("(a*b)/c", "a * b / c"), ("a^((2))", "a^2"), ("a*(b/c)", "a * (b / c)")])
def test_needless_brackets_go(text, plain):
    assert to_text(parse(text)) == plain


SYMBOLS = {"u": "kJ/kg", "v": "kJ/(kg·K)", "w": "", "y": "K", "z": "%"}


@given(trees(st.one_of(numbers(), st.sampled_from(sorted(SYMBOLS)).map(Symbol)), powers=False),
       st.fixed_dictionaries({name: st.floats(-1e4, 1e4) for name in SYMBOLS}), st.integers(0, 9))
def test_printed_numbers_read_back_and_evaluate_to_the_same(tree, drawn, decimals):
    texts = {name: number_text(number, decimals) for name, number in drawn.items()}
    nodes = {name: printed_quantity(texts[name], SYMBOLS[name]) for name in SYMBOLS}
    printed = substitute(tree, nodes)
    text = short_text(printed)
    assert parse(text) == printed
    in_si = {name: unit(SYMBOLS[name]).to_si(float(texts[name])) for name in SYMBOLS}
    try:
        meant = value(tree, in_si)
    except (ArithmeticError, ValueError):
        return
    found = value(parse(text))
    assert found == meant or (found != found and meant != meant)


def test_a_negative_printed_number_is_bracketed_beside_an_operator():
    tree = substitute(parse("a - b * c^2"), {name: printed_quantity("-3.20", "K") for name in "abc"})
    assert to_text(tree) == "(-3.20 K) - (-3.20 K) * (-3.20 K)^2"
    assert to_text(Binary("+", printed_quantity("-1", ""), Number(2.0, "2"))) == "(-1) + 2"


def test_a_fluids_designation_takes_the_place_of_its_role():
    tree = substitute(parse("h(wf, p=p_1, s=s_1)"), {"p_1": printed_quantity("2.50", "bar")}, {"wf": "R-1234ze(E)"})
    assert to_text(tree) == "h(«R-1234ze(E)», p=2.50 bar, s=s_1)"
    assert parse(to_text(tree)) == tree
