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
    pressure.gas_or_liquid, pressure.freezing_at_rest, *fluid_hazard.CAUTIONS, *release.OF_CIRCUIT, *charge.CAUTIONS,
    *room.OF_CIRCUIT, equipment.evacuation, relief.secondary, operation.stability, operation.below_atmosphere,
    operation.dry_ice)
"""Those that hang on the fluid, its charge and the room, made for each circuit of a cascade; of vessels, pipes and
relief devices the spec speaks once, so what needs them is left to the first.
"""


def _found(case: Case) -> list[Caution]:
    """The cautions of the first circuit; beside another one, those of the fluid say of which they speak."""
    several = bool(case.other_circuits)
    pairs = [(caution, one) for caution in CAUTIONS if (one := caution(case)) is not None]
    return [_naming(one, case) if several and caution in OF_FLUID else one for caution, one in pairs]


def _of_fluid(case: Case) -> list[Caution]:
    """The cautions of a second working fluid, told apart by its role and designation."""
    found = (caution(case) for caution in OF_FLUID)
    return [replace(_naming(one, case), id=f"{one.id}-{case.role}") for one in found if one is not None]


def _naming(one: Caution, case: Case) -> Caution:
    return replace(one, topic=f"{one.topic}, {case.working.designation}")


def cautions(solution: Solution) -> tuple[dict[str, Any], ...]:
    """The cautions that concern a sheet: triggered, not triggered, or not evaluated with the reason."""
    case = Case(solution)
    found = _found(case)
    found += [one for role in case.other_circuits for one in _of_fluid(Case(solution, role))]
    hazards = list(dict.fromkeys(one.hazard for one in found))
    return tuple(one.entry() for one in sorted(found, key=lambda one: hazards.index(one.hazard)))
