"""One line of a printed formula to its terms, read as a person reads it.

The line comes from :mod:`linear`. Products without a sign, one unit behind a
bracket for all terms in it, powers of ten and fraction bars mean here what
they mean on paper.
"""
from __future__ import annotations

import re
from dataclasses import dataclass

from calcpack.reread import linear as at
from calcpack.reread.terms import Function, LookUp, Minus, Name, Printed, Sign, Term
from calcpack.units.spellings import UNITS

SYMBOL = (f"(?:Δ?{at.ITALIC}[^{at.UPRIGHT}]+{at.UPRIGHT}|[A-Za-zΑ-ω][A-Za-z0-9Α-ω]*)"
          f"(?:{at.BELOW}[^{at.BELOW_END}]*{at.BELOW_END})?")
_UNIT = "|".join(sorted(map(re.escape, UNITS), key=len, reverse=True))
TOKEN = re.compile(
    rf"(?P<number>(?:\d+(?:\.\d+)?|\.\d+)(?:{at.THIN}×{at.THIN}10{at.ABOVE}−?\d+{at.ABOVE_END})?)"
    rf"|{at.THIN}(?P<unit>{_UNIT})(?![A-Za-z0-9(])"
    rf"|(?P<function>ln|exp|min|max|abs)(?=\()|(?P<symbol>{SYMBOL})"
    rf"|(?P<sign>[+−×/=<>≤≥∧∨,()|√{at.ABOVE}-{at.ROOT_END}])"
    rf"|(?P<gap>[{at.THIN} ])")
LOOK_UP = re.compile(rf"(?!(?:ln|exp|min|max|abs)\()(?P<letter>{SYMBOL})"
                     rf"\((?P<fluid>[^{at.ITALIC};]*?)(?:; (?P<given>.*))?\)", re.DOTALL)
POWER_OF_TEN = re.compile(rf"{at.THIN}×{at.THIN}10{at.ABOVE}(−?)(\d+){at.ABOVE_END}")
ARITHMETIC = re.compile(r" [+×/] |−|^[\d.]+$")
PI = Printed("3.141592653589793")


class UnreadableError(ValueError):
    """A line of the page that is no formula that a reader can follow."""


@dataclass(frozen=True, slots=True)
class _Token:
    kind: str
    text: str


def read_line(line: str) -> Term:
    """The term that a line says.

    Raises
    ------
    UnreadableError
        Where the line is none.
    """
    line = line.strip(" ")
    found = LOOK_UP.fullmatch(line)
    if found and (found["given"] or not ARITHMETIC.search(found["fluid"])):
        given = _Reader(found["given"] or "").given()
        return LookUp(found["letter"], found["fluid"], given)
    return _Reader(line).whole()


def read_value(line: str) -> Printed:
    """The one number, with or without a minus and a unit, that a line says."""
    term = read_line(line)
    if isinstance(term, Minus) and isinstance(term.of, Printed):
        return Printed(f"-{term.of.text}", term.of.unit)
    if not isinstance(term, Printed):
        raise UnreadableError(f"{at.plain(line)!r} is no number")
    return term


def _tokens(line: str) -> list[_Token]:
    line = line.replace(" and ", "∧").replace(" or ", "∨")
    found, end = [], 0
    while end < len(line):
        match = TOKEN.match(line, end)
        if match is None:
            raise UnreadableError(f"{at.plain(line)!r} cannot be read at {at.plain(line[end:])!r}")
        end = match.end()
        kind = match.lastgroup or ""
        if kind != "gap":
            found.append(_Token(kind, match[kind]))
    return found


class _Reader:
    """Reads the tokens of one line from left to right; a sign of lesser rank waits for those of higher."""

    RANKS = (("∨",), ("∧",), ("<", ">", "≤", "≥"), ("+", "−"), ("×", "/"))

    def __init__(self, line: str) -> None:
        self.line = line
        self.tokens = _tokens(line)
        self.next = 0

    def whole(self) -> Term:
        """The term of the whole line."""
        term = self.ranked()
        if self.next < len(self.tokens):
            raise self.wrong()
        return term

    def given(self) -> tuple[tuple[str, Term], ...]:
        """The known values of a look-up: ``key = term``, or a symbol whose letter is the key."""
        found: list[tuple[str, Term]] = []
        while self.next < len(self.tokens):
            key = self.tokens[self.next].text
            if self.next + 1 < len(self.tokens) and self.tokens[self.next + 1].text == "=":
                self.next += 2
            else:
                key = re.sub(f"{at.BELOW}.*", "", key)
            found.append((key, self.ranked()))
            if self.next < len(self.tokens):
                self.take(",")
        return tuple(found)

    def wrong(self) -> UnreadableError:
        return UnreadableError(f"{at.plain(self.line)!r} is no formula")

    @property
    def ahead(self) -> str:
        """The sign ahead; empty for anything else."""
        token = self.tokens[self.next] if self.next < len(self.tokens) else _Token("end", "")
        return token.text if token.kind == "sign" else ""

    def take(self, sign: str) -> None:
        if self.ahead != sign:
            raise self.wrong()
        self.next += 1

    def ranked(self, rank: int = 0) -> Term:
        """Terms joined by signs of this rank or higher ones."""
        if rank == len(self.RANKS):
            return self.factor()
        term = self.ranked(rank + 1)
        while True:
            sign = self.ahead
            if sign in self.RANKS[rank] and sign:
                self.next += 1
                term = Sign(sign, term, self.ranked(rank + 1))
            elif rank == len(self.RANKS) - 1 and self.begins_factor():
                term = Sign("×", term, self.factor())
            else:
                return term

    def begins_factor(self) -> bool:
        """Whether a factor without a sign before it is ahead."""
        if self.next >= len(self.tokens):
            return False
        token = self.tokens[self.next]
        return token.kind in ("number", "symbol", "function") or token.text in ("(", at.OVER, "√")

    def factor(self) -> Term:
        """A term with its powers, or a minus and a term."""
        if self.ahead == "−":
            self.next += 1
            return Minus(self.factor())
        term = self.single()
        while self.ahead == at.ABOVE:
            self.next += 1
            term = Sign("^", term, self.ranked())
            self.take(at.ABOVE_END)
        return term

    def single(self) -> Term:
        if self.next >= len(self.tokens):
            raise self.wrong()
        token = self.tokens[self.next]
        self.next += 1
        match token.kind:
            case "number":
                return Printed(POWER_OF_TEN.sub(_exponent, token.text), self.unit())
            case "symbol":
                return PI if token.text == "π" else Name(token.text)
            case "function":
                self.take("(")
                return Function(token.text, self.listed(")"))
        match token.text:
            case "(":
                inside = self.inside(")")
                unit = self.unit()
                return with_unit(inside, unit) if unit else inside
            case "|":
                return Function("abs", (self.inside("|"),))
            case "√":
                # A root that goes on in a further line has brackets in place of its bar.
                drawn = self.ahead == at.ROOT
                self.take(at.ROOT if drawn else "(")
                return Function("sqrt", (self.inside(at.ROOT_END if drawn else ")"),))
            case at.OVER:
                return Sign("/", self.inside(at.UNDER), self.inside(at.OVER_END))
        raise self.wrong()

    def unit(self) -> str:
        """The unit ahead, or none."""
        if self.next < len(self.tokens) and self.tokens[self.next].kind == "unit":
            self.next += 1
            return self.tokens[self.next - 1].text
        return ""

    def inside(self, end: str) -> Term:
        term = self.ranked()
        self.take(end)
        return term

    def listed(self, end: str) -> tuple[Term, ...]:
        parts = [self.ranked()]
        while self.ahead == ",":
            self.next += 1
            parts.append(self.ranked())
        self.take(end)
        return tuple(parts)


def _exponent(match: re.Match[str]) -> str:
    return f"e{'-' if match[1] else ''}{match[2]}"


def with_unit(term: Term, unit: str) -> Term:
    """A bracketed sum of numbers with the unit that stands behind it, at each of them."""
    match term:
        case Printed(text=text, unit=""):
            return Printed(text, unit)
        case Minus(of=of):
            return Minus(with_unit(of, unit))
        case Sign(sign="+" | "−" as sign, left=left, right=right):
            return Sign(sign, with_unit(left, unit), with_unit(right, unit))
    raise UnreadableError(f"a unit {unit} stands behind what is no sum of numbers")
