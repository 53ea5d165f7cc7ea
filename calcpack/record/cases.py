"""The rows that a calculation was solved for to the record's table: each cell as printed, with its numbers."""
from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from calcpack.formula.text import printed_quantity, to_text
from calcpack.formula.tree import Node
from calcpack.plan.laid import LaidStep
from calcpack.solving.cases import cell_formulas
from calcpack.solving.solution import Solution


def case_table(solution: Solution, step: LaidStep) -> dict[str, Any]:
    """The table of a cases step.

    A column is ``from`` 'the row' (given), 'a formula' of its row, or 'the
    calculation' solved for the row; cells of the last have no numbers.
    """
    formulas = cell_formulas(solution.plan, step)
    columns = [_column(solution, step, name, formulas) for name in step.step.columns]
    rows = [{"label": row.label, "cells": _cells(solution, step, index, formulas)}
            for index, row in enumerate(step.step.rows)]
    return {"columns": columns, "rows": rows, "reduction": "count", "column": step.step.columns[0],
            "shown_row": step.step.rows[step.step.shown].label, "source": step.step.source,
            "bound": list(step.step.bound)}


def _column(solution: Solution, step: LaidStep, name: str, formulas: Mapping[str, Node]) -> dict[str, Any]:
    origin = "the row" if name in step.step.given else "a formula" if name in formulas else "the calculation"
    title = solution.plan.inputs[name].title if name in solution.plan.inputs else solution.step(name).step.title
    return {"symbol": name, "title": title, "unit": solution.unit(name).symbol, "from": origin,
            "formula": to_text(formulas[name]) if name in formulas else ""}


def _cells(solution: Solution, step: LaidStep, index: int, formulas: Mapping[str, Node]) -> list[dict[str, Any]]:
    values = solution.program.cases[step.symbol][index]
    shown = {name: solution.printing.shown(name, values[solution.program.slots[name]]) for name in step.step.columns}
    local = {name: printed_quantity(text, solution.unit(name).symbol) for name, text in shown.items()}
    return [{"value": float(values[solution.program.slots[name]]), "shown": shown[name],
             "numbers": solution.numbers(formulas[name], local) if name in formulas else ""}
            for name in step.step.columns]
