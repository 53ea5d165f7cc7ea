"""Two records' listed entries to what changed: title block, options, fluids, assumptions, limits, findings."""
from __future__ import annotations

from collections.abc import Mapping
from math import isclose
from typing import Any

from calcpack.revisions.pairs import Entry, by, differing, kind_of, paired, side, text_of
from calcpack.revisions.printed import SAME_IN_SI, same_print

Data = Mapping[str, Any]

TITLE_BLOCK = (("number", "Number"), ("title", "Title"), ("project", "Project"), ("status", "Status"),
               ("purpose", "Purpose"), ("scope", "Scope"), ("p_atm_text", "Atmospheric pressure"),
               ("units", "Units of print"), ("page", "Paper"), ("grade", "Grade"), ("codes", "Codes"))
ASSUMPTION = (("text", ""), ("basis", "basis"), ("effect", "effect"), ("status", "status"), ("owner", "owner"),
              ("due", "due"))
FLUID = (("designation", ""), ("model", "model"), ("equation", "equation"), ("identity", "identity"),
         ("reference_state", "reference state"), ("range", "range"))
LIMIT = (("symbol", ""), ("sense", ""), ("bound", "bound"), ("why", "why"), ("source", "source"), ("waiver", "waiver"))
"""What somebody wrote of a limit; the rest, :data:`OUTCOME`, follows."""
OUTCOME = (("value", "value"), ("margin", "margin"), ("status", "verdict"))


def title_block(old: Data, new: Data) -> list[dict[str, Any]]:
    """What the title block says otherwise; number and date of the revision are the comparison's own."""
    before, after = _sheet(old), _sheet(new)
    return [{"name": name, "title": "Title block", "old": was, "new": now, "kind": "changed"}
            for name, was, now in differing(before, after, TITLE_BLOCK)]


def _sheet(record: Data) -> dict[str, Any]:
    pressure = record["sheet"]["p_atm"]
    return {**record["sheet"], "p_atm_text": pressure.get("written") or f"{pressure['shown']} {pressure['unit']}"}


def options(old: Data, new: Data) -> list[dict[str, Any]]:
    """The method, if it is another, and the options with another value; a default counts as its value."""
    before, after = old["case"], new["case"]
    found = []
    if before["method"] != after["method"]:
        found.append({"name": "method", "title": "Method", "old": before["method"], "new": after["method"],
                      "old_meaning": before["method_title"], "new_meaning": after["method_title"],
                      "kind": "changed"})
    for name, was, now in paired(before["options"], after["options"]):
        if was and now and was["value"] == now["value"]:
            continue
        found.append({"name": name, "title": (now or was).get("title") or name, "old": was and was["value"],
                      "new": now and now["value"], "old_meaning": was and was.get("meaning"),
                      "new_meaning": now and now.get("meaning"), "kind": kind_of(was, now)})
    return found


def fluids(old: Data, new: Data) -> list[dict[str, Any]]:
    """The roles with another fluid, another equation of state or other facts in the register."""
    found = []
    for role, was, now in paired(old["case"]["fluids"], new["case"]["fluids"]):
        parts = _fields(was, now, FLUID)
        if was and now and any(not name for name, *_ in parts):
            # Another fluid brings its own equation, range and facts: the model says enough.
            parts = [part for part in parts if part[0] in ("", "model")]
        elif was and now:
            parts += _facts(was, now)
        if parts:
            found.append({"role": role, "title": (now or was).get("title") or role, **_sides(was, now, parts),
                          "identity_changed": (was or {}).get("identity") != (now or {}).get("identity")})
    return found


def _facts(old: Entry, new: Entry) -> list[tuple[str, str, str]]:
    texts = [{fact["quantity"]: f"{fact['value']} {fact['unit']}".strip() for fact in one.get("facts") or ()}
             for one in (old, new)]
    return [(name, texts[0].get(name, ""), texts[1].get(name, "")) for name in dict.fromkeys((*texts[1], *texts[0]))
            if texts[0].get(name) != texts[1].get(name)]


def assumptions(old: Data, new: Data) -> list[dict[str, Any]]:
    """Assumptions whose text or standing changed."""
    return [{"id": name, "title": (now or was)["text"], **_sides(was, now, parts)}
            for name, was, now in paired(by("id", old.get("assumptions")), by("id", new.get("assumptions")))
            if (parts := _fields(was, now, ASSUMPTION))]


def references(old: Data, new: Data) -> list[dict[str, Any]]:
    """References that came, went or read otherwise."""
    return [{"id": name, "title": "Reference", **_sides(was, now, parts)}
            for name, was, now in paired(by("id", old.get("references")), by("id", new.get("references")))
            if (parts := _fields(was, now, (("text", ""),)))]


def limits(old: Data, new: Data) -> list[dict[str, Any]]:
    """Limits that came, went, were edited ('changed'), or whose value alone moved ('moved')."""
    found = []
    for name, was, now in paired(_limits(old), _limits(new)):
        written, outcome = _fields(was, now, LIMIT), _fields(was, now, OUTCOME)
        if was and now and same_bound(was, now):
            written = [part for part in written if part[0] != "bound"]
            if not written and _same_value(old, new, now["symbol"]):
                outcome = [part for part in outcome if part[0] == "verdict"]
        if not (written or outcome):
            continue
        entry = {"id": name, "text": (now or was)["text"], "symbol": (now or was)["symbol"],
                 **_sides(was, now, written + outcome),
                 "verdict_changed": (was or {}).get("status") != (now or {}).get("status"),
                 "bound_changed": not (was and now and same_bound(was, now))}
        found.append(entry if written or kind_of(was, now) != "changed" else {**entry, "kind": "moved"})
    return found


def _limits(record: Data) -> dict[str, Entry]:
    """The limits by id, each waiver as one text."""
    return {name: {**one, "waiver": "{name}, {date}: {reason}".format(**one["waiver"]) if one.get("waiver") else None}
            for name, one in by("id", record.get("limits")).items()}


def same_bound(old: Entry, new: Entry) -> bool:
    """Whether two limits have one bound; its text follows the digits of the value that it bounds."""
    if "bound_value" not in old or "bound_value" not in new:
        return text_of(old["bound"]) == text_of(new["bound"])
    return isclose(old["bound_value"], new["bound_value"], rel_tol=SAME_IN_SI)


def _same_value(old: Data, new: Data, symbol: str) -> bool:
    was, now = (by("symbol", (*one["inputs"], *one["steps"])).get(symbol) for one in (old, new))
    return was is not None and now is not None and same_print(was, now, exact="written" in now)


def cautions(old: Data, new: Data) -> list[dict[str, Any]]:
    """Cautions that stand otherwise; one that came or went counts only while it is triggered."""
    return _standing(old, new, "cautions", "triggered")


def checks(old: Data, new: Data) -> list[dict[str, Any]]:
    """Checks with another outcome; one that came or went counts only if it fails."""
    return _standing(old, new, "checks", "fails")


def _standing(old: Data, new: Data, key: str, telling: str) -> list[dict[str, Any]]:
    found = []
    for name, was, now in paired(by("id", old.get(key)), by("id", new.get(key))):
        before, after = (one["status"] if one else None for one in (was, now))
        if before == after or (None in (before, after) and telling not in (before, after)):
            continue
        found.append({"id": name, "title": (now or was)["text"], "old": before, "new": after,
                      "kind": kind_of(was, now)})
    return found


def program(old: Data, new: Data) -> list[dict[str, Any]]:
    """Versions of what computed the two records, where they are not the same."""
    before, after = (_versions(one.get("engine") or {}) for one in (old, new))
    return [{"name": name, "old": before.get(name), "new": after.get(name)}
            for name in dict.fromkeys((*after, *before)) if before.get(name) != after.get(name)]


def _versions(engine: Data) -> dict[str, str]:
    own = {name: engine[name] for name in ("calcpack", "root_tolerance", "python", "platform") if name in engine}
    return own | dict(engine.get("libraries") or {})


def _fields(was: Entry | None, now: Entry | None, fields: tuple[tuple[str, str], ...]) -> list[tuple[str, str, str]]:
    """The differing fields of two entries; of one that came or went, all that it has."""
    if was is None or now is None:
        return [part for part in differing(was or {}, now or {}, fields) if part[0] != "identity"]
    return differing(was, now, fields)


def _sides(was: Entry | None, now: Entry | None, parts: list[tuple[str, str, str]]) -> dict[str, Any]:
    return {"old": side((name, text) for name, text, _ in parts) if was else None,
            "new": side((name, text) for name, _, text in parts) if now else None, "kind": kind_of(was, now)}
