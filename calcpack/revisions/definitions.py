"""Two records' steps to what was edited in them: formulas, brackets, tables, wording."""
from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from calcpack.revisions.pairs import Entry, by, differing, kind_of, paired, text_of

WORDING_OF_INPUTS = (("title", "title"), ("tol_text", "tolerance"), ("source", "source"), ("note", "note"))
WORDING_OF_STEPS = (("title", "title"), ("reference", "reference"), ("note", "note"), ("labels", "labels"))


def formulas(old: Mapping[str, Any], new: Mapping[str, Any]) -> list[dict[str, Any]]:
    """What defines the steps and is not the same: an entry a formula, bracket end, table, column.

    A step that is new or gone has one entry, of kind 'added' or 'removed'.
    """
    one_system = old["sheet"]["units"] == new["sheet"]["units"]
    found = []
    for symbol, before, after in paired(by("symbol", old["steps"]), by("symbol", new["steps"])):
        here = after or before
        common = {"symbol": symbol, "step": here["id"], "title": here["title"], "own": here.get("own", False),
                  "kind": kind_of(before, after)}
        if before is None or after is None:
            found.append({**common, "what": "step", "old": before and before["formula"],
                          "new": after and after["formula"]})
            continue
        defined = (dict(definition(one, with_unit=one_system)) for one in (before, after))
        found += [{**common, "what": what, "old": was, "new": now} for what, was, now in _unequal(*defined)]
    return found


def definition(step: Entry, *, with_unit: bool = True) -> Iterator[tuple[str, str]]:
    """What defines a step, as ``(name, text)``; none of it is a number that was computed."""
    yield "kind", step["kind"]
    yield "formula", step["formula"]
    if with_unit:
        yield "unit of print", step["unit"] or "1"
    if root := step.get("root"):
        yield "lower end of the bracket", text_of(root.get("low_formula", root.get("low")))
        yield "upper end of the bracket", text_of(root.get("high_formula", root.get("high")))
    if lookup := step.get("lookup"):
        yield "source of the table", text_of(lookup["source"])
        yield "points of the table", "; ".join(f"{x} → {y}" for x, y in lookup["points"])
    if table := step.get("table"):
        yield "rows", ", ".join(row["label"] for row in table["rows"])
        for column in table["columns"]:
            yield f"column {column['symbol']}", column["formula"] or "given by the rows"


def _unequal(old: Mapping[str, str], new: Mapping[str, str]) -> Iterator[tuple[str, str | None, str | None]]:
    for name in dict.fromkeys((*new, *old)):
        if old.get(name) != new.get(name):
            yield name, old.get(name), new.get(name)


def details(old: Mapping[str, Any], new: Mapping[str, Any]) -> list[dict[str, Any]]:
    """Words beside inputs and steps that changed: titles, tolerances, sources, references, notes."""
    found = []
    for key, fields in (("inputs", WORDING_OF_INPUTS), ("steps", WORDING_OF_STEPS)):
        for symbol, before, after in paired(by("symbol", old[key]), by("symbol", new[key])):
            if before is None or after is None:
                continue
            found += [{"symbol": symbol, "title": after["title"], "what": what, "old": was, "new": now,
                       "kind": "changed"} for what, was, now in differing(_worded(before), _worded(after), fields)]
    return found


def _worded(entry: Entry) -> dict[str, Any]:
    """The entry with its tolerance and its branches' labels as plain texts."""
    tolerance = entry.get("tol")
    branches = (entry.get("choice") or {}).get("branches", ())
    return {**entry, "tol_text": f"{tolerance['shown']} {tolerance['unit']}".strip() if tolerance else None,
            "labels": "; ".join(branch.get("label") or "" for branch in branches)}
