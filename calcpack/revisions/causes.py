"""A moved value to what changed upstream of it: inputs, options, fluids, formulas, the program.

A change is named where a chain of moved values leads from it to the result;
how much each of several has moved it, :mod:`attribution` says.
"""
from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from math import isclose
from typing import Any

from calcpack.formula.tree import FUNCTIONS
from calcpack.revisions.definitions import definition
from calcpack.revisions.pairs import Entry, by

Data = Mapping[str, Any]

SAME_VALUE = 1e-9
"""Relative difference up to which a value has not moved; a root is found to 1e-11 of its unknown."""

COMPUTING = ("calcpack", "CoolProp", "numpy", "scipy", "root_tolerance")
"""What can move a number when its version does; the rest reads and prints."""

_PROPERTY = re.compile(r"\A(\w+)\((\w+)[,)]")


_NAME = re.compile(r"[A-Za-z]\w*")


class Upstream:
    """Who hangs on whom in a record, as far as values differ from those of the ``other`` record."""

    def __init__(self, record: Data, other: Data) -> None:
        self.steps = by("symbol", record["steps"])
        self._symbols = {step["id"]: step["symbol"] for step in record["steps"]}
        there = by("symbol", other["steps"])
        self._still = {symbol for symbol, step in self.steps.items()
                       if symbol in there and _is_still(step, there[symbol])}

    def of(self, symbol: str) -> set[str]:
        """A symbol and what its move can come from; what has not moved hands nothing on."""
        reached: set[str] = set()
        waiting = [(symbol, True)]
        while waiting:
            name, opened = waiting.pop()
            if (name in reached or name in self._still) and not opened:
                continue
            reached.add(name)
            step = self.steps.get(name)
            if step is not None:
                waiting += self._behind(step, reached)
        return reached

    def roles(self, symbols: set[str]) -> set[str]:
        """The roles of the fluids whose properties these symbols' steps ask for."""
        return {role for name in symbols if name in self.steps for role in _roles(self.steps[name])}

    def _behind(self, step: Entry, reached: set[str]) -> Iterator[tuple[str, bool]]:
        """What a step uses; a root moves through the steps that close it, though they close on the same value.

        The ends of a bracket do not move the root between them.
        """
        root = step.get("root")
        if root is None:
            yield from ((name, False) for name in step["uses"])
            return
        in_equation = set(_NAME.findall(root["equation"]))
        yield from ((name, False) for name in step["uses"] if name in in_equation)
        closing = (self._symbols.get(one) for one in root.get("closed_by") or ())
        yield from ((name, True) for name in closing if name is not None and name not in reached)


def _is_still(step: Entry, other: Entry) -> bool:
    return isclose(step["value"], other["value"], rel_tol=SAME_VALUE) and \
        dict(definition(step, with_unit=False)) == dict(definition(other, with_unit=False))


def _roles(step: Entry) -> Iterator[str]:
    """A property call stands alone in its formula: ``h(wf, p=p_c, s=s_1)``."""
    for _, text in definition(step):
        match = _PROPERTY.match(text)
        if match and match[1] not in FUNCTIONS:
            yield match[2]


def causes(symbol: str, old: Upstream, new: Upstream, comparison: Data) -> list[dict[str, Any]]:
    """What changed upstream of ``symbol`` in either sheet, as ``{kind, name, text}``.

    The options of a method shape its steps, so that no record can tell which
    of several moved a value: all are named where a step of the method differs.
    """
    reached = old.of(symbol) | new.of(symbol)
    laid = [one for one in comparison["formulas"] if one["symbol"] in reached]
    by_method = [one for one in laid if not one["own"]]
    found = [_cause("input", one["symbol"], one) for one in comparison["inputs"] if one["symbol"] in reached]
    if by_method:
        found += [_cause("option", one["name"], one) for one in comparison["options"]]
    roles = old.roles(reached) | new.roles(reached)
    found += [_cause("fluid", one["role"], one) for one in comparison["fluids"]
              if one["role"] in roles and one["identity_changed"]]
    written = [one for one in laid if one["own"]] if comparison["options"] else laid
    found += [_cause("formula", one["symbol"], one) for one in written if one["what"] != "unit of print"]
    found += [_cause("program", one["name"], one) for one in comparison["engine"] if one["name"] in COMPUTING]
    return found


def _cause(kind: str, name: str, entry: Entry) -> dict[str, Any]:
    what = f" ({entry['what']})" if kind == "formula" and entry["what"] not in ("formula", "step") else ""
    old, new = (entry[key] if entry[key] is not None else "none" for key in ("old", "new"))
    taken = f", taken from {entry['taken_from']}" if entry.get("taken_from") else ""
    return {"kind": kind, "name": name, "text": f"{name}{what}: {old} → {new}{taken}"}
