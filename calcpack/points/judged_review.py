"""Points on the check by a person: who signed, comments kept with what came of them, signatures bound to the record."""
from __future__ import annotations

from calcpack.points.point import IDLE, PERSON, UNMET, Judge, Verdict, View, decided, shortened
from calcpack.review.marks import ROLES, plain_name
from calcpack.review.standing import LAPSED, SIGNED, UNBOUND, Standing

PART = "Check by another person"


def _signed(view: View) -> Verdict:
    """Three names with dates, three people; where there is a review file, by signatures that hold."""
    standing: Standing | None = view.extras.review
    if standing is None:
        given = {role: (view.record.get("signoff") or {}).get(role) or {} for role in ROLES}
        missing = [role for role, one in given.items() if not one.get("name") or not one.get("date")]
        people = [(one.get("name") or "", one.get("date") or "") for one in given.values()]
    else:
        missing = [role for role in ROLES if standing.signatures[role].state != SIGNED]
        people = [(one.name or "", one.date or "") for one in standing.signatures.values()]
    if missing:
        return UNMET, f"not yet signed: {', '.join(missing)}"
    if len({plain_name(name) for name, _ in people}) < len(ROLES):
        return UNMET, "author, checker and approver are not three people"
    printed = all(name in view.title and date in view.title for name, date in people)
    return decided(printed, "title block", "a name or a date is not in the title block")


def _comments(view: View) -> Verdict:
    """Every comment and correction of the review file, with its answer, in print."""
    standing: Standing | None = view.extras.review
    if standing is None:
        return PERSON, "no review file lies beside the spec"
    said = [mark for mark in standing.review.marks if mark.text]
    if not said:
        return IDLE, "nobody has commented"
    texts = [text for one in said for text in (one.text, one.answer.text if one.answer else None) if text]
    lost = [text[:30] for text in texts if not view.prints("review", text)]
    count = f"{len(said)} {'comment or correction' if len(said) == 1 else 'comments and corrections'}"
    return decided(not lost, f"{PART}: {count}", f"not printed: {shortened(lost)}")


def _bound(view: View) -> Verdict:
    """No signature outlives a change: each is bound to the record's identity, and the page says whether it holds."""
    standing: Standing | None = view.extras.review
    if standing is None:
        checked = (view.record.get("signoff") or {}).get("checked")
        return (UNMET, "a signature does not carry the hash of what was signed") if checked else \
            (IDLE, "the sheet has not been checked")
    states = {role: standing.signatures[role].state for role in ROLES}
    bad = [f"{role} {'lapsed' if state == LAPSED else 'is a name in the spec alone'}"
           for role, state in states.items() if state in (LAPSED, UNBOUND)]
    if bad:
        return UNMET, ", ".join(bad)
    given = [role for role, state in states.items() if state == SIGNED]
    if not given:
        return IDLE, "nobody has signed"
    return decided(view.title.count(standing.record[:12]) >= len(given), "title block: bound to the record",
                   "the title block does not say what a signature is bound to")


JUDGES: dict[int, Judge] = {45: _signed, 49: _comments, 50: _bound}
