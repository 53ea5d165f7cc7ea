"""The steps of a record to the calculation as it is printed, section by section."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from markupsafe import Markup

from calcpack.formula.mathml import step_mathml
from calcpack.formula.tree import Node, Number, PropertyCall, Quantity, walk
from calcpack.formula.typeset import step_equation_html
from calcpack.render import quantities
from calcpack.render.case_table import cases, total
from calcpack.render.pages import Ground, anchor, link

Data = Mapping[str, Any]

COLUMN = 42.5
"""Width of an equation beside the step numbers, [em] of the equation's size."""

SHORT_TABLE = 10
"""Tables of at most so many rows stay on one page."""


@dataclass(frozen=True, slots=True)
class StepView:
    """A step ready for print; ``parts`` names the details that its kind adds."""

    id: str
    symbol: str
    anchor: str
    title: str
    kind: str
    mark: Markup
    equation: Markup
    reference: Markup
    note: str
    uses: Markup
    used_in: Markup
    fluids: Markup
    details: Mapping[str, Any]
    long: bool = False


def calculation(ground: Ground) -> dict[str, Any] | None:
    """The sections with their steps."""
    steps = {step["id"]: step for step in ground.items("steps")}
    sections = [{"id": one["id"], "anchor": anchor("section", one["id"]), "title": one["title"],
                 "steps": [_step(ground, steps[name]) for name in one["steps"]]}
                for one in ground.items("sections")]
    return {"sections": [one for one in sections if one["steps"]]}


def _step(ground: Ground, step: Data) -> StepView:
    kind = step["kind"]
    equation, details = _KINDS.get(kind, _plain)(ground, step)
    rows = details.get("rows") or ()
    return StepView(
        step["id"], step["symbol"], anchor("step", step["id"]), step["title"], kind,
        ground.marks.symbol(step["symbol"]), equation, ground.sourced(step.get("reference")),
        _opened(step.get("note") or ""), _uses(ground, step),
        _step_links(ground.used_by.get(step["symbol"], ())), _fluids(ground, step), details,
        len(rows) > SHORT_TABLE)


def _opened(note: str) -> str:
    """A note with a capital at its start, unless it starts with a symbol."""
    first = note.split(" ", 1)[0].strip(",;:")
    return note[:1].upper() + note[1:] if first.isalpha() and first.islower() else note


def _plain(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    return _equation(ground, step, step["formula"], step["numbers"]), {}


def _equation(ground: Ground, step: Data, formula: str, numbers: str) -> Markup:
    """The step's equation: symbols, numbers, result."""
    symbols, operands = quantities.tree(formula), quantities.tree(numbers) if numbers else None
    if symbols is None:
        return Markup('<p class="equation-text">{} = <code>{}</code> = <b>{}</b></p>').format(
            quantities.symbol(step["symbol"]), formula, quantities.quantity(step["shown"], step["unit"]))
    if operands is not None and (operands == symbols or _says_no_more(operands, step)):
        operands = None
    parts = (step["symbol"], symbols, operands, step["shown"], step["unit"], step.get("also_shown"))
    twin = "" if ground.for_print else step_mathml(*parts)
    return Markup(step_equation_html(*parts, twin=twin, column=COLUMN))


def _says_no_more(operands: Node, step: Data) -> bool:
    """Whether the numbers are the result itself, as where one symbol is set equal to another."""
    match operands:
        case Quantity(text=text, unit=unit):
            return (text, unit) == (step["shown"], step["unit"])
        case Number(text=text):
            return (text, "") == (step["shown"], step["unit"])
    return False


def _result(step: Data) -> Markup:
    also = f" ({step['also_shown']})" if step.get("also_shown") else ""
    return Markup("{} = <b>{}</b>{}").format(
        quantities.symbol(step["symbol"]), quantities.quantity(step["shown"], step["unit"]), also)


def _root(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    root = step["root"]
    ends = _ends(root)
    closing = root["closed_by"]
    closing = [closing] if isinstance(closing, str) else closing
    return _result(step), {"zero": quantities.formula(root["equation"]), "ends": ends,
                           "unknown": quantities.symbol(root["unknown"]),
                           "residual": quantities.written(root.get("residual_below") or root["residual"]),
                           "below": bool(root.get("residual_below")), "count": root["iterations"],
                           "closing": _step_links(closing)}


def _ends(found: Data) -> list[Markup]:
    """The ends of a bracket; one that was moved inwards with where it was laid down."""
    ends = []
    for name in ("low", "high"):
        formula, stated = found[f"{name}_formula"], found.get(f"{name}_stated")
        ends.append(Markup("{} (inwards of {} = {})").format(
            quantities.written(found[name]), quantities.formula(formula), quantities.written(stated))
            if stated else _end(formula, found[name]))
    return ends


def _end(formula: str, value: str) -> Markup:
    """An end of the bracket: its formula and its value, or the value alone where it was written as one."""
    node = quantities.tree(formula)
    if node is None or isinstance(node, Number | Quantity):
        return quantities.written(value)
    return Markup("{} = {}").format(quantities.formula(formula), quantities.written(value))


def _optimum(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    found = step["optimum"]
    unit, objective_unit = step["unit"], found["objective_unit"]
    points = {point["x"]: point for point in (*found["curve"], found["optimum"])}
    curve = [{"x": quantities.number(point["x"]), "y": quantities.number(point["y"]),
              "best": point is found["optimum"]} for point in sorted(points.values(), key=lambda one: one["x_value"])]
    return _result(step), {
        "objective": quantities.formula(found["objective"]), "sense": found["sense"],
        "ends": _ends(found),
        "unknown": quantities.symbol(found["unknown"]), "count": found["iterations"], "curve": curve,
        "unit": quantities.unit(unit), "objective_unit": quantities.unit(objective_unit),
        "best": quantities.quantity(found["optimum"]["y"], objective_unit),
        "closing": _step_links(found["closed_by"])}


def _choice(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    branches, held = [], None
    for branch in step["choice"]["branches"]:
        held = branch if branch["held"] else held
        branches.append({"label": branch.get("label") or "", "held": branch["held"],
                         "condition": quantities.formula(branch["condition"]) if branch["condition"] else "",
                         "numbers": (quantities.formula(branch["condition_numbers"])
                                     if branch["condition_numbers"] else ""),
                         "value": quantities.formula(branch["value"]), "verdict": _verdict(branch)})
    return _equation(ground, step, held["value"], step["numbers"]), {"branches": branches}


def _verdict(branch: Data) -> str:
    if branch["held"]:
        return "holds" if branch["condition"] else "taken"
    return "does not hold" if branch.get("reached", True) else "not reached"


def _lookup(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    lookup = step["lookup"]
    near = [tuple(pair) for pair in lookup.get("neighbours") or ()]
    points = [{"x": quantities.written(x), "y": quantities.written(y), "near": (x, y) in near}
              for x, y in lookup["points"]]
    return _result(step), {"x": quantities.formula(lookup["x"]), "source": ground.sourced(lookup["source"]),
                           "points": points, "numbers": quantities.formula(step["numbers"]),
                           "symbol": quantities.symbol(step["symbol"])}


def _series(ground: Ground, step: Data) -> tuple[Markup, dict[str, Any]]:
    table = step["table"]
    columns = [{"symbol": quantities.symbol(one["symbol"]), "title": one["title"],
                "unit": quantities.unit(one["unit"]),
                "formula": quantities.formula(one["formula"]) if one["formula"] else ""}
               for one in table["columns"]]
    names = [one["symbol"] for one in table["columns"]]
    at = names.index(table["column"]) if table["column"] in names else len(names) - 1
    worked = _worked_row(step, at)
    rows = [{"label": row["label"], "worked": row is worked, "made": _made(row, table["columns"][0]),
             "cells": [quantities.number(cell["shown"]) for cell in row["cells"]]} for row in table["rows"]]
    lines = [_line(cell, plain) for cell, plain in zip(worked["cells"], table["columns"], strict=True)]
    result = Markup("{} of {}: {}").format(_REDUCTIONS.get(table["reduction"], table["reduction"]),
                                           quantities.symbol(names[at]), _result(step))
    return result, {"columns": columns, "rows": rows, "worked": worked["label"], "lines": lines, "at": at}


def _made(row: Data, first: Data) -> Markup:
    """The formula of a row's first cell; empty where the cell is the value as given."""
    formula = quantities.tree(row.get("formula") or "")
    given = {"shown": row["cells"][0]["shown"], "unit": first["unit"]}
    return Markup("") if formula is None or _says_no_more(formula, given) else quantities.formula(row["formula"])


def _line(cell: Data, column: Data) -> Markup:
    """A column's formula with the numbers of one row, and its result."""
    result = quantities.quantity(cell["shown"], column["unit"])
    operands = quantities.tree(cell["numbers"]) if cell["numbers"] else None
    if operands is None or _says_no_more(operands, {"shown": cell["shown"], "unit": column["unit"]}):
        return result
    return Markup("{} = {}").format(quantities.formula(cell["numbers"]), result)


_REDUCTIONS = {"min": "Least", "max": "Greatest", "sum": "Sum", "mean": "Mean"}


def _worked_row(step: Data, at: int) -> Data:
    """The row that is written out: the one that gave the result, else the first."""
    rows = step["table"]["rows"]
    pick = {"min": min, "max": max}.get(step["table"]["reduction"])
    return rows[0] if pick is None else pick(rows, key=lambda row: row["cells"][at]["value"])


def _uses(ground: Ground, step: Data) -> Markup:
    """The numbers of the steps that the operands come from; an input stands by its symbol."""
    inputs = {one["symbol"] for one in ground.items("inputs")}
    named = [link(ground.anchors[name], quantities.symbol(name)) for name in step["uses"]
             if name in inputs]
    ids = [one["id"] for one in ground.items("steps") if one["symbol"] in step["uses"]]
    return Markup(", ").join([*named, *(link(anchor("step", name), name) for name in ids)])


def _step_links(ids: Any) -> Markup:
    return Markup(", ").join(link(anchor("step", name), name) for name in ids)


def formulas_of(step: Data) -> list[Node]:
    """The formulas and conditions that a step is printed with."""
    table, found = step.get("table") or {}, step.get("root") or step.get("optimum") or {}
    texts = [step["formula"], *(one["formula"] for one in table.get("columns", ())),
             *(row.get("formula") for row in table.get("rows", ())),
             *(found.get(f"{end}_formula") for end in ("low", "high"))]
    if step.get("choice"):
        texts = [text for branch in step["choice"]["branches"] for text in (branch["value"], branch["condition"])]
    return [node for text in texts if text and (node := quantities.tree(text)) is not None]


def _fluids(ground: Ground, step: Data) -> Markup:
    """Links to the fluids whose properties the step reads."""
    nodes = formulas_of(step)
    roles = dict.fromkeys(part.fluid for node in nodes for part in walk(node) if isinstance(part, PropertyCall))
    return Markup(", ").join(link(anchor("fluid", role), f"{ground.fluids[role]}")
                             for role in roles if role in ground.fluids)


_KINDS = {"root": _root, "optimum": _optimum, "choice": _choice, "lookup": _lookup, "series": _series, "cases": cases,
          "total": total}
