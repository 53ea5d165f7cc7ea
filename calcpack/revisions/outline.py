"""A comparison to an outline in words, which text, Markdown and HTML each set in their own way."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.revisions.compare import differs
from calcpack.revisions.share_table import ShareTable, share_table

Data = Mapping[str, Any]

HEADINGS = (("results", "Results"), ("limits", "Limits"), ("inputs", "Inputs"), ("options", "Method and options"),
            ("fluids", "Fluids"), ("formulas", "Formulas and steps"), ("choices", "Branches that hold"),
            ("assumptions", "Assumptions"), ("references", "References"), ("cautions", "Cautions"),
            ("checks", "Checks"), ("sheet", "Title block"), ("details", "Wording and sources"),
            ("steps", "Values that moved"))
"""The parts of a comparison in the order of print, each with its heading."""

NOTHING = "The two say the same, apart from revision, date, signatures and versions."
NO_CAUSE = "nothing upstream reads otherwise in print"
VERSIONS = "The program moved: "


@dataclass(frozen=True, slots=True)
class Row:
    """One change; ``old`` or ``new`` is None where there is nothing, ``because`` what it follows from."""

    name: str
    title: str
    old: str | None
    new: str | None
    change: str
    kind: str
    because: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Part:
    """A heading with its changes; of the results, how much each cause moved them."""

    heading: str
    rows: tuple[Row, ...]
    shares: ShareTable | None = None


@dataclass(frozen=True, slots=True)
class Outline:
    """A comparison in words: title, what is compared, notes, a line that counts, the parts."""

    title: str
    compared: str
    notes: tuple[str, ...]
    summary: str
    parts: tuple[Part, ...]


def outline(comparison: Data) -> Outline:
    """The outline of a comparison; parts without a change are left out."""
    of, against = comparison["of"], comparison["against"]
    shares = {"results": share_table(comparison)}
    parts = tuple(Part(heading, tuple(_row(key, one) for one in rows), shares.get(key))
                  for key, heading in HEADINGS if (rows := comparison[key]))
    return Outline(f"{of['number']} {of['title']}",
                   f"Revision {of['revision']} ({of['status']}) against revision {against['revision']} "
                   f"({against['status']}), {against['source']}",
                   _notes(comparison), _summary(comparison), parts)


def _notes(comparison: Data) -> tuple[str, ...]:
    notes = [f"{one['revision']}, {one['date']}: {one['note']}" for one in comparison["notes"]]
    if comparison["of"]["number"] != comparison["against"]["number"]:
        notes.insert(0, f"These are two sheets: {comparison['against']['number']} and {comparison['of']['number']}.")
    if comparison["engine"]:
        versions = ", ".join(f"{one['name']} {one['old'] or 'none'} → {one['new'] or 'none'}"
                             for one in comparison["engine"])
        notes.append(VERSIONS + versions + ".")
    return tuple(notes)


def _summary(comparison: Data) -> str:
    if not differs(comparison):
        return NOTHING
    changed = [_counted(len(comparison[key]), noun) for key, noun in
               (("inputs", "input"), ("options", "option"), ("fluids", "fluid"), ("formulas", "formula"),
                ("assumptions", "assumption")) if comparison[key]]
    moved = _counted(len(comparison["moved_only"]), "step")
    verdicts = _counted(sum(one["verdict_changed"] and one["kind"] != "removed" for one in comparison["limits"]),
                        "limit verdict")
    edits = ", ".join(changed) or "No input, option, fluid, formula or assumption"
    return f"{edits} changed; {moved} moved with them; {verdicts} changed."


def _counted(count: int, noun: str) -> str:
    return f"{count or 'no'} {noun}{'' if count == 1 else 's'}"


def _row(key: str, one: Data) -> Row:
    name = one.get("symbol") if key != "limits" else one["id"]
    title = one.get("title") or one.get("text") or ""
    if key in ("formulas", "details") and one["what"] not in ("formula", "step"):
        title = f"{title}: {one['what']}"
    share = one.get("change_percent")
    change = f"{one.get('change') or ''} ({share})" if share else one.get("change") or ""
    if one.get("inside_only"):
        change = "rows of its table moved"
    return Row(name or one.get("id") or one.get("role") or one.get("name") or "", title, one["old"], one["new"],
               change, one["kind"], _because(key, one))


def _because(key: str, one: Data) -> tuple[str, ...]:
    if key not in ("results", "limits") or one["kind"] not in ("changed", "moved"):
        return ()
    if key == "limits" and one["kind"] == "changed" and not one["causes"]:
        return ()                                     # it was edited itself, and nothing else moved it
    return tuple(cause["text"] for cause in one["causes"]) or (NO_CAUSE,)
