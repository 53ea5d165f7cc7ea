"""The sheets of a bound package to its transmittal list: what is handed over, for a person and as a table of text."""
from __future__ import annotations

import csv
import io
from collections.abc import Sequence
from dataclasses import dataclass

from calcpack.package.bound_sheets import BoundSheet

SHORT = 12
"""Digits of a hash that are printed: enough to tell files apart, few enough to compare by eye."""

HEADS = ("number", "title", "revision", "date", "status", "pages", "first_page", "file", "sha256")


@dataclass(frozen=True, slots=True)
class Transmittal:
    """To whom and for what a package is handed over, and on which ISO date."""

    date: str
    to: str = ""
    purpose: str = ""


@dataclass(frozen=True, slots=True)
class Row:
    """A sheet in the list: how many pages it has, and on which page of the package it begins."""

    sheet: BoundSheet
    pages: int
    first_page: int

    @property
    def short_hash(self) -> str:
        """The first digits of the file's SHA-256."""
        return self.sheet.sha256[:SHORT]


def rows_of(sheets: Sequence[BoundSheet], pages: Sequence[int], before: int) -> tuple[Row, ...]:
    """The rows of sheets with so many pages each, behind ``before`` pages of the package's own."""
    rows, first = [], before + 1
    for sheet, count in zip(sheets, pages, strict=True):
        rows.append(Row(sheet, count, first))
        first += count
    return tuple(rows)


def as_csv(rows: Sequence[Row]) -> str:
    """The list as comma-separated values with a heading, hashes in full."""
    made = io.StringIO()
    writer = csv.writer(made, lineterminator="\n")
    writer.writerow(HEADS)
    for row in rows:
        sheet = row.sheet.record.data["sheet"]
        writer.writerow([sheet["number"], sheet["title"], sheet["revision"], row.sheet.date, row.sheet.status,
                         row.pages, row.first_page, row.sheet.file, row.sheet.sha256])
    return made.getvalue()
