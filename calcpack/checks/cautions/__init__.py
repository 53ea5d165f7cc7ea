"""Computed values to cautions: what a threshold of a code or of practice says about them.

Thresholds are given with their source and with how far that has been
confirmed; a caution never stops a calculation and replaces no standard.
"""
from __future__ import annotations

from collections.abc import Callable
from typing import Any

from calcpack.checks.cautions import flue_gas, fluid_hazard, operation, pressure, temperature
from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import Caution
from calcpack.solving.solution import Solution

__all__ = ["CAUTIONS", "cautions"]

CAUTIONS: tuple[Callable[[Case], Caution | None], ...] = (
    *pressure.CAUTIONS, *fluid_hazard.CAUTIONS, *temperature.CAUTIONS, *operation.CAUTIONS, *flue_gas.CAUTIONS)
"""In the order of print; each gives None where it does not concern the sheet."""


def cautions(solution: Solution) -> tuple[dict[str, Any], ...]:
    """The cautions that concern a sheet: triggered, not triggered, or not evaluated with the reason."""
    case = Case(solution)
    found = (caution(case) for caution in CAUTIONS)
    return tuple(one.entry() for one in found if one is not None)
