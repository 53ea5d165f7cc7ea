"""Bounds, equalities and pinches of a plan to findings; a bound that is passed is an error."""
from __future__ import annotations

from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import entry
from calcpack.errors import BrokenLawError, Fault
from calcpack.solving.solution import Solution, printed_freely
from calcpack.units import shown_with_unit, unit

if TYPE_CHECKING:
    from calcpack.record import Record

ROUNDING = 1e-9
"""How far, relative to its bound, a value may stand beyond it and still be at it."""

ARITHMETIC = 1e-6
"""Two ways that differ by more than this share do not differ by rounding."""


def bounds(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """Each bound of the plan, such as a coefficient of performance below the reversible one.

    Raises
    ------
    BrokenLawError
        With every bound that is passed.
    """
    entries, faults = [], []
    for index, bound in enumerate(solution.plan.facts.bounds, start=1):
        value, limit = solution.value(bound.symbol), solution.value(bound.limit)
        beyond = (limit - value) if bound.above else (value - limit)
        word = "at least" if bound.above else "at most"
        shown = f"{bound.symbol} = {solution.shown(bound.symbol)}"
        allowed = f"{word} {bound.limit} = {solution.shown(bound.limit)}"
        if not beyond <= ROUNDING * abs(limit):
            faults.append(Fault(f"a law is broken: {bound.symbol} passes {bound.limit}", found=shown,
                                expected=f"{allowed}: {bound.text}"))
        entries.append(entry(f"V-B{index}", "Bound", bound.text, shown, allowed))
    if faults:
        raise BrokenLawError(faults)
    return tuple(entries)


def two_ways(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """Each pair of symbols that are found by two ways and must agree.

    Raises
    ------
    BrokenLawError
        Where they are farther apart than arithmetic explains.
    """
    entries, faults = [], []
    for index, equal in enumerate(solution.plan.facts.equals, start=1):
        one, other = solution.value(equal.symbol), solution.value(equal.other)
        largest = max(abs(one), abs(other))
        apart = abs(one - other) / largest if largest else 0.0
        status = "ok" if apart <= equal.relative else "fails"
        shown, allowed = (printed_freely(share, unit(""), 2) for share in (apart, equal.relative))
        both = f"{equal.symbol} = {solution.shown(equal.symbol)}, {equal.other} = {solution.shown(equal.other)}"
        if not apart <= max(equal.relative, ARITHMETIC):
            faults.append(Fault(f"two ways to one quantity disagree: {equal.text}", found=both,
                                expected=f"equal within {allowed} of the larger"))
        entries.append(entry(f"V-W{index}", "Two ways", equal.text, f"{shown} of the larger apart", allowed, status,
                             both))
    if faults:
        raise BrokenLawError(faults)
    return tuple(entries)


def pinches(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """The smallest temperature difference along each exchanger, which must be above zero.

    Raises
    ------
    BrokenLawError
        Where temperatures cross.
    """
    entries, faults = [], []
    for index, view in enumerate(solution.plan.facts.exchangers, start=1):
        value = solution.value(view.series)
        shown_in = solution.unit(view.series)
        zero = f"above {shown_with_unit('0', shown_in)}"
        if not value > 0.0:
            faults.append(Fault(f"the temperatures cross in the {view.name.lower()}", expected=zero,
                                found=f"{view.series} = {printed_freely(value, shown_in, 4)}"))
        entries.append(entry(f"V-P{index}", "Pinch", f"{view.name}: smallest temperature difference, {view.series}",
                             solution.shown(view.series), zero, detail=_where(solution, view.series, view.pinch)))
    if faults:
        raise BrokenLawError(faults)
    return tuple(entries)


def _where(solution: Solution, series: str, column: str) -> str:
    """The row of the profile that holds the pinch."""
    step = solution.step(series)
    at = [one.symbol for one in step.columns].index(column)
    gaps = [row[at] for row in solution.printing.tables[series]]
    return f"step {step.id}, at: {step.step.rows[gaps.index(min(gaps))].label}"
