"""What a sheet's page holds, whichever record it is made from."""
from __future__ import annotations

import copy
import re
from collections import Counter
from html import unescape
from pathlib import Path

import pytest
from render_helpers import solve_small

from calcpack.record import Record
from calcpack.render.quantities import prose
from calcpack.render.sheet import PARTS, css_text, file_stem, sheet_html

EVIL = '"><script>alert(1)</script><img src="file:///etc/passwd"> &amp; \' {{ 7*7 }} \\ </style>'


def ids_of(page: str) -> list[str]:
    return re.findall(r'\sid="([^"]*)"', page)


def visible(page: str) -> str:
    """The page's text without its markup."""
    body = re.sub(r"<math.*?</math>", "", page[page.index("<main>"):], flags=re.DOTALL)
    return re.sub(r"\s+", " ", unescape(re.sub(r"<[^>]+>", " ", body)))


def changed(record: Record, **sheet: object) -> Record:
    """The record with other fields in its title block."""
    data = copy.deepcopy(dict(record.data))
    data["sheet"].update(sheet)
    return Record(data)


def test_every_item_has_its_anchor(small: Record, small_page: str) -> None:
    expected = [f"step-{one['id']}" for one in small.data["steps"]]
    expected += [f"section-{one['id']}" for one in small.data["sections"]]
    expected += [f"input-{one['symbol']}" for one in small.data["inputs"]]
    expected += ["assumption-A1", "reference-R1", "reference-R2", "limit-L1", "limit-L2"]
    assert set(expected) <= set(ids_of(small_page))


def test_ids_are_unique_and_all_inner_links_lead_somewhere(small_page: str) -> None:
    ids = ids_of(small_page)
    assert [name for name, count in Counter(ids).items() if count > 1] == []
    links = re.findall(r'href="#([^"]*)"', small_page)
    assert len(links) > 40
    assert set(links) <= set(ids)


def test_parts_stand_in_order_and_none_is_empty(small_page: str) -> None:
    found = re.findall(r'<section class="part (\w+)"', small_page)
    order = [part.name for part in PARTS]
    assert found == sorted(found, key=order.index)
    assert {"results", "inputs", "calculation", "verification", "machine"} <= set(found)
    for body in re.findall(r'<section class="part.*?</h2>(.*?)(?=<section class="part|</main>)', small_page, re.DOTALL):
        assert len(re.sub(r"<[^>]+>|\s", "", body)) > 10


def test_what_the_record_lacks_is_left_out(small_page: str) -> None:
    assert not {"states", "diagrams", "changes", "cautions", "fluids"} & set(
        re.findall(r'<section class="part (\w+)"', small_page))


def test_every_printed_value_of_the_record_is_on_the_page(small: Record, small_page: str) -> None:
    text = visible(small_page)
    for one in (*small.data["steps"], *small.data["inputs"]):
        assert one["shown"] in text, one["symbol"]
    for limit in small.data["limits"]:
        assert limit["why"] in text


def test_each_kind_of_step_shows_how_it_was_found(small: Record, small_page: str) -> None:
    text = visible(small_page)
    assert {one["kind"] for one in small.data["steps"]} == {"formula", "lookup", "choice", "root"}
    assert "linear between the two marked rows" in text
    assert text.count("neighbour") == 2
    assert "not reached" in text and "small plates" in text
    assert "is the solution of" in text and "between 1.00 K and 80.00 K" in text
    root = next(one for one in small.data["steps"] if one["kind"] == "root")
    assert f"Found in {root['root']['iterations']} evaluations" in text


def test_failed_limits_and_holds_stand_in_the_title_block(small_page: str) -> None:
    block = visible(small_page[:small_page.index('<section class="part')])
    assert re.search(r"1 hold open: +A1", block)
    assert re.search(r"1 of 2 limits FAILS: +L2", block)


@pytest.mark.parametrize(("status", "holds", "stamp"), [
    ("draft", True, ["DRAFT", "HOLD OPEN"]), ("draft", False, ["DRAFT"]), ("for-review", True, ["HOLD OPEN"]),
    ("issued", False, []), ("superseded", True, ["SUPERSEDED"]), ("void", False, ["VOID"])])
def test_the_stamp_tells_the_standing(small: Record, status: str, holds: bool, stamp: list[str]) -> None:
    record = changed(small, status=status)
    if not holds:
        record.data["holds"].clear()
    page = sheet_html(record, for_print=True)
    found = re.search(r'<div class="stamp".*?\n</div>', page, re.DOTALL)
    assert (re.findall(r">([A-Z ]+)</div>", found[0]) if found else []) == stamp


def test_the_twin_for_screen_readers_is_in_the_page_and_not_in_print(small: Record, small_page: str) -> None:
    printed = sheet_html(small, for_print=True)
    assert small_page.count("<math") == small_page.count('class="equation"') > 0
    assert "<math" not in printed and 'class="contents"' not in printed
    assert "screen.css" in small_page and "screen.css" not in printed


def test_no_limits_is_said(tmp_path: Path) -> None:
    record = solve_small(tmp_path, change=lambda text: re.sub(r"(?s)limits:\n.*?assumptions:", "assumptions:", text))
    text = visible(sheet_html(record))
    assert text.count("No limits are stated") == 2


def test_marks_of_change_are_drawn_and_counted(small: Record, tmp_path: Path) -> None:
    from calcpack.revisions import compare_records
    edits = {"revision: A": "revision: B", "120 kW": "125 kW", "at_most: 12 m2": "at_most: 11 m2"}

    def edited(text: str) -> str:
        for old, now in edits.items():
            assert old in text
            text = text.replace(old, now)
        return text

    new = solve_small(tmp_path, change=edited)
    comparison = compare_records(small, new)
    page = sheet_html(new, comparison=comparison)
    assert page.count('class="delta"') == comparison["marks"] > 6
    text = visible(page)
    assert re.search(rf"{comparison['marks']} places carry the mark +B", text)
    assert "Compared with revision A" in text
    for id in ("input-Q_dot", "limit-L1", "step-1.2"):
        row = page[page.index(f'id="{id}"'):]
        assert 'class="delta"' in row[:row.index("</")+40]
    unmarked = page[page.index('id="input-c_w"'):]
    assert 'class="delta"' not in unmarked[:unmarked.index("</tr>")]


def test_a_sheet_without_a_comparison_has_no_marks(small_page: str) -> None:
    assert 'class="delta"' not in small_page and "since the last revision" not in small_page


def test_texts_are_escaped_wherever_they_come_from(small: Record) -> None:
    data = copy.deepcopy(dict(small.data))
    for key in ("number", "title", "project", "purpose", "scope", "grade"):
        data["sheet"][key] = EVIL
    data["assumptions"][0].update(text=EVIL, id=EVIL, basis=EVIL, owner=EVIL)
    data["holds"][0]["id"] = EVIL
    data["references"][0].update(text=EVIL, id=EVIL)
    data["limits"][0].update(why=EVIL, id=EVIL, value=EVIL, source=EVIL)
    data["inputs"][0].update(title=EVIL, source=EVIL, note=EVIL, written=EVIL)
    data["steps"][0].update(title=EVIL, note=EVIL, reference=EVIL, shown=EVIL, unit=EVIL, formula=EVIL, numbers=EVIL)
    data["checks"][0].update(text=EVIL, value=EVIL, detail=EVIL)
    data["spec_file"] = data["engine"]["command"] = EVIL
    data["signoff"]["prepared"] = {"name": EVIL, "date": EVIL}
    for for_print in (False, True):
        page, plain = sheet_html(Record(data), for_print=for_print), sheet_html(small, for_print=for_print)
        assert page.count("<script") == plain.count("<script") and "<img" not in page
        assert page.count("</style>") == 1 and "{{ 7*7 }}" in unescape(page)


def test_a_text_in_a_style_rule_cannot_leave_it() -> None:
    assert css_text('a"b\\c</style>;\n') == '"a\\22 b\\5c c\\3c \\2f style\\3e \\3b \\a "'


@pytest.mark.parametrize(("number", "stem"), [
    ("HP-101", "HP-101"), ("a/b", "a-b"), ("..", "sheet"), (".x", "x"), ("Index", "sheet-Index"), ("Ü 1", "--1")])
def test_file_names_come_from_the_number(number: str, stem: str) -> None:
    assert file_stem(number) == stem


@pytest.mark.parametrize(("text", "expected"), [
    ("-7.15 K", "−7.15\u202fK"), ("EN 378-1:2016", "EN 378-1:2016"), ("2026-12-01", "2026-12-01"), (None, ""),
    ("a < b & c", "a &lt; b &amp; c"), ("15 min", "15 min"), ("12 °C, 3 %", "12\u202f°C, 3\u202f%")])
def test_sentences_of_the_record_in_print(text: str | None, expected: str) -> None:
    assert prose(text) == expected


def test_powers_of_ten_and_symbols_inside_sentences() -> None:
    html = prose("allowed: 1e-06 of Q_dot_sink", {"Q_dot_sink"})
    assert "10<sup>−6</sup>" in html and "<sub>sink</sub>" in html
    assert prose("Q_dot_other", {"Q_dot_sink"}) == "Q_dot_other"
