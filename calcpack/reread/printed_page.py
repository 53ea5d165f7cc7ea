"""What a page prints, as a reader takes it: steps, tables and fluids; texts of formulas stay as lines."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.reread.terms import Printed


@dataclass(frozen=True, slots=True)
class Value:
    """A printed number, and the temperature in brackets behind it where it has one."""

    number: Printed
    twin: Printed | None = None


@dataclass(frozen=True, slots=True)
class PrintedFluid:
    """A fluid of the sheet: its number F1, its designation, and the facts printed of it by their headings."""

    number: str
    designation: str
    facts: dict[str, str]


@dataclass(frozen=True, slots=True)
class PrintedInput:
    """A row of the design inputs; ``written`` is the text of the spec."""

    look: str
    value: Value
    written: str


@dataclass(frozen=True, slots=True)
class Seen:
    """A value of a symbol in another place of the sheet: a results table, a limit."""

    place: str
    look: str
    value: Value


@dataclass(frozen=True, slots=True)
class Cell:
    """A cell of the state or stream table: no symbol stands beside it but that of its column."""

    place: str
    look: str
    value: Value


@dataclass(frozen=True, slots=True)
class PrintedLimit:
    """A limit: what it holds against what, the margin and the verdict."""

    id: str
    look: str
    value: Value
    sense: str
    bound: Value
    margin: Printed | None
    percent: Printed | None
    holds: bool


@dataclass(frozen=True, slots=True)
class End:
    """An end of a bracket: its formula, if one stands there, and its value.

    ``stated`` is the formula's value where the end was moved inwards from it.
    """

    formula: str
    value: Printed
    stated: Printed | None = None


@dataclass(frozen=True, slots=True)
class RootLines:
    """The equation that is zero, the bracket, and what is left at the printed solution."""

    equation: str
    ends: tuple[End, End]
    left: Printed
    less_than: bool


@dataclass(frozen=True, slots=True)
class OptimumLines:
    """The objective, the bounds, the objective at the optimum and along a curve of printed points."""

    objective: str
    greatest: bool
    ends: tuple[End, End]
    best: Printed
    curve: tuple[tuple[Printed, Printed], ...]


@dataclass(frozen=True, slots=True)
class BranchLine:
    """A row of a choice: its condition in symbols and in numbers (empty for the last one), its verdict."""

    condition: str
    numbers: str
    verdict: str


@dataclass(frozen=True, slots=True)
class LookupLines:
    """Where a table is read, and its points; ``near`` marks the neighbours."""

    at: str
    numbers: str
    points: tuple[tuple[Printed, Printed, bool], ...]


@dataclass(frozen=True, slots=True)
class ColumnLine:
    """A column of a series: its formula, and its numbers and result in the row that is written out."""

    look: str
    unit: str
    formula: str
    numbers: str
    result: Printed


@dataclass(frozen=True, slots=True)
class SeriesRow:
    """A row of a series: the formula of its first cell, if one is printed, and its cells."""

    label: str
    formula: str
    cells: tuple[Printed, ...]


@dataclass(frozen=True, slots=True)
class SeriesLines:
    """A table of the calculation: its columns, its rows, the row written out, how the result comes from which."""

    columns: tuple[ColumnLine, ...]
    rows: tuple[SeriesRow, ...]
    worked: str
    reduction: str
    reduced: str


@dataclass(frozen=True, slots=True)
class CaseColumn:
    """A column of a calculation solved row by row: its formula, or ``given`` by the row, or ``solved`` for it."""

    look: str
    unit: str
    formula: str
    given: bool
    solved: bool


@dataclass(frozen=True, slots=True)
class CaseLines:
    """A table of the calculation solved once a row; the steps of the page are those of the row ``shown``."""

    columns: tuple[CaseColumn, ...]
    rows: tuple[SeriesRow, ...]
    shown: str


@dataclass(frozen=True, slots=True)
class TotalLine:
    """The reduction of a column in the table of another step."""

    reduction: str
    look: str
    table: str


Detail = RootLines | OptimumLines | tuple[BranchLine, ...] | LookupLines | SeriesLines | CaseLines | TotalLine | None


@dataclass(frozen=True, slots=True)
class PrintedStep:
    """A step: the rows of its equation as lines; ``numbers`` is empty where the page leaves that row out."""

    id: str
    look: str
    symbols: str
    numbers: str
    result: Value
    fluids: tuple[str, ...]
    detail: Detail = None


@dataclass(frozen=True, slots=True)
class Page:
    """All that can be done again of a page.

    ``unread`` names the steps whose lines are no formulas, with why;
    ``not_followed`` those of a kind that has no lines to do again.
    """

    number: str
    ambient: Printed | None
    fluids: tuple[PrintedFluid, ...]
    inputs: tuple[PrintedInput, ...]
    steps: tuple[PrintedStep, ...]
    seen: tuple[Seen, ...]
    cells: tuple[Cell, ...]
    limits: tuple[PrintedLimit, ...]
    unread: tuple[tuple[str, str], ...]
    not_followed: tuple[str, ...]
