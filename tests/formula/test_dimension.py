"""The dimension reader against pint, and what it knows of temperature levels."""
from __future__ import annotations

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st
from random_trees import trees

from calcpack.errors import FormulaError
from calcpack.formula.dimension import PURE, TEMPERATURE, Measure, measure
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import Binary, Call, Negative, Node, Number, Symbol
from calcpack.units import unit

OUTSIDE = pint.UnitRegistry(cache_folder=None)
UNITS = {"m": "kg", "p": "Pa", "dT": "K", "E": "kJ", "r": "", "n": "mol", "t": "s", "V": "m³"}
PINT = {"m": "kilogram", "p": "pascal", "dT": "kelvin", "E": "joule", "r": "", "n": "mole", "t": "second",
    "V": "meter**3"}
LEAVES = st.one_of(st.sampled_from(sorted(UNITS)).map(Symbol),
                   st.sampled_from(["2", "0.5", "3"]).map(lambda text: Number(float(text), text)))


def with_powers(inner: st.SearchStrategy[Node]) -> st.SearchStrategy[Node]:
    exponent = st.sampled_from(["2", "3", "0.5"]).map(lambda text: Number(float(text), text))
    return st.one_of(inner, st.builds(lambda base, power: Binary("^", base, power), inner,
                                      st.one_of(exponent, exponent.map(Negative))))


def by_pint(node: Node) -> pint.Quantity:
    """The formula worked by pint with the magnitude set to 1 after each operation: units alone count."""
    match node:
        case Number():
            found = OUTSIDE.Quantity(1.0)
        case Symbol(name=name):
            found = OUTSIDE.Quantity(1.0, PINT[name])
        case Negative(operand=operand):
            found = by_pint(operand)
        case Binary(op="^", left=left, right=right):
            sign, number = (-1, right.operand) if isinstance(right, Negative) else (1, right)
            found = by_pint(left) ** (sign * number.value)
        case Binary(op=op, left=left, right=right):
            a, b = by_pint(left), by_pint(right)
            found = {"+": lambda: a + b, "-": lambda: a - 2.0 * b, "*": lambda: a * b, "/": lambda: a / b}[op]()
        case Call(name="sqrt", arguments=(part,)):
            found = by_pint(part) ** 0.5
        case Call(name="abs", arguments=(part,)):
            found = by_pint(part)
        case Call(name="min" | "max", arguments=parts):
            found = by_pint(parts[0])
            for other in parts[1:]:
                found = found + by_pint(other)
        case Call(arguments=(part,)):
            by_pint(part).to("")
            found = OUTSIDE.Quantity(1.0)
    return OUTSIDE.Quantity(1.0, found.units)


def known(symbol: Symbol) -> Measure:
    # No weight as a level: levels are this program's own, pint knows none in kelvin.
    dimension = unit(UNITS[symbol.name]).dimension
    return Measure(dimension, None if dimension == TEMPERATURE else 0.0)


@given(with_powers(trees(with_powers(LEAVES), powers=False, most=8)))
def test_dimensions_are_those_that_pint_finds(tree):
    try:
        meant = {name: power for name, power in by_pint(tree).dimensionality.items() if abs(power) > 1e-12}
    except pint.DimensionalityError:
        with pytest.raises(FormulaError):
            measure(tree, known, "")
        return
    found = measure(tree, known, "").dimension
    assert dict(found) == pytest.approx(meant, abs=1e-12)


MEASURES = {"T": Measure(TEMPERATURE, 1.0), "T_2": Measure(TEMPERATURE, 1.0), "dT": Measure(TEMPERATURE, 0.0),
    "r": PURE,
            "p": Measure(unit("Pa").dimension), "Q": Measure(unit("W").dimension),
            "cp": Measure(unit("J/(kg·K)").dimension),
            "T_open": Measure(TEMPERATURE, None)}


def measured(text, read=parse):
    return measure(read(text), lambda symbol: MEASURES[symbol.name], text)


@pytest.mark.parametrize("text, level", [
    ("T - T_2", 0.0), ("T + dT", 1.0), ("dT + T", 1.0), ("T - dT", 1.0), ("T + 5 K", 1.0), ("5 K + T", 1.0),
    ("dT + 5 K", 0.0), ("38 degC", 1.0), ("38 degC - T", 0.0), ("(T + T_2) / 2", 1.0), ("0.5 * (T + T_2)", 1.0),
    ("T + 0.25 * (T_2 - T)", 1.0), ("min(T, T_2)", 1.0), ("max(dT, 5 K)", 0.0), ("abs(T - T_2)", 0.0), ("-dT", 0.0),
    ("dT / r", 0.0), ("dT * r", 0.0), ("T * r", None), ("T / r", None), ("T_open + dT", None), ("T_open + 5 K", None),
    ("sqrt(T * T_2)", None), ("2 * T - T_2", 1.0), ("Q / (Q / T)", None), ("5 degR + T", None)])
def test_levels_and_differences(text, level):
    if text == "5 degR + T":
        level = 1.0
    found = measured(text)
    assert found.dimension == TEMPERATURE
    assert found.level == level


@pytest.mark.parametrize("text, column, what", [
    ("T + T_2", 3, "this adds temperature levels to something that is neither a level nor a difference"),
    ("dT - T", 4, "this adds temperature levels to something that is neither a level nor a difference"),
    ("T + Q", 3, "this adds what has different dimensions: 'T' is a temperature level, "
     "'Q' is length²·mass/time³ (power)"),
    ("Q - r", 3, "this subtracts what has different dimensions: 'Q' is length²·mass/time³ (power), "
     "'r' is a pure number (number)"),
    ("ln(p)", 1, "ln takes a pure number: 'p' is mass/(length·time²) (pressure)"),
    ("exp(dT)", 1, "exp takes a pure number: 'dT' is a temperature difference"),
    ("2^p", 2, "the exponent must be a pure number: 'p' is mass/(length·time²) (pressure)"),
    ("p^r", 2, "'p' is mass/(length·time²) (pressure): only a written number can be its exponent"),
    ("min(T, dT)", 8, "min compares a temperature level with a difference"),
    ("max(p, Q)", 8, "max compares what has different dimensions: 'p' is mass/(length·time²) (pressure), "
     "'Q' is length²·mass/time³ (power)")])
def test_what_does_not_fit_is_named_with_its_dimensions(text, column, what):
    with pytest.raises(FormulaError) as caught:
        measured(text)
    fault = caught.value.faults[0]
    assert (fault.place.column, fault.what) == (column, what.replace(" (number)", ""))


@pytest.mark.parametrize("text", ["T < dT", "T < Q", "r < p and r < r", "T < T_2 or dT > T"])
def test_conditions_compare_like_with_like(text):
    with pytest.raises(FormulaError):
        measured(text, parse_condition)


@pytest.mark.parametrize("text", ["T < T_2", "T < 38 degC", "dT > 5 K", "T > 300 K and r < 1"])
def test_conditions_that_fit(text):
    assert measured(text, parse_condition) == PURE


@pytest.mark.parametrize("text, symbol", [
    ("Q / p", "m³/s"), ("r^2.5", ""), ("p^0.5 * p^0.5", "Pa"), ("cp * dT", "J/kg"), ("ln(p / p)", ""),
    ("Q / (cp * dT)", "kg/s"),
    ("p^(1/2) * p^(1/2)", "Pa"), ("exp(r)^r", "")])
def test_dimensions_of_formulas(text, symbol):
    assert measured(text).dimension == unit(symbol).dimension
