"""A solved case: the plan with its numbers and their printed forms."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from calcpack.formula.text import printed_quantity, substitute, to_text
from calcpack.formula.tree import Node
from calcpack.plan.laid import LaidPlan, LaidStep
from calcpack.solving.printing import Printing
from calcpack.solving.program import Program
from calcpack.units import Unit, read_quantity, shown_with_unit, unit
from calcpack.units.digits import decimals_for, number_text

if TYPE_CHECKING:
    from calcpack.methods.method import Method
    from calcpack.spec import Spec


@dataclass(frozen=True, slots=True)
class Solution:
    """All that is known once a spec is solved; frozen, and read by checks and the record.

    ``values`` are SI floats by symbol, inputs included; ``system`` is the
    sheet's 'si' or 'us'; ``written`` is each input's text as the spec has it.
    """

    spec: Spec
    method: Method
    options: Mapping[str, str]
    plan: LaidPlan
    program: Program
    values: Mapping[str, float]
    printing: Printing
    system: str
    written: Mapping[str, str]
    p_atm: float

    def value(self, symbol: str) -> float:
        """The SI value of a symbol."""
        return self.values[symbol]

    def unit(self, symbol: str) -> Unit:
        """The unit that a symbol is printed in."""
        return self.printing.units[symbol]

    def shown(self, symbol: str) -> str:
        """The printed number of a symbol, with its unit."""
        return shown_with_unit(self.printing.shown(symbol), self.unit(symbol))

    def has(self, symbol: str) -> bool:
        """Whether the sheet gives this symbol a value."""
        return symbol in self.values

    def level(self, symbol: str) -> bool:
        """Whether a symbol is a temperature level."""
        from calcpack.plan.laid import is_level
        if symbol in self.plan.inputs:
            return is_level(self.plan.inputs[symbol].measure)
        return self.plan.step(symbol).level

    def also_shown(self, symbol: str) -> str | None:
        """The Celsius (or Fahrenheit) twin of a temperature level, else None."""
        if not self.level(symbol):
            return None
        return celsius_twin(self.values[symbol], self.printing.decimals[symbol], self.system)

    def printed_node(self, symbol: str) -> Node:
        """A symbol's printed value as a node of a formula."""
        return printed_quantity(self.printing.shown(symbol), self.unit(symbol).symbol)

    def numbers(self, tree: Node, local: Mapping[str, Node] | None = None) -> str:
        """A formula with the printed numbers for its symbols, as text that can be read back."""
        from calcpack.formula.tree import symbols_of
        nodes = {name: self.printed_node(name) for name in symbols_of(tree) if name not in (local or {})}
        names = {role: fluid.designation for role, fluid in self.plan.fluids.items()}
        return to_text(substitute(tree, nodes | dict(local or {}), names))

    def step(self, symbol: str) -> LaidStep:
        """The step that gives a symbol; KeyError for an input."""
        return self.plan.step(symbol)


def celsius_twin(value: float, decimals: int, system: str) -> str:
    """A level's everyday form: ``311.15`` K to ``'38.00 °C'``, or °F on a US sheet."""
    everyday = unit("°C" if system == "si" else "°F")
    return shown_with_unit(number_text(everyday.from_si(value), decimals), everyday)


def printed_freely(value: float, in_unit: Unit, significant: int = 4) -> str:
    """A number that is no symbol's value, such as a residual, with its unit."""
    number = in_unit.from_si(value)
    return shown_with_unit(number_text(number, decimals_for(number, significant)), in_unit)


def read_bound(text: str, symbol: str, solution: Solution) -> float:
    """A limit's bound [SI]: the value of a symbol, or a quantity of the same kind as ``symbol``."""
    if text in solution.values:
        return solution.values[text]
    kind = "temperature" if solution.level(symbol) else None
    return read_quantity(text, kind, p_atm=solution.p_atm).value
