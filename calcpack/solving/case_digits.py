"""How finely the cells of a cases step are printed, so that rows and totals can be done again from print."""
from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from calcpack.errors import NoAnswerError
from calcpack.formula.tree import symbols_of
from calcpack.plan.laid import LaidStep
from calcpack.solving.cases import cell_formulas, solved_row
from calcpack.solving.tables import REDUCTIONS

if TYPE_CHECKING:
    from calcpack.solving.printing import Printing

EXACT = 1e-11
TRIES = 24
WITHIN = 0.95
"""Largest distance of re-done and printed result, in units of the last place; a little below one for safety."""

NOTHING = (NoAnswerError, ArithmeticError, ValueError, TypeError)
"""What rounding an operand can come to where the exact value had an answer."""

_ROUNDS = 3


class CaseDigits:
    """Settles the decimals of the symbols that stand in tables of rows, in the ``printing`` that they belong to."""

    def __init__(self, printing: Printing) -> None:
        self.printing = printing
        self.program = printing.program
        self.cases = {name: [list(row) for row in rows] for name, rows in self.program.cases.items()}
        self.solved_again: dict[tuple[float, ...], list[Any]] = {}

    def start(self, step: LaidStep) -> None:
        """Given columns are printed as they were given, in every row; the number of rows is a whole one."""
        it = self.printing
        for name in step.step.given:
            it.decimals[name] = max(it.exact(it.units[name].from_si(value)) for value in self.column(step.symbol, name))
        it.decimals[step.symbol] = 0

    def column(self, table: str, name: str) -> list[float]:
        """A symbol's values in the rows of a table [SI]."""
        slot = self.program.slots[name]
        return [row[slot] for row in self.cases[table]]

    def redone_total(self, step: LaidStep) -> float:
        """A total from the printed cells of its column [SI]."""
        name = step.step.column
        return REDUCTIONS[step.step.reduction](
            [self.printing.printed(name, value) for value in self.column(step.step.table, name)])

    def raise_total(self, step: LaidStep) -> None:
        """Give the column more places until its printed cells give the printed total."""
        it, name = self.printing, step.step.column
        if step.step.reduction in ("min", "max"):
            it.decimals[step.symbol] = max(it.decimals[step.symbol], it.decimals[name])
        for _ in range(TRIES):
            if it.redoable(step) or not it.can_grow(name):
                return
            it.decimals[name] += 1

    def raise_cells(self, step: LaidStep) -> None:
        """Cells with a formula are done again from their row, the others by solving the row for its printed inputs."""
        formulas = cell_formulas(self.printing.plan, step)
        for name in reversed([one for one in step.step.columns if one in formulas]):
            self._raise_formula(step, name, formulas[name])
        solved = [name for name in step.step.columns if name not in formulas and name not in step.step.given]
        for _ in range(_ROUNDS):
            growing = [name for name in step.step.bound if self.printing.can_grow(name) and not self._exact(step, name)]
            if not growing or all(gap <= WITHIN * self.printing.place(name) for name in solved
                                  for gap in self._solved_gaps(step, name)):
                return
            for name in growing:
                self.printing.decimals[name] += 1

    def _raise_formula(self, step: LaidStep, name: str, tree: Any) -> None:
        it, uses = self.printing, symbols_of(tree)
        for _ in range(TRIES):
            if max(self._gaps(step, name, tree)) <= WITHIN * it.place(name) or not it.refine(
                    uses, lambda used: max(self._errors(step, name, tree, {used})), 0.5 * it.place(name)):
                return

    def _exact(self, step: LaidStep, name: str) -> bool:
        return all(math.isclose(self.printing.printed(name, value), value, rel_tol=EXACT)
                   for value in self.column(step.symbol, name))

    def _gaps(self, step: LaidStep, name: str, tree: Any) -> list[float]:
        """How far each printed cell is from the one done again from its row as printed [SI]."""
        slot, used = self.program.slots[name], set(symbols_of(tree))
        return [abs(self._in_row(tree, used, row) - self.printing.printed(name, row[slot]))
                for row in self.cases[step.symbol]]

    def _errors(self, step: LaidStep, name: str, tree: Any, printed: set[str]) -> list[float]:
        """How far each cell moves when the symbols in ``printed`` are rounded [SI]."""
        slot = self.program.slots[name]
        return [abs(self._in_row(tree, printed, row) - row[slot]) for row in self.cases[step.symbol]]

    def _in_row(self, tree: Any, printed: set[str], row: list[Any]) -> float:
        listed = list(row)
        for name in printed:
            slot = self.program.slots[name]
            listed[slot] = self.printing.printed(name, row[slot])
        try:
            return self.program.value_of(tree)(listed)
        except NOTHING:
            return math.inf

    def _solved_gaps(self, step: LaidStep, name: str) -> list[float]:
        """How far each cell that needs the whole calculation is from the row solved for its printed inputs [SI]."""
        slot = self.program.slots[name]
        return [abs(self._solved(step, index, row)[slot] - self.printing.printed(name, row[slot]))
                for index, row in enumerate(self.cases[step.symbol])]

    def _solved(self, step: LaidStep, index: int, row: list[Any]) -> list[Any]:
        slots = self.program.slots
        fixed = {name: self.printing.printed(name, row[slots[name]]) for name in step.step.bound}
        if all(math.isclose(value, row[slots[name]], rel_tol=EXACT) for name, value in fixed.items()):
            return row
        key = (index, *fixed.values())
        if key not in self.solved_again:
            try:
                self.solved_again[key] = solved_row(self.program, step, index, row, fixed)
            except NOTHING:
                self.solved_again[key] = [math.inf] * len(row)
        return self.solved_again[key]
