"""Tokens: numbers take their unit along, columns are kept, what has no place is told."""
from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.errors import FormulaError
from calcpack.formula.scan import MAX_LENGTH, MAX_TOKENS, scan
from calcpack.units.spellings import UNITS


def kinds(text):
    return [(token.kind, token.text, token.unit) for token in scan(text)[:-1]]


def fault_of(text):
    with pytest.raises(FormulaError) as caught:
        scan(text)
    return caught.value.faults[0]


@pytest.mark.parametrize("text, tokens", [
    ("4.2 kJ/(kg·K) * m", [("number", "4.2", "kJ/(kg·K)"), ("sign", "*", None), ("name", "m", None)]),
    ("2 * kg", [("number", "2", None), ("sign", "*", None), ("name", "kg", None)]),
    ("(5 kW)", [("sign", "(", None), ("number", "5", "kW"), ("sign", ")", None)]),
    ("(4 J/(kg·K))", [("sign", "(", None), ("number", "4", "J/(kg·K)"), ("sign", ")", None)]),
    ("50 1/s", [("number", "50", "1/s")]),
    ("1e-3 m2", [("number", "1e-3", "m²")]),
    ("x < 5 and y", [("name", "x", None), ("comparison", "<", None), ("number", "5", None), ("name", "and", None),
                     ("name", "y", None)]),
    ("max(5 K, 3 K)", [("name", "max", None), ("sign", "(", None), ("number", "5", "K"), ("sign", ",", None),
                       ("number", "3", "K"), ("sign", ")", None)]),
    ("h(«R-1234ze(E)», x=1)", [("name", "h", None), ("sign", "(", None), ("name", "R-1234ze(E)", None),
                               ("sign", ",", None), ("name", "x", None), ("sign", "=", None), ("number", "1", None),
                               ("sign", ")", None)]),
    ("T_1-T_2", [("name", "T_1", None), ("sign", "-", None), ("name", "T_2", None)]),
    ("20 %", [("number", "20", "%")])])
def test_tokens_of_a_text(text, tokens):
    assert kinds(text) == tokens


@pytest.mark.parametrize("symbol", sorted(UNITS))
def test_every_unit_as_printed_is_read_behind_a_number(symbol):
    assert kinds(f"12.5 {symbol}") == [("number", "12.5", symbol)]
    assert kinds(f"(12.5 {symbol}) * x")[1] == ("number", "12.5", symbol)


def test_columns_count_from_the_start_of_the_text():
    assert [token.at for token in scan("  a + 2.5 kW*b".replace("*", " * "))] == [2, 4, 6, 13, 15, 16]


@pytest.mark.parametrize("text, column, what, hint", [
    ("a ** 2", 3, "'**' is not an operator here", "write a power with ^"),
    ("a.b", 2, "'.' has no place in a formula", "there are no attributes and no method calls"),
    ("a[0]", 2, "'[' has no place in a formula", "there is no indexing"),
    ("a × b", 3, "'×' has no place in a formula", "write a product with *"),
    ("a − b", 3, "'−' has no place in a formula", "write minus with the hyphen -"),
    ("__import__", 1, "'_' has no place in a formula", "a symbol starts with a letter"),
    ("a; b", 2, "';' has no place in a formula", None), ("'a'", 1, '"\'" has no place in a formula', None),
    ("a\\b", 2, "'\\\\' has no place in a formula", None), ("lambda: 0", 7, "':' has no place in a formula", None),
    ("{a}", 1, "'{' has no place in a formula", None), ("a @ b", 3, "'@' has no place in a formula", None),
    ("ηa", 1, "'η' has no place in a formula", None), ("x + ａ", 5, "'ａ' has no place in a formula", None),
    ("x\u200b+ 1", 2, "'\\u200b' has no place in a formula", None), ("«R»", 1, "'«' has no place in a formula", None),
    ("1,5 * a", 2, "a comma stands inside a number", "write the decimal point as '.'"),
    ("2x", 2, "a letter follows the number", "write a product with *, and put one space before a unit"),
    ("5.kW", 2, "a letter follows the number", "write a product with *, and put one space before a unit"),
    ("1_000", 2, "a letter follows the number", "write a product with *, and put one space before a unit"),
    ("0x10", 2, "a letter follows the number", "write a product with *, and put one space before a unit"),
    ("5 parsec", 3, "'parsec' is not a unit that calcpack reads",
     "units and their case are listed by 'calcpack methods --units'"),
    ("5 bar(g)", 3, "'bar(g)' is not a unit that calcpack reads",
     "a gauge pressure can be given as an input only; its absolute value enters the formulas")])
def test_what_has_no_place_is_told_with_its_column(text, column, what, hint):
    fault = fault_of(text)
    assert (fault.place.column, fault.what, fault.hint) == (column, what, hint)


def test_digits_of_other_scripts_are_no_numbers():
    assert fault_of("2 * ٣").place.column == 5


def test_length_and_number_of_parts_are_bounded():
    assert scan("a" * MAX_LENGTH)
    assert fault_of("a" * (MAX_LENGTH + 1)).what == f"the formula is longer than {MAX_LENGTH} characters"
    assert len(scan("+".join("a" * (MAX_TOKENS // 2)))) == MAX_TOKENS
    fault = fault_of("+".join("a" * 200))
    assert (fault.what, fault.place.column) == (f"the formula has more than {MAX_TOKENS} parts", MAX_TOKENS + 1)


@given(st.text(max_size=60))
def test_any_text_is_tokens_or_a_formula_error(text):
    try:
        tokens = scan(text)
    except FormulaError as error:
        assert 1 <= error.faults[0].place.column <= len(text) + 1
        return
    assert tokens[-1].kind == "end"
    assert [token.at for token in tokens] == sorted(token.at for token in tokens)
