"""The sheet prints how its check stands: part, title block, and the points of the checklist on it."""
from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.points import Point, points
from calcpack.points.point import IDLE, MET, PERSON, UNMET
from calcpack.record import Record
from calcpack.render.pages import Extras
from calcpack.render.sheet import sheet_html
from calcpack.render.site import judged_pages
from calcpack.reread.elements import Element, elements_of
from calcpack.reread.from_print import redo
from calcpack.reread.page_reader import read_page, rows, table_of
from calcpack.review.marks import Answer, Mark, ReviewFile
from calcpack.review.standing import Standing, standing
from calcpack.review.targets import Target, targets_of
from calcpack.review.writing import review_text

Data = dict[str, Any]
ALL = ("prepared", "checked", "approved")


def _page(data: Data, found: Standing | None, for_print: bool = False) -> str:
    return sheet_html(Record(data), extras=Extras(review=found), for_print=for_print)


def _part(page: str) -> Element | None:
    return next((one for one in elements_of(page).all(".part") if one.id == "part-review"), None)


def _rows(page: str, name: str) -> list[list[str]]:
    return [[cell.text for cell in row] for row in rows(table_of(_part(page), name))]


def _signatures(page: str) -> list[list[str]]:
    table = next(one for one in elements_of(page).all("table") if "signatures" in one.classes)
    return [[cell.text for cell in row] for row in rows(table)]


def _target(data: Data, name: str) -> Target:
    return next(one for one in targets_of(data) if one.name == name)


def test_without_a_review_file_the_sheet_is_as_before(cooler: Data) -> None:
    page = _page(cooler, None)
    assert _part(page) is None and "part-review" not in page
    assert _signatures(page) == [["R. Aldane", "2026-02-03", ""], ["", "", ""], ["", "", ""]]


@pytest.mark.parametrize("for_print", [False, True])
def test_the_part_of_a_complete_check(cooler: Data, review_kit: Any, for_print: bool) -> None:
    found = standing(cooler, review_kit.agreed(cooler, roles=ALL))
    page = _page(cooler, found, for_print)
    part = _part(page)
    assert part is not None and "All 12 items are checked, and no comment is open." in part.text
    assert _rows(page, "standing-counts") == [
        ["limits", "2", "–", "–", "–", "–"], ["inputs", "5", "–", "–", "–", "–"],
        ["assumptions", "1", "–", "–", "–", "–"], ["steps", "4", "–", "–", "–", "–"], ["all", "12", "–", "–", "–", "–"]]
    assert "Checked by S. Virta (12 items, 2026-02-04)." in part.text
    assert _signatures(page) == [[name, "2026-02-05", f"signed for this record, {found.record[:12]}"]
                                 for name in ("R. Aldane", "S. Virta", "M. Okoro")]
    assert "Checked and signed in full" in page and "comments" not in [one for each in part.all("table")
                                                                       for one in each.classes]


def test_comments_stand_with_answer_and_with_what_came_of_them(cooler: Data, review_kit: Any) -> None:
    area, kept = _target(cooler, "area"), _target(cooler, "kept")
    answer = Answer("R. Aldane", "2026-02-05", "R1.")
    marks = [review_kit.mark_on(area, "comment", text="Why 1500 for T_in?", answer=answer),
             review_kit.mark_on(area, "comment", text="R1 has 1400.", date="2026-02-06"),
             review_kit.mark_on(area, "corrected", text="1400 was of the old plates", date="2026-02-07"),
             review_kit.mark_on(kept, "comment", text="Is this <b>needed</b>?")]
    page = _page(cooler, standing(cooler, review_kit.agreed(cooler, marks)))
    found = _rows(page, "comments")
    assert [row[0].replace("\u2009", " ") for row in found] == ["1.3 area", "1.3 area", "1.3 area", "1.4 kept"]
    assert [row[3].split("S. Virta")[0].strip() for row in found] == ["commented again", "corrected", "stands", "OPEN"]
    assert "R1." in found[0][2] and "R. Aldane, 2026-02-05" in found[0][2]
    assert "S. Virta, 2026-02-04, revision A, of 3.84" in found[0][1]
    assert "Is this <b>needed</b>?" in found[3][1] and "&lt;b&gt;needed" in page
    assert "Of 12 items none are not checked; none were agreed and moved since; 1 comment is open." in page


def test_what_lapsed_stands_with_both_numbers_and_voids_the_signatures(
        cooler: Data, change: Any, review_kit: Any) -> None:
    moved = change("value: 1.2", "value: 1.25")
    found = standing(moved, review_kit.agreed(cooler, roles=ALL))
    page = _page(moved, found)
    was, now = _target(cooler, "area").shown, _target(moved, "area").shown
    lapsed = {row[0]: row[1:] for row in _rows(page, "lapsed")}
    assert {"".join(key.split()) for key in lapsed} == {"L1", "ffoul", "1.3area"}
    assert [" ".join(cell.split()) for cell in lapsed["L1"]] == [was, now]
    assert "Was agreed at revision A by S. Virta, 2026-02-04, moved since" in page
    assert all(row[2].startswith("VOID: signed for record ") for row in _signatures(page))
    assert "Check open: 3 moved since, 3 signatures" in " ".join(elements_of(page).text.split())


def test_what_moved_behind_an_unchanged_number_is_named_too(cooler: Data, review_kit: Any) -> None:
    review = review_kit.agreed(cooler)
    marks = tuple(replace(one, seen="0000") if one.name in ("dT_w", "m_dot", "area") else one for one in review.marks)
    part = _part(_page(cooler, standing(cooler, replace(review, marks=marks))))
    assert part is not None and "with the same number as before or none: steps 1.1–1.3." in part.text


def test_a_gone_step_and_a_broken_rule_are_told(cooler: Data, review_kit: Any) -> None:
    gone = Mark("step", "old", "A", "abc", "3 kW", "comment", "S. Virta", "2026-02-04", "Is this needed?")
    own = review_kit.mark_on(_target(cooler, "area"), by="R. Aldane")
    part = _part(_page(cooler, standing(cooler, review_kit.agreed(cooler, [gone, own]))))
    assert part is not None and "its step is gone" in part.text
    assert "AGAINST THE RULES R. Aldane prepared revision A and marked it" in part.text


def test_every_link_of_the_part_leads_to_a_place_of_the_page(cooler: Data, review_kit: Any) -> None:
    marks = [review_kit.mark_on(one, "comment", text="Why?") for one in targets_of(cooler)]
    page = _page(cooler, standing(cooler, review_kit.agreed(cooler, marks)))
    at = page.index('id="part-review"')
    links = re.findall(r'href="#([^"]+)"', page[at:page.index("</section>", at)])
    assert len(links) == 12 and all(f'id="{one}"' in page for one in links)


def test_the_reader_of_finished_pages_reads_the_same_with_and_without_a_check(cooler: Data, review_kit: Any) -> None:
    bare = read_page(_page(cooler, None))
    review = review_kit.agreed(cooler, [review_kit.mark_on(one, "comment", text="Is 3.84 m2 right?")
                                        for one in targets_of(cooler)], ALL)
    for found in (standing(cooler, None), standing(cooler, review)):
        assert read_page(_page(cooler, found)) == bare
    pages = judged_pages(Record(cooler), None, (), True, Extras(review=standing(cooler, review)))
    assert 'id="part-review"' in pages.screen and 'id="part-review"' in pages.paper


def _judged(data: Data, review: ReviewFile | None) -> dict[int, Point]:
    found = standing(data, review) if review is not None else None
    page = _page(data, found)
    return {one.number: one for one in points(data, page, redo(page), None, Extras(review=found))}


def test_points_on_a_complete_check_are_met(cooler: Data, review_kit: Any) -> None:
    comment = review_kit.mark_on(_target(cooler, "area"), "comment", text="Why is T_in - T_out * 1500 not 3e4?")
    closed = review_kit.mark_on(_target(cooler, "area"))
    found = _judged(cooler, review_kit.agreed(cooler, [comment, closed], ALL))
    assert {number: found[number].verdict for number in (45, 49, 50)} == {45: MET, 49: MET, 50: MET}


def test_points_without_a_review_file_are_as_before(cooler: Data) -> None:
    found = _judged(cooler, None)
    assert {number: found[number].verdict for number in (45, 49, 50)} == {45: UNMET, 49: PERSON, 50: IDLE}


def test_a_lapsed_or_unbound_signature_does_not_meet_its_points(cooler: Data, change: Any, review_kit: Any) -> None:
    review = review_kit.agreed(cooler, roles=ALL)
    lapsed = _judged(change("value: 1.2", "value: 1.25"), review)
    assert lapsed[45].where == "not yet signed: prepared, checked, approved"
    assert lapsed[50].where == "prepared lapsed, checked lapsed, approved lapsed"
    unbound = _judged(cooler, replace(review, signatures=review.signatures[1:]))
    assert unbound[50] == replace(unbound[50], verdict=UNMET, where="prepared is a name in the spec alone")
    same = replace(review, signatures=tuple(replace(one, by="S. Virta") for one in review.signatures))
    assert _judged(cooler, same)[45].where == "author, checker and approver are not three people"


def test_a_comment_that_is_not_printed_does_not_meet_its_point(cooler: Data, review_kit: Any) -> None:
    comment = review_kit.mark_on(_target(cooler, "area"), "comment", text="Why 1500?")
    found = standing(cooler, review_kit.agreed(cooler, [comment]))
    page = _page(cooler, found).replace("Why 1500?", "")
    judged = {one.number: one for one in points(cooler, page, redo(page), None, Extras(review=found))}
    assert (judged[49].verdict, judged[49].where) == (UNMET, "not printed: Why 1500?")
    assert _judged(cooler, review_kit.agreed(cooler))[49].verdict == IDLE


def test_a_build_prints_the_check_that_lies_beside_the_spec(tmp_path: Path, cooler: Data, review_kit: Any) -> None:
    (tmp_path / "cooler.yaml").write_text(review_kit.SPEC, "utf-8")
    beside = tmp_path / "cooler.review.yaml"
    beside.write_text(review_text(review_kit.agreed(cooler, roles=ALL)), "utf-8")
    build = ["build", str(tmp_path), "-o", str(tmp_path / "site"), "--no-pdf", "-q"]
    done = CliRunner().invoke(main, build)
    assert done.exit_code == 0, done.output
    page = (tmp_path / "site" / "MT-7.html").read_text("utf-8")
    assert "Checked and signed in full" in page and "All 12 items are checked" in page
    record = (tmp_path / "site" / "MT-7.json").read_text("utf-8")
    assert "S. Virta" not in record
    beside.write_text("review: 1\nsheet: MT-8\n", "utf-8")
    done = CliRunner().invoke(main, build)
    assert done.exit_code == 2 and "this is the review of another sheet" in " ".join(done.stderr.split())
    assert (tmp_path / "site" / "MT-7.html").read_text("utf-8") == page
