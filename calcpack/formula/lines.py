"""A formula that is too wide for its column to the lines that it goes on in."""
from __future__ import annotations

from calcpack.formula import boxes
from calcpack.formula.boxes import Box
from calcpack.formula.nodes import SIGNS, TIMES, factors, is_simple_base, is_sum, property_pieces, set_node
from calcpack.formula.symbols import symbol_box
from calcpack.formula.tree import Binary, Call, Compare, Logic, Negative, Node, PropertyCall

INDENT = 1.5
"""How far a further line starts to the right of the equals sign, [em]; equation.css has the same."""

ROOT = "√"


def break_lines(node: Node, room: float) -> list[Box]:
    """The lines of a formula, each at most ``room`` em wide.

    Lines break before a sign of the outermost sum, then before × and after
    commas. A fraction that is too wide alone is written with a stroke, a root
    or a power with plain brackets. A single symbol wider than a line is set
    smaller.
    """
    whole = set_node(node)
    if whole.width <= room:
        return [whole]
    lines: list[Box] = []
    for piece in (boxes.shrunk(one, room - INDENT) for one in _pieces(node, room - INDENT)):
        if lines and lines[-1].width + piece.width <= room - INDENT:
            lines[-1] = boxes.row(lines[-1], piece)
        else:
            lines.append(piece)
    return lines


def _pieces(node: Node, room: float) -> list[Box]:
    """The parts of a formula that may stand on lines of their own, in reading order."""
    whole = set_node(node)
    if whole.width <= room:
        return [whole]
    match node:
        case Compare(op=op, left=left, right=right) | Logic(op=op, left=left, right=right):
            return [*_pieces(left, room), *_led_by(SIGNS[op], _pieces(right, room))]
        case Binary(op="+" | "-" as op, left=left, right=right):
            return [*_pieces(left, room), *_led_by(SIGNS[op], _operand(right, room, is_sum(right)))]
        case Binary(op="*"):
            first, *others = (_operand(factor, room, is_sum(factor)) for factor in factors(node))
            return [*first, *(piece for other in others for piece in _led_by(TIMES, other))]
        case Binary(op="/", left=left, right=right):
            return [*_operand(left, room, not is_simple_base(left)),
                    *_led_by(" / ", _operand(right, room, not is_simple_base(right)))]
        case Binary(op="^", left=left, right=right):
            *others, last = _operand(left, room, not is_simple_base(left))
            return [*others, boxes.superscript(last, set_node(right))]
        case Negative(operand=operand):
            return _led_by(boxes.MINUS, _operand(operand, room, is_sum(operand)))
        case Call(name=name, arguments=arguments):
            inside = _with_commas([_pieces(each, room) for each in arguments])
            return _led_by(ROOT if name == "sqrt" else name, _wrapped(inside))
        case PropertyCall(output=output):
            first, *others = _wrapped(property_pieces(node))
            return [boxes.row(symbol_box(output), first), *others]
    return [whole]


def _operand(node: Node, room: float, in_brackets: bool) -> list[Box]:
    pieces = _pieces(node, room)
    return _wrapped(pieces) if in_brackets else pieces


def _led_by(sign: str, pieces: list[Box]) -> list[Box]:
    return [boxes.row(boxes.text(sign), pieces[0]), *pieces[1:]]


def _wrapped(pieces: list[Box]) -> list[Box]:
    """Pieces in one pair of brackets, which stays small as no line holds both."""
    if len(pieces) == 1:
        return [boxes.bracketed(pieces[0])]
    first, *middle, last = pieces
    return [boxes.row(boxes.text("("), first), *middle, boxes.row(last, boxes.text(")"))]


def _with_commas(groups: list[list[Box]]) -> list[Box]:
    for group in groups[:-1]:
        group[-1] = boxes.row(group[-1], boxes.text(", "))
    return [piece for group in groups for piece in group]
