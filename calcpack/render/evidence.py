"""What backs a calculation: states, diagrams, checks, constants and history, ready for print."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any

from markupsafe import Markup

from calcpack.formula.tree import Quantity, walk
from calcpack.render import quantities
from calcpack.render.basis import is_sketch
from calcpack.render.changes import is_waterfall
from calcpack.render.losses import is_ladder
from calcpack.render.pages import Ground, anchor, link
from calcpack.render.working import formulas_of

Data = Mapping[str, Any]

STATE_COLUMNS = (("T", "T"), ("p", "p"), ("h", "h"), ("s", "s"), ("v", "v"))
STREAM_COLUMNS = (("m_dot", "m_dot"), ("T_in", "T_in"), ("T_out", "T_out"), ("p", "p"), ("h_in", "h_in"),
                  ("h_out", "h_out"), ("Q_dot", "Q_dot"))


def states(ground: Ground) -> dict[str, Any] | None:
    """The state table and the stream table."""
    points, streams = ground.items("states"), ground.items("streams")
    if not points and not streams:
        return None
    fluids = ground.record["case"].get("fluids") or {}
    return {"states": _table(points, STATE_COLUMNS, lambda one: {
                "number": one["number"], "label": one["label"],
                "fluid": fluids.get(one["fluid_role"], {}).get("designation", one["fluid_role"]),
                "x": (one.get("x") or {}).get("shown", "")}),
            "streams": _table(streams, STREAM_COLUMNS, lambda one: {
                "name": one["name"], "designation": one["designation"]})}


def _table(entries: Sequence[Data], columns: Sequence[tuple[str, str]], heads: Any) -> dict[str, Any] | None:
    """A table of quantities, with the columns that some row fills and their common units."""
    used = [(key, name) for key, name in columns if any(one.get(key) for one in entries)]
    if not entries:
        return None
    units = [next(one[key]["unit"] for one in entries if one.get(key)) for key, _ in used]
    rows = [{**heads(one), "cells": [_cell(one.get(key), unit) for (key, _), unit in zip(used, units, strict=True)]}
            for one in entries]
    return {"columns": [{"symbol": quantities.symbol(name), "unit": quantities.unit(text)}
                        for (_, name), text in zip(used, units, strict=True)],
            "rows": rows, "many_fluids": len({row.get("fluid") for row in rows}) > 1}


def _cell(one: Data | None, column_unit: str) -> quantities.Shown | None:
    """A cell of a table; one in another unit than its column says so itself."""
    cell = quantities.shown(one)
    if cell is None or one is None or one["unit"] == column_unit:
        return cell
    return replace(cell, number=quantities.quantity(str(one["shown"]), one["unit"]))


def diagrams(ground: Ground) -> dict[str, Any] | None:
    """The figures but for the arrangement sketch, the ladder and what moved the results, which have other parts."""
    shown = [one for one in ground.figures if not (is_sketch(one) or is_ladder(one) or is_waterfall(one))]
    return {"figures": shown} if shown else None


LONG_DETAIL = 40
"""Letters from which a check's detail stands on a line of its own."""

VERDICTS = {"ok": "holds"}


def verification(ground: Ground) -> dict[str, Any] | None:
    """The checks, by group."""
    groups: dict[str, list[dict[str, Any]]] = {}
    for one in ground.items("checks"):
        groups.setdefault(one["group"], []).append({
            "id": one["id"], "text": ground.prose(one["text"]), "value": ground.prose(one.get("value")),
            "allowed": ground.prose(one.get("allowed")), "detail": ground.prose(one.get("detail")),
            "long": len(one.get("detail") or "") > LONG_DETAIL,
            "status": VERDICTS.get(one["status"], one["status"]), "fails": one["status"] == "fails"})
    rows = [row for group in groups.values() for row in group]
    return {"groups": [{"title": title, "rows": rows} for title, rows in groups.items()],
            "count": len(rows), "fails": sum(row["fails"] for row in rows)}


def nomenclature(ground: Ground) -> dict[str, Any] | None:
    """Every symbol of inputs, steps and tables, in alphabetical order."""
    known: dict[str, tuple[str, str, str, str]] = {}
    for one in ground.items("inputs"):
        known[one["symbol"]] = (one["title"], one["unit"], ground.anchors[one["symbol"]], "input")
    for one in ground.items("steps"):
        place = (anchor("step", one["id"]), one["id"])
        for column in (one.get("table") or {}).get("columns", ()):
            known.setdefault(column["symbol"], (column["title"], column["unit"], *place))
        known[one["symbol"]] = (one["title"], one["unit"], *place)
    rows = [{"symbol": quantities.symbol(name), "title": quantities.titled(name, title), "unit": quantities.unit(unit),
             "where": link(target, word)}
            for name, (title, unit, target, word) in sorted(known.items(), key=lambda one: _order(one[0]))]
    return {"rows": rows, "constants": _constants(ground)} if rows else None


def _constants(ground: Ground) -> list[dict[str, Any]]:
    """The quantities that stand in formulas as numbers, each with the steps it stands in."""
    found: dict[tuple[str, str], list[str]] = {}
    for step in ground.items("steps"):
        for node in formulas_of(step):
            for part in walk(node):
                if isinstance(part, Quantity):
                    found.setdefault((part.text, part.unit), []).append(step["id"])
    return [{"value": quantities.quantity(text, unit),
             "where": Markup(", ").join(link(anchor("step", name), name) for name in dict.fromkeys(ids))}
            for (text, unit), ids in found.items()]


def _order(name: str) -> tuple[str, str]:
    base = name.split("_")[0]
    return base.casefold(), name
