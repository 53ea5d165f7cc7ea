"""A sheet as it stands, on a day, to the record that is issued: everything that its pages print is in it."""
from __future__ import annotations

import json
from collections.abc import Sequence
from typing import Any

from calcpack.issuing.gathering import Gathered, as_issued
from calcpack.issuing.paper import FOR_USE, issue_name, issue_stem, print_engine
from calcpack.issuing.shelf import KEPT, SUPERSEDED_IN
from calcpack.record import Record
from calcpack.review.marks import ROLES
from calcpack.review.standing import SIGNED


def frozen(case: Gathered, kind: str, date: str, still_open: Sequence[str] = ()) -> Record:
    """The record of an issue.

    Parameters
    ----------
    kind : str
        'for use' or 'for information'.
    date : str
        The ISO date of issue.
    still_open : sequence of str
        What is open at an issue for information, in words.

    Returns
    -------
    Record
        The solved record with the status 'issued' and the block ``issue``,
        read back from its own text: what is printed now is what will be read.
    """
    issue = {"kind": kind, "date": date, "file": issue_name(case.record.number, case.record.revision, kind),
             "record": f"{issue_stem(case.record.number, case.record.revision)}.json",
             "supersedes": _supersedes(case, kind), "review": _review(case), "signatures": _signatures(case),
             "open": list(still_open), "files": [one.listed() for one in sorted(case.files, key=lambda one: one.name)],
             "comparison": case.comparison, "verification": case.verification, "family": case.family,
             "history": [one.entry() for one in case.shelf if one.number == case.record.number],
             "print": dict(print_engine())}
    return Record(json.loads(Record({**as_issued(case.record).data, "issue": issue}).to_json()))


def _supersedes(case: Gathered, kind: str) -> dict[str, Any] | None:
    """The issue that this one takes the place of; an issue for information takes none's."""
    earlier = case.earlier
    if earlier is None or kind != FOR_USE:
        return None
    file = earlier.path.name if earlier.kind == KEPT else f"{SUPERSEDED_IN}/{earlier.path.name}"
    return {"revision": earlier.revision, "date": earlier.date, "kind": earlier.kind, "file": file}


def _review(case: Gathered) -> dict[str, str] | None:
    return next(({"file": one.name, "sha256": one.sha256} for one in case.files if one.role == "review"), None)


def _signatures(case: Gathered) -> dict[str, dict[str, Any] | None]:
    """The signatures that hold."""
    standing = case.standing
    held = {} if standing is None else standing.signatures
    return {role: {"name": held[role].name, "date": held[role].date}
            if role in held and held[role].state == SIGNED else None for role in ROLES}
