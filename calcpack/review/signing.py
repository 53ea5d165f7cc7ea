"""A signature to the review file that holds it, or to every reason why it cannot be given."""
from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from textwrap import shorten
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.review.marks import ROLES, ReviewFile, Signature, same_person
from calcpack.review.naming import called
from calcpack.review.standing import LAPSED, MISSING, SIGNED, Standing
from calcpack.review.taking import Words


def signed(data: Mapping[str, Any], standing: Standing, role: str, words: Words) -> ReviewFile:
    """The review file with a signature, bound to the record as it is.

    Prepared, checked and approved are three different people; 'checked' needs
    every item checked and no comment open, 'approved' a 'checked' that holds.

    Raises
    ------
    CommandError
        With every reason that stands against it.
    """
    faults = [*_against(data, standing, role, words.by)]
    if faults:
        raise CommandError(faults)
    given = Signature(role, words.by.strip(), words.date, standing.revision, standing.record)
    return replace(standing.review, signatures=(*standing.review.signatures, given))


def _against(data: Mapping[str, Any], standing: Standing, role: str, name: str) -> Iterator[Fault]:
    own = standing.signatures[role]
    named = ((data.get("signoff") or {}).get(role) or {}).get("name")
    if own.state == SIGNED:
        yield Fault(f"revision {standing.revision} is signed as {role} already", found=f"by {own.name}, {own.date}")
    if named and not same_person(named, name):
        yield Fault(f"the spec names another person as {role}", found=f"--by {name!r}", expected=named)
    yield from _others(standing, role, name)
    if role == "prepared":
        marked = [one for one in standing.review.marks
                  if one.revision == standing.revision and same_person(one.by, name)]
        if marked:
            yield Fault(f"{name} has marked {len(marked)} items of revision {standing.revision} as its checker",
                        expected="the name of the author")
    else:
        yield from _unready(standing, role)


def _others(standing: Standing, role: str, name: str) -> Iterator[Fault]:
    """Whoever stands for another role, or wrote the sheet, does not sign this one."""
    for other in ROLES:
        state = standing.signatures[other]
        if other != role and state.name and same_person(state.name, name):
            yield Fault(f"{state.name} stands for {other} and cannot sign as {role}",
                        expected="three different people")
    if role != "prepared" and not standing.authors:
        yield Fault("the sheet has no author yet, who must be another person",
                    hint="name the author in signoff.prepared of the spec, or sign as prepared first")


def _unready(standing: Standing, role: str) -> Iterator[Fault]:
    if standing.unchecked:
        first = ", ".join(called(one) for one in standing.unchecked[:5])
        count, lapsed = len(standing.unchecked), len(standing.lapsed)
        more = f" and {count - 5} more" if count > 5 else ""
        moved = f"; {lapsed} of them moved since they were agreed" if lapsed else ""
        yield Fault(f"{count} {'item is' if count == 1 else 'items are'} not checked", found=first + more + moved)
    for one in standing.open_comments:
        said = one.mark.text if one.mark else None
        yield Fault(f"a comment is open on {called(one)}", found=said and shorten(said, 200, placeholder=" …"),
                    hint="the checker closes it with --agree or --correct")
    checked = standing.signatures["checked"]
    if role == "approved" and checked.state != SIGNED:
        what = {LAPSED: "the sheet moved after it was signed as checked",
                MISSING: "the sheet is not signed as checked"}
        yield Fault(what.get(checked.state, f"{checked.name} is named as checker, and has not signed"))
