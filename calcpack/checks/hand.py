"""A record's printed numbers to the same results done again: what a checker does by hand.

Only what is printed enters: each step's numbers are read as text, evaluated,
and compared with the printed result. The property calls use the same fluids,
with the printed operands; the arithmetic is that of the printed text.
"""
from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from calcpack.checks.entries import entry
from calcpack.errors import CalcpackError
from calcpack.formula.evaluate import value
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.text import printed_quantity, substitute, to_text
from calcpack.formula.tree import Node, PropertyCall
from calcpack.solving.cases import solved_row
from calcpack.solving.program import Instruction, Program
from calcpack.solving.solution import Solution
from calcpack.solving.tables import interpolated
from calcpack.units import read_quantity, unit
from calcpack.units.digits import last_place

if TYPE_CHECKING:
    from calcpack.record import Record

ALLOWED = 1.0
"""Units in the last printed place by which a result done again may differ."""

# Binary floats put an exact tie a hair beyond the place.
_ROUNDING = 1e-6

_REDUCTIONS: dict[str, Callable[[list[float]], float]] = {
    "min": min, "max": max, "sum": math.fsum, "mean": lambda cells: math.fsum(cells) / len(cells)}


@dataclass(frozen=True, slots=True)
class Redone:
    """One printed result done again: ``places`` is the difference in units of its last place."""

    step: str
    symbol: str
    places: float
    detail: str

    @property
    def agrees(self) -> bool:
        return self.places <= ALLOWED + _ROUNDING


def redone_by_hand(solution: Solution, record: Record) -> tuple[dict[str, Any], ...]:
    """One entry that sums up, and one for each result that cannot be done again from print."""
    results = list(redone(solution, record))
    if not results:
        return ()
    worst = max(results, key=lambda one: one.places)
    failed = [one for one in results if not one.agrees]
    steps = {one.step for one in results}
    bad = {one.step for one in failed}
    summary = entry(
        "V-H", "Re-done from print", "Every step done again from the numbers as printed",
        f"{len(steps) - len(bad)} of {len(steps)} steps, worst {_places(worst.places)}",
        f"{ALLOWED:g} in the last printed place", "fails" if failed else "ok",
        f"{len(results)} printed results; worst: step {worst.step}, {worst.symbol}: {worst.detail}")
    return (summary, *(entry(f"V-H-{one.step}", "Re-done from print", f"Step {one.step}, {one.symbol}",
                             _places(one.places), f"{ALLOWED:g} in the last printed place", "fails", one.detail)
                       for one in failed))


def redone(solution: Solution, record: Record) -> Iterator[Redone]:
    """Each printed result of the record's steps, done again."""
    hand = _Hand(solution, record)
    for step in record.data["steps"]:
        yield from hand.step(step)


def _places(places: float) -> str:
    return f"{places:.2f} in the last place" if math.isfinite(places) else "cannot be done again"


class _Hand:
    """Does printed numbers again with the fluids of one solution."""

    def __init__(self, solution: Solution, record: Record) -> None:
        self.solution = solution
        self.record = record
        self.printed = {one["symbol"]: printed_quantity(one["shown"], one["unit"])
                        for one in (*record.data["inputs"], *record.data["steps"])}
        self.trees: dict[str, Node] = {}
        self.names = {role: fluid.designation for role, fluid in solution.plan.fluids.items()}
        self.fluids: dict[str, list[Any]] = {}
        for fluid in solution.plan.fluids.values():
            known = self.fluids.setdefault(fluid.designation, [])
            if all(fluid is not one for one in known):
                known.append(fluid)

    def step(self, step: Mapping[str, Any]) -> Iterator[Redone]:
        match step["kind"]:
            case "series":
                yield from self.series(step)
            case "root":
                yield self.root(step)
            case "optimum":
                yield self.optimum(step)
            case "cases":
                yield from self.cases(step)
            case "total":
                yield self.total(step)
            case "lookup":
                yield self.compared(step, step["shown"], step["unit"], lambda: self.lookup(step), step["formula"])
            case kind:
                if kind == "choice":
                    yield from self.conditions(step)
                yield from self.operands(step)
                yield self.compared(step, step["shown"], step["unit"],
                                    lambda: self.evaluated(step["numbers"], step["formula"]), step["numbers"])

    def operands(self, step: Mapping[str, Any]) -> Iterator[Redone]:
        """The numbers must be the step's formula with each symbol as it is printed at its own place; silent if so."""
        laid = self.solution.step(step["symbol"])
        tree = laid.tree
        if step["kind"] == "choice":
            held = [branch["held"] for branch in step["choice"]["branches"]].index(True)
            tree = laid.trees[f"value {held}"]
        expected = substitute(tree, self.printed, self.names)
        try:
            agrees = self.read(step["numbers"]) == expected
        except CalcpackError:
            agrees = False
        if not agrees:
            yield Redone(step["id"], step["symbol"], math.inf,
                         f"{step['numbers']} is not the formula with its operands as printed, {to_text(expected)}")

    def compared(self, step: Mapping[str, Any], shown: str, unit_symbol: str, again: Callable[[], float],
                 what: str = "", symbol: str = "") -> Redone:
        """The difference between ``shown`` and the value that ``again`` gives."""
        symbol = symbol or step["symbol"]
        try:
            number = unit(unit_symbol).from_si(again())
            places = abs(number - float(shown)) / self.place(symbol)
        except (CalcpackError, ArithmeticError, ValueError) as error:
            return Redone(step["id"], symbol, math.inf, f"{what} cannot be evaluated: {error}".strip())
        if not math.isfinite(places):
            return Redone(step["id"], symbol, math.inf, f"{what} gives no finite number".strip())
        detail = f"{what} gives {number:.9g}{' ' if unit_symbol else ''}{unit_symbol}, {shown} printed".strip()
        return Redone(step["id"], symbol, places, detail)

    def read(self, numbers: str) -> Node:
        """The tree of printed numbers, read once."""
        if numbers not in self.trees:
            self.trees[numbers] = parse(numbers)
        return self.trees[numbers]

    def place(self, symbol: str) -> float:
        """One unit in the last printed place of a symbol, in its print unit.

        Taken from the digits that the sheet settled on: 66950 may be rounded
        to tens, which its text does not tell.
        """
        return 10.0 ** -self.solution.printing.decimals[symbol]

    def evaluated(self, numbers: str, formula: str) -> float:
        """The SI value of printed numbers; ``formula`` tells roles of one designation apart."""
        tree = self.read(numbers)
        if not isinstance(tree, PropertyCall):
            return float(value(tree))
        keys = tuple(key for key, _ in tree.given)
        reader = self.fluid(tree, formula).reader(tree.output, keys)
        return reader(*(float(value(part)) for _, part in tree.given))

    def fluid(self, call: PropertyCall, formula: str) -> Any:
        known = self.fluids.get(call.fluid, [])
        if len(known) == 1:
            return known[0]
        written = parse(formula)
        if not known or not isinstance(written, PropertyCall):
            raise ValueError(f"no fluid {call.fluid} on this sheet")
        return self.solution.plan.fluids[written.fluid]

    def conditions(self, step: Mapping[str, Any]) -> Iterator[Redone]:
        """Each condition that was reached must come out in its printed numbers as it is recorded."""
        for branch in step["choice"]["branches"]:
            if not branch["condition_numbers"] or not branch["reached"]:
                continue
            came_out = bool(value(parse_condition(branch["condition_numbers"])))
            agrees = came_out == branch["held"]
            word = {True: "holds", False: "does not hold"}
            yield Redone(step["id"], step["symbol"], 0.0 if agrees else math.inf,
                         f"the condition {branch['condition_numbers']} {word[came_out]} in its printed numbers, and "
                         f"is recorded as one that {word[branch['held']]}")

    def lookup(self, step: Mapping[str, Any]) -> float:
        points = [(read_quantity(x).value, read_quantity(y).value) for x, y in step["lookup"]["points"]]
        return interpolated(points, self.evaluated(step["numbers"], step["formula"]))

    def series(self, step: Mapping[str, Any]) -> Iterator[Redone]:
        """Every cell from the printed cells beside it, then the reduction of the printed column."""
        table = step["table"]
        for row in table["rows"]:
            for column, cell in zip(table["columns"], row["cells"], strict=True):
                yield self.compared(
                    step, cell["shown"], column["unit"],
                    lambda cell=cell, column=column: self.evaluated(cell["numbers"], column["formula"]),
                    f"in row '{row['label']}': {cell['numbers']}", column["symbol"])
        at = [column["symbol"] for column in table["columns"]].index(table["column"])
        in_unit = unit(table["columns"][at]["unit"])
        cells = [in_unit.to_si(float(row["cells"][at]["shown"])) for row in table["rows"]]
        yield self.compared(step, step["shown"], step["unit"], lambda: _REDUCTIONS[table["reduction"]](cells),
                            step["formula"])

    def cases(self, step: Mapping[str, Any]) -> Iterator[Redone]:
        """Cells with a formula from the printed cells beside them, the others by solving the row as printed again."""
        table = step["table"]
        for index, row in enumerate(table["rows"]):
            again = self.row(step, index)
            for column, cell in zip(table["columns"], row["cells"], strict=True):
                if column["formula"]:
                    found = self.compared(
                        step, cell["shown"], column["unit"],
                        lambda cell=cell, column=column: self.evaluated(cell["numbers"], column["formula"]),
                        f"in row '{row['label']}': {cell['numbers']}", column["symbol"])
                else:
                    found = self.compared(
                        step, cell["shown"], column["unit"],
                        lambda again=again, column=column: again[self.solution.program.slots[column["symbol"]]],
                        f"row '{row['label']}' solved for its printed inputs", column["symbol"])
                yield found
        yield self.compared(step, step["shown"], step["unit"], lambda: float(len(table["rows"])), step["formula"])

    def row(self, step: Mapping[str, Any], index: int) -> list[float]:
        """All values of a row, solved for the cells that take the place of inputs, as printed."""
        table = step["table"]
        row, slots = table["rows"][index], self.solution.program.slots
        fixed = {column["symbol"]: unit(column["unit"]).to_si(float(cell["shown"]))
                 for column, cell in zip(table["columns"], row["cells"], strict=True)
                 if column["from"] == "the row" or column["symbol"] in table["bound"]}
        laid = self.solution.step(step["symbol"])
        # The row that was solved exactly so is not solved twice.
        solved = self.solution.program.cases[step["symbol"]][index]
        if all(math.isclose(number, solved[slots[name]], rel_tol=1e-11) for name, number in fixed.items()):
            return solved
        return solved_row(self.solution.program, laid, index, solved, fixed)

    def total(self, step: Mapping[str, Any]) -> Redone:
        """The sum, or the extreme, of a printed column."""
        total = step["total"]
        table = next(one["table"] for one in self.record.data["steps"] if one["id"] == total["table"])
        at = [column["symbol"] for column in table["columns"]].index(total["column"])
        in_unit = unit(table["columns"][at]["unit"])
        cells = [in_unit.to_si(float(row["cells"][at]["shown"])) for row in table["rows"]]
        return self.compared(step, step["shown"], step["unit"], lambda: _REDUCTIONS[total["reduction"]](cells),
                             step["formula"])

    def root(self, step: Mapping[str, Any]) -> Redone:
        """The residual at the printed solution against what one unit in its last place moves it."""
        try:
            left = self.residual(step, 0)
            moved = abs(self.residual(step, 1) - left)
        except (CalcpackError, ArithmeticError, ValueError) as error:
            return Redone(step["id"], step["symbol"], math.inf, f"the equation cannot be evaluated: {error}")
        places = 0.0 if left == 0.0 else abs(left) / moved if moved else math.inf
        return Redone(step["id"], step["symbol"], places, f"residual {left:.2g} (SI) at the printed solution, where "
                      f"one unit in its last place moves it by {moved:.2g}")

    def residual(self, step: Mapping[str, Any], places: int) -> float:
        """A root's equation, or an optimum's objective [SI], at the printed value moved by so many last places."""
        trial = unit(step["unit"]).to_si(float(step["shown"]) + places * self.place(step["symbol"]))
        return float(at_trial(self.solution, step["symbol"], trial))

    def optimum(self, step: Mapping[str, Any]) -> Redone:
        """The objective at the printed optimum, and that no printed point of its curve is better."""
        found = step["optimum"]
        shown, in_unit = found["optimum"]["y"], unit(found["objective_unit"])
        try:
            number = in_unit.from_si(self.residual(step, 0))
        except (CalcpackError, ArithmeticError, ValueError) as error:
            return Redone(step["id"], step["symbol"], math.inf, f"the objective cannot be evaluated: {error}")
        sign = 1.0 if found["sense"] == "greatest" else -1.0
        better = max((sign * (float(point["y"]) - float(shown)) for point in found["curve"]), default=0.0)
        places = max(abs(number - float(shown)), better) / last_place(shown)
        return Redone(step["id"], step["symbol"], places, f"objective {number:.9g} at the printed optimum, {shown} "
                      f"printed, the {found['sense']} of its curve")


def at_trial(solution: Solution, symbol: str, trial: float) -> float:
    """A root's equation, or an optimum's objective [SI], with ``trial`` for the unknown.

    All that stands between the unknown and its closing is computed again;
    inner unknowns stay as solved, as a checker would take them, and have a
    re-check of their own. The program is left as the solution left it.
    """
    program = solution.program
    listed = [*(solution.values[name] for name in program.slots), 0.0]
    listed[program.slots[symbol]] = trial
    body, equation = program.bodies[symbol]
    kept = dict(program.tables), dict(program.held)
    try:
        _run(program, body, listed)
        return equation(listed)
    finally:
        program.tables, program.held = kept


def _run(program: Program, body: list[Instruction], listed: list[Any]) -> None:
    for slot, function in body:
        step = program.step_at.get(slot)
        if step is not None and step.symbol in program.bodies:
            _run(program, program.bodies[step.symbol][0], listed)
        else:
            listed[slot] = function(listed)
