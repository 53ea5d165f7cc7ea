"""Cautions and usual limits of a record to their tables, with every formula that was evaluated for them."""
from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from calcpack.render import quantities
from calcpack.render.basis import confirmed_words
from calcpack.render.pages import Ground, anchor

Data = Mapping[str, Any]

DEFER = ("A caution states what the numbers of this sheet suggest; it does not replace the codes, standards and "
         "regulations in force at the place of use, nor the judgement of a licensed engineer. Where they differ, "
         "those hold.")
UNITS_FOLLOW = ", with "


def cautions(ground: Ground) -> dict[str, Any] | None:
    """Cautions by hazard: the triggered ones, what was evaluated, what was not and why."""
    rows = [_caution(ground, one) for one in ground.items("cautions")]
    if not rows:
        return None
    defers = list(dict.fromkeys(one["defer"] for one in ground.items("cautions") if one.get("defer")))
    tables = {name: [row for row in rows if row["status"] == status] for name, status in
              (("triggered", "triggered"), ("quiet", "not triggered"), ("unknown", "not evaluated"))}
    return {**{name: _by_hazard(found) for name, found in tables.items()}, "given": _given(ground),
            "counts": {name: len(found) for name, found in tables.items()}, "defers": defers or [DEFER]}


def _by_hazard(rows: Iterable[dict[str, Any]]) -> list[dict[str, Any]]:
    groups: dict[str, list[dict[str, Any]]] = {}
    for row in rows:
        groups.setdefault(row["hazard"], []).append(row)
    return [{"title": title, "rows": found} for title, found in groups.items()]


def _caution(ground: Ground, one: Data) -> dict[str, Any]:
    return {"id": one["id"], "anchor": anchor("caution", one["id"]), "hazard": one["hazard"],
            "topic": one.get("topic") or "", "text": one["text"], "value": ground.prose(one.get("value")),
            "threshold": ground.prose(one.get("threshold")), "source": ground.sourced(one.get("source")),
            "confirmed": confirmed_words(one.get("confirmed")), "status": one["status"],
            "reason": ground.prose(one.get("reason")),
            "working": [working_line(line) for line in (one.get("working") or "").splitlines()]}


def working_line(line: str) -> dict[str, Any]:
    """One line of working, 'm = c * V = 0.2 * 300 = 60.00 kg, with V in m³', to its typeset members."""
    head, _, units = line.partition(UNITS_FOLLOW)
    symbol, *formulas, result = head.split(" = ")
    pairs = [part.rpartition(" in ") for part in units.split(", ")] if units else []
    return {"symbol": quantities.symbol(symbol), "formulas": [quantities.formula(one) for one in formulas],
            "result": quantities.written(result),
            "units": [{"symbol": quantities.symbol(name), "unit": quantities.unit(unit)} for name, _, unit in pairs]}


def _given(ground: Ground) -> dict[str, Any] | None:
    """The safety quantities of the spec, as written, with their source."""
    safety = ground.record["case"].get("safety") or {}
    rows = [{"name": one["name"], "title": one["title"], "value": quantities.prose(one["written"])}
            for one in safety.get("quantities") or ()]
    if safety.get("room_level"):
        rows.append({"name": "room_level", "title": "Where the room lies.", "value": safety["room_level"]})
    if safety.get("fluid_group"):
        rows.append({"name": "fluid_group", "title": "Group of the working fluid in pressure equipment.",
                     "value": safety["fluid_group"]})
    return {"rows": rows, "source": ground.sourced(safety.get("source"))} if rows else None


def usual_limits(ground: Ground) -> list[dict[str, Any]]:
    """The limits of usual practice; the source stands in full with the caution."""
    return [{"id": one["id"], "equipment": one["equipment"], "text": one["text"][:1].lower() + one["text"][1:],
             "anchor": anchor("caution", one["caution"]),
             "value": ground.prose(one["value"]), "bound": ground.prose(one["bound"]), "status": one["status"],
             "confirmed": confirmed_words(one["confirmed"]).partition(",")[0].removesuffix(" of the source")}
            for one in ground.items("usual_limits")]
