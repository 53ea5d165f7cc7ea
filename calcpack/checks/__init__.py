"""What is checked of a solution: balances, bounds, ranges, a second source, re-check by hand, limits, cautions.

Each check reads values and adds findings; a result that breaks a law is an
error, a limit that fails is a finding, and a caution never stops anything.
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from calcpack.checks.bounds import bounds, pinches, two_ways
from calcpack.checks.cautions import cautions
from calcpack.checks.closures import energy_balances, entropy_balances, mass_balances
from calcpack.checks.exergy import exergy_view, gouy_stodola
from calcpack.checks.hand import redone_by_hand
from calcpack.checks.ladder import ladder_sums, ladder_view, losses
from calcpack.checks.limit_catalogue import usual_limits
from calcpack.checks.limits import limits
from calcpack.checks.ranges import critical_margins, fluid_ranges
from calcpack.checks.rows import laws_in_rows
from calcpack.checks.second_source import second_source
from calcpack.checks.second_way import second_way

if TYPE_CHECKING:
    from calcpack.record import Record
    from calcpack.solving.solution import Solution

__all__ = ["CHECKS", "Findings", "examine"]

Check = Callable[["Solution", "Record"], tuple[dict[str, Any], ...]]

CHECKS: tuple[Check, ...] = (
    mass_balances, energy_balances, entropy_balances, bounds, two_ways, pinches,
    gouy_stodola, ladder_sums, fluid_ranges, critical_margins, second_source, second_way, laws_in_rows, redone_by_hand)
"""The checks in the order of print; each gives entries ``{id, group, text, value, allowed, status, detail}``.

``status`` is 'ok', 'fails' or 'not evaluated'.
"""


@dataclass(frozen=True, slots=True)
class Findings:
    """Entries of the record, in the order of print: limits of the spec and of practice, checks and cautions;
    exergy balance and ladder.
    """

    limits: tuple[dict[str, Any], ...]
    checks: tuple[dict[str, Any], ...]
    cautions: tuple[dict[str, Any], ...]
    exergy: dict[str, Any] | None = None
    ladder: dict[str, Any] | None = None
    usual_limits: tuple[dict[str, Any], ...] = ()


def examine(solution: Solution, record: Record) -> Findings:
    """All findings of a solution and of the record it gave.

    Raises
    ------
    BrokenLawError
        Where a balance is open, entropy is destroyed or a bound is passed.
    """
    checks = tuple(entry for check in CHECKS for entry in check(solution, record))
    exergy = exergy_view(solution)
    if exergy is not None:
        exergy["losses"] = losses(solution)
    warned = cautions(solution)
    return Findings(limits(solution), checks, warned, exergy, ladder_view(solution), usual_limits(warned))
