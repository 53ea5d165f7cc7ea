"""How a check stands: what holds, what lapses by itself, what stays open, whose signature counts."""
from __future__ import annotations

import pickle
from dataclasses import replace
from typing import Any

import pytest

from calcpack.review.marks import GONE, Answer, Mark, ReviewFile, Signature
from calcpack.review.standing import standing
from calcpack.review.targets import Target, targets_of

Data = dict[str, Any]
ALL = ("prepared", "checked", "approved")


def _target(data: Data, name: str) -> Target:
    return next(one for one in targets_of(data) if one.name == name)


def _state(data: Data, review: ReviewFile, name: str) -> str:
    return next(one.state for one in standing(data, review).items if one.name == name)


def test_without_a_review_file_nothing_is_checked_and_the_author_is_known_from_the_spec(cooler: Data) -> None:
    found = standing(cooler, None)
    assert {one.state for one in found.items} == {"unmarked"} and len(found.unchecked) == len(found.items) == 12
    assert found.authors == ("R. Aldane",) and not found.complete
    assert {role: one.state for role, one in found.signatures.items()} == {
        "prepared": "unbound", "checked": "missing", "approved": "missing"}


def test_a_sheet_is_complete_when_all_is_agreed_and_three_people_signed(cooler: Data, review_kit: Any) -> None:
    found = standing(cooler, review_kit.agreed(cooler, roles=ALL))
    assert found.complete and found.checked and found.unchecked == () and found.open_comments == ()
    assert found.counts["input"] == {"agreed": 5, "corrected": 0, "comment": 0, "lapsed": 0, "unmarked": 0}
    assert pickle.loads(pickle.dumps(found)) == found


@pytest.mark.parametrize("role", ALL)
def test_two_signatures_are_not_enough(cooler: Data, review_kit: Any, role: str) -> None:
    found = standing(cooler, review_kit.agreed(cooler, roles=[one for one in ALL if one != role]))
    assert not found.complete


def test_agreed_and_corrected_lapse_when_anything_moves_and_hold_on_what_stayed(
        cooler: Data, change: Any, review_kit: Any) -> None:
    put_right = review_kit.mark_on(_target(cooler, "area"), "corrected", text="fouling was left out")
    review = review_kit.agreed(cooler, [put_right], ALL)
    assert _state(cooler, review, "area") == "corrected"
    moved = standing(change("value: 1.2", "value: 1.25"), review)
    assert {one.name for one in moved.lapsed} == {"f_foul", "area", "L1"} and moved.unchecked == moved.lapsed
    assert {one.state for one in moved.items if one.name not in {"f_foul", "area", "L1"}} == {"agreed"}
    assert {one.state for one in moved.signatures.values()} == {"lapsed"} and not moved.complete


def test_a_mark_of_an_earlier_revision_holds_where_nothing_moved(cooler: Data, review_kit: Any) -> None:
    later = cooler | {"sheet": cooler["sheet"] | {"revision": "B"}}
    found = standing(later, review_kit.agreed(cooler, roles=ALL))
    assert found.checked
    # Who signed revision A has said nothing of revision B.
    assert {role: one.state for role, one in found.signatures.items()} == {
        "prepared": "unbound", "checked": "missing", "approved": "missing"}


def test_a_mark_holds_by_rounding_and_lapses_by_a_digit(cooler: Data, review_kit: Any) -> None:
    area = _target(cooler, "area")
    coarse = replace(area, shown=f"{float((area.shown or '').split()[0]):.1f} m²")
    off = replace(area, shown="3.1 m²")
    assert _state(cooler, review_kit.agreed(cooler, [review_kit.mark_on(coarse)]), "area") == "agreed"
    assert _state(cooler, review_kit.agreed(cooler, [review_kit.mark_on(off)]), "area") == "lapsed"


def test_a_comment_stays_open_whatever_moves_and_is_answered_until_the_checker_closes_it(
        cooler: Data, change: Any, review_kit: Any) -> None:
    area = _target(cooler, "area")
    comment = review_kit.mark_on(area, "comment", text="Why 1500?", answer=Answer("R. Aldane", "2026-02-05", "So."))
    review = review_kit.agreed(cooler, [comment], ALL)
    for data in (cooler, change("value: 1.2", "value: 1.25")):
        found = standing(data, review)
        assert [one.name for one in found.open_comments] == ["area"] and not found.complete
    moved = change("value: 1.2", "value: 1.25")
    closed = replace(review, marks=(*review.marks, review_kit.mark_on(_target(moved, "area"))))
    found = standing(moved, closed)
    assert found.open_comments == () and _state(moved, closed, "area") == "agreed"
    item = next(one for one in found.items if one.name == "area")
    assert [one.verdict for one in item.history] == ["agreed", "comment", "agreed"]


def test_a_mark_by_the_author_counts_for_nothing_and_is_told(cooler: Data, review_kit: Any) -> None:
    own = review_kit.mark_on(_target(cooler, "area"), by="r. aldane")
    comment = review_kit.mark_on(_target(cooler, "area"), "comment", text="Why?")
    review = review_kit.agreed(cooler, [comment, own], ALL)
    found = standing(cooler, review)
    assert [one.name for one in found.open_comments] == ["area"] and not found.complete
    assert found.conflicts == ("r. aldane prepared revision A and marked it: "
                               "a mark by the sheet's author does not count",)


def test_who_wrote_one_revision_may_check_another(cooler: Data, review_kit: Any) -> None:
    """S. Virta checked A; for B the pen has changed hands, and what stayed as it was stays checked."""
    review = review_kit.agreed(cooler, roles=ALL)
    later = cooler | {"sheet": cooler["sheet"] | {"revision": "B"},
                      "signoff": {"prepared": {"name": "S. Virta", "date": "2026-03-01"}}}
    assert standing(later, review).checked
    again = replace(review, marks=(*review.marks, review_kit.mark_on(_target(later, "area"), revision="B")))
    assert standing(later, again).conflicts != ()


@pytest.mark.parametrize(("role", "name"), [("checked", "R Aldane"), ("approved", "s. virta"),
                                            ("approved", "R. Aldane")])
def test_one_person_in_two_roles_is_a_conflict(cooler: Data, review_kit: Any, role: str, name: str) -> None:
    review = review_kit.agreed(cooler, roles=ALL)
    signatures = tuple(replace(one, by=name) if one.role == role else one for one in review.signatures)
    found = standing(cooler, replace(review, signatures=signatures))
    assert len(found.conflicts) == 1 and "different people" in found.conflicts[0] and not found.complete


def test_a_name_in_the_spec_is_unbound_until_it_is_signed(cooler: Data, review_kit: Any) -> None:
    named = cooler | {"signoff": {role: {"name": name, "date": None} for role, name in
                                  (("prepared", "R. Aldane"), ("checked", "S. Virta"), ("approved", "M. Okoro"))}}
    assert {one.state for one in standing(named, review_kit.agreed(named)).signatures.values()} == {"unbound"}
    assert standing(named, review_kit.agreed(named, roles=ALL)).complete


def test_the_last_signature_of_a_role_stands(cooler: Data, review_kit: Any) -> None:
    review = review_kit.agreed(cooler, roles=ALL)
    stale = Signature("checked", "S. Virta", "2026-02-03", "A", "0123")
    first = replace(review, signatures=(stale, *review.signatures))
    last = replace(review, signatures=(*review.signatures, stale))
    assert standing(cooler, first).complete
    assert standing(cooler, last).signatures["checked"].state == "lapsed"


def test_a_mark_whose_step_is_gone_is_kept_and_its_comment_stays_open(cooler: Data, review_kit: Any) -> None:
    comment = Mark("step", "old", "A", "abc", "3 kW", "comment", "S. Virta", "2026-02-04", "Is this needed?")
    review = review_kit.agreed(cooler, [comment], ALL)
    found = standing(cooler, review)
    assert [(one.name, one.target) for one in found.gone] == [("old", None)]
    assert [one.name for one in found.open_comments] == ["old"] and not found.complete
    closed = replace(comment, seen=GONE, shown=None, verdict="agreed", text=None)
    assert standing(cooler, replace(review, marks=(*review.marks, closed))).complete
