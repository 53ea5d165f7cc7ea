"""Computed values to cautions: what a threshold of a code or of practice says about them.

Thresholds are given with their source and with how far that has been
confirmed; a caution never stops a calculation and replaces no standard.
"""
from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

from calcpack.checks.cautions import (
    charge,
    equipment,
    flow,
    flue_gas,
    fluid_hazard,
    operation,
    pressure,
    release,
    relief,
    room,
    temperature,
)
from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import Caution
from calcpack.solving.solution import Solution

__all__ = ["CAUTIONS", "cautions"]

CAUTIONS: tuple[Callable[[Case], Caution | None], ...] = (
    *pressure.CAUTIONS, *equipment.CAUTIONS, *relief.CAUTIONS, *fluid_hazard.CAUTIONS, *release.CAUTIONS,
    *charge.CAUTIONS, *room.CAUTIONS, *temperature.CAUTIONS, *operation.CAUTIONS, *flow.CAUTIONS,
    *flue_gas.CAUTIONS)
"""In the order of print; each gives None where it does not concern the sheet."""


OF_FLUID: tuple[Callable[[Case], Caution | None], ...] = (
    pressure.gas_or_liquid, pressure.freezing_at_rest, *fluid_hazard.CAUTIONS, operation.stability,
    operation.below_atmosphere, operation.dry_ice)
"""Those that hang on the fluid alone, made again for the second circuit of a cascade; the safety quantities of the
spec speak of one circuit, so what needs them is left to the first.
"""


def _other_circuits(solution: Solution) -> list[str]:
    """The roles of working fluids beside the first: those with numbered states of their own that condense."""
    roles = dict.fromkeys(point.fluid for point in solution.plan.facts.states if point.fluid != "wf")
    return [role for role in roles if Case(solution).working is not None and Case(solution, role).working is not None]


def _of_fluid(case: Case) -> list[Caution]:
    """The cautions of a second working fluid, told apart by its role and designation."""
    found = (caution(case) for caution in OF_FLUID)
    return [replace(one, id=f"{one.id}-{case.role}", topic=f"{one.topic}, {case.working.designation}")
            for one in found if one is not None]


def cautions(solution: Solution) -> tuple[dict[str, Any], ...]:
    """The cautions that concern a sheet: triggered, not triggered, or not evaluated with the reason."""
    case = Case(solution)
    found = [one for caution in CAUTIONS if (one := caution(case)) is not None]
    found += [one for role in _other_circuits(solution) for one in _of_fluid(Case(solution, role))]
    hazards = list(dict.fromkeys(one.hazard for one in found))
    return tuple(one.entry() for one in sorted(found, key=lambda one: hazards.index(one.hazard)))
