"""The points on history, superseding, stamps and attachments: each is met by an issued page, and can be unmet."""
from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import pytest
from issue_helpers import LINE_B, ON_B, RINSE, check_sheet, write_sheet

from calcpack.building import build_package
from calcpack.issuing.attached import Attachment, carried_files
from calcpack.issuing.paper import extras_of
from calcpack.issuing.shelf import issued_sheets
from calcpack.points.judged_issue import JUDGES
from calcpack.points.point import IDLE, MET, UNMET, View
from calcpack.record import Record
from calcpack.render.pages import Extras
from calcpack.render.sheet import sheet_html
from calcpack.reread.from_print import redo


class Sheet:
    """An issued sheet as a judge sees it, or with its page changed."""

    def __init__(self, record: Record, extras: Extras) -> None:
        self.record, self.extras = record, extras
        self.comparison = (record.data.get("issue") or {}).get("comparison")
        self.html = sheet_html(record, comparison=self.comparison, for_print=True, extras=extras)
        self.redone = redo(self.html)

    def judge(self, number: int, *changes: tuple[str, str]) -> tuple[str, str]:
        html = self.html
        for pattern, new in changes:
            html, count = re.subn(pattern, new, html, flags=re.DOTALL)
            assert count, f"{pattern} is not on the page"
        return JUDGES[number](View.of(self.record.data, html, self.redone, self.comparison, self.extras))


def sheet_of(folder: Path, at: int) -> Sheet:
    one = issued_sheets(folder)[at]
    files = carried_files(one.path.read_bytes())
    attached = [Attachment(entry["name"], entry["role"], files[entry["name"]])
                for entry in one.record.data["issue"]["files"]]
    return Sheet(one.record, extras_of(one.record, attached))


@pytest.fixture
def first(issued_twice: Path) -> Sheet:
    return sheet_of(issued_twice, 0)


@pytest.fixture
def second(issued_twice: Path) -> Sheet:
    return sheet_of(issued_twice, 1)


@pytest.mark.parametrize("number", [52, 57, 58, 62])
def test_an_issue_that_supersedes_another_meets_them(second: Sheet, number: int) -> None:
    assert second.judge(number)[0] == MET


def test_a_first_issue_says_that_it_supersedes_nothing(first: Sheet) -> None:
    assert first.judge(57) == (MET, "title block: it supersedes nothing")
    assert first.judge(58)[0] == IDLE and first.judge(52)[0] == first.judge(62)[0] == MET


def test_a_row_of_the_history_without_a_name_is_told(second: Sheet) -> None:
    named = r"<td>S\. Virta</td><td>M\. Okoro</td><td>2026-10-06"
    assert second.judge(52, (named, "<td>not stated</td><td></td><td>")) \
        == (UNMET, "not stated of revision A: checked, approved")


def test_a_history_that_lacks_a_revision_is_told(second: Sheet) -> None:
    assert second.judge(52, (r"<tr><td>A</td>.*?</tr>", ""))[1].startswith("not stated of revision A: date")


def test_a_title_block_that_hides_what_it_supersedes_is_told(second: Sheet) -> None:
    gone = (r'(Supersedes</th><td>).*?</td>', r"\1</td>")
    assert second.judge(57, gone)[0] == UNMET and second.judge(58, gone)[0] == UNMET


@pytest.mark.parametrize("change", [(r"<tr><td>rinse\.review\.yaml</td>.*?</tr>", ""),
                                    (r"(<td>rinse\.yaml</td>.*?<code>)[0-9a-f]{4}", r"\g<1>0000")])
def test_an_attachment_that_is_not_listed_as_it_is_is_told(second: Sheet, change: tuple[str, str]) -> None:
    assert second.judge(62, change)[0] == UNMET


def unissued(status: str, family: dict[str, Any] | None) -> Sheet:
    from calcpack.pipeline import solve_spec
    text = RINSE.replace("status: for-review", f"status: {status}")
    text = text.replace("by: R. Aldane}\n", "by: R. Aldane}\n" + LINE_B)
    return Sheet(solve_spec(Path("rinse.yaml"), text=text), Extras(family=family))


def test_a_superseded_sheet_says_by_what_and_is_stamped() -> None:
    later = {"revision": "B", "date": "2026-11-13", "kind": "for use", "file": None}
    kin = {"upstream": [], "downstream": [], "issues": [], "supersedes": None, "superseded_by": later, "stale": []}
    told = unissued("superseded", kin)
    assert told.judge(57)[0] == MET and told.judge(58)[0] == MET
    assert told.judge(57, (r"(Superseded by</th><td class=\"strong\">).*?</td>", r"\1</td>"))[0] == UNMET
    assert told.judge(58, (r'<div class="stamp".*?SUPERSEDED', '<div class="stamp"><div>'))[0] == UNMET
    assert unissued("superseded", kin | {"superseded_by": None}).judge(57)[0] == UNMET


def test_a_sheet_of_which_nothing_is_known_does_not_meet_it() -> None:
    assert unissued("for-review", None).judge(57)[0] == UNMET


def test_the_page_of_a_site_leads_to_the_issues(issued_twice: Path, tmp_path: Path) -> None:
    check_sheet(write_sheet(issued_twice, *ON_B))
    build_package([issued_twice / "rinse.yaml"], tmp_path / "site", pdf=False, jobs=1, tell=lambda words: None)
    page = (tmp_path / "site" / "RT-12.html").read_text("utf-8")
    assert '<th scope="row">Issued</th><td><a href="issued/RT-12-B.pdf">2026-11-13, for use</a></td>' in page
    assert '<td><a href="issued/RT-12-A.pdf">2026-10-06, for use</a></td></tr>' in page
    for name in ("RT-12-A.pdf", "RT-12-B.pdf"):
        assert (tmp_path / "site" / "issued" / name).read_bytes() == (issued_twice / "issued" / name).read_bytes()
