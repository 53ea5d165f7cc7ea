"""A comparison as text, Markdown, HTML and JSON: one golden text, and nothing that a sheet says becomes markup."""
from __future__ import annotations

import json
import re
from html.parser import HTMLParser
from pathlib import Path

import pytest

from calcpack.revisions import compare_records, rendered
from calcpack.revisions.markdown import code

GOLDEN = Path(__file__).with_name("golden")
ODD = "Heat | lost <script>alert(1)</script> `now` [here](file:///etc/passwd) & *there*"


@pytest.fixture(scope="module")
def comparison(cooler) -> dict:
    """Revision B of the cooler: larger duty, one formula, one assumption confirmed, another limit."""
    new = cooler(("revision: A\n", "revision: B\n"), ("120 kW", "150 kW"), ("area * f_foul", "area * f_foul + 1 m2"),
                 ("status: open", "status: confirmed"), ("at_most: 40 degC", "at_most: 34 degC"),
                 ("Heat balance of the works", "Heat balance of the works (third issue)"),
                 ("First issue}", "First issue}\n  - {revision: B, date: 2026-04-01, note: Larger duty}"))
    return compare_records(cooler(), new, source="issued/BC-7-A.json")


@pytest.fixture(scope="module")
def odd(cooler) -> dict:
    """A comparison in which everything that can be a text is an odd one."""
    old, new = cooler(), cooler(("120 kW", "150 kW"))
    new.data["sheet"] = {**new.data["sheet"], "title": ODD, "purpose": ODD}
    new.data["inputs"][0].update({"title": ODD, "source": ODD})
    new.data["steps"][3].update({"formula": ODD, "title": ODD, "note": ODD})
    new.data["assumptions"][0].update({"text": ODD, "basis": ODD})
    new.data["references"][0]["text"] = ODD
    new.data["limits"][0].update({"why": ODD, "text": ODD})
    return compare_records(old, new, source=ODD)


@pytest.mark.parametrize(("shape", "name"), [("text", "comparison.txt"), ("markdown", "comparison.md")])
def test_the_whole_text(comparison, shape, name):
    assert rendered(comparison, shape) == (GOLDEN / name).read_text("utf-8")


def test_no_line_is_wider_than_a_terminal(comparison, odd, chiller):
    wide = compare_records(chiller(), chiller(("R-1234ze(E)", "R-600a")))
    for one in (comparison, odd, wide):
        for line in rendered(one, "text").splitlines():
            assert len(line) <= 80 or " " not in line.strip()


def test_a_forged_record_does_not_steer_the_terminal(cooler):
    old, new = cooler(), cooler()
    new.data["references"][0]["text"] = "A\x1b[2Jbook\nof two lines"
    assert "Heat balance of the works → A\ufffd[2Jbook of two lines" in rendered(compare_records(old, new), "text")


def test_nothing_changed_is_one_sentence(cooler):
    same = compare_records(cooler(), cooler())
    assert rendered(same, "text").splitlines()[-1] == \
        "The two say the same, apart from revision, date, signatures and versions."
    assert "<table" not in rendered(same, "html")
    assert "|" not in rendered(same, "markdown")


def test_every_row_of_a_markdown_table_has_the_columns_of_its_head(odd):
    tables = re.findall(r"(?:^\|.*\n)+", rendered(odd, "markdown"), re.MULTILINE)
    assert len(tables) >= 7
    for table in tables:
        counts = {len(re.findall(r"(?<!\\)\|", row)) for row in table.splitlines()}
        assert len(counts) == 1


def test_what_a_sheet_says_is_no_markup_in_markdown(odd):
    plain = re.sub(r"(?<!`)(`+)(?!`).*?(?<!`)\1(?!`)", "", re.sub(r"\\.", "", rendered(odd, "markdown")))
    assert "<script" not in plain and "[here" not in plain and "*" not in plain


def test_code_holds_its_backticks():
    assert code("a | b") == "`a \\| b`"
    assert code("a `b` c") == "`` a `b` c ``"


class Page(HTMLParser):
    """Tags, attributes and text of a page."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.opened: list[str] = []
        self.tags: set[str] = set()
        self.links: list[str] = []
        self.said = ""
        self.feed(text)
        self.close()

    def handle_starttag(self, tag, attributes):
        self.tags.add(tag)
        self.links += [value for name, value in attributes if name in ("href", "src")]
        if tag != "meta":
            self.opened.append(tag)

    def handle_endtag(self, tag):
        assert self.opened.pop() == tag

    def handle_data(self, data):
        self.said += data


def test_a_page_of_its_own(comparison, odd):
    for one in (comparison, odd):
        page = Page(rendered(one, "html"))
        assert page.opened == [] and page.links == []
        assert page.tags <= {"html", "head", "meta", "title", "style", "body", "h1", "h2", "p", "section", "div",
                             "table", "thead", "tbody", "tr", "th", "td", "code", "span", "details", "summary"}
    assert ODD in page.said
    assert "url(" not in rendered(odd, "html")


def test_the_page_says_what_the_text_says(comparison):
    said = Page(rendered(comparison, "html")).said
    for words in ("Revision B (draft) against revision A (draft)", "Larger duty", "120 kW", "150 kW", "+30 kW",
                  "status: confirmed", "area * f_foul + 1 m²", "follows from Q_dot: 120 kW → 150 kW", "verdict: fails"):
        assert words in said


def test_json_is_the_comparison(comparison):
    assert json.loads(rendered(comparison, "json")) == comparison
    assert rendered(comparison, "json").endswith("}\n")
