"""What a calculation comes to: title block, results, limits, changes, ready for print."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.cautions import usual_limits
from calcpack.render.issues import for_information, issue_lines
from calcpack.render.pages import Ground, anchor, link
from calcpack.render.review_part import check_words, signature_rows

Data = Mapping[str, Any]

STAMPS = {"superseded": "SUPERSEDED", "void": "VOID"}


@dataclass(frozen=True, slots=True)
class Standing:
    """How a sheet stands: what is open or fails, and the stamp that says so on every page."""

    holds: tuple[str, ...]
    failed_limits: tuple[str, ...]
    failed_checks: tuple[str, ...]
    stamp: tuple[str, ...]
    waived_limits: tuple[str, ...] = ()

    @property
    def limits_words(self) -> str:
        """The failed limits, counted."""
        return counted(len(self.failed_limits), "limit fails", "limits fail")


def standing(record: Data) -> Standing:
    """The standing of a record."""
    holds = tuple(one["id"] for one in record.get("holds") or ())
    status = record["sheet"]["status"]
    stamp = [STAMPS[status]] if status in STAMPS else (["DRAFT"] if status == "draft" else [])
    if for_information(record):
        stamp = ["FOR INFORMATION"]
    if holds and status not in STAMPS:
        stamp.append("HOLD OPEN")
    limits = record.get("limits") or ()
    return Standing(holds, tuple(one["id"] for one in limits if one["status"] == "fails" and not one.get("waiver")),
                    tuple(one["id"] for one in record.get("checks") or () if one["status"] == "fails"),
                    tuple(stamp), tuple(one["id"] for one in limits if is_waived(one)))


def is_waived(limit: Data) -> bool:
    """Whether a limit fails and somebody answers for it."""
    return limit["status"] == "fails" and bool(limit.get("waiver"))


def counted(count: int, one: str, several: str) -> str:
    """'no limit fails', '1 limit fails', '2 limits fail'."""
    return f"{count or 'no'} {one if count == 1 else several}"


def title_block(ground: Ground) -> dict[str, Any]:
    """The fields of the title block."""
    sheet = ground.record["sheet"]
    return {"sheet": sheet, "status": status_words(ground.record), "date": sheet_date(ground.record),
            "made": (ground.record.get("issue") or {}).get("date") or sheet_date(ground.record),
            "standing": standing(ground.record),
            "signatures": signature_rows(ground), "check": check_words(ground.extras.review),
            "limits": len(ground.items("limits")),
            "cautions": sum(one["status"] == "triggered" for one in ground.items("cautions")),
            "unproved": [row["id"] for row in (ground.record.get("uncertainty") or {}).get("limits", ())
                         if row["verdict"].startswith("margin smaller")],
            "issue": issue_lines(ground), "marks": ground.marks, "hash": ground.record["spec_sha256"][:12]}


def status_words(record: Data) -> str:
    """The status as words: 'for review' rather than 'for-review', and for what a sheet is issued."""
    if for_information(record):
        return "issued for information"
    return record["sheet"]["status"].replace("-", " ")


def sheet_date(record: Data) -> str:
    """The ISO date of this revision: the sheet's own, else the one in the revision history; or empty."""
    sheet = record["sheet"]
    dates = [one["date"] for one in record.get("revisions") or () if one["revision"] == sheet["revision"]]
    return str(sheet.get("date") or (dates[-1] if dates else ""))


def results(ground: Ground) -> dict[str, Any] | None:
    """The results in the spec's order, and every limit with its margin."""
    entries = sorted(ground.record["results"].items(), key=lambda item: item[1].get("order", 0))
    limits = [limit_row(ground, one) for one in ground.items("limits")]
    usual = usual_limits(ground)
    return {"rows": [_result(ground, symbol, one) for symbol, one in entries], "limits": limits,
            "fails": sum(row["fails"] for row in limits), "waived": sum(row["waived"] for row in limits),
            "usual": usual, "outside": sum(row["status"] == "outside" for row in usual)}


def _result(ground: Ground, symbol: str, one: Data) -> dict[str, Any]:
    target = ground.anchors.get(symbol)
    verdicts = [{"id": limit["id"], "anchor": anchor("limit", limit["id"]), "waived": is_waived(limit),
                 "fails": limit["status"] == "fails" and not is_waived(limit)}
                for limit in ground.items("limits") if limit["symbol"] == symbol]
    where = link(target, one["step"] or "input") if target else Markup("")
    return {"mark": ground.marks.symbol(symbol), "symbol": quantities.symbol(symbol),
            "title": quantities.titled(symbol, one["title"]),
            "value": quantities.shown(one), "where": where, "verdicts": verdicts}


def limit_row(ground: Ground, one: Data) -> dict[str, Any]:
    """A limit with its value, bound, margin and verdict."""
    return {"id": one["id"], "anchor": anchor("limit", one["id"]), "mark": ground.marks.limit(one["id"]),
            "symbol": quantities.symbol(one["symbol"]), "text": one.get("text") or "", "sense": one["sense"],
            "value": quantities.prose(one["value"]), "bound": quantities.prose(one["bound"]),
            "margin": quantities.prose(one.get("margin")), "percent": quantities.prose(one.get("margin_percent")),
            "why": one.get("why") or "", "source": ground.sourced(one.get("source")),
            "fails": one["status"] == "fails" and not is_waived(one), "waived": is_waived(one),
            "waiver": one.get("waiver")}
