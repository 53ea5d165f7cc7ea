"""The records of a package to a page for each fluid that they use: facts, ranges, equations, sheets."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.fluids.register.groups import absent, grouped
from calcpack.record import Record
from calcpack.render import quantities
from calcpack.render.basis import fact_row
from calcpack.render.fluid_names import fluid_page_name

Data = Mapping[str, Any]


def fluid_pages(records: Sequence[Record], stems: Sequence[str]) -> dict[str, str]:
    """The pages by their addresses; ``stems`` are the names of the sheets' files."""
    from calcpack.render.sheet import environment
    template = environment().get_template("fluid.html")
    used: dict[str, list[tuple[Record, str, str, Data]]] = {}
    for record, stem in zip(records, stems, strict=True):
        for role, one in sorted((record.data["case"].get("fluids") or {}).items()):
            used.setdefault(fluid_page_name(one["designation"]), []).append((record, stem, role, one))
    styles = [f"../assets/styles/{name}.css" for name in ("fonts", "equation", "sheet", "screen")]
    return {name: template.render(fluid=_fluid(uses), styles=styles) for name, uses in sorted(used.items())}


def _fluid(uses: Sequence[tuple[Record, str, str, Data]]) -> dict[str, Any]:
    first = uses[0][3]
    models: dict[tuple[str, ...], dict[str, Any]] = {}
    for _, _, _, one in uses:
        key = tuple(one.get(name) or "" for name in ("identity", "reference_state", "range", "stated"))
        models.setdefault(key, _model(one))
    return {"designation": first["designation"], "models": list(models.values()), "groups": _groups(first),
            "absent": [title.lower() for title in absent(first.get("facts") or ())],
            "sheets": [{"number": record.number, "title": record.data["sheet"]["title"], "stem": stem,
                        "revision": record.data["sheet"]["revision"], "role": one.get("title") or role}
                       for record, stem, role, one in uses]}


def _model(one: Data) -> dict[str, Any]:
    return {"model": one["model"], "stated": one.get("stated") or "", "equation": one["equation"],
            "reference_state": one["reference_state"], "range": one.get("range") or "",
            "constants": [{"symbol": quantities.symbol(each["symbol"]), "title": each["title"],
                           "value": quantities.shown(each)} for each in one.get("constants") or ()]}


def _groups(one: Data) -> list[dict[str, Any]]:
    return [{"title": title, "rows": [fact_row(fact) for fact in facts]}
            for title, facts in grouped(one.get("facts") or ())]
