"""The formula tree: what a formula's text means, before anybody reads it.

Each node knows the column (from 0) where it stands in the text, so that a
fault can point at it. Columns do not take part in comparison: two formulas
that mean the same are equal.
"""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

FUNCTIONS: dict[str, tuple[int, int]] = {
    "sqrt": (1, 1), "ln": (1, 1), "exp": (1, 1), "abs": (1, 1),
    "min": (1, 12), "max": (1, 12),
}
"""The functions of the language, each with its least and greatest number of arguments."""

CONSTANTS: dict[str, float] = {"pi": 3.141592653589793}
"""Names that are numbers and are printed as themselves."""


@dataclass(frozen=True, slots=True)
class Number:
    """A pure number; ``text`` is what was written, so that 1.40 stays 1.40."""

    value: float
    text: str
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number with a unit, such as ``4.2 kJ/(kg·K)``; ``unit`` is the unit's symbol."""

    value: float
    text: str
    unit: str
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Symbol:
    """A name that an input or a step gives a value to, or ``pi``."""

    name: str
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Negative:
    """``-operand``."""

    operand: Node
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Binary:
    """``left op right``, op one of ``+ - * / ^``."""

    op: str
    left: Node
    right: Node
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Call:
    """A function of :data:`FUNCTIONS` on its arguments."""

    name: str
    arguments: tuple[Node, ...]
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class PropertyCall:
    """A property of a fluid: ``h(wf, p=p_c, s=s_1)`` or ``T_crit(wf)``.

    ``output`` is the property, ``fluid`` the role the spec gives a fluid to
    (in printed numbers its designation), ``given`` the known values in the
    order written.
    """

    output: str
    fluid: str
    given: tuple[tuple[str, Node], ...]
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Compare:
    """``left op right``, op one of ``< <= > >=``; only in conditions."""

    op: str
    left: Node
    right: Node
    at: int = field(default=0, compare=False)


@dataclass(frozen=True, slots=True)
class Logic:
    """``left op right``, op ``and`` or ``or``; only in conditions."""

    op: str
    left: Node
    right: Node
    at: int = field(default=0, compare=False)


Node = Number | Quantity | Symbol | Negative | Binary | Call | PropertyCall | Compare | Logic


def children(node: Node) -> tuple[Node, ...]:
    """The nodes directly below, in reading order."""
    match node:
        case Negative(operand=operand):
            return (operand,)
        case Binary(left=left, right=right) | Compare(left=left, right=right) | Logic(left=left, right=right):
            return (left, right)
        case Call(arguments=arguments):
            return arguments
        case PropertyCall(given=given):
            return tuple(value for _, value in given)
    return ()


def walk(node: Node) -> Iterator[Node]:
    """The node and all below it, in reading order."""
    yield node
    for child in children(node):
        yield from walk(child)


def symbols_of(node: Node) -> tuple[str, ...]:
    """The names that the formula uses, each once, in reading order; ``pi`` is none of them."""
    names = (part.name for part in walk(node) if isinstance(part, Symbol) and part.name not in CONSTANTS)
    return tuple(dict.fromkeys(names))
