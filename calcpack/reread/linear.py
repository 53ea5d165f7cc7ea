"""A typeset formula's markup to one line of text in which every place on the page has a mark.

Fractions, roots, scripts and italics are told by the boxes that draw them, so
the line says what the eye sees: ``‹T› ₍e₎`` is an italic T with an upright e
below it.
"""
from __future__ import annotations

import re
import unicodedata

from calcpack.reread.elements import Element

ITALIC, UPRIGHT = "\ue000", "\ue001"
BELOW, BELOW_END = "\ue002", "\ue003"
ABOVE, ABOVE_END = "\ue004", "\ue005"
OVER, UNDER, OVER_END = "\ue006", "\ue007", "\ue008"
ROOT, ROOT_END = "\ue009", "\ue00a"
THIN = "\u202f"
DOT = "\u02d9"
MARKS = re.compile("[\ue000-\ue00a]")


def linear(element: Element | str) -> str:
    """The line of an element or a text."""
    if isinstance(element, str):
        return element.replace("\n", " ")
    inside = "".join(linear(one) for one in element.inside)
    match element:
        case Element(tag="i"):
            return f"{ITALIC}{unicodedata.normalize('NFC', inside)}{UPRIGHT}"
        case Element(tag="sub"):
            return f"{BELOW}{inside}{BELOW_END}"
        case Element(tag="sup"):
            return f"{ABOVE}{inside}{ABOVE_END}"
        case Element(classes=("dot",)):
            # The spacing dot is drawn back over its letter.
            return inside.replace(DOT, "\u0307")
        case Element(classes=("frac",)):
            over, under = element.children
            return f"{OVER}{linear(over)}{UNDER}{linear(under)}{OVER_END}"
        case Element(classes=("root",)):
            return f"{ROOT}{inside}{ROOT_END}"
        case Element(tag="br"):
            return " "
    return inside


def plain(line: str) -> str:
    """A line for a message: what the marks stand for, as text."""
    text = line.replace(BELOW, "_").replace(ABOVE, "^(").replace(ABOVE_END, ")").replace(THIN, " ")
    for mark, sign in ((OVER, "("), (UNDER, ")/("), (OVER_END, ")"), (ROOT, "("), (ROOT_END, ")")):
        text = text.replace(mark, sign)
    return MARKS.sub("", text)
