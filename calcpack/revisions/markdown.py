"""An outline to Markdown with tables, for the text of a change request."""
from __future__ import annotations

import re
from collections.abc import Iterable

from calcpack.revisions.outline import Outline, Part, Row
from calcpack.revisions.share_table import HEADING, TOGETHER, ShareTable

_MARKS = re.compile(r"([\\`*_\[\]<>|~#])")
_CODE = ("Formulas and steps",)


def as_markdown(outline: Outline, level: int = 1) -> str:
    """The comparison in Markdown, its title a heading of that ``level``.

    Nothing that a sheet says can end a cell or become markup.
    """
    blocks = [f"{'#' * level} {escaped(outline.title)}", escaped(outline.compared),
              *(escaped(note) for note in outline.notes), escaped(outline.summary),
              *(_part(part, level + 1) for part in outline.parts)]
    return "\n\n".join(blocks) + "\n"


def escaped(text: str) -> str:
    """``text`` as plain words in one line of Markdown."""
    return _MARKS.sub(r"\\\1", " ".join(text.split())).replace("&", "&amp;")


def code(text: str) -> str:
    """``text`` as code in a cell, between backticks enough that it holds none as long."""
    plain = " ".join(text.split()).replace("|", "\\|")
    fence = "`" * (max((len(run) for run in re.findall("`+", plain)), default=0) + 1)
    return f"{fence} {plain} {fence}" if "`" in plain else f"{fence}{plain}{fence}"


def _part(part: Part, level: int) -> str:
    columns = ["", "", "Old", "New", *(["Change"] if any(row.change for row in part.rows) else []),
               *(["Follows from"] if any(row.because for row in part.rows) else [])]
    rows = [_line(columns), _line("---" for _ in columns)]
    rows += [_line(_cells(row, columns, part.heading in _CODE)) for row in part.rows]
    blocks = [f"{'#' * level} {part.heading}", "\n".join(rows), *(_shares(part.shares) if part.shares else ())]
    return "\n\n".join(blocks)


def _shares(table: ShareTable) -> list[str]:
    """A row a cause, a column a result."""
    if not table.columns:
        return [escaped(note) for note in table.notes]
    columns = [HEADING, *(code(column.symbol) + (f", {escaped(column.unit)}" if column.unit else "")
                          for column in table.columns)]
    rows = [_line(columns), _line("---" for _ in columns),
            *(_line([escaped(text), *(escaped(number or "–") for number in numbers)]) for text, numbers in table.rows),
            _line([TOGETHER, *(escaped(column.whole) for column in table.columns)])]
    return ["\n".join(rows), *(escaped(note) for note in table.notes)]


def _cells(row: Row, columns: list[str], formulas: bool) -> list[str]:
    setter = code if formulas else escaped
    sides = [setter(text) if text else ("–" if text is None else "") for text in (row.old, row.new)]
    cells = [code(row.name), escaped(row.title), *sides]
    if "Change" in columns:
        cells.append(escaped(row.change))
    if "Follows from" in columns:
        cells.append("<br>".join(escaped(cause) for cause in row.because))
    return cells


def _line(cells: Iterable[str]) -> str:
    return "| " + " | ".join(cells) + " |"
