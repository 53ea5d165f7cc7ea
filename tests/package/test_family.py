"""What a page and the register say of the sheets around one: sources, takers, issues, what has moved since."""
from __future__ import annotations

import re
from html import unescape
from pathlib import Path

import pytest
from package_sheets import edit, write_sheet

from calcpack.building import build_package
from calcpack.issuing.issue import issue
from calcpack.issuing.paper import FOR_INFORMATION
from calcpack.issuing.shelf import issued_sheets
from calcpack.package.family import kin
from calcpack.package.links import family_of
from calcpack.pipeline import solve_all
from calcpack.record import Record

HOLD = ("assumptions:\n  - {id: A1, text: No loss., basis: Insulated., effect: Small., status: open, owner: R. Aldane, "
        "due: 2026-12-01}\n")
LIMIT = "limits:\n  - {id: L1, symbol: T_out, at_most: 300 K, why: It must stay cool.}\n"


@pytest.fixture
def specs(tmp_path: Path) -> Path:
    folder = tmp_path / "specs"
    folder.mkdir()
    write_sheet(folder, "MT-301", {"T_in": "80 degC", "dT": "12.3456 K"}, {"T_out": "T_in + dT / 0.7"},
                title="Dryer air", more=HOLD + LIMIT)
    write_sheet(folder, "MT-302", {"T_hot": "{from: MT-301.T_out, tol: 1 K}", "T_cold": "20 degC"},
                {"dT_m": "T_hot - T_cold"}, title="Exchanger", revision="B")
    write_sheet(folder, "MT-303", {"dT_m": "{from: MT-302.dT_m}", "T_hot": "{from: MT-301.T_out}"},
                {"r": "dT_m / T_hot"}, title="Ratio")
    return folder


def around(specs: Path, number: str) -> dict:
    family = family_of(sorted(specs.glob("*.yaml")))
    records = {one.number: one for one in solve_all(family.paths)}
    return kin(records[number], solved=records, glances=family.glances.values(), issues=issued_sheets(specs),
               stems={"MT-301": "MT-301", "MT-302": "MT-302"})


def keep_record(specs: Path, number: str, revision: str | None = None) -> Path:
    """The present record as one that was kept by hand; of another revision where it is given."""
    record = next(one for one in solve_all(sorted(specs.glob("*.yaml"))) if one.number == number)
    (specs / "issued").mkdir(exist_ok=True)
    path = specs / "issued" / f"{number}-{revision or record.revision}.json"
    sheet = {**record.data["sheet"], "revision": revision or record.revision}
    path.write_text(Record({**record.data, "sheet": sheet}).to_json(), "utf-8")
    return path


def page_text(path: Path) -> str:
    return re.sub(r"\s+", " ", unescape(re.sub(r"<[^>]+>", " ", path.read_text("utf-8"))))


def part(path: Path, name: str) -> str:
    html = path.read_text("utf-8")
    return html.split(f'id="part-{name}"', 1)[1].split("</section>", 1)[0]


def test_sources_and_takers_with_revision_status_and_values(specs):
    middle = around(specs, "MT-302")
    [source] = middle["upstream"]
    assert {key: source[key] for key in ("number", "revision", "title", "status", "page")} == {
        "number": "MT-301", "revision": "A", "title": "Dryer air", "status": "draft", "page": "MT-301"}
    assert source["values"] == [{"input": "T_hot", "symbol": "T_out", "step": "1.1", "shown": "370.79", "unit": "K",
                                 "also_shown": "97.64 °C"}]
    [taker] = middle["downstream"]
    assert {key: taker[key] for key in ("number", "revision", "title", "status", "symbols", "page")} == {
        "number": "MT-303", "revision": "A", "title": "Ratio", "status": "draft", "symbols": ["dT_m"], "page": None}
    assert [one["number"] for one in around(specs, "MT-301")["downstream"]] == ["MT-302", "MT-303"]
    assert around(specs, "MT-301")["upstream"] == [] == around(specs, "MT-303")["downstream"]


def test_what_is_of_concern_in_a_source_is_said(specs):
    assert around(specs, "MT-302")["upstream"][0]["concerns"] == [
        "draft", "limit L1 fails", "hold A1 open", "revision A not issued"]
    keep_record(specs, "MT-301")
    assert "revision A not issued" not in around(specs, "MT-302")["upstream"][0]["concerns"]
    edit(specs / "MT-301.yaml", "at_most: 300 K", "at_most: 400 K")
    edit(specs / "MT-301.yaml", "status: open, owner: R. Aldane, due: 2026-12-01", "status: confirmed")
    assert around(specs, "MT-302")["upstream"][0]["concerns"] == ["draft"]


def test_issues_before_and_after(specs):
    keep_record(specs, "MT-302", "A")
    assert around(specs, "MT-302")["supersedes"]["revision"] == "A"
    assert around(specs, "MT-302")["superseded_by"] is None
    keep_record(specs, "MT-302", "C")
    found = around(specs, "MT-302")
    assert found["superseded_by"]["revision"] == "C" and found["supersedes"]["revision"] == "A"
    assert [one["revision"] for one in found["issues"]] == ["A", "C"]
    assert around(specs, "MT-301")["issues"] == [] and around(specs, "MT-301")["supersedes"] is None


def test_an_issue_is_stale_when_its_source_has_moved_and_not_before(specs):
    keep_record(specs, "MT-302")
    assert around(specs, "MT-302")["stale"] == []
    edit(specs / "MT-301.yaml", "T_in: 80 degC", "T_in: 79 degC")
    assert around(specs, "MT-302")["stale"] == [
        "issued revision B took MT-301.T_out = 370.79 K from revision A; it is 369.79 K now"]
    edit(specs / "MT-301.yaml", "T_in: 79 degC", "T_in: 80.0001 degC")
    assert around(specs, "MT-302")["stale"] == [
        "issued revision B took MT-301.T_out = 370.7866 K from revision A; it is 370.7867 K now"]
    edit(specs / "MT-301.yaml", "T_in + dT / 0.7", "dT / 0.7 + T_in")
    edit(specs / "MT-301.yaml", "T_in: 80.0001 degC", "T_in: 80 degC")
    assert around(specs, "MT-302")["stale"] == []
    edit(specs / "MT-301.yaml", "symbol: T_out, title", "symbol: T_end, title")
    edit(specs / "MT-301.yaml", "symbol: T_out, at_most", "symbol: T_end, at_most")
    edit(specs / "MT-301.yaml", "results: [T_out]", "results: [T_end]")
    edit(specs / "MT-302.yaml", "MT-301.T_out", "MT-301.T_end")
    edit(specs / "MT-303.yaml", "MT-301.T_out", "MT-301.T_end")
    assert "issued revision B took MT-301.T_out for T_hot, which is not there now" in around(specs, "MT-302")["stale"]


def test_a_spec_that_was_issued_and_has_changed_needs_a_new_revision(specs):
    keep_record(specs, "MT-302")
    edit(specs / "MT-302.yaml", "T_cold: 20 degC", "T_cold: 21 degC")
    assert around(specs, "MT-302")["stale"] == [
        "revision B was issued, and its spec has changed since without a new revision"]
    edit(specs / "MT-302.yaml", "revision: B", "revision: C")
    assert around(specs, "MT-302")["stale"] == []


def test_page_and_register_say_all_that_and_link_what_the_site_has(specs, tmp_path):
    keep_record(specs, "MT-302")
    edit(specs / "MT-301.yaml", "T_in: 80 degC", "T_in: 79 degC")
    site = tmp_path / "site"
    build_package([specs], site, pdf=False, jobs=1, tell=[].append)
    stale = "issued revision B took MT-301.T_out = 370.79 K from revision A; it is 369.79 K now"
    family = part(site / "MT-302.html", "family")
    assert 'href="MT-301.html"' in family and 'href="MT-301.html#step-1.1"' in family and 'href="MT-303.html"' in family
    text = page_text(site / "MT-302.html")
    assert stale in text.replace("\u2009", " ") and "limit L1 fails" in text
    assert 'href="MT-301.html#step-1.1"' in part(site / "MT-302.html", "inputs")
    assert "This sheet takes nothing from other sheets." in part(site / "MT-301.html", "family")
    assert "No other sheet takes a value from this one." in part(site / "MT-303.html", "family")
    register = page_text(site / "index.html").replace("\u2009", " ")
    assert stale in register and "1 has moved since it was issued" in register
    assert "MT-301: draft, limit L1 fails, hold A1 open, revision A not issued" in register
    assert "from MT-301 A" in register and "to MT-302 B, MT-303 A" in register


def test_the_points_on_register_and_neighbours_are_met_by_what_is_printed(specs, tmp_path):
    site = tmp_path / "site"
    package = build_package([specs], site, pdf=False, jobs=1, tell=[].append)
    open_points = {number: {one.number for one in found} for number, found in package.unmet.items()}
    assert all(not {59, 60} & found for found in open_points.values()) and len(open_points) == 3


def test_the_point_on_neighbours_is_not_met_by_a_page_that_leaves_one_out(specs, monkeypatch):
    from dataclasses import replace

    from calcpack.points import points
    from calcpack.render.pages import Extras
    from calcpack.render.sheet import sheet_html
    from calcpack.reread.from_print import redo
    record = next(one for one in solve_all(sorted(specs.glob("*.yaml"))) if one.number == "MT-302")
    family = around(specs, "MT-302")

    def verdicts(html: str, given: Extras) -> dict[int, tuple[str, str]]:
        return {one.number: (one.verdict, one.where) for one in points(record.data, html, redo(html), None, given)}
    whole = Extras(family=family)
    page = sheet_html(record, extras=whole)
    assert verdicts(page, whole)[60] == ("met", "Sheets before and after: 1 before, 1 after")
    assert verdicts(page, whole)[59][0] == "met"
    lacking = sheet_html(record, extras=Extras(family={**family, "downstream": []}))
    assert verdicts(lacking, whole)[60] == ("not met", "without a revision: MT-303")
    assert verdicts(sheet_html(record), Extras())[60][0] == "not met"
    other = replace(whole, family={**family, "upstream": [{**family["upstream"][0], "number": "MT-399"}]})
    assert verdicts(page, other)[59] == ("not met", "the sheet does not say MT-399")


def test_issued_pdfs_go_with_the_site_and_the_register_links_them(specs, tmp_path):
    made = issue(specs / "MT-303.yaml", kind=FOR_INFORMATION, date="2026-11-02")
    site = tmp_path / "site"
    package = build_package([specs], site, pdf=False, jobs=1, tell=[].append)
    copy = site / "issued" / made.path.name
    assert copy.read_bytes() == made.path.read_bytes() and copy in package.files
    assert f'<a href="issued/{made.path.name}">issued A</a> for information' in (site / "index.html").read_text("utf-8")
    # An issue for information is no baseline, and nothing is said to have moved since.
    assert around(specs, "MT-303")["stale"] == [] and around(specs, "MT-303")["supersedes"] is None
    assert around(specs, "MT-303")["issues"][0]["file"] == f"issued/{made.path.name}"
    made.path.unlink()
    build_package([specs], site, pdf=False, jobs=1, tell=[].append)
    assert not (site / "issued").exists()
