"""A step's trees to MathML (Core), the twin of the boxes for screen readers."""
from __future__ import annotations

from collections.abc import Iterable
from html import escape

from calcpack.formula.boxes import MINUS
from calcpack.formula.nodes import (
    NUMBER,
    SIGNS,
    factors,
    is_numeric,
    is_simple_base,
    is_sum,
    shared_unit,
    shows_value_alone,
    times,
    unit_text,
)
from calcpack.formula.symbols import parts
from calcpack.formula.tree import Binary, Call, Compare, Logic, Negative, Node, Number, PropertyCall, Quantity, Symbol

INVISIBLE_TIMES = "\u2062"
APPLY = "\u2061"


def step_mathml(symbol: str, formula: Node, numbers: Node | None, result: str, unit: str,
                also: str | None = None) -> str:
    """A step as one ``<math>`` element: symbol = symbols = numbers = result.

    The style sheet hides it from sight. It goes into
    :func:`calcpack.formula.typeset.step_equation_html` as ``twin`` for the
    HTML, and is left out of what becomes the PDF.
    """
    sides = [symbol_mathml(symbol), node_mathml(formula)]
    if numbers is not None:
        sides.append(node_mathml(numbers))
    answer = _quantity(result, unit) if NUMBER.fullmatch(result) else _words(result)
    sides.append(answer + (_words(f" ({also})") if also else ""))
    return f'<math class="twin">{_row(_between(sides, _sign("=")))}</math>'


def symbol_mathml(name: str) -> str:
    """The MathML of a symbol, without the ``<math>`` around it."""
    part = parts(name)
    letter = f'<mi mathvariant="normal">{part.letter}</mi>' if part.word else f"<mi>{part.letter}</mi>"
    if part.dot:
        letter = f'<mover accent="true">{letter}<mo stretchy="false">\u02d9</mo></mover>'
    if part.prefix:
        letter = _row([f'<mi mathvariant="normal">{part.prefix}</mi>', letter])
    below = [f"<mi>{part.italic_index}</mi>"] if part.italic_index else []
    below += [_words(piece) for piece in part.below]
    return f"<msub>{letter}{_row(_between(below, _sign(',')))}</msub>" if below else letter


def node_mathml(node: Node) -> str:
    """The MathML of a tree, without the ``<math>`` around it."""
    match node:
        case Number(text=text):
            return _number(text)
        case Quantity(text=text, unit=unit):
            return _quantity(text, unit)
        case Symbol(name=name):
            return symbol_mathml(name)
        case Negative(operand=operand):
            return _row([_sign(MINUS), _operand(operand, is_sum(operand))])
        case Binary(op="+" | "-" as op, left=left, right=right):
            return _row([node_mathml(left), _sign(SIGNS[op].strip()), _operand(right, is_sum(right))])
        case Binary(op="*"):
            return _product(node)
        case Binary(op="/", left=left, right=right):
            return f"<mfrac>{_row([node_mathml(left)])}{_row([node_mathml(right)])}</mfrac>"
        case Binary(op="^", left=left, right=right):
            base = _operand(left, not is_simple_base(left))
            return f"<msup>{_row([base])}{_row([node_mathml(right)])}</msup>"
        case Call(name=name, arguments=arguments):
            return _call(name, [node_mathml(argument) for argument in arguments])
        case PropertyCall():
            return _property(node)
        case Compare(op=op, left=left, right=right):
            return _row([node_mathml(left), _sign(SIGNS[op].strip()), node_mathml(right)])
        case Logic(op=op, left=left, right=right):
            return _row([node_mathml(left), _words(f" {op} "), node_mathml(right)])
    raise TypeError(f"no formula node: {node!r}")


def _product(node: Node) -> str:
    numeric, items = is_numeric(node), factors(node)
    pieces: list[str] = []
    for index, factor in enumerate(items):
        if index:
            sign = times(items[index - 1], factor, numeric=numeric).strip() or INVISIBLE_TIMES
            pieces.append(_sign(sign))
        pieces.append(_factor(factor))
    return _row(pieces)


def _factor(node: Node) -> str:
    if unit := shared_unit(node):
        return _row([_in_brackets(_without_units(node)), _unit(unit)])
    return _operand(node, is_sum(node) or len(factors(node)) > 1)


def _without_units(node: Node) -> str:
    match node:
        case Quantity(text=text):
            return _number(text)
        case Negative(operand=operand):
            return _row([_sign(MINUS), _without_units(operand)])
        case Binary(op=op, left=left, right=right):
            after = _without_units(right)
            return _row([_without_units(left), _sign(SIGNS[op].strip()),
                         _in_brackets(after) if is_sum(right) else after])
    raise TypeError(f"no sum of quantities: {node!r}")


def _call(name: str, arguments: list[str]) -> str:
    if name == "sqrt":
        return f"<msqrt>{arguments[0]}</msqrt>"
    if name == "abs":
        return _row([_sign("|"), arguments[0], _sign("|")])
    inside = _in_brackets("".join(_between(arguments, _sign(","))))
    return _row([f"<mi>{name}</mi>", _sign(APPLY), inside])


def _property(node: PropertyCall) -> str:
    pieces = [_words(node.fluid)]
    for index, (key, value) in enumerate(node.given):
        pieces.append(_sign("," if index else ";"))
        if not shows_value_alone(key, value):
            pieces += [symbol_mathml(key), _sign("=")]
        pieces.append(node_mathml(value))
    return _row([symbol_mathml(node.output), _in_brackets("".join(pieces))])


def _operand(node: Node, in_brackets: bool) -> str:
    inner = node_mathml(node)
    return _in_brackets(inner) if in_brackets else inner


def _number(text: str) -> str:
    match = NUMBER.fullmatch(text)
    if match is None:
        return _words(text)
    sign, digits, exponent_sign, exponent = match.groups()
    lead = _sign(MINUS) if sign == "-" else ""
    if exponent is None:
        return _row([lead, f"<mn>{digits}</mn>"]) if lead else f"<mn>{digits}</mn>"
    power = (_sign(MINUS) if exponent_sign == "-" else "") + f"<mn>{exponent}</mn>"
    return _row([lead, f"<mn>{digits}</mn>", _sign("×"), f"<msup><mn>10</mn>{_row([power])}</msup>"])


def _quantity(text: str, unit: str) -> str:
    return _row([_number(text), _unit(unit)]) if unit else _number(text)


def _unit(unit: str) -> str:
    return f"<mtext>\u00a0{unit_text(unit)}</mtext>"


def _words(text: str) -> str:
    return f"<mtext>{escape(text, quote=False)}</mtext>"


def _sign(sign: str) -> str:
    return f"<mo>{escape(sign)}</mo>"


def _in_brackets(inner: str) -> str:
    return _row([_sign("("), inner, _sign(")")])


def _row(pieces: Iterable[str]) -> str:
    return f"<mrow>{''.join(pieces)}</mrow>"


def _between(pieces: Iterable[str], separator: str) -> list[str]:
    return [item for piece in pieces for item in (separator, piece)][1:]
