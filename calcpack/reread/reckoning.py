"""Terms as read from a page to their values in SI, by plain arithmetic."""
from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from decimal import Decimal

from calcpack.reread.reading import UnreadableError
from calcpack.reread.terms import Function, LookUp, Minus, Name, Printed, Sign, Term
from calcpack.units import unit

Property = Callable[[LookUp, tuple[float, ...]], float]

_SIGNS: dict[str, Callable[[float, float], float]] = {
    "+": lambda a, b: a + b, "−": lambda a, b: a - b, "×": lambda a, b: a * b, "/": lambda a, b: a / b,
    "^": lambda a, b: a ** b, "<": lambda a, b: float(a < b), ">": lambda a, b: float(a > b),
    "≤": lambda a, b: float(a <= b), "≥": lambda a, b: float(a >= b),
    "∧": lambda a, b: float(bool(a) and bool(b)), "∨": lambda a, b: float(bool(a) or bool(b))}
_FUNCTIONS: dict[str, Callable[..., float]] = {
    "ln": math.log, "exp": math.exp, "sqrt": math.sqrt, "abs": abs,
    "min": lambda *parts: min(parts), "max": lambda *parts: max(parts)}


def reckoned(term: Term, values: Mapping[str, float], look_up: Property) -> float:
    """The SI value of a term; a condition gives 1.0 where it holds and 0.0 where not.

    ``values`` [SI] are those of the symbols by their looks, ``look_up``
    answers for the properties of fluids. Faults of arithmetic come as
    Python's own; a symbol without a value is an UnreadableError.
    """
    match term:
        case Printed():
            return si_value(term)
        case Name(look=look):
            if look not in values:
                raise UnreadableError("a symbol of the formula has no value on this page before it")
            return values[look]
        case Minus(of=of):
            return -reckoned(of, values, look_up)
        case Sign(sign=sign, left=left, right=right):
            return _SIGNS[sign](reckoned(left, values, look_up), reckoned(right, values, look_up))
        case Function(name=name, of=parts):
            return _FUNCTIONS[name](*(reckoned(part, values, look_up) for part in parts))
        case LookUp(given=given):
            return look_up(term, tuple(reckoned(value, values, look_up) for _, value in given))


def si_value(printed: Printed) -> float:
    """The SI value that a printed number stands for."""
    return unit(printed.unit).to_si(float(printed.text))


def last_place(printed: Printed) -> float:
    """One unit in the last printed place, in the unit of print.

    A whole number from a million on that ends in nought is rounded to tens,
    which is how large numbers are printed.
    """
    exact = Decimal(printed.text)
    if "e" not in printed.text and abs(exact) >= 1_000_000 and printed.text.endswith("0") and "." not in printed.text:
        return 10.0
    return 10.0 ** exact.as_tuple().exponent


def places_apart(printed: Printed, value: float) -> float:
    """How far an SI ``value`` is above the printed number, in units of its last place."""
    return (unit(printed.unit).from_si(value) - float(printed.text)) / last_place(printed)
