"""What a sheet says of being issued: the lines of its title block, what is attached, the revision history.

Of an issued record all of it stands in the block ``issue``; of a sheet that
is not issued yet, what lies in ``issued/`` is told by its family.
"""
from __future__ import annotations

import hashlib
from collections.abc import Mapping, Sequence
from typing import Any
from urllib.parse import quote

from markupsafe import Markup

from calcpack.record import Record
from calcpack.render.pages import Ground

Data = Mapping[str, Any]

FOR_INFORMATION = "for information"
BESIDE = "beside:"
"""Begins the address of a link to a file beside an issued PDF, until the PDF is finished."""
DIGITS = 12
"""So many digits of a hash tell files apart."""
SAYS = {"spec": "spec, as solved", "rows": "rows that the spec reads", "review": "marks and signatures of the check",
        "record": "record: every value at full precision"}


def for_information(record: Data) -> bool:
    """Whether a record is that of an issue for information."""
    return (record.get("issue") or {}).get("kind") == FOR_INFORMATION


def issue_lines(ground: Ground) -> dict[str, Any]:
    """The title block's lines on the issue: when, in whose place, what is open, what is attached."""
    issue = ground.record.get("issue")
    return {"known": issue is not None or ground.extras.family is not None, "date": issued_words(ground),
            "supersedes": _supersedes(ground), "superseded_by": _superseded_by(ground),
            "open": issue["open"] if issue else (), "attached": attached(ground.record)}


def issued_words(ground: Ground) -> Markup:
    """``2026-12-01, for use``; of a sheet that is built again, its issues with links; or that it is not issued."""
    if issue := ground.record.get("issue"):
        return Markup("{}, {}").format(issue["date"], issue["kind"])
    own = [one for one in _issues(ground) if one["revision"] == ground.record["sheet"]["revision"]]
    return Markup("; ").join(_entry(ground, one) for one in own) or Markup("not issued")


def _entry(ground: Ground, one: Data) -> Markup:
    """An issue in words, on a screen with a link to its PDF in the site."""
    words = Markup("{}, {}").format(one["date"], one["kind"]) if one.get("date") else Markup("{}").format(one["kind"])
    linked = one.get("file") and not ground.for_print and ground.record.get("issue") is None
    return Markup('<a href="{}">{}</a>').format(quote(one["file"]), words) if linked else words


def _supersedes(ground: Ground) -> Markup:
    """The issue that this revision takes the place of, in an issued PDF with a link to its stamped copy."""
    issue = ground.record.get("issue")
    if issue is None:
        earlier = (ground.extras.family or {}).get("supersedes")
        done = any(one["revision"] == ground.record["sheet"]["revision"] and one["kind"] == "for use"
                   for one in _issues(ground))
        return Markup("revision {}{}").format(_revision(earlier), "" if done else ", once issued for use") \
            if earlier else Markup("nothing: no issue before it")
    earlier = issue["supersedes"]
    if earlier is None:
        return Markup("nothing: it is for information" if for_information(ground.record) else "nothing: first issue")
    words = Markup("revision {}").format(_revision(earlier))
    if not ground.for_print or not earlier["file"].endswith(".pdf"):
        return Markup("{},<br>{}").format(words, earlier["file"])
    return Markup('{},<br><a href="{}">{}</a>').format(words, BESIDE + quote(earlier["file"]), earlier["file"])


def _superseded_by(ground: Ground) -> str:
    later = (ground.extras.family or {}).get("superseded_by") if ground.record.get("issue") is None else None
    return f"revision {_revision(later)}" if later else ""


def _revision(one: Data) -> str:
    return f"{one['revision']} of {one['date']}" if one.get("date") else str(one["revision"])


def attached(record: Data) -> list[dict[str, str]]:
    """The files that an issued PDF carries, each with its size and the first digits of its hash."""
    issue = record.get("issue")
    if issue is None:
        return []
    raw = Record(record).to_json().encode()
    own = {"name": issue["record"], "role": "record", "size": len(raw), "sha256": hashlib.sha256(raw).hexdigest()}
    files = sorted((*issue["files"], own), key=lambda one: one["name"])
    return [{"name": one["name"], "says": SAYS[one["role"]], "size": size_words(one["size"]),
             "sha256": one["sha256"][:DIGITS]} for one in files]


def size_words(size: int) -> str:
    """A number of bytes for a reader: ``812 B``, ``12.3 kB``."""
    return f"{size} B" if size < 1000 else f"{size / 1000:.1f} kB"


def history(ground: Ground) -> dict[str, Any]:
    """The revision history, with who checked and approved each revision and when it was issued."""
    sheet = ground.record["sheet"]
    return {"rows": [_row(ground, one, one["revision"] == sheet["revision"]) for one in ground.items("revisions")]}


def _row(ground: Ground, one: Data, current: bool) -> dict[str, Any]:
    found = [entry for entry in _issues(ground) if entry["revision"] == one["revision"]]
    signed = {role: _signed(ground, role) if current else "" for role in ("checked", "approved")}
    names = {role: signed[role] or _of_issues(found, role) or one.get(role) or "" for role in signed}
    issued = [_entry(ground, entry) for entry in found]
    if current and ground.record.get("issue"):
        issued.append(issued_words(ground))
    return {**one, "by": one.get("by") or "", **names, "issued": Markup("; ").join(dict.fromkeys(issued)),
            "current": current}


def _issues(ground: Ground) -> Sequence[Data]:
    """What was issued of the sheet before."""
    issue = ground.record.get("issue")
    return issue["history"] if issue else (ground.extras.family or {}).get("issues") or ()


def _of_issues(found: Sequence[Data], role: str) -> str:
    return next((entry[role] for entry in reversed(found) if entry.get(role)), "")


def _signed(ground: Ground, role: str) -> str:
    """Who signed this revision, where the signature holds."""
    standing = ground.extras.review
    one = standing.signatures[role] if standing is not None else None
    return str(one.name) if one is not None and one.state == "signed" else ""
