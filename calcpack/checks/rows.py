"""Every row of a cases step to the checks that the sheet's own row passes: balances, entropy, bounds, limits."""
from __future__ import annotations

import copy
from collections.abc import Iterator
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from calcpack.checks.bounds import bounds, pinches, two_ways
from calcpack.checks.closures import energy_balances, entropy_balances, mass_balances
from calcpack.checks.entries import entry
from calcpack.checks.limits import limits
from calcpack.errors import BrokenLawError
from calcpack.plan.laid import LaidStep
from calcpack.solving.cases import by_row
from calcpack.solving.solution import Solution

if TYPE_CHECKING:
    from calcpack.record import Record

LAWS = (mass_balances, energy_balances, entropy_balances, bounds, two_ways, pinches)


def laws_in_rows(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """One entry for the balances and bounds of all rows, and one for each limit that fails in another row.

    Raises
    ------
    BrokenLawError
        With the row's label at the head of the message.
    """
    entries: list[dict[str, Any]] = []
    for table in (step for step in solution.plan.steps if step.kind == "cases"):
        count = 0
        for label, row in _rows(solution, table):
            try:
                count += sum(one["status"] == "ok" for law in LAWS for one in law(row, record))
            except BrokenLawError as error:
                raise BrokenLawError(replace(fault,
                                             what=f"row {label!r}: {fault.what}") for fault in error.faults) from None
        entries.append(entry("V-N", "Every row",
                             f"Balances, entropy, bounds and pinches in each of {len(table.step.rows)} rows",
                             f"{count} hold", "all", detail="a row that breaks one stops the calculation"))
        entries += _limits_in_rows(solution, table)
    return tuple(entries)


def _rows(solution: Solution, table: LaidStep) -> Iterator[tuple[str, Solution]]:
    """The solution with the values of each row in the place of the shown row's."""
    for case, values in zip(table.step.rows, solution.program.cases[table.symbol], strict=True):
        found = {name: values[slot] for name, slot in solution.program.slots.items()}
        printing = copy.copy(solution.printing)
        printing.values = found
        yield case.label, replace(solution, values=found, printing=printing)


def _limits_in_rows(solution: Solution, table: LaidStep) -> list[dict[str, Any]]:
    """Limits judge the row that is shown; where one would fail in another row, that is said as loudly."""
    moving = by_row(solution.plan, table)
    concerned = {limit.id for limit in solution.spec.limits if {limit.symbol, limit.bound} & moving}
    failing: dict[str, list[str]] = {}
    for label, row in _rows(solution, table):
        for one in limits(row):
            if one["id"] in concerned and one["status"] == "fails":
                failing.setdefault(one["id"], []).append(label)
    return [entry(f"V-N-{name}", "Every row", f"Limit {name} in each row", f"fails in {len(labels)} rows", "none",
                  "fails",
                  ", ".join(labels)) for name, labels in failing.items()]
