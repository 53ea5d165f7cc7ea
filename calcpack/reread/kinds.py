"""One step of a printed sheet to its findings: what each kind of step lets a reader do again."""
from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping
from dataclasses import replace

from calcpack.reread.finding import Found, compared, equal, twins
from calcpack.reread.linear import plain
from calcpack.reread.printed_page import (
    BranchLine,
    CaseLines,
    End,
    LookupLines,
    OptimumLines,
    PrintedStep,
    RootLines,
    SeriesLines,
    SeriesRow,
    TotalLine,
)
from calcpack.reread.printed_sheet import PrintedSheet
from calcpack.reread.reading import UnreadableError
from calcpack.reread.reckoning import last_place, reckoned, si_value
from calcpack.reread.terms import LookUp, Printed, Term, names_in, said
from calcpack.units import unit

REDUCTIONS: dict[str, Callable[[list[float]], float]] = {
    "Least": min, "Greatest": max, "Sum": math.fsum, "Mean": lambda cells: math.fsum(cells) / len(cells)}


def findings(sheet: PrintedSheet, step: PrintedStep) -> Iterator[Found]:
    """All that can be done again of a step."""
    place = f"step {step.id}"
    yield from twins(place, step.look, step.result)
    match step.detail:
        case RootLines() as root:
            yield from _ends(sheet, step, root.ends)
        case OptimumLines() as optimum:
            yield from _ends(sheet, step, optimum.ends)
            yield from _optimum(step, optimum)
        case LookupLines() as lookup:
            yield from _lookup(sheet, step, lookup)
        case SeriesLines() as series:
            yield from _series(sheet, step, series)
        case CaseLines() as cases:
            yield from _cases(sheet, step, cases)
        case TotalLine() as total:
            yield from _total(sheet, step, total)
        case branches:
            for branch in branches or ():
                yield from _branch(sheet, step, branch)
            yield from _equation(sheet, step)


def _equation(sheet: PrintedSheet, step: PrintedStep) -> Iterator[Found]:
    """The row of numbers must be that of symbols with each as printed, and must give the result."""
    place = f"step {step.id}"
    symbols = sheet.term(step.symbols)
    if step.numbers:
        yield from same(sheet, place, step.look, symbols, sheet.term(step.numbers), sheet.numbers)
    line = step.numbers or step.symbols
    yield compared(place, step.look, step.result.number, _value(sheet, sheet.term(line), symbols), line)


def same(sheet: PrintedSheet, place: str, look: str, symbols: Term, numbers: Term,
         values: Mapping[str, Printed]) -> Iterator[Found]:
    """Whether a row of numbers is a row of symbols with ``values`` for them."""
    expected, found = list(said(symbols, values)), list(said(numbers, {}))
    if isinstance(symbols, LookUp):
        named = numbers.fluid if isinstance(numbers, LookUp) else ""
        wanted = sheet.fluids.designation(sheet.roles.get(symbols.fluid, ""))
        yield equal(place, look, named, wanted, "is the fluid of this role")
    wrong = next((pair for pair in zip(expected, found, strict=False) if pair[0] != pair[1]), None)
    if wrong is None and len(expected) != len(found):
        wrong = (f"{len(expected)} numbers and signs", f"{len(found)} of them")
    yield Found(place, f"the numbers of {plain(look)}", 0.0 if wrong is None else math.inf,
                "as printed elsewhere" if wrong is None else f"{wrong[1]} printed here, {wrong[0]} elsewhere")


def _value(sheet: PrintedSheet, term: Term, symbols: Term, local: Mapping[str, float] | None = None) -> float:
    """The SI value of a row; a look-up takes its fluid from the row of symbols, which tells roles apart."""
    if isinstance(term, LookUp) and isinstance(symbols, LookUp):
        term = replace(term, fluid=symbols.fluid)
    used = {look: si_value(sheet.values[look].number) for look in names_in(term) if look in sheet.values}
    return reckoned(term, {**used, **(local or {})}, sheet.look_up)


def _ends(sheet: PrintedSheet, step: PrintedStep, ends: tuple[End, End]) -> Iterator[Found]:
    """The ends of a bracket from their formulas, and the solution between them."""
    place = f"step {step.id}"
    for end in ends:
        if end.formula:
            term = sheet.term(end.formula)
            yield compared(place, f"an end of the bracket of {step.look}", end.stated or end.value,
                           _value(sheet, term, term), end.formula)
    low, high = (si_value(end.value) - side * last_place(end.value) * unit(end.value.unit).factor
                 for end, side in zip(ends, (1.0, -1.0), strict=True))
    inside = min(low, high) <= si_value(step.result.number) <= max(low, high)
    yield Found(place, plain(step.look), 0.0 if inside else math.inf,
                f"{step.result.number} in the bracket {ends[0].value} to {ends[1].value}")


def _optimum(step: PrintedStep, optimum: OptimumLines) -> Iterator[Found]:
    """No point of the printed curve may be better than the optimum, and the curve must hold it."""
    sign = 1.0 if optimum.greatest else -1.0
    best = float(optimum.best.text)
    better = max((sign * (float(y.text) - best) for _, y in optimum.curve), default=0.0)
    yield Found(f"step {step.id}", f"the optimum {plain(step.look)}", max(0.0, better) / last_place(optimum.best),
                f"{optimum.best} there, and no better point on the curve")
    here = [y for x, y in optimum.curve if x == step.result.number]
    yield equal(f"step {step.id}", step.look, optimum.best, here[0] if here else None, "in the row of the optimum")


def _branch(sheet: PrintedSheet, step: PrintedStep, branch: BranchLine) -> Iterator[Found]:
    """The condition in numbers must be that in symbols, and come out as its verdict says."""
    if not branch.condition or not branch.numbers:
        return
    place = f"step {step.id}"
    symbols, numbers = sheet.term(branch.condition), sheet.term(branch.numbers)
    yield from same(sheet, place, step.look, symbols, numbers, sheet.numbers)
    if branch.verdict in ("holds", "does not hold"):
        came_out = "holds" if reckoned(numbers, {}, sheet.look_up) else "does not hold"
        yield equal(place, f"a condition of {step.look}", branch.verdict, came_out, "by its numbers")


def _lookup(sheet: PrintedSheet, step: PrintedStep, lookup: LookupLines) -> Iterator[Found]:
    """The value between the two marked rows of a table."""
    place = f"step {step.id}"
    symbols = sheet.term(lookup.at)
    if lookup.numbers:
        yield from same(sheet, place, step.look, symbols, sheet.term(lookup.numbers), sheet.numbers)
    x = _value(sheet, sheet.term(lookup.numbers or lookup.at), symbols)
    near = [(si_value(one), si_value(other)) for one, other, marked in lookup.points if marked]
    if len(near) != 2 or not near[0][0] <= x <= near[1][0]:
        raise UnreadableError("the two marked rows of the table do not lie on either side of the value")
    (x0, y0), (x1, y1) = near
    yield compared(place, step.look, step.result.number, y0 + (y1 - y0) * (x - x0) / (x1 - x0), "the table")


def _series(sheet: PrintedSheet, step: PrintedStep, series: SeriesLines) -> Iterator[Found]:
    """Every cell from its formula and the cells beside it, the row written out, then the result."""
    place = f"step {step.id}"
    for row in series.rows:
        yield from _cells(sheet, place, series, row)
    worked = next((row for row in series.rows if row.label == series.worked), None)
    if worked is None:
        raise UnreadableError(f"no row ‘{series.worked}’ stands in the table")
    yield from _worked(sheet, place, series, worked)
    at = [column.look for column in series.columns].index(series.reduced)
    cells = [si_value(row.cells[at]) for row in series.rows]
    yield compared(place, step.look, step.result.number, REDUCTIONS[series.reduction](cells),
                   f"{series.reduction} of the column {series.reduced}")


def _cells(sheet: PrintedSheet, place: str, series: SeriesLines, row: SeriesRow) -> Iterator[Found]:
    here = {column.look: si_value(cell) for column, cell in zip(series.columns, row.cells, strict=True)}
    for column, cell in zip(series.columns, row.cells, strict=True):
        formula = column.formula or row.formula
        if formula:
            term = sheet.term(formula)
            yield compared(f"{place}, row {row.label}", column.look, cell, _value(sheet, term, term, here), formula)


def _worked(sheet: PrintedSheet, place: str, series: SeriesLines, row: SeriesRow) -> Iterator[Found]:
    """The row that is written out: its numbers and results are those of the table."""
    numbers = sheet.numbers | {column.look: cell for column, cell in zip(series.columns, row.cells, strict=True)}
    for column, cell in zip(series.columns, row.cells, strict=True):
        result = Printed(column.result.text, column.unit)
        yield equal(place, column.look, str(result), str(cell), f"in the row {row.label}")
        formula = column.formula or row.formula
        if column.numbers and formula:
            symbols = sheet.term(formula)
            yield from same(sheet, place, column.look, symbols, sheet.term(column.numbers), numbers)
            value = _value(sheet, sheet.term(column.numbers), symbols)
            yield compared(place, column.look, cell, value, column.numbers)


def _cases(sheet: PrintedSheet, step: PrintedStep, cases: CaseLines) -> Iterator[Found]:
    """Cells with a formula from the cells beside them; the row that the page is printed for as the page has it."""
    place = f"step {step.id}"
    yield equal(place, step.look, step.result.number.text, str(len(cases.rows)), "rows stand in the table")
    for row in cases.rows:
        here = {column.look: si_value(cell) for column, cell in zip(cases.columns, row.cells, strict=True)}
        for column, cell in zip(cases.columns, row.cells, strict=True):
            if column.formula:
                term = sheet.term(column.formula)
                value = _value(sheet, term, term, here)
                yield compared(f"{place}, row {row.label}", column.look, cell, value, column.formula)
            if row.label == cases.shown and column.look in sheet.values:
                known = sheet.values[column.look].number
                yield equal(f"{place}, row {row.label}", column.look, str(cell), str(known),
                            f"in {sheet.places[column.look]}")


def _total(sheet: PrintedSheet, step: PrintedStep, total: TotalLine) -> Iterator[Found]:
    """The reduction of a printed column."""
    table = next((one.detail for one in sheet.page.steps if one.id == total.table), None)
    if not isinstance(table, CaseLines):
        raise UnreadableError(f"step {total.table} is no table")
    at = [column.look for column in table.columns].index(total.look)
    cells = [si_value(row.cells[at]) for row in table.rows]
    yield compared(f"step {step.id}", step.look, step.result.number, REDUCTIONS[total.reduction](cells),
                   f"{total.reduction} of {total.look}")
