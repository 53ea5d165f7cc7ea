"""One family of faults: each knows its place, what was found and what to do about it.

A fault is a value first. Stages collect faults and raise them together; one
printer, :func:`describe`, shows each with its source line and a caret. The
text of a library never stands in the message; it is kept as ``detail``.
"""
from __future__ import annotations

import difflib
import textwrap
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace


@dataclass(frozen=True, slots=True)
class Place:
    """Where in a file something stands; ``line`` and ``column`` count from 1."""

    file: str
    line: int
    column: int
    length: int = 1

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"

    def shifted(self, columns: int, length: int = 1) -> Place:
        """The place ``columns`` to the right, for a fault inside a scalar."""
        return replace(self, column=self.column + columns, length=max(1, length))


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing that is wrong.

    ``what`` is a sentence without a full stop; ``found``, ``expected`` and
    ``hint`` complete it for the reader; ``detail`` holds a library's raw text.
    """

    what: str
    place: Place | None = None
    found: str | None = None
    expected: str | None = None
    hint: str | None = None
    detail: str | None = None

    def at(self, place: Place | None) -> Fault:
        """The same fault, at ``place`` unless it has a place already."""
        return self if self.place is not None else replace(self, place=place)


class CalcpackError(Exception):
    """Base of all faults that the command line prints without a traceback."""

    exit_status = 2

    def __init__(self, faults: Fault | Iterable[Fault]) -> None:
        self.faults: tuple[Fault, ...] = (faults,) if isinstance(faults, Fault) else tuple(faults)
        super().__init__("; ".join(_sentence(fault) for fault in self.faults))

    def __reduce__(self) -> tuple:
        return type(self), (self.faults,)

    def at(self, place: Place | None) -> CalcpackError:
        """The same error with ``place`` filled in where a fault has none."""
        return type(self)(fault.at(place) for fault in self.faults)


class SpecError(CalcpackError):
    """The spec is wrong: its YAML, a key, a value, a symbol."""


class FormulaError(CalcpackError):
    """A formula cannot be read, or its dimensions do not fit."""


class UnitError(CalcpackError):
    """A quantity or a unit cannot be read, or is of the wrong kind."""


class CommandError(CalcpackError):
    """The command line asks for something that is not there."""


class NoAnswerError(CalcpackError):
    """The numbers have no answer."""

    exit_status = 3


class RootError(NoAnswerError):
    """An equation has no root inside its bracket."""


class FluidRangeError(NoAnswerError):
    """A property is asked for outside the range of the fluid's equation."""


class BrokenLawError(NoAnswerError):
    """A result breaks the first or the second law."""


class MissingPartError(CalcpackError):
    """A part of the machine is missing; ``hint`` says what to install."""

    exit_status = 4


def nearest(word: str, known: Iterable[str]) -> str | None:
    """'did you mean …?' for the known word nearest to ``word``, or None."""
    names = sorted(set(known))
    found = difflib.get_close_matches(word, names, n=1, cutoff=0.6)
    if not found:
        folded = {name.casefold(): name for name in names}
        found = [folded[word.casefold()]] if word.casefold() in folded else []
    return f"did you mean {found[0]!r}?" if found else None


def describe(faults: Iterable[Fault], texts: Mapping[str, str] | None = None,
             ending: str = "nothing was written", width: int | None = None) -> str:
    """All faults as a compiler prints them.

    ``texts`` gives the text of each file by name, for the source lines; the
    last line counts the faults and says ``ending``. Sentences are wrapped to
    ``width`` columns, source lines are not; None wraps nothing.
    """
    faults = tuple(faults)
    blocks = [_block(fault, texts or {}, width) for fault in faults]
    count = "1 error" if len(faults) == 1 else f"{len(faults)} errors"
    return "\n".join([*blocks, f"{count}, {ending}."])


def _block(fault: Fault, texts: Mapping[str, str], width: int | None) -> str:
    lines = _wrapped("", f"{fault.place}: {fault.what}" if fault.place else f"error: {fault.what}", width, hanging=2)
    marked = _source_line(fault, texts)
    hint = fault.hint
    if marked and hint is not None and (width is None or len(marked[1]) + 1 + len(hint) <= width):
        marked[1] += f" {hint}"
        hint = None
    lines += marked
    for label, text in (("found:", fault.found), ("expected:", fault.expected), ("hint:", hint),
                        ("detail:", fault.detail)):
        if text is not None:
            lines += _wrapped(f"    {label:<9} ", text, width, hanging=14)
    return "\n".join(lines)


def _wrapped(label: str, text: str, width: int | None, *, hanging: int) -> list[str]:
    """A label and its text in lines of at most ``width`` columns, those after the first set in by ``hanging``."""
    if width is None or (len(label) + len(text) <= width and "\n" not in text):
        return [label + text]
    return textwrap.wrap(text, width, initial_indent=label, subsequent_indent=" " * hanging,
                         break_long_words=False, break_on_hyphens=False)


def _source_line(fault: Fault, texts: Mapping[str, str]) -> list[str]:
    place = fault.place
    if place is None or place.file not in texts:
        return []
    rows = texts[place.file].splitlines()
    if not 1 <= place.line <= len(rows):
        return []
    # A character that a terminal would act on, or not show, is printed as a mark of its own.
    row = "".join(letter if letter.isprintable() else "�" for letter in rows[place.line - 1].expandtabs(1))
    start, row = _window(row, place.column)
    room = max(1, min(place.length, len(row) - start))
    caret = " " * start + "^" * room
    return ["    " + row, "    " + caret]


def _window(row: str, column: int, width: int = 110) -> tuple[int, str]:
    """A long line cut to ``width`` around ``column``; the column inside it."""
    start = max(0, column - 1)
    if len(row) <= width:
        return start, row
    first = max(0, min(start - width // 2, len(row) - width))
    return start - first, row[first:first + width]


def _sentence(fault: Fault) -> str:
    where = f"{fault.place}: " if fault.place else ""
    found = f" (found {fault.found})" if fault.found else ""
    return f"{where}{fault.what}{found}"
