"""The rows of a bound package to its own pages, cover to transmittal list, and the count laid over every page."""
from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from markupsafe import Markup

from calcpack.package.bound import TO_SHEET
from calcpack.package.bound_links import at_odds
from calcpack.package.bound_sheets import ROLES
from calcpack.package.transmittal import Row, Transmittal
from calcpack.render import outcome, quantities
from calcpack.render.pdf import pdf_bytes
from calcpack.render.sheet import PAPER, css_text, environment

LISTED_IN_PARTS = 25
"""A package of more sheets lists the sheets alone in its contents: each has a table of contents of its own."""

NAME = "package"
"""What messages call the pages that belong to no sheet."""


def front_pdf(rows: Sequence[Row], parts: Sequence[Sequence[tuple[str, int]]], transmittal: Transmittal,
              issued: bool) -> tuple[bytes, int]:
    """Cover, register, contents and transmittal list as a PDF, and its number of pages.

    ``parts`` are of each sheet its parts with the page of the sheet that they
    begin on; ``issued`` says whether the sheets are as they were issued.
    """
    records = [row.sheet.record.data for row in rows]
    html = environment().get_template("package.html").render(
        rows=[_row(row, at, parts[at - 1] if len(rows) <= LISTED_IN_PARTS else ())
              for at, row in enumerate(rows, start=1)],
        projects=list(dict.fromkeys(record["sheet"]["project"] for record in records)), roles=ROLES,
        issued=issued, transmittal=transmittal, pages=rows[-1].first_page + rows[-1].pages - 1,
        open=_open(rows), page=_page_rules(records, transmittal),
        versions=sorted({record["engine"]["calcpack"] for record in records}))
    return pdf_bytes(html, NAME)


def count_pdf(sizes: Sequence[tuple[float, float]]) -> bytes:
    """Pages of these sizes [pt] with nothing on them but 'page n of m of the package', near the lower edge."""
    known = list(dict.fromkeys(sizes))
    html = environment().get_template("package_count.html").render(
        sizes=known, pages=[known.index(size) for size in sizes])
    return pdf_bytes(html, NAME, tags=False)[0]


def _row(row: Row, at: int, parts: Sequence[tuple[str, int]]) -> dict[str, Any]:
    record = row.sheet.record.data
    results = sorted(record["results"].items(), key=lambda item: item[1].get("order", 0))
    return {"sheet": record["sheet"], "status": row.sheet.status, "date": row.sheet.date, "to": f"{TO_SHEET}{at}",
            "signatures": row.sheet.signatures, "pages": row.pages, "first_page": row.first_page,
            "file": row.sheet.file, "hash": row.short_hash, "standing": outcome.standing(record),
            "limits": len(record.get("limits") or ()),
            "parts": [{"title": title, "page": row.first_page + page - 1} for title, page in parts],
            "results": [{"symbol": quantities.symbol(symbol), "value": quantities.shown(one)}
                        for symbol, one in results]}


def _open(rows: Sequence[Row]) -> list[str]:
    """What a reader of the cover must know before any sheet: what is open or fails, and sheets that do not agree."""
    lines, bound = [], {row.sheet.number: row.sheet.record.data for row in rows}
    for row in rows:
        found = outcome.standing(row.sheet.record.data)
        words = [f"{_several(found.holds, 'hold')} open"] if found.holds else []
        words += [f"limit {one} FAILS" for one in found.failed_limits]
        words += [f"limit {one} fails and is waived" for one in found.waived_limits]
        words += [f"check {one} FAILS" for one in found.failed_checks]
        unsigned = [role for role, one in zip(ROLES, row.sheet.signatures, strict=True) if one.state != "signed"]
        words += [f"not signed: {', '.join(unsigned)}"] if unsigned else []
        words += at_odds(row.sheet.record.data, bound)
        if words:
            lines.append(f"{row.sheet.number}: {'; '.join(words)}")
    return lines


def _several(names: Sequence[str], noun: str) -> str:
    return f"{noun}{'s' if len(names) > 1 else ''} {', '.join(names)}"


def _page_rules(records: Sequence[Any], transmittal: Transmittal) -> Markup:
    projects = list(dict.fromkeys(record["sheet"]["project"] for record in records))
    words = projects[0] if len(projects) == 1 else f"{len(projects)} projects"
    size = PAPER[records[0]["sheet"]["page"]]
    return Markup(f"@page {{ size: {size}; @top-left {{ content: {css_text('Calculation package')}; }} "
                  f"@top-right {{ content: {css_text(transmittal.date)}; }} "
                  f"@bottom-left {{ content: {css_text(words)}; }} }}")
