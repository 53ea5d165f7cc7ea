"""The folder of what was issued to its entries: issued PDFs, and records that were kept by hand.

The PDFs are the only thing that counts; the register beside them and the
stamped copies can be made again from what is read here.
"""
from __future__ import annotations

import hashlib
import json
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.issuing.attached import carried_files
from calcpack.issuing.paper import FOR_INFORMATION, FOR_USE
from calcpack.record import Record, read_record
from calcpack.revisions.order import place_in_order
from calcpack.revisions.sources import ISSUED_IN

SUPERSEDED_IN = "superseded"
"""The folder inside it with the stamped copies of superseded issues."""
KEPT = "kept record"
"""The kind of a record that was put there by hand."""


@dataclass(frozen=True, slots=True)
class Issued:
    """One issue of a sheet: ``kind`` is 'for use', 'for information' or 'kept record'; hashes are of the file's
    and of the record's bytes, in hexadecimal."""

    number: str
    revision: str
    kind: str
    path: Path
    sha256: str
    record_sha256: str
    record: Record = field(repr=False)

    @property
    def date(self) -> str:
        """The ISO date of issue; of a kept record the sheet's own, or empty."""
        issue = self.record.data.get("issue")
        return issue["date"] if issue else str(self.record.data["sheet"].get("date") or "")

    @property
    def title(self) -> str:
        return self.record.data["sheet"]["title"]

    @property
    def standing(self) -> bool:
        """Whether it may be built upon: an issue for use or a kept record, not one for information."""
        return self.kind != FOR_INFORMATION

    @property
    def order(self) -> tuple[str, tuple[int, int], str]:
        """A key that sorts by number, revision, kind."""
        return self.number, place_in_order(self.revision), self.kind

    @property
    def signatures(self) -> Mapping[str, Mapping[str, str] | None]:
        """Name and date for each role, as the issue says; None where nobody signed."""
        signed = (self.record.data.get("issue") or {}).get("signatures")
        return signed if signed is not None else self.record.data.get("signoff") or {}

    def entry(self) -> dict[str, Any]:
        """What a page says of the issue: plain data."""
        names = {role: (self.signatures.get(role) or {}).get("name") for role in ("prepared", "checked", "approved")}
        return {"revision": self.revision, "date": self.date, "kind": self.kind, "file": self.path.name, **names}


def issued_sheets(folder: Path) -> tuple[Issued, ...]:
    """All that was issued of the sheets whose specs lie in ``folder``, in the order of number, revision and kind.

    Reads ``issued/*.pdf`` with a record of ours inside and records
    ``issued/*.json``; other files there are left alone.

    Raises
    ------
    CommandError
        For a PDF or JSON file there that is damaged: it may be an issue.
    """
    shelf = folder / ISSUED_IN
    if not shelf.is_dir():
        return ()
    found = [*(_from_pdf(path) for path in sorted(shelf.glob("*.pdf"))),
             *(_from_json(path) for path in sorted(shelf.glob("*.json")))]
    return tuple(sorted((one for one in found if one is not None), key=lambda one: one.order))


def before(issues: Iterable[Issued], number: str, revision: str) -> Issued | None:
    """The last issue for use, or kept record, of a sheet before a revision."""
    here = place_in_order(revision)
    earlier = [one for one in issues if one.number == number and one.standing
               and place_in_order(one.revision) < here]
    return max(earlier, key=lambda one: (place_in_order(one.revision), one.kind == FOR_USE), default=None)


def successor(issues: Iterable[Issued], one: Issued) -> Issued | None:
    """The first issue for use after an issue of the same sheet; None for the one in force."""
    later = [other for other in issues if other.number == one.number and other.kind == FOR_USE
             and place_in_order(other.revision) > place_in_order(one.revision)]
    return min(later, key=lambda other: place_in_order(other.revision), default=None)


def _from_pdf(path: Path) -> Issued | None:
    import pikepdf
    try:
        content = path.read_bytes()
        files = carried_files(content)
    except (OSError, pikepdf.PdfError, pikepdf.PasswordError) as error:
        raise _unreadable(path, error) from None
    for name, raw in sorted(files.items()):
        if name.endswith(".json") and (record := _record(raw, path)) is not None and "issue" in record.data:
            return _issued(record, raw, record.data["issue"]["kind"], path, content)
    return None


def _from_json(path: Path) -> Issued | None:
    try:
        content = path.read_bytes()
        json.loads(content)
    except (OSError, ValueError, RecursionError) as error:
        raise _unreadable(path, error) from None
    record = _record(content, path)
    return None if record is None else _issued(record, content, KEPT, path, content)


def _record(raw: bytes, path: Path) -> Record | None:
    """The record in bytes; None where they are something else."""
    try:
        data = json.loads(raw)
    except (ValueError, RecursionError):
        return None
    if not isinstance(data, dict) or "calcpack" not in data or "sheet" not in data:
        return None
    return read_record(path, json.dumps(data))


def _issued(record: Record, raw: bytes, kind: str, path: Path, content: bytes) -> Issued:
    return Issued(record.number, record.revision, kind, path, hashlib.sha256(content).hexdigest(),
                  hashlib.sha256(raw).hexdigest(), record)


def _unreadable(path: Path, error: Exception) -> CommandError:
    return CommandError(Fault(f"{path} cannot be read, and may be an issue of a sheet", detail=str(error),
                              hint="put the whole file back, or move this one away"))
