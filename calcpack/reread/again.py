"""A printed sheet to its whole calculation anew: from the printed inputs and formulas, nothing rounded on the way.

Roots are closed in around the printed solution by a search of this module's
own. What is left of a root's equation at the printed solution comes from
here, because no row of rounded numbers can give it.
"""
from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from itertools import pairwise

from calcpack.errors import CalcpackError
from calcpack.reread.finding import Found, compared, within
from calcpack.reread.kinds import REDUCTIONS
from calcpack.reread.linear import plain
from calcpack.reread.places import as_written
from calcpack.reread.printed_page import (
    CaseLines,
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
from calcpack.reread.terms import Term, names_in
from calcpack.units import unit

CLOSE = 1e-13
"""Width of the bracket, of the unknown, at which the search stops."""

MOST_TRIES = 80

NEAR = (0.6, 3.0, 30.0)
"""Last places about a printed solution in which the solution is looked for first."""

NIL = 1e-5
"""Share of what the last printed place moves an equation by, below which two residuals are one."""

_CANNOT = (CalcpackError, ArithmeticError, ValueError, TypeError, KeyError)


def findings(sheet: PrintedSheet) -> tuple[list[Found], list[str]]:
    """Each result beside the one anew, each root's residual; and the steps that could not be reckoned anew.

    A step that hangs on another branch of a choice than the printed one, or
    on one that could not be reckoned, is named and left out. Where an input is
    not written on the page in full, its rounding moves every result: then the
    residuals alone are looked at, and less closely. What hangs on a value
    chosen by optimisation may move as far as that value's rounding moves it.
    """
    found, left_out = _Anew(sheet).whole()
    if not any(isinstance(step.detail, OptimumLines) for step in sheet.page.steps):
        return found, left_out
    aside = {(one.place, one.what): one.off for one in _Anew(sheet, aside=0.5).whole()[0]}
    return [within(one, abs(aside.get((one.place, one.what), one.off) - one.off)) for one in found], left_out


class _Anew:
    """``aside`` is how many last places the values chosen by optimisation are moved from their print."""

    def __init__(self, sheet: PrintedSheet, aside: float = 0.0) -> None:
        self.sheet, self.aside = sheet, aside
        self.steps: Sequence[PrintedStep] = sheet.page.steps
        self.exact = True
        self.values: dict[str, float] = {}
        for given in sheet.page.inputs:
            written = as_written(sheet, given)
            self.exact &= written is not None
            self.values[given.look] = si_value(given.value.number) if written is None else written

    def whole(self) -> tuple[list[Found], list[str]]:
        found: list[Found] = []
        left_out: list[str] = []
        for at, step in enumerate(self.steps):
            try:
                value = self.value(at, self.values)
                self.values[step.look] = value
                if isinstance(step.detail, RootLines):
                    found.append(self.residual(at, step, step.detail))
                if isinstance(step.detail, OptimumLines):
                    found += self.curve(at, step, step.detail, left_out)
                if isinstance(step.detail, CaseLines):
                    for row in step.detail.rows:
                        found += self.row(at, step, step.detail, row, left_out)
            except _CANNOT as error:
                left_out.append(step.id)
                self.values.pop(step.look, None)
                if isinstance(step.detail, RootLines):
                    found.append(Found(f"step {step.id}", f"the root {plain(step.look)}", math.inf, f"{error}"))
                continue
            if self.exact:
                found.append(compared(f"step {step.id}", step.look, step.result.number, value,
                                      "the whole calculation anew"))
        return found, left_out

    def row(self, at: int, step: PrintedStep, cases: CaseLines, row: SeriesRow, left_out: list[str]) -> list[Found]:
        """The cells that were solved for a row, from the steps before the table with what the row gives."""
        cells = dict(zip((column.look for column in cases.columns), row.cells, strict=True))
        given = {column.look: si_value(cells[column.look]) for column in cases.columns if column.given}
        here = {one.look: self.values[one.look] for one in self.sheet.page.inputs} | given
        try:
            for before in range(at):
                look = self.steps[before].look
                here[look] = given[look] if look in given else self.value(before, here)
        except _CANNOT:
            left_out.append(f"{step.id}, row {row.label}")
            return []
        return [compared(f"step {step.id}, row {row.label}", column.look, cells[column.look], here[column.look],
                         "the whole calculation anew") for column in cases.columns if column.solved]

    def term_value(self, line: str, values: Mapping[str, float]) -> float:
        return reckoned(self.sheet.term(line), values, self.sheet.look_up)

    def value(self, at: int, values: dict[str, float]) -> float:
        """The SI value of a step with ``values`` for all before it."""
        step = self.steps[at]
        match step.detail:
            case RootLines() as root:
                return self.root(at, root, values)
            case OptimumLines():
                number = step.result.number
                return si_value(number) + self.aside * last_place(number) * unit(number.unit).factor
            case CaseLines() | TotalLine():
                # What was solved for other rows is taken as printed.
                return si_value(step.result.number)
            case LookupLines() as lookup:
                return _between(lookup, self.term_value(lookup.at, values))
            case SeriesLines() as series:
                return self.series(series, values)
            case None:
                return self.term_value(step.symbols, values)
        for branch in step.detail:
            decided = branch.condition and branch.verdict in ("holds", "does not hold")
            if decided and bool(self.term_value(branch.condition, values)) != (branch.verdict == "holds"):
                raise UnreadableError("another branch holds here than the one that is printed")
        return self.term_value(step.symbols, values)

    def series(self, series: SeriesLines, values: Mapping[str, float]) -> float:
        picked = [column.look for column in series.columns].index(series.reduced)
        found = []
        for row in series.rows:
            here = dict(values)
            for column, cell in zip(series.columns, row.cells, strict=True):
                formula = column.formula or row.formula
                here[column.look] = self.term_value(formula, here) if formula else si_value(cell)
            found.append(here[series.columns[picked].look])
        return REDUCTIONS[series.reduction](found)

    def equation(self, at: int, line: str, trial: float, values: Mapping[str, float]) -> float:
        """What is left of a root's equation, or an optimum's objective, with ``trial`` for the unknown."""
        here = {**values, self.steps[at].look: trial}
        term = self.sheet.term(line)
        for inner in self.body(at, term):
            here[self.steps[inner].look] = self.value(inner, here)
        return reckoned(term, here, self.sheet.look_up)

    def body(self, at: int, term: Term) -> list[int]:
        """The steps after a root that its equation needs, in the order of print."""
        needed = set(names_in(term))
        inside: set[int] = set()
        grown = True
        while grown:
            # An inner root stands before the steps that its equation reads: one pass would miss what those read.
            more = {inner for inner in range(at + 1, len(self.steps)) if self.steps[inner].look in needed} - inside
            inside |= more
            needed |= {look for inner in more for look in self.reads(self.steps[inner])}
            grown = bool(more)
        return sorted(inside)

    def reads(self, step: PrintedStep) -> Iterable[str]:
        """The symbols that a step's lines use."""
        lines = [step.symbols]
        match step.detail:
            case RootLines(equation=equation, ends=ends):
                lines = [equation, *(end.formula for end in ends if end.stated is None)]
            case LookupLines(at=at):
                lines = [at]
            case SeriesLines(columns=columns, rows=rows):
                lines = [*(one.formula for one in columns), *(row.formula for row in rows)]
            case tuple() as branches:
                lines += [branch.condition for branch in branches]
        return [look for line in lines if line for look in names_in(self.sheet.term(line))]

    def root(self, at: int, root: RootLines, values: dict[str, float]) -> float:
        """The solution next to the printed one [SI]."""
        printed = self.steps[at].result.number
        place = last_place(printed) * unit(printed.unit).factor
        at_printed = si_value(printed)

        def left(trial: float) -> float:
            return self.equation(at, root.equation, trial, values)
        for width in NEAR:
            low, high = at_printed - width * place, at_printed + width * place
            f_low, f_high = left(low), left(high)
            if f_low * f_high <= 0.0:
                return closed_in(left, low, high, f_low, f_high)
        low, high = self.bracket(root, values)
        (low, f_low), (high, f_high) = usable(left, low, high), usable(left, high, low)
        if f_low * f_high <= 0.0:
            return closed_in(left, low, high, f_low, f_high)
        raise UnreadableError("the equation has no solution next to the printed one or in its bracket")

    def bracket(self, root: RootLines, values: Mapping[str, float]) -> tuple[float, float]:
        """The bracket as its formulas give it for these values; an end that was moved inwards stays as printed."""
        low, high = (self.term_value(end.formula, values) if end.formula and end.stated is None else si_value(end.value)
                     for end in root.ends)
        return low, high

    def curve(self, at: int, step: PrintedStep, optimum: OptimumLines, left_out: list[str]) -> list[Found]:
        """The objective at each printed point; half a place of the printed point is open."""
        found = []
        for x, y in optimum.curve:
            half = 0.5 * last_place(x) * unit(x.unit).factor
            try:
                value, beside = (self.equation(at, optimum.objective, si_value(x) + aside, self.values)
                                 for aside in (0.0, half))
            except _CANNOT:
                left_out.append(f"{step.id}, at {x}")
                continue
            one = compared(f"step {step.id}, at {x}", "the objective", y, value)
            found.append(within(one, abs(beside - value) / (last_place(y) * unit(y.unit).factor)))
        return found

    def residual(self, at: int, step: PrintedStep, root: RootLines) -> Found:
        """What is left at the printed solution, beside what is printed of it."""
        printed = si_value(step.result.number)
        place = last_place(step.result.number) * unit(step.result.number.unit).factor
        left = self.equation(at, root.equation, printed, self.values)
        moved = abs(self.equation(at, root.equation, printed + place, self.values) - left)
        what = f"what is left of the equation of {step.look}"
        if root.less_than:
            bound = si_value(root.left)
            return Found(f"step {step.id}", plain(what), 0.0 if abs(left) <= bound <= moved else math.inf,
                         f"{left:.3g} (SI), less than {root.left} printed, the last place moves it by {moved:.3g}")
        one = compared(f"step {step.id}", what, root.left, left)
        nil = NIL if self.exact else 0.5
        return within(one, nil * moved / (last_place(root.left) * unit(root.left.unit).factor))


def _between(lookup: LookupLines, x: float) -> float:
    points = [(si_value(one), si_value(other)) for one, other, _ in lookup.points]
    for (x0, y0), (x1, y1) in pairwise(points):
        if x0 <= x <= x1:
            return y0 + (y1 - y0) * (x - x0) / (x1 - x0)
    raise UnreadableError("the value looked up is outside the printed table")


INWARDS = (0.0, 1 / 128, 1 / 64, 1 / 32, 1 / 16, 1 / 8, 1 / 4, 3 / 8)


def usable(left: Callable[[float], float], end: float, other: float) -> tuple[float, float]:
    """An end of a bracket and the equation there; it moves inwards to where the equation can be reckoned."""
    for share in INWARDS:
        trial = end + share * (other - end)
        try:
            return trial, left(trial)
        except _CANNOT:
            continue
    raise UnreadableError("the equation can be reckoned nowhere near this end of its bracket")


def closed_in(left: Callable[[float], float], low: float, high: float, f_low: float, f_high: float) -> float:
    """The zero between two ends of unlike sign, by false position with the stale end's weight halved (Illinois)."""
    if f_low == 0.0 or f_high == 0.0:
        return low if f_low == 0.0 else high
    side = 0
    for _ in range(MOST_TRIES):
        middle = (f_high * low - f_low * high) / (f_high - f_low)
        f_middle = left(middle)
        if f_middle == 0.0 or abs(high - low) <= CLOSE * abs(middle):
            return middle
        if f_middle * f_high > 0.0:
            step, high, f_high = high - middle, middle, f_middle
            f_low, side = (f_low / 2.0 if side == -1 else f_low), -1
        else:
            step, low, f_low = middle - low, middle, f_middle
            f_high, side = (f_high / 2.0 if side == 1 else f_high), 1
        if abs(step) <= CLOSE * abs(middle):
            return middle
    return middle
