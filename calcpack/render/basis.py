"""What a calculation stands on: inputs, assumptions, references, method and fluids, ready for print."""
from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.fluid_names import fluid_page_name
from calcpack.render.linked import source_cell
from calcpack.render.pages import Ground, anchor, link

Data = Mapping[str, Any]

CONFIRMED = {"yes": "from the text of the source", "text": "from the text of the source",
             "derived": "derived from the source: confirm against the edition in force",
             "second-hand": "second-hand: confirm against the edition in force",
             "memory": "from memory: confirm before use", "no": "not confirmed: confirm before use",
             "own": "computed by this program"}
"""How far a fact is confirmed, in words."""


def confirmed_words(word: str | None) -> str:
    """The words for a fact's confirmation; a word that is not known stands as it is."""
    return CONFIRMED.get(word or "", word or "")


def purpose(ground: Ground) -> dict[str, Any] | None:
    """Purpose, scope, grade, codes and ambient pressure."""
    sheet = ground.record["sheet"]
    pressure = sheet["p_atm"]
    return {"purpose": sheet.get("purpose") or "", "scope": sheet.get("scope") or "",
            "grade": sheet.get("grade") or "", "codes": sheet.get("codes") or (),
            "p_atm": quantities.quantity(pressure["shown"], pressure["unit"]),
            "p_atm_written": pressure.get("written") or ""}


def inputs(ground: Ground) -> dict[str, Any] | None:
    """The design inputs, a row each."""
    rows = [_input(ground, one) for one in ground.items("inputs")]
    return {"rows": rows, "defaults": any(row["default"] for row in rows),
            "tolerances": any(row["tolerance"] for row in rows),
            "linked": any(one.get("from") for one in ground.items("inputs")),
            "unsourced": sum(not row["source"] for row in rows)} if rows else None


def _input(ground: Ground, one: Data) -> dict[str, Any]:
    tolerance = one.get("tol")
    return {"anchor": anchor("input", one["symbol"]), "name": one["symbol"], "mark": ground.marks.symbol(one["symbol"]),
            "symbol": quantities.symbol(one["symbol"]), "title": quantities.titled(one["symbol"], one["title"]),
            "value": quantities.shown(one),
            "written": one.get("written") or "", "note": one.get("note") or "",
            "tolerance": Markup("±&nbsp;{}").format(quantities.quantity(tolerance["shown"], tolerance["unit"]))
            if tolerance else "",
            "source": source_cell(ground, one["from"]) if one.get("from") else ground.sourced(one.get("source")),
            "default": one.get("default", False),
            "used": Markup(", ").join(link(anchor("step", name), name) for name in one.get("used_by") or ())}


def assumptions(ground: Ground) -> dict[str, Any] | None:
    """The assumptions, open ones as holds."""
    rows = [{**one, "anchor": anchor("assumption", one["id"]), "mark": ground.marks.assumption(one["id"]),
             "basis": ground.sourced(one.get("basis")), "open": one["status"] == "open"}
            for one in ground.items("assumptions")]
    return {"rows": rows, "open": sum(row["open"] for row in rows)}


def references(ground: Ground) -> dict[str, Any] | None:
    """The documents that values and formulas are taken from."""
    return {"rows": [{**one, "anchor": anchor("reference", one["id"])} for one in ground.items("references")]}


def method(ground: Ground) -> dict[str, Any] | None:
    """The method, its options with their meaning, and the arrangement sketch."""
    case = ground.record["case"]
    # A record read from its JSON has the options in the order of their names; so has the sheet.
    options = [{"name": name, **one} for name, one in sorted((case.get("options") or {}).items())]
    return {"name": case["method"], "title": case.get("method_title") or case["method"],
            "text": case.get("method_text") or "", "options": options,
            "assumes": case.get("assumes") or (), "leaves_out": case.get("leaves_out") or (),
            "figures": [one for one in ground.figures if is_sketch(one)]}


def is_sketch(figure: Any) -> bool:
    """Whether a figure is the arrangement sketch, which stands with the method."""
    return figure.id in ("sketch", "arrangement")


def fluids(ground: Ground) -> dict[str, Any] | None:
    """The fluids with their equations of state and register facts."""
    roles = ground.record["case"].get("fluids") or {}
    if not roles:
        return None
    return {"fluids": [_fluid(ground, role, roles[role]) for role in ground.fluids],
            "facts": _facts(ground, {role: roles[role] for role in ground.fluids})}


def _fluid(ground: Ground, role: str, one: Data) -> dict[str, Any]:
    return {**one, "anchor": anchor("fluid", role), "number": ground.fluids[role],
            "page": "" if ground.for_print else fluid_page_name(one["designation"]), "title": one.get("title") or role,
            "stated": one.get("stated") or "", "range": one.get("range") or ""}


def _facts(ground: Ground, roles: Mapping[str, Data]) -> list[dict[str, Any]]:
    """The register's facts, once for each designation."""
    groups: dict[str, dict[str, Any]] = {}
    for role, one in roles.items():
        group = groups.setdefault(one["designation"], {
            "designation": one["designation"], "numbers": [],
            "rows": [fact_row(fact) for fact in one.get("facts") or ()]})
        group["numbers"].append(ground.fluids[role])
    return [group for group in groups.values() if group["rows"]]


def fact_row(fact: Data) -> dict[str, Any]:
    """A fact of the register, ready for print."""
    return {"quantity": fact["quantity"], "value": quantities.quantity(str(fact["value"]), fact.get("unit") or ""),
            "source": fact.get("source") or "", "confirmed": confirmed_words(fact.get("confirmed")),
            "note": fact.get("note") or ""}
