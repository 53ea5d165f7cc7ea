"""A sheet as it stands to every reason that speaks against issuing it, each with its place where it has one."""
from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from calcpack.errors import Fault
from calcpack.issuing.gathering import Gathered
from calcpack.points.point import shortened
from calcpack.review.marks import ROLES
from calcpack.review.standing import LAPSED, MISSING, SIGNED, Item
from calcpack.review.writing import review_path
from calcpack.revisions.order import place_in_order

if TYPE_CHECKING:
    from calcpack.points import Point

SIGNING_POINTS = (45, 49, 50)
"""Points of the checklist that say again what the signatures and marks say."""
REMEDIES = {9: "sheet.purpose in the spec", 10: "sheet.scope in the spec", 11: "sheet.grade in the spec",
            12: "sheet.codes in the spec", 15: "the texts of the references in the spec",
            22: "basis and effect of the assumption", 24: "owner and due of the assumption",
            42: "give an input its tolerance: {value: 0.72, tol: 0.02, source: R1}",
            52: "revisions in the spec; who checked and approved comes from the signatures",
            65: "calcpack self-check -o verification.json, in the folder of the spec",
            66: "calcpack self-check -o verification.json, in the folder of the spec"}
"""Where a person puts right what a point finds missing, for those that one place puts right."""
SAID = {LAPSED: "has lapsed, since the sheet moved after it", MISSING: "is missing",
        "unbound": "is a name in the spec that no signature stands behind"}


def clashes(case: Gathered, kind: str, date: str) -> tuple[Fault, ...]:
    """What no kind of issue gets past: a sheet that is not in force, a revision or a day that is not the next."""
    return (*_not_in_force(case), *_revision(case, kind), *_day(case, date))


def gates(case: Gathered, date: str) -> tuple[Fault, ...]:
    """What stands between the sheet and an issue for use, but for the points of its checklist."""
    return (*_draft(case), *_holds(case), *_failed(case), *_sources(case), *_marks(case), *_signatures(case, date))


def unmet_points(unmet: Sequence[Point], told: Sequence[Fault]) -> tuple[Fault, ...]:
    """The points that the pages to be issued do not meet; those on signatures only where nothing is told of them."""
    return tuple(Fault(f"point {one.number} of the checklist is not met: {one.text}", found=one.where or None,
                       hint=REMEDIES.get(one.number))
                 for one in unmet if not told or one.number not in SIGNING_POINTS)


def _not_in_force(case: Gathered) -> Iterator[Fault]:
    status = case.spec.sheet.status
    if status in ("superseded", "void"):
        yield Fault(f"a sheet that is {status} is not issued", case.spec.place("sheet", "status"))


def _revision(case: Gathered, kind: str) -> Iterator[Fault]:
    place, revision = case.spec.place("sheet", "revision"), case.record.revision
    own = [one for one in case.shelf if one.number == case.record.number]
    same = [one for one in own if one.revision == revision and (one.standing or one.kind == kind)]
    if same:
        yield Fault(f"revision {revision} was issued already", place, found=f"{same[-1].kind}, {same[-1].path.name}",
                    hint="give the sheet its next revision")
        return
    last = max((one for one in own if one.standing), key=lambda one: place_in_order(one.revision), default=None)
    if last is not None and place_in_order(last.revision) > place_in_order(revision):
        numbers = revision.isdigit() and not last.revision.isdigit()
        yield Fault(f"revision {revision} does not come after {last.revision}, which was issued last", place,
                    hint="numbers come before letters, not after them" if numbers else None)


def _day(case: Gathered, date: str) -> Iterator[Fault]:
    earlier = case.earlier
    if earlier is not None and earlier.date > date:
        yield Fault(f"the day of issue is before that of revision {earlier.revision}", found=date,
                    expected=f"{earlier.date} or later")


def _draft(case: Gathered) -> Iterator[Fault]:
    if case.spec.sheet.draft:
        yield Fault("a draft is not issued for use", case.spec.place("sheet", "status"),
                    hint="write for-review, and have it checked")


def _holds(case: Gathered) -> Iterator[Fault]:
    for index, one in enumerate(case.spec.assumptions):
        if one.status == "open":
            owner = f"{one.owner}, due {one.due}" if one.owner and one.due else None
            yield Fault(f"hold {one.id} is open", case.spec.place("assumptions", index, "status"), found=owner)


def _failed(case: Gathered) -> Iterator[Fault]:
    places = {one.id: index for index, one in enumerate(case.spec.limits)}
    for one in case.record.failed_limits:
        yield Fault(f"limit {one['id']} fails and nobody has waived it",
                    case.spec.place("limits", places[one["id"]]) if one["id"] in places else None,
                    found=str(one["value"]), expected=f"{one['sense']} {one['bound']}")
    for one in case.record.data["checks"]:
        if one["status"] == "fails":
            yield Fault(f"check {one['id']} fails", found=one.get("value"))


def _sources(case: Gathered) -> Iterator[Fault]:
    """A sheet stands as firmly as those that it takes values from."""
    for one in case.family["upstream"]:
        concerns = [words for words in one["concerns"] if not words.endswith("waived")]
        if concerns:
            yield Fault(f"sheet {one['number']}, from which it takes values, is not fit for use",
                        found="; ".join(concerns), hint="issue that sheet first")


def _marks(case: Gathered) -> Iterator[Fault]:
    standing = case.standing
    if standing is None:
        yield Fault("the sheet has no review file", expected=str(review_path(case.path).name),
                    hint=f"calcpack review {case.path}")
        return
    for one in standing.open_comments:
        yield Fault(f"a comment on {one.kind} {one.name} is open", found=one.mark.text if one.mark else None)
    waiting = standing.unchecked
    if waiting:
        lapsed = sum(one.state == LAPSED for one in waiting)
        said = f", {lapsed} of them since their marks lapsed" if lapsed else ""
        yield Fault(f"{len(waiting)} of {len(standing.items)} items are not checked{said}", found=_named(waiting),
                    hint=f"calcpack review {case.path}")


def _named(items: Sequence[Item]) -> str:
    return shortened([f"{one.kind} {one.name}" for one in items], 3)


def _signatures(case: Gathered, date: str) -> Iterator[Fault]:
    standing = case.standing
    if standing is None:
        return
    for role in ROLES:
        one = standing.signatures[role]
        if one.state != SIGNED:
            yield Fault(f"the signature '{role}' {SAID[one.state]}", found=one.name,
                        hint=f"calcpack review {case.path} --sign {role} --by NAME")
        elif one.date and one.date > date:
            yield Fault(f"the signature '{role}' is dated after the day of issue", found=one.date, expected=date)
    for words in standing.conflicts:
        yield Fault(words)


def in_words(faults: Sequence[Fault]) -> list[str]:
    """The reasons as lines of the first page of an issue for information."""
    return [one.what + (f" ({one.found})" if one.found else "") for one in faults]
