"""A calculation solved row by row to its table for print, in bands that fit the page."""
from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.pages import Ground, anchor, link

Data = Mapping[str, Any]

BAND = 9
"""Columns beside the row's label that fit the width of a page."""

REDUCTIONS = {"min": "Least", "max": "Greatest", "sum": "Sum", "mean": "Mean"}


def cases(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    """The result and the bands of a cases step; a band repeats the rows' labels."""
    table = step["table"]
    columns = [_column(ground, one) for one in table["columns"]]
    bands = []
    for start in range(0, len(columns), BAND):
        part = slice(start, start + BAND)
        bands.append({"columns": columns[part], "rows": [
            {"label": row["label"], "shown": row["label"] == table["shown_row"],
             "cells": [quantities.number(cell["shown"]) for cell in row["cells"][part]]} for row in table["rows"]]})
    shown = next(row for row in table["rows"] if row["label"] == table["shown_row"])
    lines = [_line(cell, one) for cell, one in zip(shown["cells"], table["columns"], strict=True)]
    result = Markup("{} = <b>{}</b>").format(quantities.symbol(step["symbol"]), step["shown"])
    return result, {"bands": bands, "rows": table["rows"], "columns": columns, "lines": lines,
                    "shown": table["shown_row"], "source": ground.sourced(table["source"])}


def _column(ground: Ground, one: Data) -> dict[str, Any]:
    step = next((step for step in ground.items("steps") if step["symbol"] == one["symbol"]), None)
    origin = link(anchor("step", step["id"]), f"step {step['id']}") if step else Markup("input")
    formula = quantities.formula(one["formula"]) if one["formula"] else \
        "given by the row" if one["from"] == "the row" else Markup("solved for the row, as {}").format(origin)
    return {"symbol": quantities.symbol(one["symbol"]), "title": one["title"], "unit": quantities.unit(one["unit"]),
            "formula": formula}


def _line(cell: Data, column: Data) -> Markup:
    result = quantities.quantity(cell["shown"], column["unit"])
    operands = quantities.tree(cell["numbers"]) if cell["numbers"] else None
    return result if operands is None else Markup("{} = {}").format(quantities.formula(cell["numbers"]), result)


def total(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    """A total as words: the sum, or the extreme, of a column of a table."""
    one = step["total"]
    table = link(anchor("step", one["table"]), one["table"])
    also = f" ({step['also_shown']})" if step.get("also_shown") else ""
    return Markup("{} of {} in table {}: {} = <b>{}</b>{}").format(
        REDUCTIONS[one["reduction"]], quantities.symbol(one["column"]), table, quantities.symbol(step["symbol"]),
        quantities.quantity(step["shown"], step["unit"]), also), {}
