"""Reader two: the formula compiled to a function of SI values, for floats and for arrays.

The tree becomes nested Python functions over one list of values; each symbol
is a slot of that list. Nothing is executed that is not in the tree.
"""
from __future__ import annotations

import math
import operator
from collections.abc import Callable, Mapping, Sequence
from types import ModuleType
from typing import Any

from calcpack.formula.tree import (
    CONSTANTS,
    Binary,
    Call,
    Compare,
    Logic,
    Negative,
    Node,
    Number,
    PropertyCall,
    Quantity,
    Symbol,
)
from calcpack.units import unit

Values = Sequence[Any]
Compiled = Callable[[Values], Any]

_OPERATORS = {"+": operator.add, "-": operator.sub, "*": operator.mul, "/": operator.truediv, "^": operator.pow,
              "<": operator.lt, "<=": operator.le, ">": operator.gt, ">=": operator.ge}
_FLOAT = {"sqrt": math.sqrt, "ln": math.log, "exp": math.exp, "abs": abs, "min": min, "max": max}


def compiled(node: Node, slots: Mapping[str, int], *, arrays: bool = False) -> Compiled:
    """A function of a list of SI values; ``slots`` says where each symbol stands.

    With ``arrays`` the values may be NumPy arrays, which are broadcast as
    usual; without, they are floats and the function is some times faster.
    Faults of arithmetic (a root of a negative number, a division by zero)
    come as Python's ArithmeticError or ValueError; the caller, who knows the
    step, tells the reader.
    """
    return _compile(node, slots, _array_functions() if arrays else _FLOAT)


def value(node: Node, values: Mapping[str, float] | None = None) -> float:
    """The SI value of a formula with ``values`` for its symbols; for tests and re-checks."""
    values = values or {}
    slots = {name: index for index, name in enumerate(values)}
    return compiled(node, slots)(list(values.values()))


def _array_functions() -> dict[str, Any]:
    import numpy
    return {"sqrt": numpy.sqrt, "ln": numpy.log, "exp": numpy.exp, "abs": numpy.abs,
            "min": _folded(numpy, "minimum"), "max": _folded(numpy, "maximum")}


def _folded(numpy: ModuleType, name: str) -> Callable[..., Any]:
    two = getattr(numpy, name)

    def many(first: Any, *others: Any) -> Any:
        for other in others:
            first = two(first, other)
        return first
    return many


def _compile(node: Node, slots: Mapping[str, int], functions: Mapping[str, Any]) -> Compiled:
    match node:
        case Number(value=number):
            return lambda v: number
        case Quantity(value=number, unit=symbol):
            si = unit(symbol).to_si(number)
            return lambda v: si
        case Symbol(name=name):
            if name in CONSTANTS:
                constant = CONSTANTS[name]
                return lambda v: constant
            return operator.itemgetter(slots[name])
        case Negative(operand=operand):
            inner = _compile(operand, slots, functions)
            return lambda v: -inner(v)
        case Binary() | Compare():
            return _binary(node, slots, functions)
        case Logic(op=op, left=left, right=right):
            a, b = _compile(left, slots, functions), _compile(right, slots, functions)
            return (lambda v: a(v) & b(v)) if op == "and" else (lambda v: a(v) | b(v))
        case Call(name=name, arguments=arguments):
            return _call(functions[name], [_compile(part, slots, functions) for part in arguments])
        case PropertyCall():
            raise ValueError("a property look-up is evaluated by its fluid, not by the formula")


def _binary(node: Binary | Compare, slots: Mapping[str, int], functions: Mapping[str, Any]) -> Compiled:
    """An operand that is a symbol is read from its slot, with one call less."""
    apply = _OPERATORS[node.op]
    i, j = (slots[part.name] if isinstance(part, Symbol) and part.name not in CONSTANTS else None
            for part in (node.left, node.right))
    if i is not None and j is not None:
        return lambda v: apply(v[i], v[j])
    a, b = _compile(node.left, slots, functions), _compile(node.right, slots, functions)
    if i is not None:
        return lambda v: apply(v[i], b(v))
    if j is not None:
        return lambda v: apply(a(v), v[j])
    return lambda v: apply(a(v), b(v))


def _call(function: Callable[..., Any], parts: list[Compiled]) -> Compiled:
    if len(parts) == 1:
        only = parts[0]
        # min and max of one value are that value; Python's own would look for a sequence.
        return only if function in (min, max) else lambda v: function(only(v))
    if len(parts) == 2:
        first, second = parts
        return lambda v: function(first(v), second(v))
    return lambda v: function(*[part(v) for part in parts])
