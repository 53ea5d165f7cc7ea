"""The places where a sheet prints a value again, each beside the step or input that the value is from."""
from __future__ import annotations

import math
from collections.abc import Iterator

from calcpack.errors import CalcpackError
from calcpack.reread.finding import Found, compared, equal, twins, within
from calcpack.reread.linear import BELOW, BELOW_END, plain
from calcpack.reread.printed_page import Cell, PrintedInput, PrintedLimit, Value
from calcpack.reread.printed_sheet import PrintedSheet
from calcpack.reread.reckoning import last_place, si_value
from calcpack.reread.terms import Printed
from calcpack.units import read_quantity, unit


def findings(sheet: PrintedSheet) -> list[Found]:
    """Results, bound, limits, states, streams and inputs, value by value."""
    found: list[Found] = []
    for one in sheet.page.seen:
        found += _seen(sheet, one.place, one.look, one.value)
    for cell in sheet.page.cells:
        found += _cell(sheet, cell)
    for limit in sheet.page.limits:
        found += _limit(sheet, limit)
    for given in sheet.page.inputs:
        found += _input(sheet, given)
    return found


def _seen(sheet: PrintedSheet, place: str, look: str, value: Value) -> Iterator[Found]:
    known = sheet.values.get(look)
    if known is None:
        yield Found(place, plain(look), math.inf, "no step and no input of this sheet gives the symbol")
        return
    yield equal(place, look, str(value.number), str(known.number), f"in {sheet.places[look]}")
    yield from twins(place, look, value)


def _cell(sheet: PrintedSheet, cell: Cell) -> Iterator[Found]:
    """A cell of the state table, T of row 3, is that of the symbol T₃ where there is one.

    Elsewhere the cell must be the value of some symbol with the letter of its
    column: the table has no room to say which.
    """
    row = cell.place.rpartition(" row ")[2]
    own = f"{cell.look}{BELOW}{row}{BELOW_END}"
    if own in sheet.values:
        yield from _seen(sheet, cell.place, own, cell.value)
        return
    letter = cell.look.partition(BELOW)[0]
    # A capital stands for the whole body where the small letter stands for a kilogram.
    known = [value.number for look, value in sheet.values.items()
             if look.partition(BELOW)[0].casefold() == letter.casefold()]
    there = cell.value.number in known
    yield Found(cell.place, plain(cell.look), 0.0 if there else math.inf,
                f"{cell.value.number} printed, {'as' if there else 'not'} the value of a symbol {plain(letter)}")
    yield from twins(cell.place, cell.look, cell.value)


def _limit(sheet: PrintedSheet, limit: PrintedLimit) -> Iterator[Found]:
    """A limit's value is that of its symbol; margin, share and verdict follow from value and bound."""
    place = f"limit {limit.id}"
    yield from _seen(sheet, place, limit.look, limit.value)
    yield from twins(place, f"the bound of {limit.look}", limit.bound)
    value, bound = si_value(limit.value.number), si_value(limit.bound.number)
    over = value - bound if limit.sense == "at least" else bound - value
    yield equal(place, "the verdict", limit.holds, over >= 0.0 or _nearly(limit, over), "by value and bound")
    factor = unit(limit.bound.number.unit).factor
    if limit.margin is not None:
        # A margin is a difference of the unrounded value: half a place of the printed value is open.
        slack = last_place(limit.value.number) * unit(limit.value.number.unit).factor
        yield _within(place, "the margin", limit.margin, over, slack)
        if limit.percent is not None and bound:
            yield _within(place, "the margin as a share", limit.percent, over / abs(bound), slack / abs(bound))
    elif limit.percent is not None:
        yield Found(place, "the margin as a share", math.inf, f"no margin beside {limit.percent} of {factor:g}")


def _nearly(limit: PrintedLimit, over: float) -> bool:
    return abs(over) <= 0.5 * last_place(limit.value.number) * unit(limit.value.number.unit).factor


def _within(place: str, what: str, printed: Printed, value: float, slack: float) -> Found:
    return within(compared(place, what, printed, value), slack / (last_place(printed) * unit(printed.unit).factor))


def _input(sheet: PrintedSheet, given: PrintedInput) -> Iterator[Found]:
    """An input as used is the same as written."""
    yield from twins("the inputs", given.look, given.value)
    written = as_written(sheet, given)
    if written is not None:
        yield compared("the inputs", given.look, given.value.number, written, f"{given.written}, as written,")


def as_written(sheet: PrintedSheet, given: PrintedInput) -> float | None:
    """The SI value of an input as the spec wrote it; None where the page does not say it in full."""
    ambient = sheet.page.ambient
    try:
        reading = read_quantity(given.written.replace("\u202f", " ").replace("−", "-"),
                                p_atm=si_value(ambient) if ambient else None)
    except CalcpackError:
        return None
    return reading.value if reading.unit.dimension == unit(given.value.number.unit).dimension else None
