"""What the page carries for its checker, and what it does without scripts."""
from __future__ import annotations

import json
import re
from collections.abc import Callable
from html import unescape
from pathlib import Path

from chromium_client import Profile

from calcpack.pipeline import solve_spec
from calcpack.record import Record
from calcpack.render.marking import SCRIPTS, review_data
from calcpack.render.sheet import sheet_html
from calcpack.reread.elements import elements_of
from calcpack.review.targets import targets_of

BOX = re.compile(r'<\w+[^>]* data-kind="([^"]*)" data-name="([^"]*)" data-seen="([^"]*)"(?: data-shown="([^"]*)")?>')


def test_every_target_has_its_box_and_no_box_has_another(page: Path, spec: Path) -> None:
    found = [tuple(map(unescape, one)) for one in BOX.findall(page.read_text("utf-8"))]
    wanted = {(one.kind, one.name, one.identity, one.shown or "") for one in targets_of(solve_spec(spec).data)}
    assert set(found) == wanted and len(found) == len(wanted) > 15


def test_every_figure_of_a_method_can_be_marked(spec_text: Callable[..., str]) -> None:
    from calcpack.figures import figures
    record = solve_spec(Path("pump.yaml"), text=spec_text("vapour-compression"), name="pump.yaml")
    html = sheet_html(record, figures=figures(record.data))
    marked = {(kind, name) for kind, name, *_ in BOX.findall(html)}
    assert marked == {one.key for one in targets_of(record.data)}
    assert ("figure", "arrangement") in marked and len([one for one in marked if one[0] == "figure"]) > 3


def test_paper_carries_nothing_of_it(spec: Path) -> None:
    paper = sheet_html(solve_spec(spec), for_print=True)
    assert "data-" not in paper and "<script" not in paper and "<template" not in paper and "review-" not in paper


def test_a_text_of_the_sheet_cannot_end_its_data(spec: Path) -> None:
    record = solve_spec(spec)
    evil = "</script><script>alert(1)</script><!--"
    data = review_data({**record.data, "sheet": {**record.data["sheet"], "project": evil}}, None)
    assert "<" not in data and json.loads(data)["project"] == evil


def test_what_is_read_again_of_a_page_is_the_same_without_the_desk(page: Path) -> None:
    text = page.read_text("utf-8")
    bare = re.sub(r"<template.*?</template>|<script.*?</script>| data-(?:kind|name|seen|shown)=\"[^\"]*\"", "", text,
                  flags=re.DOTALL)
    assert len(bare) < len(text) and "Check this sheet" not in bare
    assert elements_of(text).text == elements_of(bare).text


def test_the_scripts_lie_beside_the_page_and_name_no_address(page: Path) -> None:
    folder = page.parent / "assets" / "scripts"
    assert sorted(one.name for one in folder.iterdir()) == sorted(SCRIPTS)
    for one in folder.iterdir():
        own = one.read_text("utf-8")
        assert re.findall(r"https?://|fetch\(|XMLHttpRequest|sendBeacon|eval\(|import\(", own) == [], one.name
    assert "MIT License" in (folder / "js-yaml.min.js").read_text("utf-8")


def test_without_scripts_the_page_is_as_it_reads(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    seen = tab.js("document.querySelector('main').innerText")
    tab.send("Emulation.setScriptExecutionDisabled", value=True)
    tab.reload()
    assert tab.js("document.querySelector('main').innerText") == seen
    assert tab.js("document.querySelectorAll('.review-start, .review-bar, dialog').length") == 0


def test_a_sheet_without_an_author_can_be_marked(spec: Path) -> None:
    record = solve_spec(spec)
    data = review_data(Record({**record.data, "signoff": {"prepared": None}}).data, None)
    assert json.loads(data)["author"] == ""
