"""Formula text to tree, by a small grammar of our own and no ``eval``.

::

    condition  = all { "or" all }
    all        = comparison { "and" comparison }
    comparison = sum ( "<" | "<=" | ">" | ">=" ) sum
    sum        = term { ("+" | "-") term }
    term       = factor { ("*" | "/") factor }
    factor     = "-" factor | power
    power      = atom [ "^" factor ]
    atom       = number [ unit ] | name | name "(" sum { "," sum } ")" | "(" sum ")"
    property   = name "(" role { "," name "=" sum } ")"

A unit stands one space behind its number and has no spaces in it:
``4.2 kJ/(kg·K)``. Text, depth and written exponents are bounded.
"""
from __future__ import annotations

import math

from calcpack.errors import Fault, FormulaError, Place, nearest
from calcpack.formula.scan import Token, scan
from calcpack.formula.tree import (
    FUNCTIONS,
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

MAX_DEPTH = 40
MAX_EXPONENT = 12.0
LEVEL_UNITS = ("°C", "°F")
COMPARISONS = ("<", "<=", ">", ">=")


def parse(text: str) -> Node:
    """The tree of a formula's right-hand side.

    Raises
    ------
    FormulaError
        The fault's place is relative to the text: file ``""``, line 1, the
        column where the reading stopped.
    """
    reader = _Reader(text)
    node = reader.property_call() if reader.looks_like_property() else reader.sum(0)
    reader.finish()
    return node


def parse_condition(text: str) -> Node:
    """The tree of a condition: comparisons joined by ``and`` and ``or``, of which ``and`` binds tighter."""
    reader = _Reader(text)
    node = reader.condition(0)
    reader.finish()
    return node


class _Reader:
    """One pass over the tokens; each method reads one rule of the grammar."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.tokens = scan(text)
        self.index = 0

    @property
    def token(self) -> Token:
        return self.tokens[self.index]

    def take(self) -> Token:
        token = self.token
        self.index += 1
        return token

    def fail(self, what: str, token: Token | None = None, *, expected: str | None = None,
             hint: str | None = None) -> FormulaError:
        token = token or self.token
        return FormulaError(formula_fault(self.text, what, token.at, len(token.text) or 1,
                                          found=repr(token.text) if token.text else "the end of the formula",
                                          expected=expected, hint=hint))

    def finish(self) -> None:
        token = self.token
        if token.kind == "end":
            return
        if token.kind == "comparison":
            raise self.fail("a comparison stands where a value is meant",
                            hint="comparisons belong in the condition of a choice")
        if token.kind in ("name", "number") or token.text == "(":
            raise self.fail("an operator is missing here", expected="one of + - * / ^")
        raise self.fail(f"{token.text!r} does not belong here", expected="an operator or the end")

    def expect(self, text: str) -> Token:
        if self.token.text != text or self.token.kind == "end":
            raise self.fail(f"{text!r} is missing here", expected=repr(text))
        return self.take()

    def condition(self, depth: int) -> Node:
        node = self.all_of(depth)
        while self.token.text == "or":
            word = self.take()
            node = Logic("or", node, self.all_of(depth), word.at)
        return node

    def all_of(self, depth: int) -> Node:
        node = self.comparison(depth)
        while self.token.text == "and":
            word = self.take()
            node = Logic("and", node, self.comparison(depth), word.at)
        return node

    def comparison(self, depth: int) -> Node:
        left = self.sum(depth)
        if self.token.text not in COMPARISONS:
            raise self.fail("a comparison is missing here", expected="one of < <= > >=")
        op = self.take()
        return Compare(op.text, left, self.sum(depth), op.at)

    def sum(self, depth: int) -> Node:
        node = self.term(depth)
        while self.token.text in ("+", "-"):
            op = self.take()
            node = Binary(op.text, node, self.term(depth), op.at)
        return node

    def term(self, depth: int) -> Node:
        node = self.factor(depth)
        while self.token.text in ("*", "/"):
            op = self.take()
            node = Binary(op.text, node, self.factor(depth), op.at)
        return node

    def factor(self, depth: int) -> Node:
        if depth > MAX_DEPTH:
            raise self.fail(f"the formula nests deeper than {MAX_DEPTH} levels",
                            hint="split it into steps that can be checked one by one")
        if self.token.text == "-":
            minus = self.take()
            if self.token.unit in LEVEL_UNITS:
                # -1 degC is a level below zero, not the negative of a level.
                level = self.take()
                return Quantity(-float(level.text), f"-{level.text}", level.unit, minus.at)
            return Negative(self.factor(depth + 1), minus.at)
        return self.power(depth)

    def power(self, depth: int) -> Node:
        base = self.atom(depth)
        if self.token.text != "^":
            return base
        op = self.take()
        exponent = self.factor(depth + 1)
        self.bound_exponent(exponent, op)
        return Binary("^", base, exponent, op.at)

    def bound_exponent(self, exponent: Node, op: Token) -> None:
        """Keep written exponents small: a tower of powers has no place on a sheet."""
        if isinstance(exponent, Binary) and exponent.op == "^":
            raise self.fail("a power of a power is not allowed", op, hint="use brackets and two steps")
        number = exponent.operand if isinstance(exponent, Negative) else exponent
        if isinstance(number, Number) and abs(number.value) > MAX_EXPONENT:
            raise self.fail(f"the exponent is beyond {MAX_EXPONENT:g}", op,
                            expected=f"an exponent from -{MAX_EXPONENT:g} to {MAX_EXPONENT:g}")

    def atom(self, depth: int) -> Node:
        token = self.token
        if token.kind == "number":
            return self.number()
        if token.kind == "name":
            return self.name(depth)
        if token.text == "(":
            self.take()
            node = self.sum(depth + 1)
            self.expect(")")
            return node
        raise self.fail("a value is missing here", expected="a number, a symbol or '('")

    def number(self) -> Node:
        token = self.take()
        value = float(token.text)
        if not math.isfinite(value):
            raise self.fail("the number is too large", token)
        if token.unit is None:
            return Number(value, token.text, token.at)
        return Quantity(value, token.text, token.unit, token.at)

    def name(self, depth: int) -> Node:
        token = self.take()
        if token.text in ("and", "or"):
            raise self.fail(f"{token.text!r} stands where a value is meant", token)
        if self.token.text != "(":
            return Symbol(token.text, token.at)
        least, most = self.arity(token)
        self.take()
        arguments = [self.sum(depth + 1)]
        while self.token.text == ",":
            self.take()
            arguments.append(self.sum(depth + 1))
        if self.token.text == "=":
            raise self.fail("a property look-up must be a step of its own", token,
                            hint="give the property a symbol, then use the symbol")
        self.expect(")")
        if not least <= len(arguments) <= most:
            raise self.fail(f"{token.text} takes {least} to {most} arguments" if most > least
                            else f"{token.text} takes {least} argument", token)
        return Call(token.text, tuple(arguments), token.at)

    def arity(self, token: Token) -> tuple[int, int]:
        if token.text not in FUNCTIONS:
            raise self.fail(f"there is no function {token.text!r}", token,
                            expected="one of " + ", ".join(sorted(FUNCTIONS)),
                            hint=nearest(token.text, FUNCTIONS))
        return FUNCTIONS[token.text]

    def looks_like_property(self) -> bool:
        """``name(role)`` or ``name(role, x=…)``: no function of the language takes '='."""
        kinds = [(token.kind, token.text) for token in self.tokens]
        if len(kinds) < 4 or kinds[0][0] != "name" or kinds[1][1] != "(" or kinds[0][1] in FUNCTIONS:
            return False
        return kinds[2][0] == "name" and (kinds[3][1] == "," or (kinds[3][1] == ")" and len(kinds) == 5))

    def property_call(self) -> Node:
        output = self.take()
        self.take()
        fluid = self.take()
        given: list[tuple[str, Node]] = []
        while self.token.text == ",":
            self.take()
            if self.token.kind != "name":
                raise self.fail("a known property is missing here", expected="such as p=p_1")
            key = self.take()
            self.expect("=")
            if key.text in dict(given):
                raise self.fail(f"{key.text!r} is given twice", key)
            given.append((key.text, self.sum(1)))
        self.expect(")")
        return PropertyCall(output.text, fluid.text, tuple(given), output.at)


def formula_fault(text: str, what: str, at: int, length: int = 1, *, found: str | None = None,
                  expected: str | None = None, hint: str | None = None) -> Fault:
    """A fault inside a formula's text; column ``at`` counts from 0."""
    return Fault(what, Place("", 1, at + 1, length), found=found, expected=expected, hint=hint)
