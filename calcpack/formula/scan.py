"""Formula text to tokens; a number takes the unit behind it along."""
from __future__ import annotations

import re
from dataclasses import dataclass

from calcpack.errors import Fault, FormulaError, Place

MAX_LENGTH = 600
MAX_TOKENS = 250

# Digits are those of ASCII: \d would take the digits of any script.
_NUMBER = re.compile(r"(?:[0-9]+(?:\.[0-9]+)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?")
_NAME = re.compile(r"[A-Za-z][A-Za-z0-9]*(?:_[A-Za-z0-9]+)*")
# Designations of fluids stand in printed numbers, first in a property's bracket.
_FLUID = re.compile(r"(?<=\()«([^«»]{1,80})»")
_UNIT = re.compile(r" (?!and\b|or\b)((?:1/)?[A-Za-z°µΔ%][A-Za-z0-9°µΔ%²³/^·*.()\[\]-]*)")
_SIGNS = ("<=", ">=", "<", ">", "+", "-", "*", "/", "^", "(", ")", ",", "=")


@dataclass(frozen=True, slots=True)
class Token:
    """A piece of the text: kind ``number``, ``name``, ``sign``, ``comparison`` or ``end``."""

    kind: str
    text: str
    at: int
    unit: str | None = None


def scan(text: str) -> list[Token]:
    """All tokens of ``text``, the last of kind ``end``.

    Raises
    ------
    FormulaError
        For a sign that is not in the language, a unit that is not known, or
        a text longer than 600 characters or of more than 250 tokens.
    """
    if len(text) > MAX_LENGTH:
        raise _fault(f"the formula is longer than {MAX_LENGTH} characters", 0,
                     hint="split it into steps that can be checked one by one")
    tokens: list[Token] = []
    at = 0
    while at < len(text):
        if text[at].isspace():
            at += 1
            continue
        token, at = _next(text, at)
        tokens.append(token)
        if len(tokens) > MAX_TOKENS:
            raise _fault(f"the formula has more than {MAX_TOKENS} parts", token.at, len(token.text),
                         hint="split it into steps that can be checked one by one")
    return [*tokens, Token("end", "", len(text))]


def _next(text: str, at: int) -> tuple[Token, int]:
    if match := _NUMBER.match(text, at):
        return _number(text, match)
    if match := _NAME.match(text, at):
        return Token("name", match.group(), at), match.end()
    if match := _FLUID.match(text, at):
        return Token("name", match.group(1), at), match.end()
    for sign in _SIGNS:
        if text.startswith(sign, at):
            if text.startswith("**", at):
                raise _fault("'**' is not an operator here", at, 2, hint="write a power with ^")
            kind = "comparison" if sign[0] in "<>" else "sign"
            return Token(kind, sign, at), at + len(sign)
    raise _fault(f"{text[at]!r} has no place in a formula", at, expected=(
        "numbers, symbols, + - * / ^ ( ) , and the functions sqrt ln exp abs min max"),
        hint=_HINTS.get(text[at]))


_HINTS = {
    ".": "there are no attributes and no method calls",
    "[": "there is no indexing",
    "×": "write a product with *",
    "−": "write minus with the hyphen -",
    "_": "a symbol starts with a letter",
}


def _number(text: str, match: re.Match[str]) -> tuple[Token, int]:
    end = match.end()
    if text[end:end + 1] == "," and text[end + 1:end + 2].isdigit():
        raise _fault("a comma stands inside a number", end, hint="write the decimal point as '.'")
    if end < len(text) and (text[end].isalpha() or text[end] in "_."):
        raise _fault("a letter follows the number", end, found=repr(text[match.start():end + 1]),
                     hint="write a product with *, and put one space before a unit")
    found = _UNIT.match(text, end)
    if not found:
        return Token("number", match.group(), match.start()), end
    spelled, stop = _balanced(found.group(1), found.start(1))
    return Token("number", match.group(), match.start(), _unit_symbol(spelled, found.start(1))), stop


def _balanced(spelled: str, start: int) -> tuple[str, int]:
    """Cut the unit where a bracket closes that it did not open, or at a trailing operator."""
    depth = 0
    for index, letter in enumerate(spelled):
        depth += (letter == "(") - (letter == ")")
        if depth < 0:
            spelled = spelled[:index]
            break
    spelled = spelled.rstrip("/*^-.·")
    return spelled, start + len(spelled)


def _unit_symbol(spelled: str, at: int) -> str:
    from calcpack.errors import UnitError
    from calcpack.units import unit
    try:
        return unit(spelled).symbol
    except UnitError as error:
        fault = error.faults[0]
        raise _fault(fault.what, at, len(spelled), expected=fault.expected,
                     hint=fault.hint or "put spaces around an operator that follows a number") from None


def _fault(what: str, at: int, length: int = 1, *, found: str | None = None,
           expected: str | None = None, hint: str | None = None) -> FormulaError:
    return FormulaError(Fault(what, Place("", 1, at + 1, length), found=found, expected=expected, hint=hint))
