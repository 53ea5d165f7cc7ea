"""Turn the text of a scalar into a quantity, and tell apart what only looks like a number.

YAML 1.1 read ``no`` as false, ``12:30`` as 750 and ``010`` as 8. Here scalars
have the meaning of YAML 1.2 (core schema, https://yaml.org/spec/1.2.2/#103-core-schema),
and where a number is meant, spellings that programs read differently are faults.
"""
from __future__ import annotations

import re
from typing import TYPE_CHECKING

from calcpack.errors import Fault, UnitError

if TYPE_CHECKING:
    from calcpack.units import Reading

_NOT_NUMBERS: tuple[tuple[re.Pattern[str], str, str | None], ...] = (
    (re.compile(r"(?i)(?:y|yes|n|no|on|off|true|false)\Z"), "{} is a word, where a quantity is meant", None),
    (re.compile(r"[+-]?0\d[\d.]*(?:\s|\Z)"), "{} starts with a zero, which some programs read as octal",
     "write the number without the zero in front"),
    (re.compile(r"[+-]?0[xob][0-9A-Fa-f]+(?:\s|\Z)"), "{} is not a decimal number", "write it in decimal"),
    (re.compile(r"[+-]?\d+(?::\d+)+(?:\s|\Z)"), "{} is not a quantity",
     "write a time as one number with a unit, such as 12.5 h"),
    (re.compile(r"[+-]?\d+(?:_\d+)+"), "{} holds an underscore inside the number",
     "write the digits together"),
)


def clipped(value: object) -> str:
    """A value in quotes for a message, cut after 60 characters."""
    text = str(value)
    return repr(text if len(text) <= 60 else text[:59] + "…")


def quantity(text: str, kind: str | None = None, *, p_atm: float | None = None) -> Reading:
    """The quantity that ``text`` writes, of the ``kind`` if one is given.

    Raises
    ------
    UnitError
        For what :func:`calcpack.units.read_quantity` refuses, and for words
        and numbers that programs read differently.
    """
    from calcpack.units import read_quantity
    for pattern, what, hint in _NOT_NUMBERS:
        if pattern.match(text):
            raise UnitError(Fault(what.format(clipped(text)), hint=hint,
                                  expected="a quantity such as '5 bar' or '0.72'"))
    return read_quantity(text, kind, p_atm=p_atm)
