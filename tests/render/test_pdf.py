"""The PDF of a sheet: its pages, its watermark, its bytes, and what it refuses."""
from __future__ import annotations

import builtins
import logging
import re
import subprocess
from pathlib import Path
from typing import Any

import pikepdf
import pytest
from render_helpers import pages_of, solve_small, text_of

from calcpack.errors import MissingPartError
from calcpack.record import Record
from calcpack.render import pdf as pdf_room
from calcpack.render.pdf import pdf_bytes, write_pdf
from calcpack.render.sheet import sheet_html

Word = tuple[float, float, float, float, str]


def words_of(pdf: Path) -> list[tuple[float, float, list[Word]]]:
    """For each page its width and height and its words with their boxes, in points."""
    pages = []
    for page in text_of(pdf, "-bbox").split("<page ")[1:]:
        width, height = map(float, re.search(r'width="([\d.]+)" height="([\d.]+)"', page).groups())
        words = [(*map(float, match.groups()[:4]), match[5]) for match in re.finditer(
            r'xMin="([-\d.]+)" yMin="([-\d.]+)" xMax="([-\d.]+)" yMax="([-\d.]+)">(.*?)</word>', page)]
        pages.append((width, height, words))
    return pages


def collisions(words: list[Word]) -> list[tuple[str, str]]:
    """Pairs of words on one line of print that lie on each other."""
    lines: dict[tuple[int, int], list[Word]] = {}
    for word in words:
        lines.setdefault((round(word[1]), round(word[3])), []).append(word)
    return [(one[4], other[4]) for line in lines.values() for index, one in enumerate(line)
            for other in line[index + 1:] if min(one[2], other[2]) - max(one[0], other[0]) > 1.0]


def issued(record: Record) -> Record:
    """The record as if it were issued with no hold open."""
    return Record({**record.data, "sheet": {**record.data["sheet"], "status": "issued"}, "holds": []})


@pytest.fixture(scope="module")
def us_pdf(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("us")
    record = solve_small(folder, page="Letter", units="us")
    write_pdf(sheet_html(record, for_print=True), folder / "us.pdf", record)
    return folder / "us.pdf"


def test_pages_are_numbered_and_carry_number_revision_and_status(small: Record, small_pdf: Path) -> None:
    pages = pages_of(small_pdf)
    assert len(pages) > 2
    for number, page in enumerate(pages, start=1):
        assert f"Sheet {number} of {len(pages)}" in page
        head = page.strip().splitlines()[0]
        for word in ("RT-12", "Rinse water heater", "Revision A", "DRAFT"):
            assert word in head
        foot = page.strip().splitlines()[-1]
        assert "Dye works" in foot and small.data["spec_sha256"][:12] in foot
    assert f"1 of {len(pages)}" in pages[0].split("Results")[0]


def test_the_number_of_pages_is_told(small: Record, small_pdf: Path, tmp_path: Path) -> None:
    count = write_pdf(sheet_html(small, for_print=True), tmp_path / "again.pdf", small)
    assert count == len(pages_of(small_pdf))


def stamped(pdf: Path) -> list[str]:
    """For each page, the letters of a watermark's size on it, in alphabetical order."""
    return ["".join(sorted("".join(word[4] for word in words if word[3] - word[1] > 25 and word[2] - word[0] > 40)))
            for _, _, words in words_of(pdf)]


def test_the_watermark_is_on_every_page_of_a_draft_and_on_none_of_an_issued_sheet(
        small: Record, small_pdf: Path, tmp_path: Path) -> None:
    assert set(stamped(small_pdf)) == {"".join(sorted("DRAFT" + "HOLDOPEN"))}
    record = issued(small)
    write_pdf(sheet_html(record, for_print=True), tmp_path / "issued.pdf", record)
    assert set(stamped(tmp_path / "issued.pdf")) == {""}


def test_paper_is_as_the_sheet_asks(small_pdf: Path, us_pdf: Path) -> None:
    assert {(round(width), round(height)) for width, height, _ in words_of(small_pdf)} == {(595, 842)}
    assert {(round(width), round(height)) for width, height, _ in words_of(us_pdf)} == {(612, 792)}
    assert "kBtu/h" in text_of(us_pdf) and "psi" in text_of(us_pdf)


def test_no_word_leaves_the_margins_or_lies_on_another(small_pdf: Path, us_pdf: Path) -> None:
    for pdf in (small_pdf, us_pdf):
        for width, height, words in words_of(pdf):
            print_words = [word for word in words if word[3] - word[1] < 25]
            assert len(print_words) > 30
            assert [word for word in print_words if word[0] < 40 or word[2] > width - 40] == []
            assert [word for word in print_words if word[1] < 20 or word[3] > height - 15] == []
            assert collisions(print_words) == []


def test_collisions_are_seen() -> None:
    assert collisions([(10, 5, 30, 15, "one"), (28, 5, 40, 15, "two"), (41, 5, 50, 15, "three")]) == [("one", "two")]


def test_a_long_value_and_a_long_title_stay_inside(tmp_path: Path) -> None:
    record = solve_small(tmp_path, change=lambda text: text.replace(
        "title: Rinse water heater", "title: " + "Heater of the rinse water behind the second dyeing vat " * 3).replace(
        "Heat balance of the works", "https://example.org/" + "unbroken" * 30))
    write_pdf(sheet_html(record, for_print=True), tmp_path / "long.pdf", record)
    for width, _, words in words_of(tmp_path / "long.pdf"):
        assert [word for word in words if word[3] - word[1] < 25 and not 40 < word[0] < word[2] < width - 40] == []


def test_bookmarks_follow_the_sheet(small_pdf: Path) -> None:
    with pikepdf.open(small_pdf) as pdf, pdf.open_outline() as outline:
        top = outline.root[0]
        assert top.title == "Rinse water heater"
        titles = [one.title for one in top.children]
        assert titles[0] == "Results and limits" and "Calculation" in titles and "Contents" not in titles
        calculation = top.children[titles.index("Calculation")]
        assert [re.sub(r"\s+", " ", one.title) for one in calculation.children] == ["1 The engineer's own steps"]


def test_the_pdf_is_tagged_dated_by_the_sheet_and_embeds_its_fonts(small_pdf: Path) -> None:
    with pikepdf.open(small_pdf) as pdf:
        assert pdf.Root.MarkInfo.Marked and pdf.Root.Lang == "en"
        assert str(pdf.docinfo["/CreationDate"]).startswith("D:20261202")
    fonts = subprocess.run(["pdffonts", str(small_pdf)], check=True, capture_output=True, text=True).stdout
    rows = fonts.splitlines()[2:]
    assert rows and all("STIX" in row for row in rows)
    assert all(re.search(r"\syes yes yes\s", row) for row in rows)


def test_links_inside_lead_to_steps(small_pdf: Path) -> None:
    with pikepdf.open(small_pdf) as pdf:
        names = {str(name) for name, _ in pikepdf.NameTree(pdf.Root.Names.Dests).items()}
    assert {"step-1.1", "step-1.6", "input-Q_dot"} <= names


def test_equal_pages_give_equal_bytes(small: Record) -> None:
    page = sheet_html(small, for_print=True)
    assert pdf_bytes(page, "x")[0] == pdf_bytes(page, "x")[0]


@pytest.mark.parametrize("address", [
    "file:///etc/hostname", "http://127.0.0.1:1/x.png", "../sheet.html", "file://host/styles/sheet.css",
    "styles/../../pyproject.toml", "ftp://127.0.0.1/x"])
def test_nothing_is_read_from_outside(address: str) -> None:
    page = f'<html lang="en"><title>x</title><img alt="x" src="{address}">'
    with pytest.raises(MissingPartError) as caught:
        pdf_bytes(page, "x")
    assert "reads nothing from outside" in caught.value.faults[0].detail


def test_own_assets_and_data_addresses_are_read() -> None:
    page = '<html lang="en"><title>x</title><img alt="x" src="styles/delta.svg"><img alt="y" src="data:image/svg+xml,' \
           '%3Csvg xmlns=%22http://www.w3.org/2000/svg%22 width=%225%22 height=%225%22/%3E">'
    assert pdf_bytes(page, "x")[1] == 1


def test_a_warning_of_the_engine_makes_no_pdf(small: Record, tmp_path: Path) -> None:
    page = sheet_html(small, for_print=True).replace("</style>", "p { colour: red }</style>")
    with pytest.raises(MissingPartError) as caught:
        write_pdf(page, tmp_path / "x.pdf", small)
    assert "colour" in caught.value.faults[0].detail and caught.value.exit_status == 4
    assert not list(tmp_path.iterdir())
    assert not logging.getLogger("weasyprint").handlers[1:]


@pytest.mark.parametrize(("error", "words"), [
    (ImportError("No module named 'weasyprint'"), "not installed"),
    (OSError("cannot load library 'libpango-1.0-0'\nmore"), "a library that the PDF engine needs is missing")])
def test_a_missing_engine_is_told_with_what_to_install(monkeypatch: pytest.MonkeyPatch, error: Exception,
                                                       words: str) -> None:
    really = builtins.__import__

    def without(name: str, *rest: Any, **more: Any) -> Any:
        if name == "weasyprint":
            raise error
        return really(name, *rest, **more)

    monkeypatch.setattr(builtins, "__import__", without)
    with pytest.raises(MissingPartError) as caught:
        pdf_room.pdf_bytes("<p>", "x")
    fault = caught.value.faults[0]
    assert words in fault.what and "libpango" in fault.hint and "--no-pdf" in fault.hint
    assert "\n" not in fault.detail and caught.value.exit_status == 4
