"""One printed value beside the same value done again."""
from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from calcpack.reread.linear import plain
from calcpack.reread.printed_page import Value
from calcpack.reread.reckoning import last_place, places_apart, si_value
from calcpack.reread.terms import Printed
from calcpack.units import unit

ALLOWED = 1.0
"""Units in the last printed place by which a value done again may differ."""

ROUNDING = 1e-6
"""Binary floats put an exact tie a hair beyond the place."""


@dataclass(frozen=True, slots=True)
class Found:
    """A value done again: where it stands, which, how many last places it is off, and in words.

    Where it is a number, ``again`` is the value done again with its unit, and
    ``off`` how many last places that is above the printed one.
    """

    place: str
    what: str
    places: float
    detail: str
    again: str = ""
    off: float = 0.0

    @property
    def agrees(self) -> bool:
        return self.places <= ALLOWED + ROUNDING


def compared(place: str, look: str, printed: Printed, value: float, how: str = "") -> Found:
    """A printed number beside an SI ``value``."""
    again = unit(printed.unit).from_si(value)
    words = f"{again:.9g} {printed.unit}".strip()
    off = places_apart(printed, value)
    return Found(place, plain(look), abs(off), f"{plain(how) + ' gives ' if how else ''}{words}, {printed} printed",
                 words, off)


def within(found: Found, room: float) -> Found:
    """The same finding where ``room`` last places more are open."""
    return replace(found, places=max(0.0, found.places - room))


def twins(place: str, look: str, value: Value) -> Iterator[Found]:
    """A temperature beside its twin in brackets: each must be the other, as finely as the coarser is printed."""
    if value.twin is None:
        return
    number, twin = value.number, value.twin
    place_si = max(last_place(one) * unit(one.unit).factor for one in (number, twin))
    apart = abs(si_value(number) - si_value(twin)) / place_si
    yield Found(place, plain(look), apart, f"{number} and {twin} printed for one temperature")


def equal(place: str, look: str, printed: object, other: object, where: str) -> Found:
    """Two places that must print one thing alike."""
    return Found(place, plain(look), 0.0 if printed == other else float("inf"), f"{printed} here, {other} {where}")
