"""A record and its review file to how the check stands: what holds, what is open, who signed."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from calcpack.review.marks import GONE, ROLES, Mark, ReviewFile, Signature, plain_name
from calcpack.review.targets import KINDS, Target, record_identity, shows_the_same, targets_of

Data = Mapping[str, Any]

AGREED, CORRECTED, COMMENT, LAPSED, UNMARKED = STATES = ("agreed", "corrected", "comment", "lapsed", "unmarked")
SIGNED, UNBOUND, MISSING = "signed", "unbound", "missing"
BY_AUTHOR = "a mark by the sheet's author does not count"


@dataclass(frozen=True, slots=True)
class Item:
    """A target with the mark that stands for it and the marks before it, oldest first.

    ``state`` is 'agreed', 'corrected', 'comment', 'lapsed' or 'unmarked'.
    ``target`` is None where the sheet has it no more: its step is gone.
    """

    kind: str
    name: str
    state: str
    target: Target | None
    mark: Mark | None = None
    earlier: tuple[Mark, ...] = ()

    @property
    def history(self) -> tuple[Mark, ...]:
        """All its marks, oldest first."""
        return (*self.earlier, self.mark) if self.mark is not None else self.earlier

    @property
    def shown(self) -> str | None:
        """The number that the sheet shows now."""
        return self.target.shown if self.target is not None else None


@dataclass(frozen=True, slots=True)
class SignatureState:
    """How one of the three signatures stands at the sheet's revision.

    'signed': bound to the record as it is. 'lapsed': signed at this revision,
    and the sheet has moved since. 'unbound': a name in the spec alone.
    'missing': nobody.
    """

    role: str
    state: str
    name: str | None = None
    date: str | None = None
    record: str | None = None


@dataclass(frozen=True, slots=True)
class Standing:
    """How the check of a sheet stands.

    ``record`` is the identity of the whole sheet as it is; ``items`` has each
    target in the order of the sheet, ``gone`` the marked ones that the sheet
    has no more; ``authors`` are the names known for this revision;
    ``conflicts`` says in sentences which rule of independence is broken.
    """

    number: str
    revision: str
    record: str
    authors: tuple[str, ...]
    items: tuple[Item, ...]
    gone: tuple[Item, ...]
    signatures: Mapping[str, SignatureState]
    conflicts: tuple[str, ...]
    review: ReviewFile

    @property
    def unchecked(self) -> tuple[Item, ...]:
        """What the checker has to look at: never marked, or lapsed."""
        return self.of(UNMARKED, LAPSED)

    @property
    def lapsed(self) -> tuple[Item, ...]:
        """What was agreed and has moved since."""
        return self.of(LAPSED)

    @property
    def open_comments(self) -> tuple[Item, ...]:
        """Comments that the checker has not closed, those on what is gone among them."""
        return (*self.of(COMMENT), *(one for one in self.gone if one.state == COMMENT))

    def of(self, *states: str) -> tuple[Item, ...]:
        """The items in one of the states."""
        return tuple(one for one in self.items if one.state in states)

    @property
    def counts(self) -> dict[str, dict[str, int]]:
        """How many items, by kind and state; kinds that the sheet lacks are left out."""
        kinds = {one.kind for one in self.items}
        return {kind: {state: sum(one.kind == kind and one.state == state for one in self.items) for state in STATES}
                for kind in KINDS if kind in kinds}

    @property
    def checked(self) -> bool:
        """Whether every item holds as agreed or corrected, and no comment is open."""
        return not self.unchecked and not self.open_comments

    @property
    def complete(self) -> bool:
        """Whether all is checked, and the three signatures hold, of three different people."""
        signed = all(self.signatures[role].state == SIGNED for role in ROLES)
        return self.checked and signed and not self.conflicts


def standing(data: Data, review: ReviewFile | None) -> Standing:
    """How the check of a record stands; without a review file nothing is marked.

    An agreement holds while the target's identity is the one seen and its
    number still rounds to the one shown; a comment stays open until the
    checker marks the target otherwise, whatever moves or is answered.
    """
    sheet = data["sheet"]
    review = review or ReviewFile(sheet["number"])
    targets = {one.key: one for one in targets_of(data)}
    counted, refused = _counted(data, review)
    whole = record_identity(data)
    signatures = {role: _signature(data, review, role, whole) for role in ROLES}
    gone = dict.fromkeys(mark.key for mark in review.marks if mark.key not in targets)
    return Standing(sheet["number"], sheet["revision"], whole, authors(data, review, sheet["revision"]),
                    tuple(_item(key, target, counted) for key, target in targets.items()),
                    tuple(_item(key, None, counted) for key in gone),
                    signatures, (*_conflicts(signatures), *refused), review)


def authors(data: Data, review: ReviewFile, revision: str) -> tuple[str, ...]:
    """Who prepared a revision: whoever signed so, and for the sheet's own revision the name in the spec."""
    named = ((data.get("signoff") or {}).get("prepared") or {}).get("name")
    found = [one.by for one in review.signatures if one.role == "prepared" and one.revision == revision]
    found += [named] if named and revision == data["sheet"]["revision"] else []
    return tuple({plain_name(name): name for name in found}.values())


def _counted(data: Data, review: ReviewFile) -> tuple[tuple[Mark, ...], list[str]]:
    """The marks that count, and a sentence for each person whose marks do not: an author checks nobody's work."""
    written = {revision: {plain_name(name) for name in authors(data, review, revision)}
               for revision in {one.revision for one in review.marks}}
    own = [one for one in review.marks if plain_name(one.by) in written[one.revision]]
    people = dict.fromkeys((one.by, one.revision) for one in own)
    said = [f"{by} prepared revision {revision} and marked it: {BY_AUTHOR}" for by, revision in people]
    return tuple(one for one in review.marks if one not in own), said


def _item(key: tuple[str, str], target: Target | None, marks: tuple[Mark, ...]) -> Item:
    own = [one for one in marks if one.key == key]
    if not own:
        return Item(*key, UNMARKED, target)
    mark = own[-1]
    seen = target.identity if target is not None else GONE
    holds = mark.seen == seen and (target is None or shows_the_same(mark.shown, target.shown))
    state = mark.verdict if mark.verdict == COMMENT or holds else LAPSED
    return Item(*key, state, target, mark, tuple(own[:-1]))


def _signature(data: Data, review: ReviewFile, role: str, whole: str) -> SignatureState:
    """Signatures of earlier revisions are history: they say nothing of this one."""
    given = [one for one in review.signatures if one.role == role and one.revision == data["sheet"]["revision"]]
    if given:
        last: Signature = given[-1]
        return SignatureState(role, SIGNED if last.record == whole else LAPSED, last.by, last.date, last.record)
    named = (data.get("signoff") or {}).get(role)
    if named and named.get("name"):
        return SignatureState(role, UNBOUND, named["name"], named.get("date"))
    return SignatureState(role, MISSING)


def _conflicts(signatures: Mapping[str, SignatureState]) -> list[str]:
    """Prepared, checked and approved are three different people."""
    roles: dict[str, list[SignatureState]] = {}
    for one in signatures.values():
        if one.name:
            roles.setdefault(plain_name(one.name), []).append(one)
    return [f"{ones[0].name} stands for {' and '.join(one.role for one in ones)}; these are different people"
            for ones in roles.values() if len(ones) > 1]
