"""The attribution of a comparison to one table: a row a cause, a column a result."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

Data = Mapping[str, Any]

HEADING = "How much each change moved the results"
TOGETHER = "together"


@dataclass(frozen=True, slots=True)
class Column:
    """A result: what each cause moved it by, in ``unit``; None where the cause is told within another."""

    symbol: str
    unit: str
    numbers: tuple[str | None, ...]
    whole: str

    @property
    def head(self) -> str:
        """The symbol with the unit of its numbers: ``'W_dot_net [kW]'``."""
        return f"{self.symbol} [{self.unit}]" if self.unit else self.symbol


@dataclass(frozen=True, slots=True)
class ShareTable:
    """The causes in words, the columns, and how the parts were found."""

    causes: tuple[str, ...]
    columns: tuple[Column, ...]
    notes: tuple[str, ...]

    @property
    def rows(self) -> tuple[tuple[str, tuple[str | None, ...]], ...]:
        """Each cause with its numbers, column by column."""
        return tuple((cause, tuple(column.numbers[at] for column in self.columns))
                     for at, cause in enumerate(self.causes))


def by_result(comparison: Data) -> dict[str, Data]:
    """The attribution by symbol in the order of the results, which a comparison read from JSON has lost."""
    found = comparison.get("attribution") or {}
    order = [one["symbol"] for one in comparison.get("results") or ()]
    return {symbol: found[symbol] for symbol in order if symbol in found} | found


def share_table(comparison: Data) -> ShareTable | None:
    """The table; None where no result was changed. Without columns, its notes say why."""
    found, note = by_result(comparison), comparison.get("attribution_note") or ""
    if not found and not note:
        return None
    parts = {symbol: {part["text"]: part["number"] for part in _told(one)} for symbol, one in found.items()}
    moved = {one["program"]["text"] for one in found.values() if one["program"]["number"] != "0"}
    quiet = {one["program"]["text"] for one in found.values()} - moved
    causes = tuple(text for text in dict.fromkeys(text for one in parts.values() for text in one) if text not in quiet)
    columns = tuple(Column(symbol, one["unit"], tuple(parts[symbol].get(text) for text in causes), one["sum_number"])
                    for symbol, one in found.items())
    return ShareTable(causes, columns, (*_methods(found), *([_sentence(note)] if note else [])))


def _told(one: Data) -> list[Data]:
    return [*one["parts"], one["program"]]


def _methods(found: Mapping[str, Data]) -> list[str]:
    """How the parts were found, once where it is the same for all, and the number of solves."""
    by_method: dict[str, list[str]] = {}
    for symbol, one in found.items():
        by_method.setdefault(one["method"], []).append(symbol)
    lines = [_sentence(method if len(by_method) == 1 else f"{', '.join(symbols)}: {method}")
             for method, symbols in by_method.items()]
    if lines:
        solves = next(iter(found.values()))["solves"]
        lines.append(f"{solves} {'solve' if solves == 1 else 'solves'}; each number is rounded by itself.")
    return lines


def _sentence(text: str) -> str:
    first, _, rest = text.partition(" ")
    # A symbol at the beginning keeps its letters.
    return (f"{first.capitalize()} {rest}" if first.isalpha() and first.islower() else text).rstrip(".") + "."
