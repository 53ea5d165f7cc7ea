"""Two records to one comparison: what was edited, what moved because of it, what carries a mark.

What is listed, both records say; :mod:`attribution` alone solves anew, for how
much each change moved a result.
"""
from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.revisions import definitions, entries, values
from calcpack.revisions.attribution import attribution
from calcpack.revisions.causes import Upstream, causes

if TYPE_CHECKING:
    from calcpack.record import Record

CONTENT = ("sheet", "inputs", "options", "fluids", "formulas", "choices", "assumptions", "references", "limits",
           "results", "steps", "details", "cautions", "checks")
"""The keys of a comparison whose lists are empty where the two sheets say the same."""


def compare(old: Record, new: Record, *, source: str | None = None, folder: Path | None = None) -> dict[str, Any]:
    """What changed from ``old`` to ``new``, as plain data for JSON.

    Parameters
    ----------
    old, new : Record
        Two revisions of a sheet; of two different sheets, ``sheet`` says so.
    source : str, optional
        Where the old record comes from, for the reader; else its PDF, if it was issued, or its spec.
    folder : Path, optional
        The folder of the specs, for files of rows that they name; else the current one.

    Returns
    -------
    dict
        ``against`` and ``of`` name the two; the lists of :data:`CONTENT` stand
        in the order of the new sheet, with ``old`` and ``new`` as printed (None
        where there is nothing) and ``kind``; ``results`` and ``limits`` have
        ``causes``. ``edited`` are the symbols that somebody changed,
        ``moved_only`` the steps that followed. ``changed_symbols`` and
        ``changed_ids`` name what carries a mark on the new sheet, ``marks``
        counts the marks of inputs, steps, results, assumptions and limits.
        ``engine`` lists versions that are not the same; ``notes`` the lines of
        the revision history that are new. ``attribution`` has each changed
        result's parts by cause, see :func:`attribution.attribution`;
        ``attribution_note`` says why, where it has none.
    """
    before, after = old.data, new.data
    found = _content(before, after)
    found["engine"] = entries.program(before, after)
    _add_causes(before, after, found)
    parts, note = attribution(before, after, found, folder if folder is not None else Path())
    _drop_still_causes(found, parts)
    edited = _edited(after, found)
    return {"against": {**_named(before), "source": source or _named_by(before)}, "of": _named(after),
            "letter": after["sheet"]["revision"], **found, "notes": _notes(before, after),
            "edited": edited, "moved_only": [one["symbol"] for one in found["steps"] if one["kind"] == "moved"],
            "attribution": parts, "attribution_note": note, **_marks(after, found)}


def _named_by(record: Mapping[str, Any]) -> str | None:
    """The file that a reader can ask for: of an issue its PDF, since its spec's name is that of the newer one too."""
    return (record.get("issue") or {}).get("file") or record.get("spec_file")


def differs(comparison: Mapping[str, Any]) -> bool:
    """Whether the two sheets say anything else, apart from revision, date, signatures and versions."""
    return any(comparison[key] for key in CONTENT)


def _content(before: Mapping[str, Any], after: Mapping[str, Any]) -> dict[str, Any]:
    formulas = definitions.formulas(before, after)
    return {
        "sheet": entries.title_block(before, after), "inputs": values.inputs(before, after),
        "options": entries.options(before, after), "fluids": entries.fluids(before, after), "formulas": formulas,
        "choices": values.choices(before, after), "assumptions": entries.assumptions(before, after),
        "references": entries.references(before, after), "limits": entries.limits(before, after),
        "results": values.results(before, after),
        "steps": values.steps(before, after, {one["symbol"] for one in formulas}),
        "details": definitions.details(before, after), "cautions": entries.cautions(before, after),
        "checks": entries.checks(before, after)}


def _add_causes(before: Mapping[str, Any], after: Mapping[str, Any], found: dict[str, Any]) -> None:
    old, new = Upstream(before, after), Upstream(after, before)
    for one in (*found["results"], *found["limits"]):
        one["causes"] = causes(one["symbol"], old, new, found)


def _drop_still_causes(found: Mapping[str, Any], parts: Mapping[str, Any]) -> None:
    """Take from each result's causes, and its limits', those whose part in its move is nothing."""
    for one in (*found["results"], *found["limits"]):
        if one["symbol"] in parts:
            told = parts[one["symbol"]]
            still = {name for part in told["parts"] if part["number"] == "0" for name in part["cause"].split(", ")}
            kept = [cause for cause in one["causes"] if cause["name"] not in still
                    and not (cause["kind"] == "program" and told["program"]["number"] == "0")]
            one["causes"] = kept or one["causes"]


def _named(record: Mapping[str, Any]) -> dict[str, Any]:
    sheet = record["sheet"]
    return {**{key: sheet.get(key) for key in ("number", "title", "revision", "status", "date")},
            "spec_sha256": record["spec_sha256"], "spec_file": record.get("spec_file")}


def _notes(before: Mapping[str, Any], after: Mapping[str, Any]) -> list[dict[str, Any]]:
    known = {one["revision"] for one in before.get("revisions") or ()}
    return [dict(one) for one in after.get("revisions") or () if one["revision"] not in known]


def _edited(after: Mapping[str, Any], found: Mapping[str, Any]) -> list[str]:
    touched = {one["symbol"] for key in ("inputs", "formulas", "details") for one in found[key]}
    return [one["symbol"] for one in (*after["inputs"], *after["steps"]) if one["symbol"] in touched]


def _marks(after: Mapping[str, Any], found: Mapping[str, Any]) -> dict[str, Any]:
    """What of the new sheet carries a mark; what is gone has no place to carry one."""
    touched = {one["symbol"] for key in ("inputs", "formulas", "steps", "details", "choices") for one in found[key]}
    printed = [one["symbol"] for one in (*after["inputs"], *after["steps"])]
    ids = {key: [one["id"] for one in found[key] if one["kind"] != "removed"] for key in ("assumptions", "limits")}
    symbols = [symbol for symbol in printed if symbol in touched]
    on_title_page = sum(symbol in touched for symbol in after["results"])
    return {"changed_symbols": symbols, "changed_ids": ids,
            "marks": len(symbols) + on_title_page + sum(map(len, ids.values()))}
