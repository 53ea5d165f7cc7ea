"""What a spec says of its rows to rows with values: a reference season, a table beside the spec or inside it."""
from __future__ import annotations

import csv
import io
import math
import re
from dataclasses import dataclass
from pathlib import Path

from calcpack.errors import Fault, SpecError, UnitError, nearest
from calcpack.formula.dimension import TEMPERATURE
from calcpack.plan.seasons import SEASONS, SOURCE, Season
from calcpack.plan.steps import CaseRow
from calcpack.units import Unit, unit

MAX_ROWS = 400
MAX_COLUMNS = 20
LABEL = "label"

TITLES = {"T_out": "Outdoor temperature of the row", "t_bin": "Hours of the row"}

_HEADING = re.compile(r"([A-Za-z][A-Za-z0-9]*(?:_[A-Za-z0-9]+)*)\s*(?:\[([^\]]*)\])?")


@dataclass(frozen=True, slots=True)
class RowColumn:
    """A column that the rows give: its symbol and title, the unit it is written in, whether it is a level."""

    symbol: str
    title: str
    unit: str
    level: bool = False

    @property
    def print_unit(self) -> str:
        """The unit of the step; a level is one in whichever scale the column is written."""
        return "degC" if self.level else self.unit


@dataclass(frozen=True, slots=True)
class Rows:
    """The rows of a sheet, with where they are from; ``season`` is None for a table of the engineer's own."""

    columns: tuple[RowColumn, ...]
    rows: tuple[CaseRow, ...]
    source: str
    season: Season | None = None

    def index(self, label: str) -> int:
        """The row that is called ``label``.

        Raises
        ------
        SpecError
            Where there is none.
        """
        wanted = _plain_label(label)
        for index, row in enumerate(self.rows):
            if _plain_label(row.label) == wanted:
                return index
        labels = [row.label for row in self.rows]
        shown = ", ".join(labels if len(labels) <= 12 else [*labels[:6], "…", *labels[-3:]])
        raise SpecError(Fault(f"there is no row {label!r}", expected=f"one of {shown}", hint=nearest(label, labels)))


def read_rows(written: str, folder: Path) -> Rows:
    """The rows that ``written`` names: a season, a table of several lines, or a file in ``folder``.

    Raises
    ------
    SpecError
        Where there is no such file, or a table cannot be read.
    """
    if written in SEASONS:
        return _reference(SEASONS[written])
    if "\n" in written.strip():
        return _table(written, "table in the spec")
    return _table(_file(written, folder), written)


def _reference(season: Season) -> Rows:
    columns = (RowColumn("T_out", TITLES["T_out"], "degC", True), RowColumn("t_bin", TITLES["t_bin"], "h"))
    rows = tuple(CaseRow(f"{T} °C".replace("-", "\N{MINUS SIGN}"), (f"{T + 273.15:.12g} K", f"{hours} h")) for T,
                 hours in season.bins)
    return Rows(columns, rows, f"{SOURCE}: {season.name}", season)


def _file(name: str, folder: Path) -> str:
    if name.startswith(("/", "~")) or "\\" in name or ".." in name.split("/") or not name.endswith(".csv"):
        raise SpecError(Fault(f"{name!r} names no rows",
                              expected=", ".join(SEASONS) + ", the path of a .csv file in or "
                              "below the spec's folder, or the table itself", hint=nearest(name, SEASONS)))
    try:
        return (folder / name).read_text("utf-8")
    except (OSError, UnicodeDecodeError) as error:
        raise SpecError(Fault(f"the table {name} cannot be read", detail=str(error),
                              expected="a file of comma-separated values beside the spec, in UTF-8")) from None


def _table(text: str, source: str) -> Rows:
    lines = [row for row in csv.reader(io.StringIO(text.strip()),
                                       skipinitialspace=True) if any(cell.strip() for cell in row)]
    if not 2 <= len(lines) <= MAX_ROWS + 1:
        raise SpecError(Fault(f"the table has {max(0, len(lines) - 1)} rows",
                              expected=f"a heading and 1 to {MAX_ROWS} rows"))
    heads = [cell.strip() for cell in lines[0]]
    labelled = heads[0] == LABEL
    columns = tuple(_column(head) for head in heads[1 if labelled else 0:])
    symbols = [column.symbol for column in columns]
    if not 1 <= len(columns) <= MAX_COLUMNS or len(set(symbols)) < len(symbols):
        raise SpecError(Fault("the heading of the table does not fit", found=", ".join(heads),
                              expected=f"1 to {MAX_COLUMNS} columns, each symbol once"))
    rows = tuple(_row([cell.strip() for cell in line], number, columns, labelled)
                 for number, line in enumerate(lines[1:], start=1))
    if len({_plain_label(row.label) for row in rows}) < len(rows):
        raise SpecError(Fault("two rows of the table have one label",
                              hint=f"give each row a name of its own in a first column {LABEL!r}"))
    return Rows(columns, rows, source)


def _column(head: str) -> RowColumn:
    found = _HEADING.fullmatch(head)
    if found is None:
        raise SpecError(Fault(f"{head!r} is not the heading of a column",
                              expected=f"a symbol with its unit, such as T_out [degC], or {LABEL} for the first"))
    symbol, spelled = found.group(1), (found.group(2) or "").strip()
    try:
        written = unit(spelled)
    except UnitError as error:
        raise SpecError(error.faults) from None
    return RowColumn(symbol, TITLES.get(symbol, f"{symbol} of the row"), spelled, _is_level(symbol, written))


def _is_level(symbol: str, written: Unit) -> bool:
    return written.dimension == TEMPERATURE and (written.level or not symbol.startswith(("dT", "Delta")))


def _row(cells: list[str], number: int, columns: tuple[RowColumn, ...], labelled: bool) -> CaseRow:
    values = cells[1:] if labelled else cells
    if len(values) != len(columns):
        raise SpecError(Fault(f"row {number} of the table has {len(cells)} values",
                              expected=f"{len(columns) + labelled}, as in the heading", found=", ".join(cells)))
    texts = tuple(_quantity(cell, number, column) for cell, column in zip(values, columns, strict=True))
    label = cells[0] if labelled else f"{values[0]} {unit(columns[0].unit).symbol}".strip()
    if not label:
        raise SpecError(Fault(f"row {number} of the table has no label"))
    return CaseRow(label, texts)


def _quantity(cell: str, number: int, column: RowColumn) -> str:
    try:
        value = float(cell)
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise SpecError(Fault(f"row {number} of the table: {cell!r} is not a number", expected="such as -7 or 3.5",
                              hint=f"column {column.symbol}; a decimal point, no unit: that stands in the heading"))
    written = unit(column.unit)
    if written.level:
        return f"{written.to_si(value):.12g} K"
    return f"{cell} {column.unit}".strip()


def _plain_label(label: str) -> str:
    return label.replace("degC", "°C").replace("−", "-").replace(" ", "").casefold()
