"""Two records' values to what moved: inputs, results, steps, and the branch that holds."""
from __future__ import annotations

from collections.abc import Mapping
from math import isclose
from typing import Any

from calcpack.revisions.pairs import Entry, by, kind_of, paired
from calcpack.revisions.printed import SAME_IN_SI, change, change_percent, quantity_text, same_print


def inputs(old: Mapping[str, Any], new: Mapping[str, Any]) -> list[dict[str, Any]]:
    """The inputs whose value changed, with both as printed and as written.

    ``taken_from`` names the value of another sheet, where the new one is taken from it.
    """
    found = []
    for symbol, before, after in paired(by("symbol", old["inputs"]), by("symbol", new["inputs"])):
        if before and after and _same_input(before, after):
            continue
        origin = (after or {}).get("from")
        found.append({"symbol": symbol, "title": (after or before)["title"], **_moved(before, after, exact=True),
                      "old_written": before and before.get("written"),
                      "new_written": after and after.get("written"),
                      **({"taken_from": f"{origin['number']}.{origin['symbol']}"} if origin else {})})
    return found


def _same_input(before: Entry, after: Entry) -> bool:
    """Whether an input is the same; one that two sheets have handed on may be printed with more digits than before."""
    if before.get("from") and after.get("from"):
        return isclose(before["value"], after["value"], rel_tol=SAME_IN_SI)
    return same_print(before, after, exact=True)


def results(old: Mapping[str, Any], new: Mapping[str, Any]) -> list[dict[str, Any]]:
    """The results of the title page that moved, came or went."""
    found = []
    for symbol, before, after in paired(_in_order(old), _in_order(new)):
        exact = is_exact(old, symbol) and is_exact(new, symbol)
        if before and after and same_print(before, after, exact=exact):
            continue
        found.append({"symbol": symbol, "title": (after or before)["title"], **_moved(before, after, exact=exact)})
    return found


def steps(old: Mapping[str, Any], new: Mapping[str, Any], edited: set[str]) -> list[dict[str, Any]]:
    """The steps of both sheets whose printed value moved; 'edited' where the step itself was, else 'moved'.

    ``inside_only`` marks a series whose rows moved and whose result did not.
    """
    found = []
    for symbol, before, after in paired(by("symbol", old["steps"]), by("symbol", new["steps"])):
        if before is None or after is None or _same_step(before, after):
            continue
        exact = _is_constant(before) and _is_constant(after)
        entry = {"symbol": symbol, "step": after["id"], "title": after["title"],
                 **_moved(before, after, exact=exact), "kind": "edited" if symbol in edited else "moved",
                 "inside_only": same_print(before, after, exact=exact)}
        found.append(entry | {"change": None, "change_percent": None} if entry["inside_only"] else entry)
    return found


def choices(old: Mapping[str, Any], new: Mapping[str, Any]) -> list[dict[str, Any]]:
    """The choices in which another branch holds, each branch by its label or its condition."""
    found = []
    for symbol, before, after in paired(by("symbol", old["steps"]), by("symbol", new["steps"])):
        if not (before and after and before.get("choice") and after.get("choice")):
            continue
        was, now = _held(before), _held(after)
        if was["at"] != now["at"]:
            found.append({"symbol": symbol, "step": after["id"], "title": after["title"], "old": was["text"],
                          "new": now["text"], "kind": "changed"})
    return found


def is_exact(record: Mapping[str, Any], symbol: str) -> bool:
    """Whether every digit of a symbol's printed value counts: inputs and written constants."""
    step = by("symbol", record["steps"]).get(symbol)
    return step is None or _is_constant(step)


def _is_constant(step: Entry) -> bool:
    return step["kind"] == "formula" and not step["uses"]


def _in_order(record: Mapping[str, Any]) -> dict[str, Entry]:
    # Canonical JSON sorts the keys; the order of the title page stands in the entries.
    return dict(sorted(record["results"].items(), key=lambda item: item[1].get("order", 0)))


def _moved(before: Entry | None, after: Entry | None, *, exact: bool) -> dict[str, Any]:
    both = before is not None and after is not None
    return {"old": quantity_text(before), "new": quantity_text(after),
            "change": change(before, after, exact=exact) if both else None,
            "change_percent": change_percent(before, after) if both else None, "kind": kind_of(before, after)}


def _same_step(before: Entry, after: Entry) -> bool:
    exact = _is_constant(before) and _is_constant(after)
    return same_print(before, after, exact=exact) and _same_table(before.get("table"), after.get("table"))


def _same_table(old: Entry | None, new: Entry | None) -> bool:
    """Whether two series print the same rows; tables of another shape are a change of definition."""
    if not old or not new or [row["label"] for row in old["rows"]] != [row["label"] for row in new["rows"]] \
            or [one["symbol"] for one in old["columns"]] != [one["symbol"] for one in new["columns"]]:
        return True
    units = [(one["unit"], two["unit"]) for one, two in zip(old["columns"], new["columns"], strict=True)]
    return all(same_print({**before, "unit": was}, {**after, "unit": now})
               for row_before, row_after in zip(old["rows"], new["rows"], strict=True)
               for before, after, (was, now) in zip(row_before["cells"], row_after["cells"], units, strict=True))


def _held(step: Entry) -> dict[str, Any]:
    for at, branch in enumerate(step["choice"]["branches"]):
        if branch["held"]:
            return {"at": at, "text": branch.get("label") or branch["condition"] or "otherwise"}
    return {"at": None, "text": "no branch"}
