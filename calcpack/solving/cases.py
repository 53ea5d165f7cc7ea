"""A cases step to the same calculation solved for each of its rows, one list of values a row."""
from __future__ import annotations

from collections.abc import Callable, Collection, Mapping
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from calcpack.errors import NoAnswerError
from calcpack.formula.tree import symbols_of
from calcpack.plan.laid import LaidPlan, LaidStep
from calcpack.units import read_quantity

if TYPE_CHECKING:
    from calcpack.solving.program import Instruction, Program


class RowError(NoAnswerError):
    """A row without an answer; the message begins with the row."""


def row_by_row(program: Program, step: LaidStep, before: list[Instruction]) -> Callable[[list[Any]], float]:
    """The function of a cases step; ``before`` are the instructions of all steps ahead of it.

    It fills the program's ``tables`` and ``cases`` and leaves everything else
    as the row that is shown left it.
    """
    program.befores[step.symbol] = before
    slots = [program.slots[name] for name in step.step.columns]
    given = [given_values(step, index) for index in range(len(step.step.rows))]
    block = _without(program, before, step.step.given)

    def tabulate(values: list[Any]) -> float:
        held = program.memory()
        try:
            # The row that is shown has been solved: the steps before this one are its steps.
            rows = [list(values) if index == step.step.shown else _run_row(program, step, index, values, fixed, block)
                    for index, fixed in enumerate(given)]
        finally:
            program.recall(held)
        program.cases[step.symbol] = rows
        program.tables[step.symbol] = [[row[slot] for slot in slots] for row in rows]
        return float(len(rows))
    return tabulate


def solved_row(program: Program, step: LaidStep, index: int, values: list[Any],
               fixed: Mapping[str, float] | None = None) -> list[Any]:
    """All values in the row ``index``; ``fixed`` are symbols whose steps are not run, with their values.

    Raises
    ------
    NoAnswerError
        With the row's label at the head of the message.
    """
    fixed = given_values(step, index) | dict(fixed or {})
    held = program.memory()
    try:
        return _run_row(program, step, index, values, fixed, _without(program, program.befores[step.symbol], fixed))
    finally:
        program.recall(held)


def _without(program: Program, before: list[Instruction], names: Collection[str]) -> list[Instruction]:
    """The instructions but for those that give ``names`` their values."""
    kept = {program.slots[name] for name in names}
    return [pair for pair in before if pair[0] not in kept]


def _run_row(program: Program, step: LaidStep, index: int, values: list[Any], fixed: Mapping[str, float],
             block: list[Instruction]) -> list[Any]:
    """A copy of ``values`` with those that are ``fixed`` put in and the block run on it."""
    listed = list(values)
    for name, value in fixed.items():
        listed[program.slots[name]] = value
    try:
        program.run_block(block, listed)
        program.require_real(listed)
    except NoAnswerError as error:
        label = step.step.rows[index].label
        raise RowError(replace(fault, what=f"row {label!r}: {fault.what}") for fault in error.faults) from None
    return listed


def given_values(step: LaidStep, index: int) -> dict[str, float]:
    """The SI values of the given columns in a row."""
    texts = step.step.rows[index].values
    return {name: read_quantity(text).value for name, text in zip(step.step.given, texts, strict=True)}


def by_row(plan: LaidPlan, step: LaidStep) -> frozenset[str]:
    """The symbols before a cases step that can differ from row to row."""
    moving = set(step.step.given)
    grown = True
    while grown:
        more = {one.symbol for one in plan.steps if one.kind not in ("cases", "total")
                and moving & set(one.uses)} - moving
        grown, moving = bool(more), moving | more
    return frozenset(moving)


def cell_formulas(plan: LaidPlan, step: LaidStep) -> dict[str, Any]:
    """The tree of each column that can be done again from its row: its operands stand there or are one for all rows."""
    moving = by_row(plan, step)
    columns = set(step.step.columns)
    return {name: tree for name in step.step.columns if (tree := _formula(plan, name)) is not None
            and name not in step.step.given and _stands(symbols_of(tree), columns, moving)}


def _formula(plan: LaidPlan, name: str) -> Any:
    if name in plan.inputs:
        return None
    step = plan.step(name)
    return step.tree if step.kind == "formula" else None


def _stands(names: Collection[str], columns: Collection[str], moving: Collection[str]) -> bool:
    return all(name in columns or name not in moving for name in names)
