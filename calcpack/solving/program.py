"""A laid plan to a program: one list of values, one function a step, roots as nested blocks.

Evaluation is bare floats in SI. A program is compiled once and run for a
solution, for a root's trial values, for a check with printed values.
"""
from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from functools import partial
from typing import Any

from calcpack.errors import Fault, NoAnswerError, RootError
from calcpack.formula.evaluate import Compiled, compiled
from calcpack.formula.text import to_text
from calcpack.formula.tree import CONSTANTS, Node, PropertyCall, Symbol, symbols_of
from calcpack.plan.laid import LaidDemand, LaidPlan, LaidStep
from calcpack.plan.steps import CasesStep, Closing, LookupStep, OptimumStep, RootStep, SeriesStep, TotalStep
from calcpack.solving.cases import row_by_row
from calcpack.solving.roots import Optimum, Root, find_optimum, find_root
from calcpack.solving.tables import REDUCTIONS, interpolated
from calcpack.solving.troubles import Teller, UnmetError, arithmetic
from calcpack.units import read_quantity, shown_with_unit

Instruction = tuple[int, Callable[[list[Any]], Any]]

REMEMBERED = 256
"""Look-ups of one property of one fluid that a run remembers before it starts afresh."""


class Program:
    """A plan compiled; ``slots`` says where in the list of values each symbol stands.

    Attributes
    ----------
    roots, optima : dict of str to Root, Optimum
        Of the last run, each unknown's bracket and count of evaluations.
    tables : dict of str to list of list of float
        Of the last run, the rows of each series.
    held : dict of str to int
        Of the last run, the branch that held in each choice.
    cases : dict of str to list of list of float
        Of the last run, all values in each row of each cases step.
    """

    def __init__(self, plan: LaidPlan) -> None:
        self.plan = plan
        names = [*plan.inputs, *(step.symbol for step in plan.steps)]
        names += [column.symbol for step in plan.steps for column in step.columns]
        self.slots = {name: index for index, name in enumerate(dict.fromkeys(names))}
        self.step_at = {self.slots[step.symbol]: step for step in plan.steps}
        self.roots: dict[str, Root] = {}
        self.optima: dict[str, Optimum] = {}
        self.tables: dict[str, list[list[float]]] = {}
        self.held: dict[str, int] = {}
        self.cases: dict[str, list[list[Any]]] = {}
        self.befores: dict[str, list[Instruction]] = {}
        self.functions: dict[str, Callable[[list[Any]], Any]] = {}
        self.bodies: dict[str, tuple[list[Instruction], Compiled]] = {}
        self.compiled_trees: dict[Node, Callable[[list[Any]], Any]] = {}
        self.readers: dict[tuple[str, str, tuple[str, ...]], Callable[..., float]] = {}
        self.looked_up: list[dict[tuple[float, ...], float]] = []
        self.teller = Teller(plan)
        self.spare = len(self.slots)
        self.block = self._block(list(plan.items), 0)[0]

    def run(self, inputs: Mapping[str, float]) -> dict[str, float]:
        """All values by symbol, inputs included.

        Raises
        ------
        NoAnswerError
            With the step's number and symbol in the message.
        """
        values: list[Any] = [0.0] * (self.spare + 1)
        for name, value in inputs.items():
            values[self.slots[name]] = value
        for found in self.looked_up:
            found.clear()
        self.run_block(self.block, values)
        self.require_real(values)
        return {name: values[index] for name, index in self.slots.items()}

    def memory(self) -> tuple[dict[str, Any], ...]:
        """What the last run found besides values: roots, optima, tables, branches, cases."""
        return tuple(dict(one) for one in (self.roots, self.optima, self.tables, self.held, self.cases))

    def recall(self, memory: tuple[dict[str, Any], ...]) -> None:
        """Put back what :meth:`memory` gave."""
        self.roots, self.optima, self.tables, self.held, self.cases = memory

    def run_block(self, block: list[Instruction], values: list[Any]) -> None:
        """Run instructions on a list of values, in place."""
        slot = 0
        try:
            for slot, function in block:
                values[slot] = function(values)
        except NoAnswerError as error:
            raise (self.teller.named(error, self.step_at[slot]) if slot in self.step_at else error) from None
        except (ArithmeticError, ValueError, TypeError) as error:
            raise arithmetic(error, self.step_at[slot]) from None

    def require_real(self, values: list[Any]) -> None:
        """Raise where a step's value is no finite real number."""
        for slot, step in self.step_at.items():
            value = values[slot]
            if isinstance(value, complex) or not math.isfinite(value):
                raise NoAnswerError(Fault(f"step {step.id}, {step.symbol}: the result is not a finite real number",
                                          found=str(value)))

    def _block(self, items: list[LaidStep | Closing | LaidDemand], start: int,
               until: str | None = None) -> tuple[list[Instruction], int]:
        block: list[Instruction] = []
        index = start
        while index < len(items):
            item = items[index]
            if isinstance(item, Closing):
                if item.symbol == until:
                    return block, index
                index += 1
                continue
            if isinstance(item, LaidDemand):
                block.append((self.spare, self._demand(item)))
                index += 1
                continue
            if isinstance(item.step, (RootStep, OptimumStep)):
                body, index = self._block(items, index + 1, item.symbol)
                function = self._unknown(item, body)
            elif isinstance(item.step, CasesStep):
                function = row_by_row(self, item, list(block))
            else:
                function = self._function(item)
            self.functions[item.symbol] = function
            block.append((self.slots[item.symbol], function))
            index += 1
        return block, index

    def _unknown(self, step: LaidStep, body: list[Instruction]) -> Callable[[list[Any]], float]:
        """A root or an optimum: trial values run the body, then the equation or objective is read."""
        slot = self.slots[step.symbol]
        equation = compiled(step.tree, self.slots)
        low, high = (compiled(step.trees[name], self.slots) for name in ("low", "high"))
        self.bodies[step.symbol] = (body, equation)

        def solve(values: list[Any]) -> float:
            last = math.nan

            def at(trial: float) -> float:
                nonlocal last
                values[slot] = last = trial
                self.run_block(body, values)
                found = equation(values)
                if isinstance(found, complex) or not math.isfinite(found):
                    raise NoAnswerError(Fault("the equation has no real value here"))
                return found
            solution = self._found(step, at, low(values), high(values))
            if last != solution:
                # The search ended elsewhere: the body's values must be those at the solution.
                at(solution)
            return solution
        return solve

    def _found(self, step: LaidStep, at: Callable[[float], float], low: float, high: float) -> float:
        unknown = partial(self.teller.value, step.symbol)
        try:
            if isinstance(step.step, RootStep):
                self.roots[step.symbol] = root = find_root(at, low, high, unknown, partial(self.teller.residual, step))
                return root.value
            self.optima[step.symbol] = optimum = find_optimum(at, low, high, greatest=step.step.sense == "greatest",
                                                              unknown=unknown)
        except RootError as error:
            raise self.teller.bracketed(error, step, low, high) from None
        return optimum.value

    def residual_at(self, symbol: str, trial: float, values: Mapping[str, float]) -> float:
        """A root's equation, or an optimum's objective, with ``trial`` for the unknown and its body run again [SI].

        What the last full run found (roots, optima, tables, branches) stays as it was.
        """
        body, equation = self.bodies[symbol]
        listed = [*(values[name] for name in self.slots), 0.0]
        listed[self.slots[symbol]] = trial
        kept = self.memory()
        try:
            self.run_block(body, listed)
            return equation(listed)
        finally:
            self.recall(kept)

    def _function(self, step: LaidStep) -> Callable[[list[Any]], Any]:
        match step.step:
            case SeriesStep():
                return self._series(step)
            case LookupStep():
                return self._lookup(step)
            case TotalStep():
                return self._total(step)
        if step.kind == "choice":
            return self._choice(step)
        return self.value_of(step.tree)

    def _demand(self, demand: LaidDemand) -> Callable[[list[Any]], float]:
        holds = compiled(demand.condition, self.slots)
        names = symbols_of(demand.condition)

        def require(values: list[Any]) -> float:
            if not holds(values):
                found = self.teller.values(names, {name: values[self.slots[name]] for name in names})
                raise UnmetError(Fault(demand.text, found=found, hint=demand.hint,
                                       expected=to_text(demand.condition)))
            return 0.0
        return require

    def value_of(self, tree: Node) -> Callable[[list[Any]], Any]:
        """The compiled function of a tree, formula or property look-up; compiled once."""
        if tree not in self.compiled_trees:
            self.compiled_trees[tree] = self._compiled(tree)
        return self.compiled_trees[tree]

    def _compiled(self, tree: Node) -> Callable[[list[Any]], Any]:
        if not isinstance(tree, PropertyCall):
            return compiled(tree, self.slots)
        reader = self._reader(tree.fluid, tree.output, tuple(key for key, _ in tree.given))
        given = [compiled(value, self.slots) for _, value in tree.given]
        parts = [value for _, value in tree.given]
        if len(parts) == 2 and all(isinstance(part, Symbol) and part.name not in CONSTANTS for part in parts):
            i, j = (self.slots[part.name] for part in parts)
            return lambda v: reader(v[i], v[j])
        if len(given) == 2:
            first, second = given
            return lambda v: reader(first(v), second(v))
        return lambda v: reader(*[part(v) for part in given])

    def _reader(self, role: str, output: str, names: tuple[str, ...]) -> Callable[..., float]:
        """A fluid's reader; two values that a run has asked for already are not asked for again."""
        key = role, output, names
        if key not in self.readers:
            reader = self.plan.fluids[role].reader(output, names)
            if len(names) == 2:
                # States return exactly: at the ends of profiles, and in a root's body where its unknown has no say.
                self.looked_up.append({})
                reader = _remembering(reader, self.looked_up[-1])
            self.readers[key] = reader
        return self.readers[key]

    def _choice(self, step: LaidStep) -> Callable[[list[Any]], Any]:
        branches = step.step.branches
        conditions = [compiled(step.trees[f"when {i}"], self.slots) if branch.when else (lambda v: True)
                      for i, branch in enumerate(branches)]
        results = [compiled(step.trees[f"value {i}"], self.slots) for i in range(len(branches))]

        def choose(values: list[Any]) -> Any:
            index = next(i for i, condition in enumerate(conditions) if condition(values))
            self.held[step.symbol] = index
            return results[index](values)
        return choose

    def _lookup(self, step: LaidStep) -> Callable[[list[Any]], float]:
        of = compiled(step.tree, self.slots)
        points = [(read_quantity(x).value, read_quantity(y).value) for x, y in step.step.points]
        written_in = read_quantity(step.step.points[0][0]).unit

        def told(x: float) -> str:
            return shown_with_unit(f"{written_in.from_si(x):.6g}", written_in)
        return lambda v: interpolated(points, of(v), told)

    def _total(self, step: LaidStep) -> Callable[[list[Any]], float]:
        pick = self.plan.step(step.step.table).step.columns.index(step.step.column)
        reduce = REDUCTIONS[step.step.reduction]
        return lambda v: reduce([row[pick] for row in self.tables[step.step.table]])

    def _series(self, step: LaidStep) -> Callable[[list[Any]], float]:
        firsts = [compiled(step.trees[f"row {i}"], self.slots) for i in range(len(step.step.rows))]
        slots = [self.slots[column.symbol] for column in step.columns]
        others = [(slot, self.value_of(column.tree)) for slot, column in zip(slots[1:], step.columns[1:], strict=True)]
        pick = [column.symbol for column in step.columns].index(step.step.column)
        reduce = REDUCTIONS[step.step.reduction]

        def tabulate(values: list[Any]) -> float:
            rows = []
            for first in firsts:
                values[slots[0]] = first(values)
                for slot, function in others:
                    values[slot] = function(values)
                rows.append([values[slot] for slot in slots])
            self.tables[step.symbol] = rows
            return reduce([row[pick] for row in rows])
        return tabulate


def _remembering(reader: Callable[..., float], found: dict[tuple[float, ...], float]) -> Callable[..., float]:
    """The reader, with what it gave kept in ``found`` by the two values it was asked with."""
    def read(first: float, second: float) -> float:
        known = found.get((first, second))
        if known is None:
            if len(found) >= REMEMBERED:
                found.clear()
            known = found[first, second] = reader(first, second)
        return known
    return read
