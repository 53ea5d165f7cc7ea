"""Sheets and a transmittal to one PDF: the package's own pages first, then every sheet, counted through."""
from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from calcpack.errors import CommandError, Fault
from calcpack.package.bound import Part, bound, pages_of, parts_of
from calcpack.package.bound_front import count_pdf, front_pdf
from calcpack.package.bound_sheets import BoundSheet
from calcpack.package.transmittal import Row, Transmittal, rows_of

FIRST_GUESS = 3
"""Pages of the package's own, to begin with; their number hangs on the page numbers that they print."""

TRIES = 5


@dataclass(frozen=True, slots=True)
class BoundPackage:
    """One PDF of a package, with the rows of its transmittal list."""

    content: bytes
    rows: tuple[Row, ...]

    @property
    def pages(self) -> int:
        """How many pages it has in all."""
        return self.rows[-1].first_page + self.rows[-1].pages - 1


def bind(sheets: Sequence[BoundSheet], transmittal: Transmittal, *, issued: bool) -> BoundPackage:
    """The sheets bound to one PDF; equal sheets and transmittals give equal bytes.

    Raises
    ------
    CommandError
        For no sheets, or two of one number.
    MissingPartError
        Where the PDF engine is missing.
    """
    _require_sheets(sheets)
    pages = [pages_of(sheet.content) for sheet in sheets]
    parts = [parts_of(sheet.content) for sheet in sheets]
    before = FIRST_GUESS
    for _ in range(TRIES):
        rows = rows_of(sheets, pages, before)
        front, count = front_pdf(rows, parts, transmittal, issued)
        if count == before:
            break
        before = count
    else:
        raise CommandError(Fault("the package's own pages do not come to rest", hint="report the specs"))
    projects = list(dict.fromkeys(sheet.record.data["sheet"]["project"] for sheet in sheets))
    title = "Calculation package" + (f": {projects[0]}" if len(projects) == 1 else "")
    bookmarked = [Part(sheet.content, _bookmark(sheet)) for sheet in sheets]
    return BoundPackage(bound([Part(front), *bookmarked], title, count_pdf), rows)


def _bookmark(sheet: BoundSheet) -> str:
    block = sheet.record.data["sheet"]
    return f"{block['number']} {block['title']}, revision {block['revision']}"


def _require_sheets(sheets: Sequence[BoundSheet]) -> None:
    numbers = [sheet.number for sheet in sheets]
    if not numbers:
        raise CommandError(Fault("there is no sheet to bind"))
    twice = sorted({number for number in numbers if numbers.count(number) > 1})
    if twice:
        raise CommandError(Fault(f"the sheet number {twice[0]} stands in more than one spec",
                                 expected="a number of its own for each sheet"))
