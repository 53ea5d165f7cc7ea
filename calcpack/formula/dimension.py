"""Reader one: the dimension of a formula, proved once when the plan is laid.

Besides the dimension the reader counts *levels* of temperature: a level has
weight 1, a difference 0. So ``T_1 - T_2`` is a difference, ``(T_1 + T_2)/2`` a
level, and ``T_1 + T_2`` neither, which is a fault. The weight is ``None`` where
it cannot be told (``T_1 * p_2/p_1`` is an absolute temperature all the same).
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from calcpack.errors import FormulaError
from calcpack.formula.parse import formula_fault
from calcpack.formula.text import to_text
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
from calcpack.units import DIMENSIONLESS, Dimension, dimension_text, unit

TEMPERATURE: Dimension = unit("K").dimension


@dataclass(frozen=True, slots=True)
class Measure:
    """What a formula is: its dimension and, of a temperature, its weight as a level."""

    dimension: Dimension
    level: float | None = 0.0

    @property
    def text(self) -> str:
        if self.dimension == TEMPERATURE and self.level in (0.0, 1.0):
            return "a temperature level" if self.level else "a temperature difference"
        return dimension_text(self.dimension)


PURE = Measure(DIMENSIONLESS)
Lookup = Callable[[Symbol], Measure]


def measure(node: Node, lookup: Lookup, text: str) -> Measure:
    """The measure of ``node``; ``lookup`` gives that of a symbol, ``text`` is for faults.

    Raises
    ------
    FormulaError
        Where operands do not fit; the fault names both and their dimensions.
    """
    result = _Prover(lookup, text).read(node)
    if result.dimension == TEMPERATURE and result.level not in (None, 0.0, 1.0):
        if not (isinstance(node, Binary) and node.op in "+-"):
            # A multiple of a level, such as 0.7 T_c, is an absolute temperature and nothing more is known.
            return Measure(TEMPERATURE, None)
        raise FormulaError(formula_fault(
            text, "this adds temperature levels to something that is neither a level nor a difference",
            node.at, hint="a mean of levels divides their sum by their number"))
    return result


class _Prover:
    """Walks the tree once; every method returns the measure of its node."""

    def __init__(self, lookup: Lookup, text: str) -> None:
        self.lookup = lookup
        self.text = text

    def fail(self, what: str, node: Node, hint: str | None = None) -> FormulaError:
        return FormulaError(formula_fault(self.text, what, node.at, hint=hint))

    def read(self, node: Node) -> Measure:
        match node:
            case Number():
                return PURE
            case Quantity(unit=symbol):
                written = unit(symbol)
                level = 1.0 if written.level else (None if symbol == "K" else 0.0)
                return Measure(written.dimension, level)
            case Symbol(name=name):
                return PURE if name in CONSTANTS else self.lookup(node)
            case Negative(operand=operand):
                inner = self.read(operand)
                return Measure(inner.dimension, None if inner.level is None else -inner.level)
            case Call():
                return self.call(node)
            case Compare() | Logic():
                return self.condition(node)
            case Binary(op="+" | "-"):
                return self.sum(node)
            case Binary(op="^"):
                return self.power(node)
            case Binary():
                return self.product(node)
            case PropertyCall():
                raise self.fail("a property look-up must be a step of its own", node)

    def name(self, node: Node, kind: Measure) -> str:
        return f"'{to_text(node)}' is {kind.text}"

    def same(self, left: Node, right: Node, at: Node, verb: str) -> tuple[Measure, Measure]:
        a, b = self.read(left), self.read(right)
        if a.dimension != b.dimension:
            raise self.fail(f"{verb} what has different dimensions: {self.name(left, a)}, {self.name(right, b)}", at)
        return a, b

    def sum(self, node: Binary) -> Measure:
        verb = "this adds" if node.op == "+" else "this subtracts"
        a, b = self.same(node.left, node.right, node, verb)
        sign = 1.0 if node.op == "+" else -1.0
        # A quantity in K beside a level is a difference (T + 5 K); beside anything else it stays open.
        if a.level is None or b.level is None:
            known = a.level if b.level is None else b.level
            open_side = node.right if b.level is None else node.left
            written = isinstance(open_side, Quantity)
            return Measure(a.dimension, known if written and known is not None else None)
        return Measure(a.dimension, a.level + sign * b.level)

    def product(self, node: Binary) -> Measure:
        a, b = self.read(node.left), self.read(node.right)
        dimension = a.dimension * b.dimension if node.op == "*" else a.dimension / b.dimension
        dimension = Dimension({name: power for name, power in dimension.items() if power})
        return Measure(dimension, self.product_level(node, a, b, dimension))

    def product_level(self, node: Binary, a: Measure, b: Measure, dimension: Dimension) -> float | None:
        if dimension != TEMPERATURE:
            return 0.0
        warm, other, factor = (a, b, node.right) if a.dimension == TEMPERATURE else (b, a, node.left)
        if warm.dimension != TEMPERATURE or other.dimension:
            return None
        if warm.level in (None, 0.0):
            return warm.level
        number = _constant(factor)
        if number is None or (node.op == "/" and warm is b):
            return None
        return warm.level * number if node.op == "*" else warm.level / number

    def power(self, node: Binary) -> Measure:
        base, exponent = self.read(node.left), self.read(node.right)
        if exponent.dimension:
            raise self.fail(f"the exponent must be a pure number: {self.name(node.right, exponent)}", node)
        if not base.dimension:
            return PURE
        number = _constant(node.right)
        if number is None:
            raise self.fail(f"{self.name(node.left, base)}: only a written number can be its exponent", node)
        raised = base.dimension ** number
        return Measure(Dimension({name: power for name, power in raised.items() if power}),
                       None if raised == TEMPERATURE else 0.0)

    def call(self, node: Call) -> Measure:
        first = self.read(node.arguments[0])
        if node.name in ("min", "max"):
            for other in node.arguments[1:]:
                measured = self.same(node.arguments[0], other, other, f"{node.name} compares")[1]
                if None not in (first.level, measured.level) and first.level != measured.level:
                    raise self.fail(f"{node.name} compares a temperature level with a difference", other)
                first = Measure(first.dimension, first.level if first.level is not None else measured.level)
            return first
        if node.name == "abs":
            return first
        if node.name == "sqrt":
            raised = first.dimension ** 0.5
            return Measure(raised, None if raised == TEMPERATURE else 0.0)
        if first.dimension:
            raise self.fail(f"{node.name} takes a pure number: {self.name(node.arguments[0], first)}", node)
        return PURE

    def condition(self, node: Compare | Logic) -> Measure:
        if isinstance(node, Logic):
            self.condition(node.left)
            self.condition(node.right)
            return PURE
        a, b = self.same(node.left, node.right, node, "this compares")
        if a.dimension == TEMPERATURE and None not in (a.level, b.level) and a.level != b.level:
            raise self.fail(f"this compares a level with a difference: {self.name(node.left, a)}, "
                            f"{self.name(node.right, b)}", node)
        return PURE


def _constant(node: Node) -> float | None:
    """The value of a node made of written numbers only, such as ``-2`` or ``1/3``."""
    match node:
        case Number(value=value):
            return value
        case Negative(operand=operand):
            inner = _constant(operand)
            return None if inner is None else -inner
        case Binary(op=op, left=left, right=right) if op in "+-*/":
            a, b = _constant(left), _constant(right)
            if a is None or b is None or (op == "/" and b == 0.0):
                return None
            return {"+": a + b, "-": a - b, "*": a * b}[op] if op != "/" else a / b
    return None
