"""A value of another sheet to the reading of an input, at full precision, with a number that can be printed for it."""
from __future__ import annotations

import math

from calcpack.errors import Fault, UnitError
from calcpack.formula.dimension import TEMPERATURE
from calcpack.record.carried import Carried
from calcpack.units import KINDS, Reading, unit
from calcpack.units.digits import decimals_for, number_text
from calcpack.units.unit import dimension_text

DIGITS = 10
"""Significant digits of the printed number: beyond what a printed result can show, short of a float's own."""


def reading_of(carried: Carried, kind: str | None, name: str) -> Reading:
    """The reading of an input of the ``kind`` (None: any) that takes the value called ``name``.

    Raises
    ------
    UnitError
        Where the value is of another kind; it has no place.
    """
    there = unit(carried.unit)
    if kind is not None:
        _require_kind(carried, kind, name)
    return Reading(carried.value, there, number_in_full(there.from_si(carried.value)))


def number_in_full(number: float) -> str:
    """The number in so many digits that a sheet can be done again from it, without zeros at the end."""
    most = max(0, decimals_for(number, DIGITS)) if number else 0
    rounded = float(number_text(number, most))
    return next(text for decimals in range(most + 1)
                if math.isclose(float(text := number_text(number, decimals)), rounded, rel_tol=1e-15, abs_tol=0.0))


def _require_kind(carried: Carried, kind: str, name: str) -> None:
    wanted, dimension = KINDS[kind], unit(carried.unit).dimension
    shown = f"{name} = {carried.origin['shown']} {carried.unit}".strip()
    if dimension != wanted.dimension:
        raise UnitError(Fault(f"a {kind} is meant here", found=f"{shown}, {dimension_text(dimension)}",
                              expected=f"a value in {wanted.si}" if wanted.si else "a pure number"))
    if dimension == TEMPERATURE and carried.level != wanted.level:
        found, meant = ("level", "difference") if carried.level else ("difference", "level")
        raise UnitError(Fault(f"a temperature {found} stands where a {meant} is meant", found=shown,
                              hint="an input of the sheet's own is a difference where its symbol begins with dT"))
