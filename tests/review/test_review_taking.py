"""Targets by name, marks, answers and signatures taken, and every reason why one is refused."""
from __future__ import annotations

from dataclasses import replace
from typing import Any

import pytest

from calcpack.errors import CommandError
from calcpack.review.marks import GONE, Answer, Mark, ReviewFile
from calcpack.review.naming import items_named
from calcpack.review.signing import signed
from calcpack.review.standing import Standing, standing
from calcpack.review.taking import Words, answered, marked, taken
from calcpack.review.targets import targets_of

Data = dict[str, Any]
VIRTA = Words("S. Virta", "2026-02-04")


def _names(found: Standing, *texts: str) -> list[str]:
    return [f"{item.kind}:{item.name}" for item, _ in items_named(found, texts)]


def _refused(call: Any) -> list[str]:
    with pytest.raises(CommandError) as caught:
        call()
    return [one.what for one in caught.value.faults]


@pytest.mark.parametrize(("text", "meant"), [
    ("area", ["step:area"]), ("1.3", ["step:area"]), ("1.1-1.3", ["step:dT_w", "step:m_dot", "step:area"]),
    ("1.2–1.3", ["step:m_dot", "step:area"]), ("L1-L2", ["limit:L1", "limit:L2"]), ("Q_dot", ["input:Q_dot"]),
    ("A1", ["assumption:A1"]), ("step:area", ["step:area"]), ("area, L2,1.1", ["step:area", "limit:L2", "step:dT_w"]),
    ("T_in-T_out", ["input:T_in", "input:T_out"]), ("m_dot-area", ["step:m_dot", "step:area"]),
    ("area,1.3,area", ["step:area"])])
def test_a_target_is_named_as_the_sheet_names_it(cooler: Data, text: str, meant: list[str]) -> None:
    assert _names(standing(cooler, None), text) == meant


def test_a_name_of_two_things_must_say_which(cooler: Data) -> None:
    both = cooler | {"assumptions": [cooler["assumptions"][0] | {"id": "area"}]}
    found = standing(both, None)
    with pytest.raises(CommandError) as caught:
        items_named(found, ["area"])
    assert caught.value.faults[0].expected == "assumption:area or step:area"
    assert _names(found, "assumption:area") == ["assumption:area"]


@pytest.mark.parametrize(("text", "what", "hint"), [
    ("aria", "there is nothing called 'aria' on the sheet", "did you mean 'area'?"),
    ("limit:area", "there is nothing called 'limit:area' on the sheet", None),
    ("stp:area", "'stp' in 'stp:area' is no kind of target", "did you mean 'step'?"),
    ("1.3-1.1", "the range '1.3-1.1' ends before it begins", None),
    ("L1-area", "there is nothing called 'L1-area' on the sheet", "did you mean 'area'?"),
    ("", "there is nothing called '' on the sheet", None)])
def test_an_unknown_target_is_a_fault_with_a_hint(cooler: Data, text: str, what: str, hint: str | None) -> None:
    with pytest.raises(CommandError) as caught:
        items_named(standing(cooler, None), ["1.1", text])
    assert [(one.what, one.hint) for one in caught.value.faults] == [(what, hint)]


def test_all_unknown_targets_are_told_at_once(cooler: Data) -> None:
    assert len(_refused(lambda: items_named(standing(cooler, None), ["x1,x2", "x3"]))) == 3


def test_marks_are_bound_to_what_is_seen_and_appended(cooler: Data) -> None:
    found = standing(cooler, None)
    review = marked(found, items_named(found, ["1.3", "L1"]), "agreed", VIRTA)
    area = next(one for one in targets_of(cooler) if one.name == "area")
    assert review.marks[0] == Mark("step", "area", "A", area.identity, area.shown, "agreed", "S. Virta", "2026-02-04")
    again = standing(cooler, review)
    assert marked(again, items_named(again, ["1.3"]), "agreed", VIRTA) == review
    second = marked(again, items_named(again, ["1.3"]), "agreed", Words("T. Lind", "2026-02-05"))
    assert second.marks[:2] == review.marks and second.marks[2].by == "T. Lind"


def test_the_author_marks_nothing_and_texts_are_needed(cooler: Data) -> None:
    found = standing(cooler, None)
    named = items_named(found, ["area"])
    assert _refused(lambda: marked(found, named, "agreed", Words("r aldane", "2026-02-04"))) == [
        "R. Aldane prepared revision A and cannot check it"]
    for verdict in ("comment", "corrected"):
        assert _refused(lambda verdict=verdict: marked(found, named, verdict, VIRTA)) == [
            f"a mark with the verdict {verdict} needs a text"]


@pytest.mark.parametrize(("by", "date", "text", "what"), [
    (" ", "2026-02-04", "", "the name is missing"),
    ("S. Virta", "4.2.2026", "", "'4.2.2026' is not a day of the calendar"),
    ("S. Virta", "2026-02-30", "", "'2026-02-30' is not a day of the calendar"),
    ("S.\u202eVirta", "2026-02-04", "", "the name holds a character that cannot be seen"),
    ("S.\nVirta", "2026-02-04", "", "the name holds a character that cannot be seen"),
    ("S. Virta", "2026-02-04", "a\x07", "the text holds a character that cannot be seen"),
    ("S" * 201, "2026-02-04", "", "the name is too long"),
    ("S. Virta", "2026-02-04", "x" * 8001, "the text is too long")])
def test_names_dates_and_texts_must_be_such(by: str, date: str, text: str, what: str) -> None:
    assert _refused(lambda: Words(by, date, text)) == [what]


def test_a_range_closes_no_comment_and_a_name_does(cooler: Data) -> None:
    found = standing(cooler, None)
    review = marked(found, items_named(found, ["area"]), "comment", replace(VIRTA, text="Why 1500?"))
    found = standing(cooler, review)
    assert _refused(lambda: marked(found, items_named(found, ["1.1-1.4"]), "agreed", VIRTA)) == [
        "1.3 area has an open comment, which a range does not close"]
    for texts in (["1.3"], ["1.1-1.4", "area"]):
        closed = standing(cooler, marked(found, items_named(found, texts), "agreed", VIRTA))
        assert closed.open_comments == ()


def test_an_answer_goes_to_the_open_comment_once(cooler: Data) -> None:
    found = standing(cooler, None)
    said = Words("R. Aldane", "2026-02-05", "As the catalogue says.")
    assert _refused(lambda: answered(found, items_named(found, ["area"]), said)) == [
        "1.3 area has no open comment to answer"]
    found = standing(cooler, marked(found, items_named(found, ["area"]), "comment", replace(VIRTA, text="Why 1500?")))
    named = items_named(found, ["area"])
    assert _refused(lambda: answered(found, named, replace(said, text=" "))) == ["an answer needs a text"]
    assert _refused(lambda: answered(found, named, replace(said, by="S Virta"))) == [
        "the comment on 1.3 area is S. Virta's own"]
    found = standing(cooler, answered(found, named, said))
    assert found.open_comments[0].mark.answer == Answer("R. Aldane", "2026-02-05", "As the catalogue says.")
    assert _refused(lambda: answered(found, items_named(found, ["area"]), said)) == [
        "the comment on 1.3 area has an answer already"]


def test_a_comment_on_what_is_gone_can_be_closed(cooler: Data, review_kit: Any) -> None:
    comment = Mark("step", "old", "A", "abc", "3 kW", "comment", "S. Virta", "2026-02-04", "Is this needed?")
    found = standing(cooler, review_kit.agreed(cooler, [comment]))
    review = marked(found, items_named(found, ["old"]), "agreed", VIRTA)
    assert review.marks[-1].seen == GONE and standing(cooler, review).open_comments == ()


def test_taking_a_file_twice_is_taking_it_once(cooler: Data, review_kit: Any) -> None:
    page = review_kit.agreed(cooler)
    first = taken(standing(cooler, None), page)
    assert first.marks == page.marks
    assert taken(standing(cooler, first), page) == first


def test_an_older_mark_of_another_file_does_not_overrule_a_newer_one(cooler: Data, review_kit: Any) -> None:
    area = next(one for one in targets_of(cooler) if one.name == "area")
    comment = review_kit.mark_on(area, "comment", text="Why 1500?", date="2026-02-06")
    older, newer = review_kit.mark_on(area, date="2026-02-05"), review_kit.mark_on(area, date="2026-02-07")
    ours = standing(cooler, ReviewFile("MT-7", (comment,)))
    assert standing(cooler, taken(ours, ReviewFile("MT-7", (older,)))).open_comments != ()
    assert standing(cooler, taken(ours, ReviewFile("MT-7", (newer,)))).open_comments == ()


def test_an_answer_is_taken_and_two_are_not(cooler: Data, review_kit: Any) -> None:
    area = next(one for one in targets_of(cooler) if one.name == "area")
    comment = review_kit.mark_on(area, "comment", text="Why 1500?")
    ours = standing(cooler, ReviewFile("MT-7", (comment,)))
    one, two = (replace(comment, answer=Answer("R. Aldane", "2026-02-05", text)) for text in ("So.", "Not so."))
    assert taken(ours, ReviewFile("MT-7", (one,))).marks == (one,)
    assert _refused(lambda: taken(standing(cooler, ReviewFile("MT-7", (one,))), ReviewFile("MT-7", (two,)))) == [
        "the comment of 2026-02-04 on area has two answers"]
    assert taken(standing(cooler, ReviewFile("MT-7", (one,))), ReviewFile("MT-7", (comment,))).marks == (one,)


def test_a_file_brings_neither_the_authors_marks_nor_signatures(cooler: Data, review_kit: Any) -> None:
    area = next(one for one in targets_of(cooler) if one.name == "area")
    own = ReviewFile("MT-7", (review_kit.mark_on(area, by="R. Aldane"),))
    assert _refused(lambda: taken(standing(cooler, None), own)) == ["R. Aldane prepared revision A and cannot check it"]
    signed_file = review_kit.agreed(cooler, roles=("checked",))
    assert _refused(lambda: taken(standing(cooler, None), signed_file)) == [
        "the file holds a signature that is not taken: checked, S. Virta, 2026-02-05"]


def _sign(data: Data, review: ReviewFile, role: str, name: str) -> ReviewFile:
    return signed(data, standing(data, review), role, Words(name, "2026-02-06"))


def test_three_people_sign_in_turn(cooler: Data, review_kit: Any) -> None:
    review = review_kit.agreed(cooler)
    for role, name in (("prepared", "R. Aldane"), ("checked", "S. Virta"), ("approved", "M. Okoro")):
        review = _sign(cooler, review, role, name)
    assert standing(cooler, review).complete
    assert [one.record for one in review.signatures] == [standing(cooler, None).record] * 3


@pytest.mark.parametrize(("role", "name", "why"), [
    ("prepared", "T. Lind", "the spec names another person as prepared"),
    ("checked", "r. aldane", "R. Aldane stands for prepared and cannot sign as checked"),
    ("approved", "M. Okoro", "the sheet is not signed as checked")])
def test_a_signature_that_breaks_a_rule_is_refused(
        cooler: Data, review_kit: Any, role: str, name: str, why: str) -> None:
    assert _refused(lambda: _sign(cooler, review_kit.agreed(cooler), role, name)) == [why]


def test_nobody_signs_twice_what_holds_and_everybody_may_again_what_lapsed(
        cooler: Data, change: Any, review_kit: Any) -> None:
    review = _sign(cooler, review_kit.agreed(cooler), "prepared", "R. Aldane")
    assert _refused(lambda: _sign(cooler, review, "prepared", "R. Aldane")) == [
        "revision A is signed as prepared already"]
    moved = change("value: 1.2", "value: 1.25")
    assert standing(moved, _sign(moved, review, "prepared", "R. Aldane")).signatures["prepared"].state == "signed"


def test_checked_needs_every_item_and_no_open_comment_and_tells_all(cooler: Data, change: Any, review_kit: Any) -> None:
    area = next(one for one in targets_of(cooler) if one.name == "dT_w")
    review = review_kit.agreed(cooler, [review_kit.mark_on(area, "comment", text="Why so?")])
    moved = change("value: 1.2", "value: 1.25")
    with pytest.raises(CommandError) as caught:
        _sign(moved, review, "checked", "S. Virta")
    assert [(one.what, one.found) for one in caught.value.faults] == [
        ("3 items are not checked", "L1, f_foul, 1.3 area; 3 of them moved since they were agreed"),
        ("a comment is open on 1.1 dT_w", "Why so?")]


def test_approved_needs_a_checked_that_holds(cooler: Data, change: Any, review_kit: Any) -> None:
    review = review_kit.agreed(cooler, roles=("prepared", "checked"))
    moved = change("value: 1.2", "value: 1.25")
    whole = replace(review, marks=review_kit.agreed(moved).marks)
    assert _refused(lambda: _sign(moved, whole, "approved", "M. Okoro")) == [
        "the sheet moved after it was signed as checked"]
    named = cooler | {"signoff": cooler["signoff"] | {"checked": {"name": "S. Virta", "date": None}}}
    assert _refused(lambda: _sign(named, review_kit.agreed(named), "approved", "M. Okoro")) == [
        "S. Virta is named as checker, and has not signed"]


def test_who_marked_as_checker_does_not_sign_as_author(cooler: Data, review_kit: Any) -> None:
    nameless = cooler | {"signoff": {}}
    assert _refused(lambda: _sign(nameless, review_kit.agreed(nameless), "prepared", "S. Virta")) == [
        "S. Virta has marked 12 items of revision A as its checker"]
    assert _refused(lambda: _sign(nameless, review_kit.agreed(nameless), "checked", "S. Virta")) == [
        "the sheet has no author yet, who must be another person"]
