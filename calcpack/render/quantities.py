"""Printed quantities of a record to cells and phrases of a page."""
from __future__ import annotations

import re
from collections.abc import Container, Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any

from markupsafe import Markup, escape

from calcpack.errors import FormulaError
from calcpack.formula import typeset
from calcpack.formula.boxes import THIN
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import Node

PRINTED = re.compile(r"(?<![\w.)])-?\d+(?:\.\d+)?(?:e[-+]?\d+)?(?![\w-])|(?<!\w)[A-Za-z]\w*")
"""Numbers and names inside a sentence."""

BEFORE_UNIT = re.compile(
    r"(?:(?<=\d)|^) (?=(?:K|bar|psi|kPa|MPa|Pa|kW|W|MW|kJ|kg|kmol|mm|m|s|h|Btu|lb)\b|°[CFR]\b|%)")
"""The gap between a number and its unit; at the start of a piece the number is what stands before it."""

POWERS = re.compile(r"(?<=m)[23](?!\d)")
"""The figure in m2 and m3, as the fluid register writes them."""


def _raised(match: re.Match[str]) -> str:
    return {"2": "²", "3": "³"}[match[0]]


@dataclass(frozen=True, slots=True)
class Shown:
    """A quantity in print: the number, its unit, and a second way to say it such as ``(38.00 °C)``."""

    number: Markup
    unit: Markup
    also: str = ""


def shown(entry: Mapping[str, Any] | None) -> Shown | None:
    """The quantity of an entry with ``shown`` and ``unit``; None for no entry."""
    if entry is None:
        return None
    also = entry.get("also_shown")
    return Shown(number(str(entry["shown"])), unit(entry.get("unit") or ""), f"({also})" if also else "")


def number(text: str) -> Markup:
    """A number with a true minus and powers of ten; a word stays a word."""
    return Markup(typeset.quantity_html(text, ""))


def unit(text: str) -> Markup:
    """A unit's symbol, upright."""
    return Markup(typeset.unit_html(POWERS.sub(_raised, text))) if text else Markup("")


def quantity(text: str, unit_symbol: str = "") -> Markup:
    """A number with its unit inside running text, never broken between lines."""
    plain = Markup(typeset.quantity_html(text, POWERS.sub(_raised, unit_symbol)))
    return Markup('<span class="whole">{}</span>').format(plain) if unit_symbol else plain


def written(text: str) -> Markup:
    """A quantity that stands as one text, such as ``4 m2``."""
    value, _, unit_symbol = text.partition(" ")
    return quantity(value, unit_symbol)


def titled(name: str, title: str) -> str:
    """The title of a symbol; a dash where the record has the symbol's own name in its place."""
    return "–" if title == name else title


def prose(text: str | None, symbols: Container[str] = ()) -> Markup:
    """A sentence of the record: true minus signs, powers of ten, and those of its words that are ``symbols``."""
    pieces, end, text = [], 0, str(text or "")
    for match in PRINTED.finditer(text):
        found = _set(match[0], symbols)
        if found is not None:
            pieces += [escape(_glued(text[end:match.start()])), found]
            end = match.end()
    return Markup("").join([*pieces, escape(_glued(text[end:]))])


def _glued(text: str) -> str:
    """The text with units that stay on the line of their number."""
    return BEFORE_UNIT.sub(THIN, text)


def _set(word: str, symbols: Container[str]) -> Markup | None:
    """The markup of a number or a symbol that needs some; None for what stands as it is."""
    if word[0].isalpha():
        return symbol(word) if "_" in word and word in symbols else None
    mantissa, mark, power = word.partition("e")
    if not mark:
        return number(word) if word[0] == "-" else None
    return number(f"{mantissa}e{int(power)}")


@cache
def symbol(name: str) -> Markup:
    """A symbol in running text."""
    return Markup(typeset.symbol_html(name))


def tree(text: str) -> Node | None:
    """A formula's or a condition's tree; None for a text that is none, such as 'min of dT_x'."""
    for read in (parse, parse_condition):
        try:
            return read(text)
        except FormulaError:
            continue
    return None


def formula(text: str) -> Markup:
    """A formula or condition on one line of running text."""
    node = tree(text)
    return Markup("<code>{}</code>").format(text) if node is None else Markup(typeset.node_html(node))
