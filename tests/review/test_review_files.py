"""A review file is written in one form and read strictly, whoever wrote it."""
from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
import yaml
from hypothesis import given
from hypothesis import strategies as st

from calcpack.errors import SpecError
from calcpack.review.marks import Answer, Mark, ReviewFile, Signature, same_person
from calcpack.review.reading import own_comments, read_review
from calcpack.review.writing import review_path, review_text, scalar
from calcpack.spec.source import UNSEEN

FILE = Path("pump.review.yaml")
REVIEW = ReviewFile("MT-103", (
    Mark("step", "T_2", "A", "0a1b2c3d4e5f60718293", "354.78 K", "comment", "S. Virta", "2026-10-20",
         "Where does the loss go: into the gas?\nSee page 5.",
         Answer("R. Aldane", "2026-10-21", "Into the room, see A2")),
    Mark("step", "T_2", "B", "e0fa1b2c3d4e5f607182", "354.49 K", "corrected", "S. Virta", "2026-10-22", "no"),
    Mark("limit", "L1", "B", "1e10", "4.239", "agreed", "S. Virta", "2026-10-22"),
    Mark("figure", "log-p-h", "B", "abc", None, "agreed", "S. Virta", "2026-10-22"),
), (Signature("checked", "S. Virta", "2026-10-22", "B", "5f60"),))

TEXT = """\
# Marks of the check of sheet MT-103. Written by 'calcpack review' and by the sheet's page; keep it in git.
review: 1
sheet: MT-103
marks:
  - step: T_2
    revision: A
    seen: "0a1b2c3d4e5f60718293"
    shown: "354.78 K"
    verdict: comment
    by: S. Virta
    date: "2026-10-20"
    text: "Where does the loss go: into the gas?\\nSee page 5."
    answer:
      by: R. Aldane
      date: "2026-10-21"
      text: "Into the room, see A2"
  - step: T_2
    revision: B
    seen: e0fa1b2c3d4e5f607182
    shown: "354.49 K"
    verdict: corrected
    by: S. Virta
    date: "2026-10-22"
    text: "no"
  - limit: L1
    revision: B
    seen: "1e10"
    shown: "4.239"
    verdict: agreed
    by: S. Virta
    date: "2026-10-22"
  - figure: log-p-h
    revision: B
    seen: abc
    verdict: agreed
    by: S. Virta
    date: "2026-10-22"
signatures:
  - role: checked
    by: S. Virta
    date: "2026-10-22"
    revision: B
    record: "5f60"
"""


def test_the_form_is_one_key_a_line_in_a_fixed_order() -> None:
    assert review_text(REVIEW) == TEXT
    assert read_review(FILE, TEXT) == REVIEW


def test_another_reader_of_yaml_reads_the_same_texts() -> None:
    read = yaml.load(TEXT, Loader=yaml.BaseLoader)
    assert read["marks"][0]["text"] == REVIEW.marks[0].text and read["marks"][1]["text"] == "no"
    assert read["marks"][2]["seen"] == "1e10" and read["signatures"][0]["record"] == "5f60"


def test_a_new_mark_is_a_block_of_new_lines_in_a_diff() -> None:
    more = ReviewFile("MT-103", (*REVIEW.marks, REVIEW.marks[-1]))
    less = ReviewFile("MT-103", REVIEW.marks)
    assert review_text(more).startswith(review_text(less))
    assert "signatures" not in review_text(less) and "marks" not in review_text(ReviewFile("MT-103"))


def test_a_review_file_lies_beside_its_spec() -> None:
    assert review_path(Path("specs/pump.yaml")) == Path("specs/pump.review.yaml")


@pytest.mark.parametrize(("text", "written"), [
    ("S. Virta", "S. Virta"), ("MT-103", "MT-103"), ("Off", '"Off"'), ("No", '"No"'), ("null", '"null"'),
    ("103", '"103"'), ("a: b", '"a: b"'), ("a #b", '"a #b"'), ("-x", '"-x"'), ("é", '"é"'), ("a  b", '"a  b"'),
    (" a ", "a"), ("a\n", "a"), ("T_2 (see A2)", "T_2 (see A2)"), ("say \"so\"\\", '"say \\"so\\"\\\\"'),
    ("tab\there", '"tab\\there"'), ("α β", '"α β"'), ("", '""')])
def test_a_scalar_is_plain_where_no_reader_could_take_it_for_anything_else(text: str, written: str) -> None:
    assert scalar(text) == written


_SEEN = st.text(st.characters(exclude_categories=("Cs",)), min_size=1, max_size=30).map(str.strip).filter(
    lambda text: text != "" and not UNSEEN.search(text) and "\r" not in text)


@given(_SEEN, _SEEN, _SEEN, st.booleans())
def test_what_is_written_is_read_again(name: str, by: str, text: str, answered: bool) -> None:
    answer = Answer(by, "2026-10-21", text) if answered else None
    review = ReviewFile("MT-1", (Mark("step", name, "A", "x1", name, "comment", by, "2026-10-20", text, answer),))
    written = review_text(review)
    assert read_review(FILE, written) == review
    assert yaml.load(written, Loader=yaml.BaseLoader)["marks"][0]["text"] == text
    assert scalar(text) in (text, json.dumps(text, ensure_ascii=False))


HAND = """\
review: 1
sheet: MT-103
marks:
- {step: T_2, revision: B, seen: 0a1b, verdict: agreed, by: S. Virta, date: 2026-10-20}
- by: S. Virta
  date: 2026-10-20
  verdict: comment
  text: >
    Two lines
    folded.
  step: p_e
  seen: 0a1c
  shown: 5.1 bar
  revision: B
  answer:
    by: R. Aldane
    date: 2026-10-21
    text: |
      As the offer says:
      page 5.
signatures:
"""


def test_a_file_written_by_hand_works_in_any_form_of_yaml() -> None:
    found = read_review(FILE, HAND)
    assert found.marks[0] == Mark("step", "T_2", "B", "0a1b", None, "agreed", "S. Virta", "2026-10-20")
    assert found.marks[1].text == "Two lines folded." and found.marks[1].shown == "5.1 bar"
    assert found.marks[1].answer == Answer("R. Aldane", "2026-10-21", "As the offer says:\npage 5.")
    assert read_review(FILE, review_text(found)) == found


FAULTS: list[tuple[str, str, str]] = [
    ("review: 1", "review: 2", "pump.review.yaml:1:9: this calcpack reads format 1 of a review file"),
    ("sheet: MT-103\n", "", "pump.review.yaml:1:1: key 'sheet' is missing in the review file"),
    ("sheet: MT-103", "sheet: MT-104", "pump.review.yaml:2:8: this is the review of another sheet"),
    ("sheet: MT-103", "sheet:", "pump.review.yaml:2:1: key 'sheet' has no value"),
    ("marks:", "remarks:", "pump.review.yaml:3:1: unknown key 'remarks' in the review file"),
    ("verdict: agreed", "verdict: agree", "pump.review.yaml:4:49: 'agree' is not a value of verdict"),
    ("verdict: agreed, ", "", "pump.review.yaml:4:4: key 'verdict' is missing in a mark"),
    ("date: 2026-10-20}", "date: 2026-02-30}", "pump.review.yaml:4:77: '2026-02-30' is not a day of the calendar"),
    ("step: T_2, ", "", "pump.review.yaml:4:3: a mark needs one target"),
    ("step: T_2, ", "step: T_2, limit: L1, ", "pump.review.yaml:4:15: a mark has more than one target"),
    ("step: T_2, ", "steps: T_2, ", "pump.review.yaml:4:3: a mark needs one target"),
    ("verdict: agreed", "verdict: corrected", "pump.review.yaml:4:49: a mark with the verdict corrected needs a text"),
    ("  step: p_e\n", "  step: p_e\n  step: p_e\n", "pump.review.yaml:12:3: key 'step' is given twice"),
    ("  answer:\n    by: R. Aldane\n    date: 2026-10-21\n", "  answer:\n    by: R. Aldane\n",
     "pump.review.yaml:16:5: key 'date' is missing in an answer"),
    ("  answer:\n    by: R. Aldane\n    date: 2026-10-21\n    text: |\n      As the offer says:\n      page 5.\n",
     "  answer: yes\n", "pump.review.yaml:15:11: a mapping is meant for answer"),
    ("signatures:\n", "signatures:\n- {role: check, by: S. Virta, date: 2026-10-20, revision: B, record: 5f}\n",
     "pump.review.yaml:22:10: 'check' is not a value of role"),
    ("signatures:\n", "signatures: S. Virta\n", "pump.review.yaml:21:13: a list is meant for signatures"),
    ("seen: 0a1c", "seen: [0a1c]", "pump.review.yaml:12:9: a text is meant for seen"),
    ("review: 1", "review: &one 1", "pump.review.yaml:1:9: an anchor, '&one', is not allowed"),
    ("  text: >\n", "  text: x: y\n", "pump.review.yaml:8:10: a colon does not belong here"),
]


@pytest.mark.parametrize(("old", "new", "told"), FAULTS)
def test_every_fault_has_its_place(old: str, new: str, told: str) -> None:
    assert HAND.count(old) >= 1
    with pytest.raises(SpecError) as caught:
        read_review(FILE, HAND.replace(old, new, 1), number="MT-103")
    assert told in [f"{one.place}: {one.what}" for one in caught.value.faults]


def test_an_empty_file_and_one_that_is_no_review_are_faults() -> None:
    for text, told in (("", "the review file is empty"), ("- a\n", "the review file must be a mapping of keys"),
                       ("calcpack: 1\n", "unknown key 'calcpack' in the review file")):
        with pytest.raises(SpecError) as caught:
            read_review(FILE, text)
        assert any(one.what == told for one in caught.value.faults), text


def test_all_faults_come_at_once_in_the_order_of_the_file() -> None:
    text = HAND.replace("verdict: agreed", "verdict: agree").replace("date: 2026-10-21", "date: tomorrow")
    with pytest.raises(SpecError) as caught:
        read_review(FILE, text)
    assert [one.place.line for one in caught.value.faults if one.place] == [4, 17]


@pytest.mark.parametrize("text", [TEXT, HAND, TEXT.replace("by: S. Virta", 'by: "#1 S. Virta"')])
def test_a_sign_inside_a_text_is_no_comment(text: str) -> None:
    assert own_comments(FILE, text) == ()


@pytest.mark.parametrize(("text", "line", "column"), [
    (TEXT + "# ask again\n", 44, 1), (TEXT.replace("verdict: comment", "verdict: comment # why"), 9, 22),
    ("# mine\n" + HAND, 1, 1), (HAND.replace("- by", "# two\n- by"), 5, 1)])
def test_a_comment_that_would_be_lost_is_found(text: str, line: int, column: int) -> None:
    assert [(one.place.line, one.place.column) for one in own_comments(FILE, text) if one.place] == [(line, column)]


@pytest.mark.parametrize(("one", "other", "same"), [
    ("S. Virta", "s virta", True), ("S.Virta", "S. Virta", True), ("S. Virta", "R. Virta", False)])
def test_names_are_compared_without_case_space_and_full_stops(one: str, other: str, same: Any) -> None:
    assert same_person(one, other) is same
