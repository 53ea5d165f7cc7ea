"""A page to its results done again from what it prints: every row of numbers, every place where a value stands.

The reader has the page alone. It shares with the program that made the page
the factors of the units and the equations of state of the fluids; formulas,
arithmetic and tables are read and reckoned here anew.
"""
from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from calcpack.errors import CalcpackError, Fault, NoAnswerError
from calcpack.reread import again, kinds, places
from calcpack.reread.finding import ALLOWED, Found
from calcpack.reread.page_reader import read_page
from calcpack.reread.printed_page import Page, PrintedStep
from calcpack.reread.printed_sheet import PrintedSheet
from calcpack.reread.reading import UnreadableError

_CANNOT = (UnreadableError, CalcpackError, ArithmeticError, ValueError, TypeError, KeyError)
"""What a wrong character on a page can come to when it is read or reckoned."""


class BrokenPrintError(NoAnswerError):
    """A printed result that cannot be had from what is printed."""


@dataclass(frozen=True, slots=True)
class Redone:
    """A page done again: all findings, the steps that no reader of this program follows, and the whole anew.

    ``whole`` are the findings of the second round, in which every step is
    reckoned from the printed inputs and formulas alone, without rounding; it
    is made where the first round agrees.
    """

    number: str
    findings: tuple[Found, ...]
    whole: tuple[Found, ...]
    steps: int
    not_followed: tuple[str, ...]

    @property
    def wrong(self) -> tuple[Found, ...]:
        """The findings that do not agree."""
        return tuple(one for one in (*self.findings, *self.whole) if not one.agrees)

    @property
    def worst(self) -> Found | None:
        """The finding that is farthest off."""
        return max(self.findings, key=lambda one: one.places, default=None)


def redo(html: str) -> Redone:
    """All that a page prints, done again from its visible text."""
    return redo_page(read_page(html))


def redo_page(page: Page) -> Redone:
    """The same for a page that has been read."""
    sheet = PrintedSheet.of(page)
    findings = [Found(f"step {id_}", "the step", math.inf, why) for id_, why in page.unread]
    findings += sheet.doubles
    for step in page.steps:
        findings += _guarded(step, kinds.findings(sheet, step))
    findings += places.findings(sheet)
    # A wrong number would lead the second round astray everywhere behind it: the first round names it alone.
    whole, not_followed = again.findings(sheet) if all(one.agrees for one in findings) else ([], [])
    return Redone(page.number, tuple(findings), tuple(whole), len(page.steps),
                  tuple(dict.fromkeys((*page.not_followed, *not_followed))))


def require(html: str, name: str) -> Redone:
    """:func:`redo`, for a page that must agree.

    Raises
    ------
    BrokenPrintError
        With each step or place whose print cannot be done again.
    """
    done = redo(html)
    if done.wrong:
        raise BrokenPrintError(
            Fault(f"{name}: {one.place}: {one.what} as printed cannot be had from what is printed", found=one.detail,
                  expected=f"{ALLOWED:g} in the last printed place") for one in done.wrong)
    return done


def require_same(html: str, others: Iterable[str], name: str) -> None:
    """Other pages of the same sheet must print what the one that was done again prints.

    Raises
    ------
    BrokenPrintError
        For a page that does not.
    """
    page = read_page(html)
    if any(read_page(other) != page for other in others):
        raise BrokenPrintError(Fault(f"{name}: two pages of this sheet print different numbers"))


def _guarded(step: PrintedStep, found: Iterator[Found]) -> list[Found]:
    """The findings of a step; where the reading breaks off, that is the last of them."""
    collected: list[Found] = []
    try:
        collected.extend(found)
    except _CANNOT as error:
        collected.append(Found(f"step {step.id}", "a row of the step", math.inf, f"it cannot be done again: {error}"))
    return collected
