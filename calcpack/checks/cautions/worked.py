"""A formula of a code and its numbers to its value and to the line that a reader can do again.

The formulas of codes are tied to units (kg, m³, L/s), so they are evaluated in
those units and not in SI; the value comes from the operands as printed.
"""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.formula.evaluate import value as evaluated
from calcpack.formula.parse import parse
from calcpack.formula.text import printed_quantity, substitute, to_text
from calcpack.units import shown_with_unit
from calcpack.units.digits import decimals_for, number_text

OPERAND_DIGITS = 6
RESULT_DIGITS = 4

Operand = float | tuple[float, str]
"""A bare number, or a number with the unit that the formula takes it in."""


@dataclass(frozen=True, slots=True)
class Worked:
    """The ``value``, in ``unit``, and the ``line``: symbol = formula = numbers = result, with the units."""

    value: float
    unit: str
    line: str

    @property
    def shown(self) -> str:
        """The value as the line prints it."""
        return shown_with_unit(printed(self.value, RESULT_DIGITS), self.unit)


def worked(symbol: str, formula: str, unit: str, **operands: Operand) -> Worked:
    """Evaluate ``formula`` with ``operands``, given in the units that it takes, to a value in ``unit``."""
    tree = parse(formula)
    pairs = {name: one if isinstance(one, tuple) else (one, "") for name, one in operands.items()}
    texts = {name: plain(number) for name, (number, _) in pairs.items()}
    value = float(evaluated(tree, {name: float(text) for name, text in texts.items()}))
    numbers = to_text(substitute(tree, {name: printed_quantity(text, "") for name, text in texts.items()}))
    units = [f"{name} in {in_unit}" for name, (_, in_unit) in pairs.items() if in_unit]
    result = shown_with_unit(printed(value, RESULT_DIGITS), unit)
    line = f"{symbol} = {formula} = {numbers} = {result}" + (f", with {', '.join(units)}" if units else "")
    return Worked(value, unit, line)


def plain(number: float) -> str:
    """A number to six digits without the zeros behind them."""
    text = printed(number, OPERAND_DIGITS)
    return text.rstrip("0").rstrip(".") if "." in text and "e" not in text else text


def printed(number: float, digits: int) -> str:
    """A number to so many significant digits, but never fewer than its whole part has."""
    return number_text(number, max(0, decimals_for(number, digits)))


def lines(*found: Worked | None) -> str:
    """The lines of several workings, one below the other."""
    return "\n".join(one.line for one in found if one is not None)
