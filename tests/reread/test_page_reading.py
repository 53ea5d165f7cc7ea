"""Typeset formulas read back as a reader takes them: the value is that of the formula that was set."""
from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcpack.fluids import FluidDefinition
from calcpack.formula.evaluate import value
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import Binary, Call, Negative, Node, Quantity
from calcpack.formula.typeset import equation_html, node_html, quantity_html, symbol_html
from calcpack.reread.elements import elements_of
from calcpack.reread.linear import linear
from calcpack.reread.printed_fluids import definition_from, property_name
from calcpack.reread.reading import UnreadableError, read_line, read_value
from calcpack.reread.reckoning import last_place, reckoned
from calcpack.reread.terms import LookUp, Printed


def _line(html: str) -> str:
    return linear(elements_of(html)).strip(" ")


def _no_look_up(call: LookUp, given: tuple[float, ...]) -> float:
    raise AssertionError("no property stands here")


@pytest.mark.parametrize("text", [
    "1.2 kg/s * (300 kJ/kg - 250.5 kJ/kg)", "(3 kJ/kg - (-2.5 kJ/kg)) / (1 kJ/(kg*K) + 0.5 kJ/(kg*K))",
    "sqrt(4 m2 * 9 m2)", "2^0.5 * 3", "-(2 + 3) * 4", "1.5e-5 * 2e3", "abs(-3 K)", "min(5 K, 3 K, 9 K) * 2",
    "exp(-2 / 3) * ln(7)", "(1 - 2 / 3)^2", "8 / (2 / 4)", "8 / 2 / 4", "5 - (3 - 2)", "pi * 2 m", "2 min * 3"])
def test_a_formula_is_read_as_it_was_set(text: str) -> None:
    tree = parse(text)
    assert reckoned(read_line(_line(node_html(tree))), {}, _no_look_up) == pytest.approx(value(tree), rel=1e-14)


def _trees() -> st.SearchStrategy[Node]:
    numbers = st.integers(1, 9999).map(lambda n: Quantity(n / 8, f"{n / 8}", "kJ/kg"))

    def deeper(inner: st.SearchStrategy[Node]) -> st.SearchStrategy[Node]:
        both = st.tuples(st.sampled_from("+-*/"), inner, inner)
        return st.one_of(both.map(lambda one: Binary(*one)), inner.map(Negative),
                         st.lists(inner, min_size=1, max_size=3).map(lambda parts: Call("max", tuple(parts))),
                         inner.map(lambda one: Call("abs", (one,))),
                         inner.map(lambda one: Call("sqrt", (Call("abs", (one,)),))))
    return st.recursive(numbers, deeper, max_leaves=14)


@settings(max_examples=150, deadline=None)
@given(_trees(), st.sampled_from([18.0, 44.0, 90.0]))
def test_any_formula_is_read_as_it_was_set_however_its_lines_break(tree: Node, column: float) -> None:
    box = elements_of(equation_html(tree, column=column)).first(".equation")
    rows = box.children[0].children
    line = " ".join(linear(row) for row in rows)
    try:
        expected = value(tree)
    except (ZeroDivisionError, OverflowError):
        return
    if not math.isfinite(expected):
        return
    assert reckoned(read_line(line), {}, _no_look_up) == pytest.approx(expected, rel=1e-9, abs=1e-9)


def test_symbols_stand_side_by_side_and_keep_their_looks() -> None:
    term = read_line(_line(node_html(parse("m_dot_wf * (h_3 - h_4) * eta_m / COP"))))
    values = {_line(symbol_html(name)): number
              for name, number in (("m_dot_wf", 2.0), ("h_3", 9.0), ("h_4", 4.0), ("eta_m", 0.5), ("COP", 4.0))}
    assert reckoned(term, values, _no_look_up) == pytest.approx(1.25)


def test_conditions_say_whether_they_hold() -> None:
    for text, holds in (("2 K < 3 K and 5 > 4", 1.0), ("2 K >= 3 K or 1 > 4", 0.0), ("1 <= 1", 1.0)):
        assert reckoned(read_line(_line(node_html(parse_condition(text)))), {}, _no_look_up) == holds


def test_a_look_up_names_its_fluid_and_what_is_known() -> None:
    term = read_line(_line(node_html(parse("h(«R-1234ze(E)», p=2.5 bar, x=1)"))))
    assert isinstance(term, LookUp)
    assert (term.fluid, [property_name(key) for key, _ in term.given]) == ("R-1234ze(E)", ["p", "x"])
    constant = read_line(_line(node_html(parse("T_crit(wf)"))))
    assert isinstance(constant, LookUp) and property_name(constant.letter) == "T_crit"
    for name in ("cp", "rho", "x_eq", "lambda", "gamma"):
        assert property_name(_line(symbol_html(name))) == name


@pytest.mark.parametrize("line", ["3 K +", "(3 K", "3 K 4 K )", "", "= 3", "2 × × 3"])
def test_what_is_no_formula_is_refused(line: str) -> None:
    with pytest.raises(UnreadableError):
        read_line(line.replace(" K", "\u202fK"))


def test_numbers_of_every_form() -> None:
    assert read_value(_line(quantity_html("-1.20e-5", "kW"))) == Printed("-1.20e-5", "kW")
    assert read_value(_line(quantity_html("0.720", ""))) == Printed("0.720")
    assert last_place(Printed("1.20e-5")) == pytest.approx(1e-7)
    assert last_place(Printed("66950")) == 1.0
    assert last_place(Printed("1234560")) == 10.0


@pytest.mark.parametrize("definition", [
    FluidDefinition("R-290"), FluidDefinition("water", model="IF97"), FluidDefinition("R-134a", reference="IIR"),
    FluidDefinition("ethylene glycol", mass_fraction=0.3), FluidDefinition("oil", constant_cp=1900.0, density=870.0),
    FluidDefinition("exhaust", composition=(("N2", 0.71), ("CO2", 0.1234567890123), ("H2O", 0.16)), basis="mass")])
def test_a_fluid_is_stated_in_full(definition: FluidDefinition) -> None:
    assert definition_from(definition.words) == definition


def test_a_zero_that_is_not_the_fluids_own_is_refused() -> None:
    from calcpack.reread.printed_fluids import open_printed
    from calcpack.reread.printed_page import PrintedFluid
    own = "the equation's own zero of h and s, as in the property library"
    said = f"{own}; saturated liquid at 0.01 °C: h = 0.00 kJ/kg, s = 0.0000 kJ/(kg·K)"
    assert open_printed(PrintedFluid("F1", "water", {"As stated": "water", "Reference state": said}))
    for wrong in (said.replace("h = 0.00", "h = 1.00"), said.replace("s = 0.0000", "s = 0.1000"), "another zero"):
        with pytest.raises(UnreadableError):
            open_printed(PrintedFluid("F1", "water", {"As stated": "water", "Reference state": wrong}))
