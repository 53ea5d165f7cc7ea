"""What a printed formula says, as a reader takes it: numbers with units, symbols by their look, signs."""
from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

NEGATE = "−"


@dataclass(frozen=True, slots=True)
class Printed:
    """A number as printed, with its unit's symbol or none; an exponent is written ``e5``."""

    text: str
    unit: str = ""

    def __str__(self) -> str:
        return f"{self.text} {self.unit}".strip()


@dataclass(frozen=True, slots=True)
class Name:
    """A symbol by its look: letter, marks of italics, subscript."""

    look: str


@dataclass(frozen=True, slots=True)
class Minus:
    """A minus before a term."""

    of: Term


@dataclass(frozen=True, slots=True)
class Sign:
    """Two terms with a sign between: ``+ − × / ^``, a comparison, ``and`` or ``or``."""

    sign: str
    left: Term
    right: Term


@dataclass(frozen=True, slots=True)
class Function:
    """A function with a name in upright letters on its terms."""

    name: str
    of: tuple[Term, ...]


@dataclass(frozen=True, slots=True)
class LookUp:
    """A property of a fluid: its letter, the fluid as printed, the known values by their letters."""

    letter: str
    fluid: str
    given: tuple[tuple[str, Term], ...]


Term = Printed | Name | Minus | Sign | Function | LookUp


def said(term: Term, values: Mapping[str, Printed]) -> Iterator[str]:
    """Numbers and signs in the order of reading, with ``values`` for the symbols; brackets do not count.

    Two rows say the same where these agree, however their lines are broken.
    """
    match term:
        case Printed(text=text):
            yield from (NEGATE, str(Printed(text[1:], term.unit))) if text[0] == "-" else (str(term),)
        case Name(look=look):
            yield from said(values[look], values) if look in values else (f"no value of {look}",)
        case Minus(of=of):
            yield NEGATE
            yield from said(of, values)
        case Sign(sign=sign, left=left, right=right):
            yield from said(left, values)
            yield sign
            yield from said(right, values)
        case Function(name=name, of=parts):
            yield name
            for part in parts:
                yield from said(part, values)
        case LookUp(letter=letter, given=given):
            yield letter
            for key, value in given:
                yield key
                yield from said(value, values)


def names_in(term: Term) -> Iterator[str]:
    """The looks of the symbols that a term uses."""
    match term:
        case Name(look=look):
            yield look
        case Minus(of=of):
            yield from names_in(of)
        case Sign(left=left, right=right):
            yield from names_in(left)
            yield from names_in(right)
        case Function(of=parts):
            for part in parts:
                yield from names_in(part)
        case LookUp(given=given):
            for _, value in given:
                yield from names_in(value)
