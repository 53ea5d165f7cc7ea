"""A comparison with the revision before to the delta marks beside what changed."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from markupsafe import Markup

Data = Mapping[str, Any]


@dataclass(frozen=True, slots=True)
class Marks:
    """What carries a mark: symbols, and ids of assumptions and limits; ``count`` of marks drawn."""

    letter: str = ""
    symbols: frozenset[str] = frozenset()
    assumptions: frozenset[str] = frozenset()
    limits: frozenset[str] = frozenset()
    count: int = 0

    def symbol(self, name: str) -> Markup:
        """The mark of an input, a step or a result; empty where nothing changed."""
        return self._mark(name in self.symbols)

    def assumption(self, name: str) -> Markup:
        """The mark of an assumption."""
        return self._mark(name in self.assumptions)

    def limit(self, name: str) -> Markup:
        """The mark of a limit."""
        return self._mark(name in self.limits)

    def _mark(self, changed: bool) -> Markup:
        if not changed:
            return Markup("")
        return Markup('<span class="delta" title="changed in revision {0}">{0}</span>').format(self.letter)


def marks_of(record: Data, comparison: Data | None) -> Marks:
    """The marks of a sheet; none without a comparison."""
    if comparison is None:
        return Marks()
    ids = comparison.get("changed_ids") or {}
    symbols = frozenset(comparison.get("changed_symbols") or ())
    assumptions, limits = frozenset(ids.get("assumptions") or ()), frozenset(ids.get("limits") or ())
    marked = [one["symbol"] in symbols for one in (*record["inputs"], *record["steps"])]
    marked += [symbol in symbols for symbol in record["results"]]
    marked += [one["id"] in assumptions for one in record.get("assumptions") or ()]
    marked += [one["id"] in limits for one in record.get("limits") or ()]
    return Marks(str(comparison["letter"]), symbols, assumptions, limits, sum(marked))
