"""The formula tree back to text, with the fewest brackets that keep its meaning.

Used for the printed numbers of a step: symbols are replaced by the quantities
as printed, and the text that results is itself a formula that can be read and
evaluated again.
"""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from calcpack.formula.tree import Binary, Call, Compare, Logic, Negative, Node, Number, PropertyCall, Quantity, Symbol

RANK = {"or": 1, "and": 2, "<": 3, "<=": 3, ">": 3, ">=": 3, "+": 4, "-": 4, "*": 5, "/": 5, "^": 7}
_NEGATIVE = 6
_ATOM = 8


def rank(node: Node) -> int:
    """How tightly a node binds; a looser node inside a tighter one needs brackets."""
    match node:
        case Binary(op=op) | Compare(op=op) | Logic(op=op):
            return RANK[op]
        case Negative():
            return _NEGATIVE
        case Number(text=text) | Quantity(text=text) if "e" in text.lower():
            return RANK["*"]
    return _ATOM


def needs_brackets(parent: Binary | Compare | Logic, child: Node, *, right: bool) -> bool:
    """Whether ``child`` must stand in brackets as an operand of ``parent``."""
    if isinstance(child, Negative):
        # A negative number as printed always stands in brackets beside an operator.
        return right or parent.op == "^" or isinstance(child.operand, (Number, Quantity))
    if isinstance(child, (Number, Quantity)):
        return parent.op == "^" and not right and (isinstance(child, Quantity) or rank(child) < _ATOM)
    if rank(child) != RANK[parent.op]:
        return rank(child) < RANK[parent.op]
    return right or parent.op == "^"


def to_text(node: Node) -> str:
    """The formula's text; reading it again gives an equal tree."""
    match node:
        case Number(text=text):
            return text
        case Quantity(text=text, unit=unit):
            return f"{text} {unit}" if unit else text
        case Symbol(name=name):
            return name
        case Negative(operand=operand):
            inner = to_text(operand)
            loose = rank(operand) < _NEGATIVE and not isinstance(operand, (Number, Quantity))
            return f"-({inner})" if loose or isinstance(operand, Negative) else f"-{inner}"
        case Binary(op="^", left=left, right=right):
            return f"{_operand(node, left, False)}^{_operand(node, right, True)}"
        case Binary(op=op, left=left, right=right) | Compare(op=op, left=left, right=right) | \
                Logic(op=op, left=left, right=right):
            return f"{_operand(node, left, False)} {op} {_operand(node, right, True)}"
        case Call(name=name, arguments=arguments):
            return f"{name}({', '.join(map(to_text, arguments))})"
        case PropertyCall(output=output, fluid=fluid, given=given):
            role = fluid if fluid.replace("_", "a").isalnum() and fluid[:1].isalpha() else f"«{fluid}»"
            return f"{output}({', '.join([role, *(f'{key}={to_text(value)}' for key, value in given)])})"


def _operand(parent: Binary | Compare | Logic, child: Node, right: bool) -> str:
    text = to_text(child)
    return f"({text})" if needs_brackets(parent, child, right=right) else text


def substitute(node: Node, values: Mapping[str, Node], fluids: Mapping[str, str] | None = None) -> Node:
    """The tree with symbols replaced by ``values`` and fluid roles by designations."""
    match node:
        case Symbol(name=name):
            return values.get(name, node)
        case Negative(operand=operand):
            return replace(node, operand=substitute(operand, values))
        case Binary(left=left, right=right) | Compare(left=left, right=right) | Logic(left=left, right=right):
            return replace(node, left=substitute(left, values), right=substitute(right, values))
        case Call(arguments=arguments):
            return replace(node, arguments=tuple(substitute(part, values) for part in arguments))
        case PropertyCall(fluid=fluid, given=given):
            return replace(node, fluid=(fluids or {}).get(fluid, fluid),
                           given=tuple((key, substitute(value, values)) for key, value in given))
    return node


def printed_quantity(text: str, unit: str) -> Node:
    """A printed number such as ``-3.20`` and its unit as a node of a formula."""
    if text.startswith("-"):
        return Negative(printed_quantity(text[1:], unit))
    return Quantity(float(text), text, unit) if unit else Number(float(text), text)
