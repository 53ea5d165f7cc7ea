"""The records of a package to its register: one page that lists every sheet and how it stands."""
from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from calcpack.record import Record
from calcpack.render import outcome, quantities
from calcpack.render.fluid_names import register_fluids
from calcpack.render.pages import NO_EXTRAS, Extras
from calcpack.render.review_part import check_words
from calcpack.render.sheet import environment


def register_html(records: Sequence[Record], stems: Sequence[str], *, pdf: bool,
                  extras: Mapping[str, Extras] | None = None) -> str:
    """The register page.

    ``stems`` are the names of the sheets' files, ``extras`` what is known of
    each beside its record, by its number.
    """
    rows = [_row(record, stem, (extras or {}).get(record.number, NO_EXTRAS))
            for record, stem in zip(records, stems, strict=True)]
    return environment().get_template("register.html").render(
        rows=rows, pdf=pdf, fluids=register_fluids(records),
        projects=list(dict.fromkeys(row["sheet"]["project"] for row in rows)),
        open=sum(bool(row["standing"].holds) for row in rows),
        stale=sum(bool(row["stale"]) for row in rows), linked=any(row["sources"] or row["takers"] for row in rows),
        failing=sum(bool(row["standing"].failed_limits) for row in rows),
        versions=sorted({record.data["engine"]["calcpack"] for record in records}),
        styles=["assets/styles/fonts.css", "assets/styles/equation.css", "assets/styles/register.css"])


def _row(record: Record, stem: str, extras: Extras) -> dict[str, Any]:
    family = extras.family or {}
    results = sorted(record.data["results"].items(), key=lambda item: item[1].get("order", 0))
    return {"sheet": record.data["sheet"], "stem": stem, "status": outcome.status_words(record.data),
            "date": outcome.sheet_date(record.data),
            "standing": outcome.standing(record.data), "check": check_words(extras.review),
            "limits": len(record.data.get("limits") or ()),
            "results": [{"symbol": quantities.symbol(symbol), "title": one["title"], "value": quantities.shown(one)}
                        for symbol, one in results],
            "sources": family.get("upstream") or (), "takers": family.get("downstream") or (),
            "stale": [quantities.prose(text) for text in family.get("stale") or ()],
            "issues": [one for one in family.get("issues") or () if one["file"]],
            "hash": record.data["spec_sha256"], "file": record.data["spec_file"]}
