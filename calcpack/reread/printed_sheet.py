"""A page and the values that it prints for its symbols, looked at together."""
from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field

from calcpack.reread.finding import Found
from calcpack.reread.linear import plain
from calcpack.reread.printed_fluids import PrintedFluids
from calcpack.reread.printed_page import Page, SeriesLines, Value
from calcpack.reread.reading import UnreadableError, read_line
from calcpack.reread.terms import LookUp, Printed, Term


@dataclass(frozen=True, slots=True)
class PrintedSheet:
    """What stands on the page: ``values`` by the look of their symbols, ``roles`` the number of each fluid role.

    ``doubles`` are symbols that two places define with different values, so
    that no reader can tell which is meant.
    """

    page: Page
    values: Mapping[str, Value]
    places: Mapping[str, str]
    roles: Mapping[str, str]
    fluids: PrintedFluids
    doubles: tuple[Found, ...]
    terms: dict[str, Term] = field(default_factory=dict)

    @classmethod
    def of(cls, page: Page) -> PrintedSheet:
        """The sheet of a page."""
        values: dict[str, Value] = {}
        places: dict[str, str] = {}
        doubles = []
        given = [(one.look, one.value, "the inputs") for one in page.inputs]
        for look, value, place in (*given, *((one.look, one.result, f"step {one.id}") for one in page.steps)):
            if look in values and values[look] != value:
                doubles.append(Found(place, plain(look), math.inf, f"{values[look].number} in {places[look]}, "
                                     f"{value.number} in {place}: one symbol for two things"))
            values[look], places[look] = value, place
        return cls(page, values, places, _roles(page), PrintedFluids(page.fluids), tuple(doubles))

    @property
    def numbers(self) -> dict[str, Printed]:
        """The printed number of each symbol."""
        return {look: value.number for look, value in self.values.items()}

    def term(self, line: str) -> Term:
        """What a line says; read once."""
        if line not in self.terms:
            self.terms[line] = read_line(line)
        return self.terms[line]

    def look_up(self, call: LookUp, given: tuple[float, ...]) -> float:
        """A property, where the row names the fluid by its role or by its designation."""
        number = self.roles.get(call.fluid, "")
        if not number:
            named = {one.designation: one.number for one in self.page.fluids}
            number = named.get(call.fluid, "")
        return self.fluids.value(number, call, given)


def _roles(page: Page) -> dict[str, str]:
    """The number of each role, from the steps that call a fluid by its role and name its number below."""
    found: dict[str, str] = {}
    for step in page.steps:
        lines = [step.symbols]
        if isinstance(step.detail, SeriesLines):
            lines = [column.formula for column in step.detail.columns]
        called = list(dict.fromkeys(role for line in lines if line for role in _called(line)))
        if len(called) <= len(step.fluids):
            found |= dict(zip(called, step.fluids, strict=False))
    return found


def _called(line: str) -> list[str]:
    try:
        term = read_line(line)
    except UnreadableError:
        return []
    return [term.fluid] if isinstance(term, LookUp) else []
