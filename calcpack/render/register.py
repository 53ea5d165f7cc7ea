"""The records of a package to its register: one page that lists every sheet and how it stands."""
from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from calcpack.record import Record
from calcpack.render import outcome, quantities
from calcpack.render.fluid_names import register_fluids
from calcpack.render.sheet import environment


def register_html(records: Sequence[Record], stems: Sequence[str], *, pdf: bool) -> str:
    """The register page; ``stems`` are the names of the sheets' files."""
    rows = [_row(record, stem) for record, stem in zip(records, stems, strict=True)]
    return environment().get_template("register.html").render(
        rows=rows, pdf=pdf, fluids=register_fluids(records),
        projects=list(dict.fromkeys(row["sheet"]["project"] for row in rows)),
        open=sum(bool(row["standing"].holds) for row in rows),
        failing=sum(bool(row["standing"].failed_limits) for row in rows),
        versions=sorted({record.data["engine"]["calcpack"] for record in records}),
        styles=["assets/styles/fonts.css", "assets/styles/equation.css", "assets/styles/register.css"])


def _row(record: Record, stem: str) -> dict[str, Any]:
    results = sorted(record.data["results"].items(), key=lambda item: item[1].get("order", 0))
    return {"sheet": record.data["sheet"], "stem": stem, "status": outcome.status_words(record.data),
            "date": outcome.sheet_date(record.data),
            "standing": outcome.standing(record.data), "limits": len(record.data.get("limits") or ()),
            "results": [{"symbol": quantities.symbol(symbol), "title": one["title"], "value": quantities.shown(one)}
                        for symbol, one in results],
            "hash": record.data["spec_sha256"], "file": record.data["spec_file"]}
