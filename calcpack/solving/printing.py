"""How finely each value is printed, so that what is printed can be re-done from print.

Each symbol has one printed form everywhere. Starting from customary digits, a
formula's result loses places that its printed operands cannot support (never
below four significant digits), then operands gain places where a result still
could not be re-done from them. The aim: operands as printed give the printed
result within one unit of its last place.
"""
from __future__ import annotations

import math
from collections.abc import Callable, Mapping

from calcpack.formula.tree import Binary, Number, Quantity
from calcpack.plan.laid import LaidPlan, LaidStep
from calcpack.solving.case_digits import EXACT, NOTHING, TRIES, WITHIN, CaseDigits
from calcpack.solving.program import Program
from calcpack.units import Unit, kind_of_unit
from calcpack.units.digits import LARGEST_PLAIN, decimals_for, number_text

LEAST_SIGNIFICANT = 4
MOST_SIGNIFICANT = 9
EXACT_SIGNIFICANT = 10
CONVERTED_SIGNIFICANT = 6
NOISE = 1e-10


class Printing:
    """Decimals of each symbol in its print unit, for one solution.

    ``values`` are all symbols' SI values; ``units`` their print units.
    """

    def __init__(self, plan: LaidPlan, program: Program, values: Mapping[str, float]) -> None:
        self.plan = plan
        self.program = program
        self.values = dict(values)
        self.rows = CaseDigits(self)
        self.tables = {name: [list(row) for row in rows] for name, rows in program.tables.items()}
        self.units: dict[str, Unit] = {name: one.unit for name, one in plan.inputs.items()}
        self.units |= {step.symbol: step.unit for step in plan.steps}
        self.units |= {column.symbol: column.unit for step in plan.steps for column in step.columns}
        self.trees = {step.symbol: step.tree for step in plan.steps if step.kind == "formula"}
        self.decimals = {name: self._start(name) for name in self.units}
        for name in (*plan.inputs, *(step.symbol for step in plan.steps if isinstance(step.tree, (Number, Quantity)))):
            self.decimals[name] = self.exact(self.units[name].from_si(self.values[name]))
        for step in plan.steps:
            if step.kind == "cases":
                self.rows.start(step)
        self._settle()

    def shown(self, name: str, value: float | None = None) -> str:
        """The printed number of a symbol, or of another ``value`` in its form."""
        value = self.values[name] if value is None else value
        return number_text(self.units[name].from_si(value), self.decimals[name])

    def printed(self, name: str, value: float | None = None) -> float:
        """The SI value that the printed number stands for."""
        return self.units[name].to_si(float(self.shown(name, value)))

    def place(self, name: str) -> float:
        """One unit in the last printed place, in SI."""
        return 10.0 ** -self.decimals[name] * self.units[name].factor

    def redone(self, step: LaidStep) -> float:
        """The step's value from its operands as printed [SI]."""
        if step.kind == "total":
            return self.rows.redone_total(step)
        return self._evaluate(step, set(step.uses))

    def _magnitude(self, name: str) -> float:
        for step in self.plan.steps:
            for index, column in enumerate(step.columns):
                if column.symbol == name:
                    return max(abs(self.units[name].from_si(row[index])) for row in self.tables[step.symbol])
        value = abs(self.values[name])
        terms = self._terms(name)
        # What is left when equal terms cancel is noise: it is printed as finely as the terms.
        if terms and value < NOISE * max(terms):
            value = max(terms)
        return abs(value / self.units[name].factor)

    def _terms(self, name: str) -> list[float]:
        """The sizes of the terms, where a step is a sum or difference [SI]."""
        tree = self.trees.get(name)
        if not (isinstance(tree, Binary) and tree.op in "+-"):
            return []
        listed = [*(self.values[symbol] for symbol in self.program.slots), 0.0]
        return [abs(self.program.value_of(part)(listed)) for part in (tree.left, tree.right)]

    def _places(self, name: str, significant: int) -> int:
        """Decimals for so many significant digits, as far as they can be seen in print."""
        magnitude = self._magnitude(name)
        places = decimals_for(magnitude, significant)
        # A number printed without an exponent has its last place where its last digit stands.
        return max(0, places) if magnitude < LARGEST_PLAIN else places

    def _start(self, name: str) -> int:
        kind = kind_of_unit(self.units[name])
        magnitude = self._magnitude(name)
        if kind is not None and kind.decimals is not None:
            return kind.decimals + (0 if magnitude < 1e6 else -1)
        return self._places(name, kind.significant if kind else 5)

    def exact(self, number: float) -> int:
        """The fewest decimals that print an input just as it was given; six digits of one that was converted."""
        most = max(0, decimals_for(number, EXACT_SIGNIFICANT)) if number else 0
        for decimals in range(0, most + 1):
            if math.isclose(float(number_text(number, decimals)), number, rel_tol=EXACT, abs_tol=0.0):
                return decimals
        return max(0, decimals_for(number, CONVERTED_SIGNIFICANT))

    def _settle(self) -> None:
        checked = [step for step in self.plan.steps if step.kind in ("formula", "property", "choice", "lookup")]
        for step in checked:
            self._lower(step)
        for _ in range(3):
            self._level_pairs()
            for step in reversed(self.plan.steps):
                if step.kind == "series":
                    self._raise_series(step)
                elif step.kind == "cases":
                    self.rows.raise_cells(step)
                elif step.kind == "total":
                    self.rows.raise_total(step)
                elif step.kind not in ("root", "optimum"):
                    self._raise(step)
        for step in checked:
            self._coarsen(step)
        for step in self.plan.steps:
            if step.kind == "total":
                self._coarsen(step)

    def _level_pairs(self) -> None:
        """Two values that must agree are printed equally fine, so that the eye can compare them."""
        for pair in self.plan.facts.equals:
            finer = max(self.decimals[pair.symbol], self.decimals[pair.other])
            self.decimals[pair.symbol] = self.decimals[pair.other] = finer

    def _lower(self, step: LaidStep) -> None:
        """Take places off a formula's result that its operands do not support."""
        kind = kind_of_unit(step.unit)
        if kind is not None and kind.decimals is not None:
            return
        least = self._places(step.symbol, LEAST_SIGNIFICANT)
        while self.decimals[step.symbol] > least and not self.redoable(step):
            self.decimals[step.symbol] -= 1

    def _coarsen(self, step: LaidStep) -> None:
        """Where operands cannot be printed finely enough, as after long chains of differences, print less."""
        least = self._places(step.symbol, 1)
        while self.decimals[step.symbol] > least and not self.redoable(step):
            self.decimals[step.symbol] -= 1

    def _raise(self, step: LaidStep) -> None:
        """Give operands more places until the result can be re-done from print."""
        for _ in range(TRIES):
            if self.redoable(step) or not self.refine(
                    step.uses, lambda name: self._moved(step, name), 0.5 * self.place(step.symbol)):
                return

    def redoable(self, step: LaidStep) -> bool:
        """Whether printed operands give the printed result within one unit of its last place."""
        return abs(self.redone(step) - self.printed(step.symbol)) <= WITHIN * self.place(step.symbol)

    def refine(self, names: tuple[str, ...], moved: Callable[[str], float], allowed: float) -> bool:
        """One more place for the operand whose rounding moves the result most; False if none can help."""
        movers = [(moved(name), name) for name in names if self.can_grow(name)]
        worst = max(movers, default=(0.0, ""))
        if worst[0] <= 0.1 * allowed:
            return False
        self.decimals[worst[1]] += 1
        return True

    def can_grow(self, name: str) -> bool:
        """Whether another place of a symbol would show more of its value."""
        if name in self.plan.inputs and math.isclose(self.printed(name), self.values[name], rel_tol=EXACT):
            return False
        return self.decimals[name] < self._places(name, MOST_SIGNIFICANT)

    def _moved(self, step: LaidStep, name: str) -> float:
        return abs(self._evaluate(step, {name}) - self.values[step.symbol])

    def _evaluate(self, step: LaidStep, printed: set[str]) -> float:
        """The step's function with the symbols in ``printed`` rounded, the others exact."""
        slots = self.program.slots
        listed = [*(self.values[name] for name in slots), 0.0]
        for name in printed:
            listed[slots[name]] = self.printed(name)
        try:
            return self.program.functions[step.symbol](listed)
        except NOTHING:
            # A printed operand just across a saturation line, or equal to another: more places will bring it back.
            return math.inf

    def _raise_series(self, step: LaidStep) -> None:
        """The same for a table: each cell re-done from the printed cells to its left."""
        for _ in range(TRIES):
            refined = False
            for column in reversed(step.columns[1:]):
                refined |= self._raise_column(step, column.symbol)
            self._raise_firsts(step)
            if not refined:
                return

    def _raise_column(self, step: LaidStep, name: str) -> bool:
        column = next(one for one in step.columns if one.symbol == name)
        uses = symbols_in(column.tree)
        if all(gap <= WITHIN * self.place(name) for gap in self.cell_gaps(step, name)):
            return False
        return self.refine(uses, lambda used: max(self.cell_errors(step, name, {used})), 0.5 * self.place(name))

    def _raise_firsts(self, step: LaidStep) -> None:
        """The first column must not be finer than the formulas of its rows support."""
        first = step.columns[0].symbol
        for index, row in enumerate(self.tables[step.symbol]):
            tree = step.trees[f"row {index}"]
            for _ in range(TRIES):
                uses = symbols_in(tree)
                gap = abs(self.redone_tree(tree, {}) - self.printed(first, row[0]))
                if gap <= WITHIN * self.place(first) or not self.refine(
                        uses, lambda used, tree=tree, row=row: abs(self._tree_with(tree, {used}) - row[0]),
                        0.5 * self.place(first)):
                    break

    def cell_errors(self, step: LaidStep, name: str, printed: set[str]) -> list[float]:
        """How far each cell of a column moves when the symbols in ``printed`` are rounded [SI]."""
        index = [column.symbol for column in step.columns].index(name)
        tree = step.columns[index].tree
        return [abs(self._tree_with(tree, printed, self.row_values(step, row)) - row[index])
                for row in self.tables[step.symbol]]

    def cell_gaps(self, step: LaidStep, name: str) -> list[float]:
        """How far each printed cell of a column is from the one re-done from print [SI]."""
        index = [column.symbol for column in step.columns].index(name)
        tree = step.columns[index].tree
        return [abs(self.redone_tree(tree, self.row_values(step, row)) - self.printed(name, row[index]))
                for row in self.tables[step.symbol]]

    def row_values(self, step: LaidStep, row: list[float]) -> dict[str, float]:
        """The exact values of a table's columns in one row."""
        return {column.symbol: cell for column, cell in zip(step.columns, row, strict=True)}

    def redone_tree(self, tree: object, local: Mapping[str, float]) -> float:
        """A formula's value with every operand as printed [SI]."""
        return self._tree_with(tree, set(symbols_in(tree)), local)

    def _tree_with(self, tree: object, printed: set[str], local: Mapping[str, float] | None = None) -> float:
        slots = self.program.slots
        values = self.values | dict(local or {})
        listed = [*(values[name] for name in slots), 0.0]
        for name in printed:
            listed[slots[name]] = self.printed(name, values[name])
        try:
            return self.program.value_of(tree)(listed)
        except NOTHING:
            return math.inf


def symbols_in(tree: object) -> tuple[str, ...]:
    """The symbols of a tree that may be None."""
    from calcpack.formula.tree import symbols_of
    return symbols_of(tree) if tree is not None else ()
