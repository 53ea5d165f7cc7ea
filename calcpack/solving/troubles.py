"""What went wrong in a run to a fault in the engineer's words: the step, the units of print, the inputs behind it."""
from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace

from calcpack.errors import Fault, NoAnswerError, RootError
from calcpack.formula.dimension import Measure, measure
from calcpack.formula.text import to_text
from calcpack.formula.tree import symbols_of
from calcpack.plan.laid import LaidPlan, LaidStep, is_level
from calcpack.solving.cases import RowError
from calcpack.units import Unit, print_unit, shown_with_unit, unit
from calcpack.units.digits import decimals_for, number_text

FEW = 6
"""So many inputs can be named in a hint and still help."""


class UnmetError(NoAnswerError):
    """A demand that does not hold: its own words are the message, whatever step was being solved."""


class Teller:
    """Words the values of a plan for messages."""

    def __init__(self, plan: LaidPlan) -> None:
        self.plan = plan
        self.known = {one.symbol: (one.unit, one.measure) for one in (*plan.inputs.values(), *plan.steps)}

    def value(self, name: str, value: float) -> str:
        """A symbol's value [SI] in the unit it is printed in; a temperature level with its everyday twin."""
        shown_in, found = self.known[name]
        text = _in_unit(value, shown_in)
        if not is_level(found):
            return text
        everyday = unit("°C" if shown_in.symbol == "K" else "°F")
        return f"{text} ({shown_with_unit(number_text(everyday.from_si(value), 2), everyday)})"

    def values(self, names: Iterable[str], values: Mapping[str, float]) -> str:
        """Several symbols, each with its value."""
        return ", ".join(f"{name} = {self.value(name, values[name])}" for name in names)

    def residual(self, step: LaidStep, value: float) -> str:
        """A residual [SI] of a root's equation, in the unit of a symbol of the same dimension where it has one."""
        names = symbols_of(step.tree)
        dimension = measure(step.tree, lambda symbol: self._measure(symbol.name), step.step.formula).dimension
        like = (shown_in for shown_in, found in (self.known[name] for name in names if name in self.known)
                if shown_in.dimension == dimension and not is_level(found))
        return _in_unit(value, next(like, None) or print_unit(dimension, "si"), digits=4)

    def _measure(self, name: str) -> Measure:
        return self.known[name][1]

    def bracketed(self, error: RootError, step: LaidStep, low: float, high: float) -> RootError:
        """The same error with the bracket in the engineer's units and formulas, where it gives no hint of its own."""
        ends = " to ".join(f"{to_text(step.trees[name])} = {self.value(step.symbol, value)}"
                           for name, value in (("low", low), ("high", high)))
        hint = f"the bracket runs from {ends}{self._behind(step)}"
        return RootError(replace(fault, hint=fault.hint or hint) for fault in error.faults)

    def named(self, error: NoAnswerError, step: LaidStep) -> NoAnswerError:
        """The same error, naming the innermost step that met it, and the inputs that it hangs on if they are few."""
        if isinstance(error, (UnmetError, RowError)) or any(one.what.startswith("step ") for one in error.faults):
            return error
        title = step.step.title[:1].lower() + step.step.title[1:]
        hint = self._behind(step).removeprefix("; ") or None
        return type(error)(replace(fault, what=f"step {step.id}, {step.symbol} ({title}): {fault.what}",
                                   hint=fault.hint or hint) for fault in error.faults)

    def _behind(self, step: LaidStep) -> str:
        """The inputs that a step hangs on where they are few, else those that it reads itself, as the end of a hint."""
        behind = inputs_behind(self.plan, step)
        names = behind if len(behind) <= FEW else [name for name in self.plan.inputs if name in step.uses]
        if not names:
            return ""
        words = f"; it hangs on the input{'s' if len(names) > 1 else ''} {', '.join(names)}"
        return words if len(names) == len(behind) else f"{words} and through other steps on more"


def inputs_behind(plan: LaidPlan, step: LaidStep) -> tuple[str, ...]:
    """The inputs that a step hangs on, directly or through other steps, in the order of the sheet."""
    steps = {one.symbol: one for one in plan.steps}
    seen: set[str] = set()
    ahead = [step.symbol]
    while ahead:
        name = ahead.pop()
        if name not in seen:
            seen.add(name)
            ahead += steps[name].uses if name in steps else ()
    return tuple(name for name in plan.inputs if name in seen)


def arithmetic(error: Exception, step: LaidStep) -> NoAnswerError:
    """An error of bare arithmetic as a fault of the step it happened in."""
    if isinstance(error, ZeroDivisionError):
        what = "a division by zero"
    elif isinstance(error, ValueError):
        what = "a root or logarithm of a number that has none"
    else:
        what = "arithmetic without a real result"
    return NoAnswerError(Fault(what, hint=f"see step {step.id}, {step.symbol} = {step.step.formula}",
                               detail=str(error)))


def _in_unit(value: float, shown_in: Unit, digits: int = 6) -> str:
    """A value [SI] with the unit it is shown in, to ``digits`` significant digits."""
    number = shown_in.from_si(value)
    return shown_with_unit(number_text(number, max(0, decimals_for(number, digits))), shown_in)
