"""What backs a calculation: states, diagrams, checks, cautions, history and machine, ready for print."""
from __future__ import annotations

import hashlib
from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.record import Record
from calcpack.render import quantities
from calcpack.render.basis import confirmed_words, is_sketch
from calcpack.render.pages import Ground, anchor, link

Data = Mapping[str, Any]

STATE_COLUMNS = (("T", "T"), ("p", "p"), ("h", "h"), ("s", "s"), ("v", "v"))
STREAM_COLUMNS = (("m_dot", "m_dot"), ("T_in", "T_in"), ("T_out", "T_out"), ("p", "p"), ("h_in", "h_in"),
                  ("h_out", "h_out"), ("Q_dot", "Q_dot"))
DEFER = ("A caution states what the numbers of this sheet suggest; it does not replace the codes, standards and "
         "regulations in force at the place of use, nor the judgement of a licensed engineer. Where they differ, "
         "those hold.")


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
    rows = [{**heads(one), "cells": [quantities.shown(one.get(key)) for key, _ in used]} for one in entries]
    units = [next(one[key]["unit"] for one in entries if one.get(key)) for key, _ in used]
    return {"columns": [{"symbol": quantities.symbol(name), "unit": quantities.unit(text)}
                        for (_, name), text in zip(used, units, strict=True)],
            "rows": rows, "many_fluids": len({row.get("fluid") for row in rows}) > 1}


def diagrams(ground: Ground) -> dict[str, Any] | None:
    """The figures that are not the arrangement sketch."""
    shown = [figure for figure in ground.figures if not is_sketch(figure)]
    return {"figures": shown} if shown else None


SHARES = ("g_rev", "g_Carnot")
BOUND_SYMBOLS = ("COP_rev", "COP_Carnot", "eta_rev", "eta_Carnot", "W_dot_rev", "W_dot_rev_taken", "COP", "eta_th",
                 "eta_net", "eta_real", "eta_ex", "W_dot_net", "g_rev", "g_Carnot")
"""The symbols that a method names the bound and the figure set against it by, in the order of print."""


def bound(ground: Ground) -> dict[str, Any] | None:
    """The reversible bound and the share of it that is reached, where the record has both."""
    steps = {one["symbol"]: one for one in ground.items("steps")}
    if not any(name in steps for name in SHARES):
        return None
    rows = [{"symbol": quantities.symbol(name), "title": steps[name]["title"], "value": quantities.shown(steps[name]),
             "where": link(anchor("step", steps[name]["id"]), steps[name]["id"])}
            for name in BOUND_SYMBOLS if name in steps]
    return {"rows": rows}


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


def cautions(ground: Ground) -> dict[str, Any] | None:
    """Triggered cautions by hazard; then what was evaluated, then what was not."""
    rows = [_caution(ground, one) for one in ground.items("cautions")]
    if not rows:
        return None
    groups: dict[str, list[dict[str, Any]]] = {}
    for row in rows:
        if row["status"] == "triggered":
            groups.setdefault(row["hazard"], []).append(row)
    defers = list(dict.fromkeys(one["defer"] for one in ground.items("cautions") if one.get("defer")))
    return {"triggered": [{"title": title, "rows": found} for title, found in groups.items()],
            "count": sum(len(found) for found in groups.values()),
            "quiet": [row for row in rows if row["status"] == "not triggered"],
            "unknown": [row for row in rows if row["status"] == "not evaluated"], "defers": defers or [DEFER]}


def _caution(ground: Ground, one: Data) -> dict[str, Any]:
    return {"id": one["id"], "anchor": anchor("caution", one["id"]), "hazard": one["hazard"],
            "topic": one.get("topic") or "", "text": one["text"], "value": ground.prose(one.get("value")),
            "threshold": ground.prose(one.get("threshold")), "source": ground.sourced(one.get("source")),
            "confirmed": confirmed_words(one.get("confirmed")), "status": one["status"],
            "reason": ground.prose(one.get("reason"))}


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
    return {"rows": rows} if rows else None


def _order(name: str) -> tuple[str, str]:
    base = name.split("_")[0]
    return base.casefold(), name


def history(ground: Ground) -> dict[str, Any] | None:
    """The revision history."""
    sheet = ground.record["sheet"]
    return {"rows": [{**one, "by": one.get("by") or "", "current": one["revision"] == sheet["revision"]}
                     for one in ground.items("revisions")]}


def machine(ground: Ground) -> dict[str, Any] | None:
    """What computed the sheet: versions, hashes, command."""
    engine = ground.record["engine"]
    libraries = [f"{name} {version}" for name, version in sorted(engine["libraries"].items())]
    return {"engine": engine, "libraries": libraries, "spec_file": ground.record["spec_file"],
            "spec_sha256": ground.record["spec_sha256"], "record_sha256": record_hash(ground.record),
            "tolerance": quantities.prose(engine.get("root_tolerance")),
            "iterated": any(one["kind"] == "root" for one in ground.items("steps"))}


def record_hash(record: Data) -> str:
    """The SHA-256 of the record's file, in hexadecimal."""
    return hashlib.sha256(Record(record).to_json().encode()).hexdigest()
