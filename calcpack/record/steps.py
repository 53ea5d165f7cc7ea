"""Solved steps to the record's entries: formula, numbers as printed, result."""
from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from typing import Any

from calcpack.formula.text import printed_quantity, to_text
from calcpack.formula.tree import Node, PropertyCall, symbols_of, walk
from calcpack.plan.laid import LaidStep
from calcpack.plan.steps import CasesStep, LookupStep, OptimumStep, RootStep, SeriesStep, TotalStep
from calcpack.record.cases import case_table
from calcpack.record.identity import step_identity
from calcpack.solving.solution import Solution, printed_freely
from calcpack.solving.tables import neighbours
from calcpack.units import Unit, print_unit, read_quantity, shown_with_unit
from calcpack.units.digits import decimals_for, number_text


def step_entries(solution: Solution, identities: dict[str, str]) -> list[dict[str, Any]]:
    """All steps; ``identities`` starts with the inputs' and gains each step's."""
    return [_entry(solution, step, identities) for step in solution.plan.steps]


def _entry(solution: Solution, step: LaidStep, identities: dict[str, str]) -> dict[str, Any]:
    symbol = step.symbol
    entry: dict[str, Any] = {
        "id": step.id, "symbol": symbol, "title": step.step.title, "kind": step.kind,
        "formula": formula_text(step), "numbers": numbers_text(solution, step),
        "value": float(solution.value(symbol)), "unit": step.unit.symbol, "shown": solution.printing.shown(symbol),
        "also_shown": solution.also_shown(symbol), "uses": list(step.uses),
        "reference": step.step.reference or None, "note": step.step.note or None,
        "section": str(step.step.section + 1), "own": step.step.place is not None}
    detail = _DETAILS.get(step.kind)
    if detail is not None:
        entry[_NAMES.get(step.kind, step.kind)] = detail(solution, step)
    identities[symbol] = entry["identity"] = step_identity(
        symbol, step.kind, _formulas(solution, step), step.unit.symbol, _reads(solution, step), identities,
        _fluids(solution, step))
    return entry


def formula_text(step: LaidStep) -> str:
    """What the record keeps as the step's formula, in the formula language where it has one."""
    match step.step:
        case SeriesStep(reduction=reduction, column=column):
            return f"{reduction} of {column}"
        case CasesStep():
            return "number of rows"
        case TotalStep(reduction=reduction, column=column, table=table):
            return f"{reduction} of {column} in {table}"
        case LookupStep():
            return f"table at {to_text(step.tree)}"
    if step.kind == "choice":
        return "; ".join(f"{branch.value} if {branch.when}" if branch.when else f"{branch.value} otherwise"
                         for branch in step.step.branches)
    return to_text(step.tree)


def numbers_text(solution: Solution, step: LaidStep) -> str:
    """The formula with its operands as printed; for a choice, of the branch that held."""
    match step.step:
        case SeriesStep() | RootStep() | OptimumStep() | CasesStep() | TotalStep():
            return ""
    if step.kind == "choice":
        held = solution.program.held[step.symbol]
        return solution.numbers(step.trees[f"value {held}"])
    return solution.numbers(step.tree)


def _formulas(solution: Solution, step: LaidStep) -> list[str]:
    texts = [formula_text(step), *(f"{name}: {to_text(tree)}" for name, tree in step.trees.items())]
    texts += [f"{column.symbol}: {to_text(column.tree)}" for column in step.columns if column.tree is not None]
    match step.step:
        case LookupStep(points=points):
            texts += [f"{x}: {y}" for x, y in points]
        case CasesStep(rows=rows):
            texts += [f"{row.label}: {', '.join(row.values)}" for row in rows]
        case RootStep() | OptimumStep():
            # An unknown hangs on all that its body reads; the body's own symbols stand by their formulas.
            texts += [text for one in root_body(solution, step.symbol)
                      for text in (one.symbol, *_formulas(solution, one), *_fluids(solution, one))]
    return texts


def _reads(solution: Solution, step: LaidStep) -> tuple[str, ...]:
    """What a step's value hangs on: for an unknown, also what its body reads from before it."""
    if not isinstance(step.step, (RootStep, OptimumStep)):
        return step.uses
    body = root_body(solution, step.symbol)
    inside = {step.symbol, *(one.symbol for one in body)}
    outside = (name for one in body for name in one.uses if name not in inside)
    return tuple(dict.fromkeys((*step.uses, *outside)))


def root_body(solution: Solution, symbol: str) -> list[LaidStep]:
    """The steps between a root and its closing that the equation needs, in order."""
    from calcpack.plan.steps import Closing
    inside: list[LaidStep] = []
    started = False
    for item in solution.plan.items:
        if isinstance(item, LaidStep):
            if item.symbol == symbol:
                started = True
            elif started:
                inside.append(item)
        elif isinstance(item, Closing) and item.symbol == symbol:
            break
    needed = set(symbols_of(solution.step(symbol).tree))
    grown = True
    while grown:
        # An inner root stands before the steps that its equation reads: one pass backwards would miss those.
        more = {name for step in inside if step.symbol in needed for name in step.uses} - needed
        grown, needed = bool(more), needed | more
    return [step for step in inside if step.symbol in needed]


def _fluids(solution: Solution, step: LaidStep) -> list[str]:
    trees = [tree for tree in (step.tree, *step.trees.values(), *(c.tree for c in step.columns)) if tree is not None]
    roles = [part.fluid for tree in trees for part in walk(tree) if isinstance(part, PropertyCall)]
    return [solution.plan.fluids[role].identity for role in dict.fromkeys(roles)]


def _root(solution: Solution, step: LaidStep) -> dict[str, Any]:
    """The equation, the bracket used, and what is left of the equation at the printed solution."""
    root = solution.program.roots[step.symbol]
    printed = solution.printing.printed(step.symbol)
    left = solution.program.residual_at(step.symbol, printed, solution.values)
    equation_unit = print_unit(_equation_dimension(solution, step), solution.system)
    closing = [name for name in symbols_of(step.tree) if not _given_before(solution, step, name)]
    return {"unknown": step.symbol, "equation": to_text(step.tree), **_ends(solution, step, root.low, root.high),
            "residual": printed_freely(left, equation_unit, 2),
            "residual_below": _below(solution, step, left, equation_unit),
            "residual_value": float(left), "iterations": root.evaluations,
            "closed_by": [solution.step(name).id for name in closing]}


NIL = 1e-4
"""Share of what the last printed place moves an equation by; a residual below it has no digits to print."""


def _below(solution: Solution, step: LaidStep, left: float, equation_unit: Unit) -> str | None:
    """The power of ten that a residual too small for digits of its own is below; None for one that has digits."""
    beside = solution.printing.printed(step.symbol) + solution.printing.place(step.symbol)
    nil = NIL * abs(solution.program.residual_at(step.symbol, beside, solution.values) - left)
    if abs(left) >= nil:
        return None
    return shown_with_unit(f"1e{math.ceil(math.log10(nil / equation_unit.factor))}", equation_unit)


def _optimum(solution: Solution, step: LaidStep) -> dict[str, Any]:
    """The objective, the bounds used, the optimum and a curve around it, all as printed."""
    found = solution.program.optima[step.symbol]
    objective_unit = print_unit(_equation_dimension(solution, step), solution.system)
    decimals = max(0, decimals_for(objective_unit.from_si(found.objective), 6))
    digits = solution.printing.decimals[step.symbol]

    def pair(x: float, y: float) -> dict[str, Any]:
        return {"x": number_text(step.unit.from_si(x), max(0, digits)), "x_value": x,
                "y": number_text(objective_unit.from_si(y), decimals), "y_value": y}
    return {"unknown": step.symbol, "objective": to_text(step.tree), "sense": step.step.sense,
            **_ends(solution, step, found.low, found.high), "iterations": found.evaluations,
            "objective_unit": objective_unit.symbol,
            "optimum": pair(found.value, found.objective), "curve": [pair(x, y) for x, y in found.curve],
            "closed_by": [solution.step(name).id for name in symbols_of(step.tree)
                          if not _given_before(solution, step, name)]}


def _ends(solution: Solution, step: LaidStep, low: float, high: float) -> dict[str, Any]:
    """The ends of a bracket as used, their formulas, and what the formula says where an end was moved inwards."""
    finest, found = solution.printing.decimals[step.symbol], {}
    listed = [*(solution.values[name] for name in solution.program.slots), 0.0]
    for name, used in (("low", low), ("high", high)):
        value = solution.program.value_of(step.trees[name])(listed)
        decimals = _end_decimals(solution, step, name, value, finest)
        stated = _end(step, value, decimals)
        found |= {name: _end(step, used, decimals), f"{name}_formula": to_text(step.trees[name])}
        found[f"{name}_stated"] = stated if stated != found[name] else None
    return found


def _end_decimals(solution: Solution, step: LaidStep, name: str, value: float, finest: int) -> int:
    """Places of a bracket's end: no finer than its operands as printed give it again."""
    again = solution.printing.redone_tree(step.trees[name], {})
    gap = abs(again - value) / step.unit.factor
    decimals = min(2, max(0, finest))
    while decimals > 0 and not 2.0 * gap <= 10.0 ** -decimals:
        decimals -= 1
    return decimals


def _end(step: LaidStep, value: float, decimals: int) -> str:
    return shown_with_unit(number_text(step.unit.from_si(value), decimals), step.unit)


def _equation_dimension(solution: Solution, step: LaidStep) -> Any:
    from calcpack.formula.dimension import measure
    known = {name: one.measure for name, one in solution.plan.inputs.items()}
    known |= {one.symbol: one.measure for one in solution.plan.steps}
    return measure(step.tree, lambda symbol: known[symbol.name], "").dimension


def _given_before(solution: Solution, step: LaidStep, name: str) -> bool:
    if name in solution.plan.inputs or name == step.symbol:
        return True
    order = [one.symbol for one in solution.plan.steps]
    return order.index(name) < order.index(step.symbol)


def _choice(solution: Solution, step: LaidStep) -> dict[str, Any]:
    held = solution.program.held[step.symbol]
    branches = []
    for index, branch in enumerate(step.step.branches):
        numbers = solution.numbers(step.trees[f"when {index}"]) if branch.when else ""
        branches.append({"condition": branch.when, "condition_numbers": numbers, "held": index == held,
                         "value": branch.value, "label": branch.label, "reached": index <= held})
    return {"branches": branches}


def _lookup(solution: Solution, step: LaidStep) -> dict[str, Any]:
    points = [(read_quantity(x).value, read_quantity(y).value) for x, y in step.step.points]
    below, above = neighbours(points, solution.program.value_of(step.tree)(
        [*(solution.values[name] for name in solution.program.slots), 0.0]))
    texts = [list(step.step.points[points.index(point)]) for point in (below, above)]
    return {"source": step.step.source, "x": to_text(step.tree), "points": [list(pair) for pair in step.step.points],
            "neighbours": texts}


def _table(solution: Solution, step: LaidStep) -> dict[str, Any]:
    columns = [{"symbol": column.symbol, "title": column.title, "unit": column.unit.symbol,
                "formula": to_text(column.tree) if column.tree is not None else ""} for column in step.columns]
    rows = []
    for index, (row, cells) in enumerate(zip(step.step.rows, solution.program.tables[step.symbol], strict=True)):
        rows.append({"label": row.label, "formula": to_text(step.trees[f"row {index}"]),
                     "cells": _cells(solution, step, index, cells)})
    return {"columns": columns, "rows": rows, "reduction": step.step.reduction, "column": step.step.column}


def _cells(solution: Solution, step: LaidStep, row: int, values: list[float]) -> list[dict[str, Any]]:
    local: dict[str, Node] = {}
    cells = []
    for column, value in zip(step.columns, values, strict=True):
        shown = solution.printing.shown(column.symbol, value)
        tree = column.tree if column.tree is not None else step.trees[f"row {row}"]
        cells.append({"value": float(value), "shown": shown, "numbers": solution.numbers(tree, local)})
        local[column.symbol] = printed_quantity(shown, column.unit.symbol)
    return cells


def _total(solution: Solution, step: LaidStep) -> dict[str, Any]:
    return {"reduction": step.step.reduction, "column": step.step.column, "table": solution.step(step.step.table).id}


_DETAILS: Mapping[str, Callable[[Solution, LaidStep], dict[str, Any]]] = {
    "root": _root, "optimum": _optimum, "choice": _choice, "lookup": _lookup, "series": _table, "cases": case_table,
    "total": _total}
_NAMES = {"series": "table", "cases": "table"}
"""Where a kind's detail stands in the entry, if not under its own name."""
