"""A formula's tree to a box: every node of the tree has one way to be set.

Nothing is rounded, reordered or simplified: what stands in the tree is what
is set. Brackets come from the tree alone, so that a bracket that means
something is always there.
"""
from __future__ import annotations

import re
from collections.abc import Iterator

from calcpack.formula import boxes
from calcpack.formula.boxes import MINUS, THIN, Box
from calcpack.formula.symbols import is_named_by, is_word, symbol_box
from calcpack.formula.tree import (
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
    symbols_of,
    walk,
)

TIMES = " × "
SIGNS = {"+": " + ", "-": f" {MINUS} ", "*": TIMES,
         "<": " < ", ">": " > ", "<=": " ≤ ", ">=": " ≥ ", "and": " and ", "or": " or "}
NUMBER = re.compile(r"([+-]?)(\d+(?:\.\d+)?|\.\d+)(?:[eE]([+-]?)0*(\d+))?")
_DEGREES = re.compile(r"\bdeg(?=[CF]\b)")


def set_node(node: Node, nested: bool = False) -> Box:
    """The box of a tree; ``nested`` when it stands inside a fraction."""
    match node:
        case Number(text=text):
            return number_box(text)
        case Quantity(text=text, unit=unit):
            return quantity_box(text, unit)
        case Symbol(name=name):
            return symbol_box(name)
        case Negative(operand=operand):
            return boxes.row(boxes.text(MINUS), _operand(operand, nested, is_sum(operand)))
        case Binary(op="+" | "-" as op, left=left, right=right):
            return boxes.row(set_node(left, nested), boxes.text(SIGNS[op]),
                             _operand(right, nested, is_sum(right)))
        case Binary(op="*"):
            return _product(node, nested)
        case Binary(op="/", left=left, right=right):
            return boxes.fraction(set_node(left, True), set_node(right, True), nested=nested)
        case Binary(op="^", left=left, right=right):
            return boxes.superscript(_operand(left, nested, not is_simple_base(left)),
                                     set_node(right, nested))
        case Call(name=name, arguments=arguments):
            return _call(name, arguments, nested)
        case PropertyCall():
            return boxes.row(symbol_box(node.output), boxes.bracketed(boxes.row(*property_pieces(node))))
        case Compare(op=op, left=left, right=right) | Logic(op=op, left=left, right=right):
            return boxes.row(set_node(left, nested), boxes.text(SIGNS[op]), set_node(right, nested))
    raise TypeError(f"no formula node: {node!r}")


def is_sum(node: Node) -> bool:
    """Whether the node needs brackets beside a sign: a sum, a difference or a negative."""
    return isinstance(node, Negative) or (isinstance(node, Binary) and node.op in "+-")


def factors(node: Node) -> list[Node]:
    """The factors of a product in reading order; a node that is none is its own only factor."""
    if isinstance(node, Binary) and node.op == "*":
        return [*factors(node.left), node.right]
    return [node]


def times(left: Node, right: Node, *, numeric: bool) -> str:
    """The sign between two factors: × before a number or a minus and beside words, else at most a space."""
    if numeric or isinstance(_edge(right, first=True), Number | Quantity | Negative):
        return TIMES
    if any(isinstance(edge, Symbol) and is_word(edge.name)
           for edge in (_edge(left, first=False), _edge(right, first=True))):
        return TIMES
    # The last letter of a subscript, an f above all, would touch the bracket.
    before = _edge(left, first=False)
    subscripted = isinstance(before, Symbol) and "_" in before.name.replace("_dot", "")
    return "" if is_sum(right) and not is_sum(left) and not subscripted else THIN


def is_numeric(node: Node) -> bool:
    """Whether the node is a row of numbers, where every product shows its sign."""
    return not symbols_of(node) or any(isinstance(part, Quantity) for part in walk(node))


def shared_unit(node: Node) -> str | None:
    """The unit to set once behind a bracketed sum: that of all its terms; None where they differ."""
    if not (isinstance(node, Binary) and node.op in "+-"):
        return None
    units = {term.unit if isinstance(term, Quantity) else None for term in _terms(node)}
    return units.pop() if len(units) == 1 else None


def sum_without_units(node: Node) -> Box:
    """A sum of quantities of one unit, with the numbers alone."""
    match node:
        case Quantity(text=text):
            return number_box(text)
        case Negative(operand=operand):
            return boxes.row(boxes.text(MINUS), sum_without_units(operand))
        case Binary(op=op, left=left, right=right):
            after = sum_without_units(right)
            return boxes.row(sum_without_units(left), boxes.text(SIGNS[op]),
                             boxes.bracketed(after) if is_sum(right) else after)
    raise TypeError(f"no sum of quantities: {node!r}")


def property_pieces(node: PropertyCall) -> list[Box]:
    """What stands in a property's brackets: the fluid, then each known value; a line may break between."""
    pieces = [boxes.text(node.fluid)]
    for index, (key, value) in enumerate(node.given):
        shown = set_node(value)
        if not shows_value_alone(key, value):
            shown = boxes.row(symbol_box(key), boxes.text(" = "), shown)
        pieces[-1] = boxes.row(pieces[-1], boxes.text(", " if index else "; "))
        pieces.append(shown)
    return pieces


def shows_value_alone(key: str, value: Node) -> bool:
    """Whether a known value says itself which property it is: p_c in h(wf; p_c), but not 1 for x."""
    return isinstance(value, Symbol) and is_named_by(value.name, key)


def is_simple_base(node: Node) -> bool:
    """Whether a power's base needs no brackets: a symbol, a bare number, or bars of its own."""
    if isinstance(node, Number):
        return "e" not in node.text.lower()
    return isinstance(node, Symbol) or (isinstance(node, Call) and node.name == "abs")


def number_box(text: str) -> Box:
    """A number as printed: a true minus, and powers of ten for an e-notation; other texts as they are."""
    match = NUMBER.fullmatch(text)
    if match is None:
        return boxes.text(text)
    sign, digits, exponent_sign, exponent = match.groups()
    plain = boxes.text((MINUS if sign == "-" else sign) + digits)
    if exponent is None:
        return plain
    power = boxes.text((MINUS if exponent_sign == "-" else "") + exponent)
    return boxes.superscript(boxes.row(plain, boxes.text(f"{THIN}×{THIN}10")), power)


def quantity_box(text: str, unit: str) -> Box:
    """A number and its unit with a thin space between."""
    return boxes.row(number_box(text), boxes.text(THIN), unit_box(unit)) if unit else number_box(text)


def unit_box(unit: str) -> Box:
    """A unit, upright."""
    return boxes.text(unit_text(unit))


def unit_text(unit: str) -> str:
    """A unit's symbol as printed: the symbols of :mod:`calcpack.units`, with degC as °C."""
    return _DEGREES.sub("°", unit)


def _product(node: Node, nested: bool) -> Box:
    numeric, parts = is_numeric(node), factors(node)
    pieces: list[Box] = []
    for index, factor in enumerate(parts):
        if index:
            pieces.append(boxes.text(times(parts[index - 1], factor, numeric=numeric)))
        pieces.append(factor_box(factor, nested))
    return boxes.row(*pieces)


def factor_box(node: Node, nested: bool = False) -> Box:
    """A factor of a product; a sum in brackets has a unit that its terms share once, behind them."""
    if unit := shared_unit(node):
        return boxes.row(boxes.bracketed(sum_without_units(node)), boxes.text(THIN), unit_box(unit))
    return _operand(node, nested, is_sum(node) or _is_product(node))


def _operand(node: Node, nested: bool, in_brackets: bool) -> Box:
    box = set_node(node, nested)
    return boxes.bracketed(box) if in_brackets else box


def _call(name: str, arguments: tuple[Node, ...], nested: bool) -> Box:
    inside = boxes.joined((set_node(argument, nested) for argument in arguments), boxes.text(", "))
    if name == "sqrt":
        return boxes.root(inside)
    if name == "abs":
        return boxes.bracketed(inside, "|", "|")
    return boxes.row(boxes.text(name), boxes.bracketed(inside))


def _terms(node: Node) -> Iterator[Node]:
    if isinstance(node, Binary) and node.op in "+-":
        yield from _terms(node.left)
        yield from _terms(node.right)
    elif isinstance(node, Negative):
        yield from _terms(node.operand)
    else:
        yield node


def _is_product(node: Node) -> bool:
    return isinstance(node, Binary) and node.op == "*"


def _edge(node: Node, *, first: bool) -> Node:
    """The outermost node at the left or the right end, where no bracket or bar stands."""
    match node:
        case Binary(op="*", left=left, right=right):
            return _edge(left if first else right, first=first)
        case Binary(op="^", left=left):
            return left
    return node
