"""What a checker sees of one entry of a record, as a hash that moves when it moves.

Only identities and printed texts go in, never a raw float: a value that differs
in its last bits on another machine, and is printed the same, is the same sight.
"""
from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from typing import Any

from calcpack.figures.naming import ARRANGEMENT, diagram_ids
from calcpack.record.identity import identity

Data = Mapping[str, Any]
Known = Mapping[str, str]
"""The identity of each symbol of the sheet: what defines its value, all that it uses included."""

_WORD = re.compile(r"[A-Za-z]\w*")
_STATE = ("T", "p", "h", "s", "v")


def known_identities(record: Data) -> dict[str, str]:
    """The identities that the record gives its inputs and steps, by symbol."""
    return {one["symbol"]: one["identity"] for one in (*record["inputs"], *record["steps"])}


def documents(record: Data) -> dict[str, str]:
    """What the ids that sources and references name stand for: documents by their text, assumptions by all they say."""
    found = {one["id"]: one["text"] for one in record.get("references") or ()}
    return found | {one["id"]: assumption_seen(one) for one in record.get("assumptions") or ()}


def _cited(text: str | None, cited: Known) -> list[str]:
    """The documents that a source or a reference names: whoever agrees with 'R1' agrees with what R1 is."""
    return [says for name, says in cited.items() if re.search(rf"(?<![\w-]){re.escape(name)}(?![\w-])", text or "")]


def input_seen(entry: Data, cited: Known) -> str:
    """An input's row: value and unit by identity, tolerance, note and title as printed, source with its document."""
    tol = entry.get("tol")
    return identity(("input", entry["identity"], f"{tol['shown']} {tol['unit']}" if tol else None,
                     entry.get("source"), _cited(entry.get("source"), cited), entry.get("note"), entry.get("title")))


def step_seen(entry: Data, cited: Known) -> str:
    """A step: all that its value hangs on by identity, title and note as printed, reference with its document."""
    return identity(("step", entry["identity"], entry.get("title"), entry.get("reference"),
                     _cited(entry.get("reference"), cited), entry.get("note")))


def limit_seen(entry: Data, known: Known, cited: Known) -> str:
    """A limit: what it bounds by identity, its bound, its reason, source and waiver, and whether it holds."""
    waiver = entry.get("waiver")
    return identity(("limit", entry["id"], known.get(entry["symbol"], entry["symbol"]), entry["sense"], entry["bound"],
                     entry.get("text"), entry.get("why"), entry.get("source"),
                     _cited(entry.get("source"), cited), entry["status"],
                     sorted(waiver.items()) if waiver else None))


def assumption_seen(entry: Data) -> str:
    """An assumption: everything that it says."""
    return identity(("assumption", *(entry.get(key) for key in (
        "id", "text", "basis", "effect", "status", "owner", "due"))))


def figures_seen(record: Data, known: Known) -> dict[str, tuple[str, str]]:
    """Of each figure, by its id, the title and the identity of the inputs and steps that it draws."""
    found = {}
    if (record.get("sketch") or {}).get("nodes"):
        found[ARRANGEMENT] = "Arrangement", _arrangement(record, known)
    drawn = [(one["title"], _diagram(record, one, known)) for one in record["diagrams"]]
    drawn += [(one["title"], _profile(one, known)) for one in record["exchangers"]]
    if record.get("ladder"):
        drawn.append((record["ladder"]["title"], _ladder(record["ladder"], known)))
    return found | dict(zip(diagram_ids(record), drawn, strict=True))


def _of(entry: Data | None, keys: Iterable[str], known: Known) -> list[str | None]:
    """The identities of the quantities under ``keys``; None where there is none."""
    quantities = [(entry or {}).get(key) for key in keys]
    return [known.get(one["symbol"], one["symbol"]) if one else None for one in quantities]


def _arrangement(record: Data, known: Known) -> str:
    sketch = record["sketch"]
    nodes = [[one["name"], one["shape"], one["column"], one["row"]] for one in sketch["nodes"]]
    links = [[one["from"], one["to"], known.get(one["label"], one["label"]), one["style"]] for one in sketch["links"]]
    ends = [[one["name"], *_of(one, ("T_in", "T_out"), known)] for one in record["streams"]]
    return identity((ARRANGEMENT, nodes, links, ends))


def _diagram(record: Data, diagram: Data, known: Known) -> str:
    states = {one["number"]: one for one in record["states"]}
    points = [[one["label"], *_of(states.get(one["label"]), _STATE, known),
               *([] if one["label"] in states else [f"{one['x']:.4g}", f"{one['y']:.4g}"])]
              for one in diagram["points"]]
    paths = [[one["from"], one["to"], one["style"]] for one in diagram["paths"]]
    axes = [[diagram[axis]["quantity"], diagram[axis]["unit"]] for axis in ("x", "y")]
    return identity(("diagram", diagram["kind"], diagram["title"], axes, points, paths))


def _profile(exchanger: Data, known: Known) -> str:
    return identity(("profile", exchanger["title"], exchanger.get("hot_role"), exchanger.get("cold_role"),
                     *_of(exchanger, ("Q_dot",), known), *_of(exchanger["pinch"], ("dT",), known)))


def _ladder(ladder: Data, known: Known) -> str:
    ends = [[one["label"], one["shown"], *_named(one.get("formula") or one.get("symbol"), known)]
            for one in (ladder["start"], ladder["end"])]
    rungs = [[one["kind"], one["label"], one["shown"], one["share_shown"], *_named(one.get("formula"), known)]
             for one in ladder["rungs"]]
    return identity(("ladder", ladder["title"], ladder["unit"], ends, rungs))


def _named(formula: str | None, known: Known) -> list[str]:
    return [known[word] for word in _WORD.findall(formula or "") if word in known]
