"""The page's scripts and the command hold to one rule each: the text of a file, what lapses, what is merged."""
from __future__ import annotations

import dataclasses
import json
from decimal import Decimal
from pathlib import Path
from typing import Any

import pytest
from chromium_client import Tab
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from calcpack.errors import CommandError
from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.render.marking import review_data
from calcpack.review.marks import Answer, Mark, ReviewFile, Signature, plain_name
from calcpack.review.reading import read_review
from calcpack.review.standing import standing
from calcpack.review.taking import taken
from calcpack.review.targets import shows_the_same, targets_of
from calcpack.review.writing import review_text
from calcpack.spec.source import UNSEEN

OFTEN = settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
TEXT = st.text(st.characters(codec="utf-8"), min_size=1, max_size=40).map(
    lambda text: UNSEEN.sub("", text).replace("\r", "").strip()).filter(bool)
TRAPS = st.sampled_from([
    "yes", "No", "null", "~", "1e3", "0x1f", "12:30", "2026-11-02", "a: b", "# no", "- x", "'", '"', "\\", "T_2", "é",
    "two  blanks", "a\nb", "{a}", "[", "%", "°C", "88.31 °C", "S. Virta", "true ", "on", "a #b", "-5", "=", "!x", "&a",
    "M. Weiß", "Άρης"])
WORD = st.one_of(TRAPS.map(str.strip), TEXT)
NAME = WORD.map(lambda text: text.replace("\n", " "))
DATE = st.dates().map(str)


def marks(names: st.SearchStrategy[str] = NAME, by: st.SearchStrategy[str] = NAME) -> st.SearchStrategy[Mark]:
    answers = st.none() | st.builds(Answer, NAME, DATE, WORD)
    return st.builds(Mark, st.sampled_from(["step", "input", "assumption", "limit", "figure"]), names,
                     NAME, NAME, st.none() | NAME, st.sampled_from(["comment", "corrected"]), by, DATE, WORD, answers)


SIGNATURES = st.builds(Signature, st.sampled_from(["prepared", "checked", "approved"]), NAME, DATE, NAME, NAME)


def plain(record: Record, review: ReviewFile) -> dict[str, Any]:
    """Marks and signatures as the page carries them."""
    return json.loads(str(review_data(record.data, review)))


@pytest.fixture(scope="module")
def record(spec: Path) -> Record:
    return solve_spec(spec)


@OFTEN
@given(st.lists(marks(), max_size=4), st.lists(SIGNATURES, max_size=2))
def test_the_page_writes_and_reads_the_bytes_that_the_command_writes(
        scripts: Tab, record: Record, listed: list[Mark], signed: list[Signature]) -> None:
    review = ReviewFile("MT-140", tuple(listed), tuple(signed))
    given_marks = plain(record, review)
    call = ", ".join(json.dumps(given_marks[key]) for key in ("marks", "signatures"))
    text = scripts.js(f"calcpackReview.text.write('MT-140', {call})")
    assert text == review_text(review)
    assert read_review(Path("x.review.yaml"), text) == review
    again = scripts.js(f"calcpackReview.text.read({json.dumps(text)}, 'MT-140')")
    assert again == {key: given_marks[key] for key in ("marks", "signatures")}


NUMBERS = st.decimals(Decimal("-999"), Decimal("999"), places=3).flatmap(
    lambda number: st.sampled_from([f"{number}", f"{number:.1f}", f"{number:.2f}", f"{number:.0f}", f"{number:.2e}",
                                    f"{number:.2f}".replace("-", "−")]))
SHOWN = st.none() | st.tuples(NUMBERS, st.sampled_from(["", " K", " °C", " kW (3.1 h)"])).map("".join)


@OFTEN
@given(SHOWN, SHOWN)
def test_page_and_command_agree_on_what_is_still_the_same_number(
        scripts: Tab, seen: str | None, now: str | None) -> None:
    values = ", ".join("undefined" if one is None else json.dumps(one) for one in (seen, now))
    assert scripts.js(f"calcpackReview.marks.showsTheSame({values})") is shows_the_same(seen, now)


@pytest.mark.parametrize(("seen", "now", "same"), [
    ("88.31 °C", "88.312 °C", True), ("88.31 °C", "88.32 °C", False), ("88.3 K", "88.35 K", True),
    ("88.3 K", "88.351 K", False), ("88.3 K", "88.3 °C", False), ("1.2e3 W", "1249 W", True),
    ("1.2e3 W", "1251 W", False), ("126.0037 kJ", "126.004 kJ", True)])
def test_a_number_is_the_same_to_the_digits_of_the_one_that_has_fewer(
        scripts: Tab, seen: str, now: str, same: bool) -> None:
    assert shows_the_same(seen, now) is same
    assert scripts.js(f"calcpackReview.marks.showsTheSame('{seen}', '{now}')") is same


@OFTEN
@given(NAME, NAME)
def test_page_and_command_agree_on_whose_name_it_is(scripts: Tab, one: str, other: str) -> None:
    for name in (one, other, f" {one.upper()} .", f"{one} {other}"):
        same = scripts.js(f"calcpackReview.marks.plainName({json.dumps(one)}) === "
                          f"calcpackReview.marks.plainName({json.dumps(name)})")
        assert same is (plain_name(one) == plain_name(name)), name


PEOPLE = st.sampled_from(["S. Virta", "s virta", "M. Okoro", "R. Aldane"])


@st.composite
def histories(draw: st.DrawFn, record: Record) -> tuple[Mark, ...]:
    """Marks on places of the sheet, on one that is gone among them; some saw what is there and some did not."""
    targets = {one.key: one for one in targets_of(record.data)}
    found = []
    for _ in range(draw(st.integers(0, 12))):
        kind, name = draw(st.sampled_from([*targets, ("step", "lost")]))
        target = targets.get((kind, name))
        there = target is not None and draw(st.booleans())
        verdict = draw(st.sampled_from(["agreed", "comment", "corrected"]))
        shown = draw(st.sampled_from([target.shown if target else None, "3 K", None]))
        found.append(Mark(kind, name, draw(st.sampled_from(["A", "0"])), target.identity if there else "moved",
                          shown, verdict, draw(PEOPLE), draw(DATE), "Why?"))
    return tuple(found)


@OFTEN
@given(st.data())
def test_page_and_command_agree_on_how_each_place_stands(scripts: Tab, record: Record, data: st.DataObject) -> None:
    signed = data.draw(st.lists(st.builds(Signature, st.just("prepared"), PEOPLE, DATE, st.sampled_from(["A", "0"]),
                                          st.just("x")), max_size=1))
    review = ReviewFile("MT-140", data.draw(histories(record)), tuple(signed))
    found = scripts.js(f"""((data) => {{
      const places = calcpackReview.places.placesOf(document.querySelector("main"));
      const desk = new calcpackReview.desk.Desk({{ data, places, store: data, settings: null, view: null, off: null }});
      return [desk.items.map((one) => [one.place.kind, one.place.name, one.state]),
              calcpackReview.marks.goneComments(places, desk.marks)];
    }})({json.dumps(plain(record, review))})""")
    expected = standing(record.data, review)
    assert sorted(map(tuple, found[0])) == sorted((one.kind, one.name, one.state) for one in expected.items)
    assert found[1] == sum(one.state == "comment" for one in expected.gone)


@OFTEN
@given(st.data())
def test_page_and_command_take_the_marks_of_another_file_alike(
        scripts: Tab, record: Record, data: st.DataObject) -> None:
    pool = st.lists(marks(st.sampled_from(["m_w", "Q_w"]), st.just("S. Virta")), min_size=1, max_size=5)
    drawn = data.draw(pool)
    answered = [data.draw(st.sampled_from([one, dataclasses.replace(one, answer=None)])) for one in drawn]
    ours = tuple(data.draw(st.permutations(drawn))[:3])
    mine, theirs = ReviewFile("MT-140", ours), ReviewFile("MT-140", tuple(answered))
    stands = standing(record.data, mine)
    call = ", ".join(json.dumps(plain(record, one)["marks"]) for one in (mine, theirs))
    twice = scripts.js(f"calcpackReview.marks.twiceAnswered({call}) ?? null")
    try:
        expected = taken(stands, theirs)
    except CommandError:
        assert twice is not None
        return
    assert twice is None
    assert scripts.js(f"calcpackReview.marks.merged({call})") == plain(record, expected)["marks"]
