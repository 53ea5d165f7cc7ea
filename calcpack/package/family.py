"""A solved sheet to its place among the others: what it takes and gives, its issues, and what has moved since."""
from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

from calcpack.package.glance import Glance
from calcpack.record import Record
from calcpack.record.carried import Carried, carried_of, offered
from calcpack.units import shown_with_unit, unit
from calcpack.units.digits import decimals_for, number_text

if TYPE_CHECKING:
    from calcpack.issuing.shelf import Issued

Data = Mapping[str, Any]

SAME = 1e-9
"""Relative difference up to which a carried value has not moved; a root is found to 1e-11 of its unknown."""
MOST_DIGITS = 10


def kin(record: Record, *, solved: Mapping[str, Record], glances: Iterable[Glance], issues: Sequence[Issued],
        stems: Mapping[str, str]) -> dict[str, Any]:
    """What a sheet's page and the register say of the sheets around it, as plain data.

    Parameters
    ----------
    solved : mapping
        Records by number: the sheet's own sources at least.
    glances : iterable of Glance
        All specs among which a taker may be.
    issues : sequence of Issued
        What was issued of the sheets whose specs lie beside this one's.
    stems : mapping
        By number the name of the page of each sheet of the same site.

    Returns
    -------
    dict
        ``upstream``, ``downstream``, ``issues``, ``supersedes``, ``superseded_by``, ``stale``.
    """
    from calcpack.issuing.shelf import before
    own = [one for one in issues if one.number == record.number]
    later = _later(own, record)
    earlier = before(own, record.number, record.revision)
    return {"upstream": _upstream(record, solved, issues, stems),
            "downstream": _downstream(record.number, glances, stems),
            "issues": [_issue(one) for one in own],
            "supersedes": _issue(earlier) if earlier else None, "superseded_by": _issue(later) if later else None,
            "stale": _stale(record, own, solved)}


def issue_address(one: Issued) -> str:
    """The name of an issued PDF in the site."""
    return f"issued/{one.path.name}"


def _issue(one: Issued) -> dict[str, Any]:
    """An entry of the shelf; a record kept by hand has no file that the site shows."""
    return {**one.entry(), "file": issue_address(one) if one.path.suffix == ".pdf" else None}


def _later(own: Iterable[Issued], record: Record) -> Issued | None:
    """The first revision that was issued for use after the one at hand."""
    from calcpack.revisions.order import place_in_order
    here = place_in_order(record.revision)
    return min((one for one in own if one.standing and place_in_order(one.revision) > here),
               key=lambda one: one.order, default=None)


def _upstream(record: Record, solved: Mapping[str, Record], issues: Sequence[Issued],
              stems: Mapping[str, str]) -> list[dict[str, Any]]:
    found: dict[str, dict[str, Any]] = {}
    for entry in record.data["inputs"]:
        origin = entry.get("from")
        if not origin:
            continue
        number = origin["number"]
        source = solved.get(number)
        sheet = found.setdefault(number, {
            "number": number, "revision": origin["revision"], "title": origin["title"],
            "status": source.data["sheet"]["status"] if source else None,
            "concerns": _concerns(source, issues) if source else [], "page": stems.get(number), "values": []})
        sheet["values"].append({"input": entry["symbol"], "symbol": origin["symbol"], "step": origin["step"],
                                "shown": origin["shown"], "unit": origin["unit"],
                                "also_shown": origin.get("also_shown")})
    return list(found.values())


def _concerns(source: Record, issues: Iterable[Issued]) -> list[str]:
    """Why a value of this sheet may still change: plain words, the gravest first."""
    status = source.data["sheet"]["status"]
    said = [status] if status in ("draft", "superseded", "void") else []
    said += [f"limit {one['id']} fails" for one in source.failed_limits]
    said += [f"limit {one['id']} fails, waived" for one in source.waived_limits]
    said += [f"check {one['id']} fails" for one in source.data["checks"] if one["status"] == "fails"]
    said += [f"hold {one['id']} open" for one in source.data["holds"]]
    issued = any(one.number == source.number and one.revision == source.revision and one.standing for one in issues)
    return said if issued else [*said, f"revision {source.revision} not issued"]


def _downstream(number: str, glances: Iterable[Glance], stems: Mapping[str, str]) -> list[dict[str, Any]]:
    found = []
    for one in glances:
        symbols = [link.symbol for link in one.links.values() if link.number == number]
        if symbols and one.number is not None and one.number != number:
            found.append({"number": one.number, "revision": one.revision, "title": one.title,
                          "status": one.status or "draft", "symbols": list(dict.fromkeys(symbols)),
                          "page": stems.get(one.number)})
    return sorted(found, key=lambda one: one["number"])


def _stale(record: Record, own: Iterable[Issued], solved: Mapping[str, Record]) -> list[str]:
    """What has moved under the issue in force: values of its sources, and its own spec."""
    standing = [one for one in own if one.standing]
    if not standing:
        return []
    last = max(standing, key=lambda one: one.order)
    said = []
    for symbol, was in carried_of(last.record.data).items():
        source = solved.get(was.origin["number"])
        now = offered(source.data, was.origin["symbol"]) if source else None
        if now is None:
            said.append(f"issued revision {last.revision} took {_name(was)} for {symbol}, which is not there now")
        elif abs(now.value - was.value) > SAME * max(abs(now.value), abs(was.value)):
            old, new = _told_apart(was, now)
            said.append(f"issued revision {last.revision} took {_name(was)} = {old} from revision "
                        f"{was.origin['revision']}; it is {new} now")
    spec_changed = last.record.data["spec_sha256"] != record.data["spec_sha256"]
    if spec_changed and last.revision == record.revision:
        said.append(f"revision {last.revision} was issued, and its spec has changed since without a new revision")
    return said


def _name(carried: Carried) -> str:
    return f"{carried.origin['number']}.{carried.origin['symbol']}"


def _told_apart(was: Carried, now: Carried) -> tuple[str, str]:
    """Both values as printed, with more digits where the printed ones are the same."""
    old, new = (shown_with_unit(one.origin["shown"], one.unit) for one in (was, now))
    there = unit(now.unit)
    for digits in range(4, MOST_DIGITS + 1):
        if old != new:
            break
        old, new = (shown_with_unit(number_text(number, max(0, decimals_for(number, digits))), there)
                    for number in (there.from_si(one.value) for one in (was, now)))
    return old, new
